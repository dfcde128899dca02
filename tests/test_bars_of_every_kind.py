"""Random bars, tied or not: none brings the reading down, and none counts more than it is."""

from __future__ import annotations

import math
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ifcopenshell
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.beam import Bars
from tests.barred_beams import LENGTH, Curve, ModelWithBars, straight
from tests.models import (
    BEARINGS,
    Layer,
    MadeBeam,
    Ties,
    answers,
    brief,
    load,
    model,
    rate_model,
    rectangle,
)

Point = tuple[float, float, float]
COORDINATE = {
    "x": st.floats(-800.0, LENGTH + 800.0),
    "y": st.floats(-260.0, 260.0),
    "z": st.floats(-150.0, 750.0),
}
POINTS = st.tuples(*COORDINATE.values())
ANY = st.lists(POINTS, min_size=2, max_size=6, unique=True).map(lambda each: Curve(tuple(each)))


def crank(values: tuple[float, float, float, float, float]) -> Curve:
    """A bar bent from one height to another."""
    x, y, low, high, slope = values
    places = ((100.0, y, high), (x, y, high), (x + slope * abs(high - low), y, low))
    return Curve((*places, (LENGTH - 100.0, y, low)))


CRANKS = st.tuples(
    st.floats(600.0, 3000.0),
    st.floats(-120.0, 120.0),
    st.floats(30.0, 280.0),
    st.floats(320.0, 570.0),
    st.floats(0.5, 9.0),
).map(crank)
ALONG = st.tuples(
    st.floats(0.0, 3000.0),
    st.floats(3300.0, LENGTH),
    st.floats(-130.0, 130.0),
    st.floats(20.0, 580.0),
).map(lambda v: straight(*v))
SHAPES = st.lists(st.one_of(ALONG, CRANKS, ANY), min_size=1, max_size=5)


def steel_at(bars: tuple[Bars, ...], x: float) -> float:
    """Area of bars at a place [mm2]."""
    return sum(one.count * one.area for one in bars if one.start <= x <= one.end)


@settings(max_examples=60, deadline=None)
@given(shapes=SHAPES, diameter=st.sampled_from([10.0, 16.0, 25.0]), others=st.booleans())
def test_loose_bars_never_count_more_than_tied_ones(
    shapes: list[Curve], diameter: float, others: bool
) -> None:
    read = []
    for tied in (True, False):
        made = ModelWithBars()
        beam = made.beam()
        if others:
            made.beam(origin=(3000.0, -3000.0, 100.0), along=(0.0, 1.0, 0.0))
            made.beam(origin=(LENGTH - 200.0, 0.0, 0.0))
        bars = [made.bar(shape, diameter, beam) for shape in shapes]
        if tied:
            made.aggregate(beam, bars)
        found = made.read(beam)
        read.append(found.bars if any(s.source == "bars" for s in found.sources) else ())
    for x in (500.0, 1900.0, 3000.0, 4400.0, 5500.0):
        assert steel_at(read[1], x) <= steel_at(read[0], x) + 1e-6


@settings(max_examples=60, deadline=None)
@given(shapes=SHAPES, diameter=st.sampled_from([10.0, 16.0, 25.0]))
def test_pieces_of_a_bar_are_never_longer_than_the_bar(
    shapes: list[Curve], diameter: float
) -> None:
    """Nor do two of them count at one place, but where the bar runs back."""
    made = ModelWithBars()
    beam = made.beam()
    made.bars(beam, *shapes, diameter=diameter)
    longest = max(map(length_of, shapes))
    for bars in made.read(beam).bars:
        whole = bars.start_beyond + bars.end - bars.start + bars.end_beyond
        assert 0.0 < whole <= longest + 2.0 * diameter
        assert 0.0 < bars.along <= 1.0
        assert min(bars.start_beyond, bars.end_beyond) >= 0.0


def length_of(shape: Curve) -> float:
    pairs = zip(shape.points, shape.points[1:], strict=False)
    return sum(math.dist(one, other) for one, other in pairs)


# What contradicts itself is never adequate

PLACES = tuple(150.0 + 200.0 * number for number in range(31))
LINKS = (Ties("10M", PLACES, 105.0, 40.0, 560.0),)
CAGE = (
    Layer("25M", 60.0, (-90.0, 0.0, 90.0), 40.0, 6260.0),
    Layer("20M", 540.0, (-90.0, 90.0), 40.0, 6260.0),
)
FIVE = Layer("25M", 110.0, (-50.4, -25.2, 0.0, 25.2, 50.4), 40.0, 6260.0)
UNDER = Layer("25M", -20.0, (0.0,), 40.0, 6260.0)


def made(*layers: Layer, **changes: Any) -> MadeBeam:
    return MadeBeam(rectangle(300.0, 600.0), 6300.0, layers=(*CAGE, *layers), ties=LINKS, **changes)


def untied(data: bytes) -> bytes:
    """The same model with bars that no relation ties to a beam."""
    file = ifcopenshell.file.from_string(data.decode("ascii"))
    for relation in file.by_type("IfcRelAggregates"):
        if relation.RelatingObject.is_a("IfcBeam"):
            file.remove(relation)
    text: str = file.to_string()
    return text.encode("ascii")


def twice() -> bytes:
    """Two beams in one place, and bars of neither."""
    return untied(model(made(), MadeBeam(rectangle(320.0, 620.0), 6300.0, mark="B-2")))


@pytest.mark.parametrize(
    ("data", "word"),
    [
        (lambda: model(made(FIVE)), "more than a bundle may have"),
        (lambda: model(made(UNDER)), "outside the concrete"),
        (lambda: untied(model(made(FIVE))), "more than a bundle may have"),
        (twice, "in another beam alike"),
    ],
)
def test_what_contradicts_itself_is_never_adequate(
    data: Callable[[], bytes], word: str, tmp_path: Path
) -> None:
    text = brief(BEARINGS, load("floor", 'line = "5 kN/m"'))
    for answer in answers(rate_model(tmp_path, data(), text)).values():
        assert answer["verdict"] == "not rated"
        assert any(word in reason for reason in answer["reasons"])

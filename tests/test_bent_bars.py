"""Bars that go on at another height: level parts, slopes and haunches, read and rated."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

import ifcopenshell
import pytest

from ifccheck.beam import Anchor, Bars, Opening, Outline, Run
from ifccheck.frame.openings import _bends, _cut_bends
from ifccheck.rating.subject import Subject
from tests.barred_beams import LENGTH, Curve, ModelWithBars, bent, straight
from tests.made_subjects import line, point, rated, subject
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

LOADS = (line("floor", 14.0), point("press", 60e3, 2200.0))


def with_bars(one: Subject, bars: Sequence[Bars]) -> Subject:
    assert one.bars
    (strength,) = set(one.bar_yield)
    return replace(one, bars=tuple(bars), bar_yield=(strength,) * len(bars))


def utilisations(one: Subject) -> list[float]:
    ((_, (found,)),) = (rated(one),)
    return [state.utilisation for state in found.limit_states]


def cut(bar: Bars, x: float, counting: float) -> list[Bars]:
    """A bar in two layers end to end, with what goes on as far as it counts."""
    lengths = (x - bar.start) * counting, (bar.end - x) * counting
    return [
        replace(bar, end=x, end_beyond=lengths[1]),
        replace(bar, start=x, start_beyond=lengths[0]),
    ]


def straight_bars() -> Subject:
    one = subject(loads=LOADS)
    ends = {"start_anchor": Anchor.STRAIGHT, "end_anchor": Anchor.STRAIGHT}
    return with_bars(one, [replace(bar, **ends) for bar in one.bars])


@pytest.mark.parametrize("x", [1200.0, 3000.0])
def test_a_bar_in_two_layers_at_one_height_is_one_bar(x: float) -> None:
    """Where it counts in full beyond: as long again as a top bar takes more (1.3)."""
    whole = straight_bars()
    halves = with_bars(whole, [half for bar in whole.bars for half in cut(bar, x, 1.3)])
    assert utilisations(halves) == pytest.approx(utilisations(whole), rel=1e-9)


@pytest.mark.parametrize("x", [1200.0, 3000.0])
def test_what_goes_on_helps_and_never_more_than_a_straight_bar(x: float) -> None:
    whole = straight_bars()
    halves = with_bars(whole, [half for bar in whole.bars for half in cut(bar, x, 1.0)])
    ended = with_bars(whole, [half for bar in whole.bars for half in cut(bar, x, 0.0)])
    for best, some, least in zip(*map(utilisations, (whole, halves, ended)), strict=True):
        assert best * (1.0 - 1e-9) <= some <= least * (1.0 + 1e-9)
    assert max(utilisations(ended)) > 1.5 * max(utilisations(halves))


def haunched(*bars: Curve) -> Any:
    """A beam whose soffit falls by 300 mm over the first two metres: 1 in 6.7."""
    made = ModelWithBars()
    beam = made.beam()
    deep = Outline((((-150, 0), (150, 0), (150, 900), (-150, 900)),))
    shallow = Outline((((-150, 300), (150, 300), (150, 900), (-150, 900)),))
    runs = (Run(0.0, 2000.0, deep, shallow), Run(2000.0, LENGTH, shallow))
    made.frames[beam.id()] = replace(made.frames[beam.id()], runs=runs)
    made.bars(beam, *bars, diameter=20.0)
    return made.read(beam)


def test_a_bar_along_a_haunch_follows_it_in_pieces() -> None:
    found = haunched(Curve(((0.0, 0.0, 60.0), (2000.0, 0.0, 360.0), (5950.0, 0.0, 360.0))))
    assert found.reasons == ""
    *pieces, level = found.bars
    slope = 300.0 / 2000.0
    for bars in pieces:
        # the end of the piece that is nearer to the middle of the section
        assert bars.z == pytest.approx(60.0 + slope * bars.end, abs=0.1)
        assert bars.along == pytest.approx((1.0 + slope**2) ** -1.5)
    assert [a.end for a in pieces[:-1]] == pytest.approx([b.start for b in pieces[1:]])
    assert pieces[-1].end == pytest.approx(level.start) == pytest.approx(2000.0)
    assert level.along == 1.0
    assert level.start_beyond == pytest.approx(math.hypot(2000.0, 300.0), rel=1e-3)
    assert pieces[0].start_beyond == 0.0
    assert pieces[0].end_beyond == pytest.approx(5950.0 - pieces[0].end, rel=0.01)


def test_a_bar_straight_through_a_haunch_is_level() -> None:
    (bars,) = haunched(straight(50.0, 5950.0, 0.0, 360.0)).bars
    assert (bars.z, bars.along, bars.start_beyond) == (360.0, 1.0, 0.0)


def test_a_bar_as_steep_in_a_level_beam_is_not_read() -> None:
    made = ModelWithBars()
    beam = made.beam()
    made.bars(beam, Curve(((0.0, 0.0, 60.0), (2000.0, 0.0, 360.0))), diameter=20.0)
    assert "not read" in made.read(beam).reasons


def test_what_goes_on_round_a_square_bend_does_not_count() -> None:
    made = ModelWithBars()
    beam = made.beam()
    corners = [(500, 0, 60), (4000, 0, 60), (4400, 0, 460), (4400, 0, 560)]
    back = [(500, 50, 60), (4000, 50, 60), (4400, 50, 460), (4000, 50, 520)]
    made.bars(beam, bent(corners, 60.0), bent(back, 60.0), diameter=16.0)
    first, second = made.read(beam).bars, made.read(beam).bars
    inclined = 400.0 * math.sqrt(2.0)
    for bars in (*first, *second):
        if bars.z == 60.0:
            assert inclined - 100.0 < bars.end_beyond <= inclined + 100.0


def test_the_place_of_a_bend_is_known_between_level_parts() -> None:
    low = Bars(1, 20.0, 300.0, 1000.0, 3000.0, 60.0, (0.0,), start_beyond=400.0, end_beyond=900.0)
    high = replace(low, start=3480.0, end=5950.0, z=540.0, start_beyond=2700.0, end_beyond=0.0)
    assert sorted(_bends([low, high])) == [
        (600.0, 1000.0, -math.inf, math.inf),
        (3000.0, 3480.0, 50.0, 550.0),
    ]


def test_bent_bars_where_an_opening_is_are_a_reason() -> None:
    low = Bars(1, 20.0, 300.0, 1000.0, 3000.0, 60.0, (0.0,), end_beyond=3000.0)
    high = replace(low, start=3480.0, end=5950.0, z=540.0, start_beyond=2700.0, end_beyond=0.0)
    for start, blocked in ((3100.0, True), (3600.0, False), (2500.0, False)):
        hole = Opening(start, start + 200.0, -150.0, 150.0, 200.0, 400.0, "rectangular")
        assert bool(list(_cut_bends([hole], [low, high]))) is blocked


# Bars that no relation ties, through the whole program

PLACES = tuple(150.0 + 200.0 * number for number in range(31))
CAGE = (
    Layer("25M", 60.0, (-90.0, 0.0, 90.0), 40.0, 6260.0),
    Layer("20M", 540.0, (-90.0, 90.0), 40.0, 6260.0),
)


def test_a_beam_whose_bars_nothing_ties_rates_as_the_same_beam_with_its_bars(
    tmp_path: Path,
) -> None:
    links = (Ties("10M", PLACES, 105.0, 40.0, 560.0),)
    data = model(MadeBeam(rectangle(300.0, 600.0), 6300.0, layers=CAGE, ties=links))
    text = brief(
        BEARINGS, load("floor", 'line = "20 kN/m"'), load("press", 'point = "40 kN"', 'at = "2 m"')
    )
    file = ifcopenshell.file.from_string(data.decode("ascii"))
    (beam,) = file.by_type("IfcBeam")
    for relation in file.by_type("IfcRelAggregates"):
        if relation.RelatingObject == beam:
            file.remove(relation)
    found = [
        answers(rate_model(tmp_path / name, content, text))["B-1"]
        for name, content in (("tied", data), ("loose", file.to_string().encode("ascii")))
    ]
    tied, loose = ({s["name"]: s["utilisation"] for s in one["limit_states"]} for one in found)
    assert loose == pytest.approx(tied, rel=1e-9)
    assert found[0]["verdict"] == found[1]["verdict"] == "adequate"

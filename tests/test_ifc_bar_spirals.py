"""Spirals: the same bar wound along a beam is a row of closed stirrups at its pitch."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.ifc.bar_helices import turns_of
from ifccheck.ifc.bar_paths import path_length
from ifccheck.ifc.context import make_context
from ifccheck.ifc.lexer import scan
from ifccheck.ifc.reinforcement import read_reinforcement
from ifccheck.ifc.step_table import make_step_table
from tests.barred_beams import Curve, Found, ModelWithBars, bent, straight
from tests.drawn_curves import drawn

WIDE, LOW, HIGH = 100.0, 40.0, 560.0
ROUND_TRIP = 2.0 * (2.0 * WIDE + HIGH - LOW)
CORNERS = ((WIDE, LOW), (WIDE, HIGH), (-WIDE, HIGH), (-WIDE, LOW))


def spiral(pitch: float = 100.0, turns: float = 40.0, start: float = 500.0) -> Curve:
    """A rectangular spiral with sharp corners that rises evenly along its length."""
    points, along = [(start, *CORNERS[0])], 0.0
    for number in range(1, round(4 * turns) + 1):
        (y0, z0), (y, z) = CORNERS[(number - 1) % 4], CORNERS[number % 4]
        along += math.hypot(y - y0, z - z0) / ROUND_TRIP
        points.append((start + pitch * along, y, z))
    return Curve(tuple(points))


def read(model: ModelWithBars, beam: Any, kind: str, curve: Curve) -> Found:
    points = np.array(curve.points) * model.scale
    solid = model.file.create_entity(
        "IfcSweptDiskSolid", drawn(model.file, kind, points, curve.arcs), 5.0 * model.scale
    )
    made = [model.bar([solid], 10.0, beam, Name="S-1")]
    made += [model.bar(straight(40, 5960, y, 60), 20.0, beam) for y in (-70.0, 70.0)]
    model.aggregate(beam, made)
    return model.read(beam)


@pytest.mark.parametrize("kind", ["polyline", "indexed", "composite", "linear spline",
                                  "rational spline"])  # fmt: skip
@pytest.mark.parametrize("unit", ["mm", "m"])
def test_a_spiral_gives_stirrups_at_its_pitch(kind: str, unit: str) -> None:
    model = ModelWithBars(unit=unit)
    found = read(model, model.beam(), kind, spiral())
    (ties,) = found.stirrups
    assert (ties.legs, ties.closed) == (2, True)
    assert ties.spacing == pytest.approx(100.0)
    # 40 turns from 500 on: the middle of the first at 550, of the last at 4450, half a pitch more
    assert (ties.start, ties.end) == pytest.approx((500.0, 4500.0))
    assert (ties.bottom, ties.top) == pytest.approx((LOW - 5.0, HIGH + 5.0))
    assert "a spiral" in found.remarks
    assert found.reasons == ""


def test_a_spiral_with_bends_and_hooks_at_its_ends() -> None:
    model = ModelWithBars()
    corners = list(spiral(turns=20.25).points)
    inwards = [(corners[0][0], 40.0, 100.0), (corners[-1][0], 40.0, 500.0)]
    found = read(model, model.beam(), "indexed", bent([inwards[0], *corners, inwards[1]], 25.0))
    (ties,) = found.stirrups
    assert (ties.legs, ties.closed, ties.spacing) == (2, True, pytest.approx(100.0, abs=0.5))


def test_a_spiral_of_two_pitches_makes_two_zones() -> None:
    model = ModelWithBars()
    close, wide = spiral(60.0, 20.0), spiral(120.0, 20.0, 500.0 + 60.0 * 20.0)
    found = read(model, model.beam(), "polyline", Curve((*close.points, *wide.points[1:])))
    assert {round(ties.spacing) for ties in found.stirrups} == {60, 90, 120}


@pytest.mark.parametrize(
    "curve",
    [
        spiral(pitch=400.0, turns=12.0),  # its legs lean by more than 1 in 10
        Curve(tuple((500.0 + 8.0 * a, 100.0 * math.cos(a), 300.0 + 100.0 * math.sin(a))
                    for a in np.arange(0.0, 120.0, 0.2).tolist())),  # round: no legs
    ],
)  # fmt: skip
def test_doubtful_spirals_give_nothing(curve: Curve) -> None:
    model = ModelWithBars()
    found = read(model, model.beam(), "polyline", curve)
    assert found.stirrups == ()
    assert "bar S-1" in found.remarks + found.reasons


def test_a_stirrup_of_two_flat_turns_is_one_stirrup() -> None:
    model = ModelWithBars()
    beam = model.beam()
    rings = [Curve(tuple((x, y, z) for _, y, z in spiral(turns=7.0).points)) for x in (200, 400)]
    model.bars(beam, *rings, straight(40, 5960, 0, 60), diameter=10.0)
    (ties,) = model.read(beam).stirrups
    assert ties.spacing == pytest.approx(200.0)
    assert ties.legs == 2


def test_spirals_are_found_among_bars_that_are_read_in_bulk() -> None:
    model = ModelWithBars()
    beam = model.beam()
    alone = read(model, beam, "polyline", spiral())
    text = model.file.to_string().encode()
    statements = make_step_table(text, scan(text))
    assert statements is not None
    context = make_context(model.file, model.schema)
    found = read_reinforcement(context, model.frames, {}, statements)[beam.id()]
    assert Found(found).stirrups == alone.stirrups
    assert Found(found).remarks == alone.remarks


@given(
    st.floats(20.0, 90.0), st.floats(2.0, 9.0), st.floats(0.0, 60.0),
    st.tuples(*[st.floats(-1.0, 1.0)] * 3).filter(lambda v: np.linalg.norm(v) > 0.2),
)  # fmt: skip
def test_turns_have_no_more_steel_than_the_spiral(
    pitch: float, turns: float, noise: float, axis: tuple[float, float, float]
) -> None:
    """Spirals about any axis, shaken at random: their turns are shorter together."""
    curve = bent(spiral(pitch, turns + 4.0).points, 20.0)
    points = np.array(curve.points)
    points += noise * np.sin(np.arange(points.size).reshape(points.shape) * 12.9898)
    x = np.array(axis) / np.linalg.norm(axis)
    y = np.cross(x, np.eye(3)[int(np.abs(x).argmin())])
    y /= np.linalg.norm(y)
    turned = points @ np.array([x, y, np.cross(x, y)])
    drawn_length = np.linalg.norm(np.diff(points, axis=0), axis=1).sum()
    found = turns_of(turned, 10.0)
    assert sum(path_length(turn) for turn in found) <= drawn_length * 1.001
    if noise == 0.0:
        assert len(found) == math.floor(round(4 * (turns + 4.0)) / 4.0)
        places = [float(np.array(turn.points).mean(axis=0) @ x) for turn in found]
        assert np.abs(np.diff(places)) == pytest.approx(pitch, rel=0.02)

"""Development of bars: published lengths, hand figures and the rise along a bar."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
import yaml
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.mechanics.arrays import ANCHOR_FULL, ANCHOR_HOOK, ANCHOR_STRAIGHT, Members, Stations
from ifccheck.mechanics.width_profile import pack_strips, strips_of
from ifccheck.standards.contract import Options
from ifccheck.standards.csa_a23_3_14.development import (
    compression_development_length,
    developed_fraction,
    development_length,
    hook_development_length,
)
from ifccheck.standards.csa_a23_3_14.sections import Prepared, prepare

PUBLISHED = yaml.safe_load(
    (Path(__file__).parent / "published" / "csa_flexure.yaml").read_text(encoding="utf-8")
)["development_length"]


def length_of(**changes) -> float:
    """A 25M bar, f'c 25 MPa, fy 400 MPa, well covered, unless changed."""
    given_values = {
        "diameter": 25.2,
        "steel_yield": 400.0,
        "concrete_strength": 25.0,
        "cover_distance": 500.0,
        "top_bar": False,
        "density_factor": 1.0,
        "bar_area": 500.0,
    } | changes
    return float(development_length(**{k: np.array(v) for k, v in given_values.items()}))


@pytest.mark.parametrize("bar", PUBLISHED["bars"], ids=lambda bar: bar["bar"])
@pytest.mark.parametrize("column", range(4))
def test_published_development_length(bar, column) -> None:
    """Lengths printed to 10 mm; the lap is 1.3 ld before the least length of 300 mm."""
    strength = PUBLISHED["concrete_strength"][column]
    length = length_of(
        diameter=bar["diameter"], bar_area=bar["area"], concrete_strength=float(strength),
        steel_yield=float(PUBLISHED["bar_yield"]),
    )  # fmt: skip
    assert length == pytest.approx(bar["length"][column], rel=PUBLISHED["tolerance"])
    if length > 300.0:
        lap = 1.3 * length
        assert lap == pytest.approx(bar["lap"][column], rel=PUBLISHED["tolerance"])


@pytest.mark.parametrize(
    ("changes", "factor"),
    [
        ({"top_bar": True}, 1.3),
        ({"density_factor": 0.85}, 1.2),
        ({"density_factor": 0.75}, 1.3),
        ({"steel_yield": 500.0}, 1.25),
        ({"cover_distance": 25.2}, 2.5),
        ({"cover_distance": 63.0}, 1.0),
        ({"concrete_strength": 64.0}, 5 / 8),
        ({"concrete_strength": 80.0}, 5 / 8),
    ],
)
def test_what_lengthens_a_bar(changes, factor) -> None:
    assert length_of(**changes) == pytest.approx(factor * length_of())


def test_small_bars_are_a_fifth_shorter() -> None:
    """k4 = 0.8 up to 20M (19.5 mm); a bar of 20 mm is not a 20M bar."""
    small = length_of(diameter=19.5, bar_area=300.0, cover_distance=40.0)
    assert small == pytest.approx(1.15 * 0.8 / 40.0 * 400 / 5 * 300)
    larger = length_of(diameter=20.0, bar_area=314.0, cover_distance=40.0)
    assert larger == pytest.approx(1.15 / 40.0 * 400 / 5 * 314)


def test_no_cover_no_bond() -> None:
    assert length_of(cover_distance=0.0) == math.inf
    assert length_of(cover_distance=-5.0) == math.inf
    assert math.isnan(length_of(concrete_strength=math.nan))


@pytest.mark.parametrize(
    ("diameter", "strength", "steel_yield", "density", "expected"),
    [
        (25.2, 25.0, 400.0, 1.0, 504.0),
        (25.2, 25.0, 500.0, 1.0, 630.0),
        (25.2, 25.0, 400.0, 0.75, 655.2),
        (11.3, 64.0, 400.0, 1.0, 150.0),
        (35.7, 81.0, 300.0, 1.0, 35.7 * 100 / 8 * 0.75),
        (35.7, 64.0, 200.0, 1.0, 8 * 35.7),
    ],
)
def test_hooks_by_hand(diameter, strength, steel_yield, density, expected) -> None:
    """100 db/sqrt(f'c) x fy/400, at least 8 db and 150 mm."""
    length = hook_development_length(
        diameter=np.array(diameter), steel_yield=np.array(steel_yield),
        concrete_strength=np.array(strength), density_factor=np.array(density),
    )  # fmt: skip
    assert float(length) == pytest.approx(expected)


@pytest.mark.parametrize(
    ("diameter", "strength", "expected"),
    [(25.2, 25.0, 0.24 * 25.2 * 400 / 5), (25.2, 64.0, 0.044 * 25.2 * 400), (8.0, 64.0, 200.0)],
)
def test_compression_by_hand(diameter, strength, expected) -> None:
    length = compression_development_length(
        diameter=np.array(diameter), steel_yield=np.array(400.0),
        concrete_strength=np.array(strength),
    )  # fmt: skip
    assert float(length) == pytest.approx(expected)


def fraction(x: float, side: int = 0, start=0.0, end=6000.0, first=600.0, last=400.0) -> float:
    return float(
        developed_fraction(
            x=np.array(x), side=np.array(side), bar_start=np.array(start), bar_end=np.array(end),
            start_length=np.array(first), end_length=np.array(last),
        )
    )  # fmt: skip


@pytest.mark.parametrize(
    ("x", "expected"),
    [
        (-1.0, 0.0),
        (0.0, 0.0),
        (150.0, 0.25),
        (600.0, 1.0),
        (3000.0, 1.0),
        (5900.0, 0.25),
        (6000.0, 0.0),
        (6001.0, 0.0),
    ],
)
def test_stress_rises_from_either_end(x, expected) -> None:
    assert fraction(x) == pytest.approx(expected)


@pytest.mark.parametrize(("x", "expected"), [(2000.0, 0.5), (2300.0, 1.0), (1999.0, 0.0)])
def test_a_bar_that_goes_on_elsewhere_develops_there_too(x, expected) -> None:
    """Of 600 mm that it takes, 300 are bonded before it comes to where it is counted."""
    found = developed_fraction(
        x=np.array(x),
        side=np.array(0),
        bar_start=np.array(2000.0),
        bar_end=np.array(9000.0),
        start_length=np.array(600.0),
        end_length=np.array(600.0),
        start_beyond=np.array(300.0),
    )
    assert float(found) == pytest.approx(expected)


def test_short_bar_never_reaches_its_yield() -> None:
    """1 m long, 600 mm at either end: at most 5/6."""
    values = [fraction(x, end=1000.0, last=600.0) for x in np.linspace(0, 1000, 101)]
    assert max(values) == pytest.approx(500 / 600)


def test_anchored_ends_count_up_to_themselves() -> None:
    assert fraction(0.0, first=0.0) == 1.0
    assert fraction(0.0, side=1, first=0.0) == 1.0
    assert fraction(0.0, side=-1, first=0.0) == 0.0
    assert fraction(-0.1, first=0.0) == 0.0
    assert fraction(6000.0, side=1, last=0.0) == 0.0
    assert fraction(6000.0, last=0.0) == 1.0
    assert fraction(10.0, start=-math.inf, end=math.inf, first=0.0, last=0.0) == 1.0


def test_a_bar_without_bond_carries_nothing() -> None:
    assert fraction(3000.0, first=math.inf) == 0.0
    assert fraction(3000.0, start=-math.inf, first=math.inf) == 0.0
    assert math.isnan(fraction(3000.0, first=math.nan))


@given(
    st.floats(-100.0, 7000.0), st.floats(1.0, 3000.0), st.floats(1.0, 3000.0),
    st.sampled_from([-1, 0, 1]),
)  # fmt: skip
def test_seen_from_the_other_end_it_is_the_same(x, first, last, side) -> None:
    assert fraction(x, side, first=first, last=last) == pytest.approx(
        fraction(6000.0 - x, -side, first=last, last=first), abs=1e-9
    )


# --- along a beam


SECTION = (((0.0, 0.0), (300.0, 0.0), (300.0, 500.0), (0.0, 500.0)),)


def members_with(start_anchor: int, end_anchor: int, height: float) -> Members:
    """300 x 500, 3-25M from 200 to 5800 mm and a second layer, 2-25M, from 1500 to 4500 mm."""
    one = np.ones((1, 2))
    return Members(
        concrete_strength=np.array([25.0]),
        density_factor=np.array([1.0]),
        aggregate_size=np.array([20.0]),
        span=np.array([6000.0]),
        layer_height=np.array([[height, height + 50.0]]),
        layer_area=np.array([[1500.0, 1000.0]]),
        layer_bar_area=500.0 * one,
        layer_diameter=25.2 * one,
        layer_yield=400.0 * one,
        layer_start=np.array([[200.0, 1500.0]]),
        layer_end=np.array([[5800.0, 4500.0]]),
        layer_start_anchor=np.array([[start_anchor, ANCHOR_STRAIGHT]]),
        layer_end_anchor=np.array([[end_anchor, ANCHOR_STRAIGHT]]),
        layer_cover_distance=60.0 * one,
        strips=pack_strips([strips_of(SECTION)]),
        overhang_left=np.zeros(1),
        overhang_right=np.zeros(1),
        flange_thickness=np.zeros(1),
    )


def prepared_at(members: Members, x: np.ndarray) -> Prepared:
    rows = np.zeros(len(x), dtype=np.intp)
    stations = Stations(
        beam=rows,
        section=rows,
        x=x,
        side=rows,
        stirrup_area=np.zeros(len(x)),
        stirrup_spacing=np.full(len(x), np.inf),
        stirrup_yield=np.full(len(x), 400.0),
        inside=np.ones(len(x), dtype=np.bool_),
        shear_loss=np.zeros(len(x)),
    )
    return prepare(members, stations, Options("general"))


def beam_with(start_anchor: int, end_anchor: int, x: np.ndarray, height: float = 60.0) -> Prepared:
    return prepared_at(members_with(start_anchor, end_anchor, height), x)


LD = 1.15 / 60.0 * 400 / 5 * 500.0
LDH = 100 * 25.2 / 5


def test_area_grows_along_the_development_length() -> None:
    x = np.array([0.0, 200.0, 200.0 + LD / 2, 200.0 + LD, 1500.0, 1500.0 + LD / 4, 3000.0])
    face = beam_with(ANCHOR_STRAIGHT, ANCHOR_STRAIGHT, x).sagging
    expected = [0.0, 0.0, 750.0, 1500.0, 1500.0, 1750.0, 2500.0]
    np.testing.assert_allclose(face.tension_area, expected, rtol=1e-9, atol=1e-9)
    np.testing.assert_allclose(
        face.tension_area_full, [0, 0, 1500, 1500, 1500, 2500, 2500], rtol=1e-12
    )
    np.testing.assert_allclose(face.tension_force, 0.85 * 400 * face.tension_area, rtol=1e-12)
    assert face.moment_resistance[:2].tolist() == [0.0, 0.0]
    a = 0.85 * 400 * 750 / ((0.85 - 0.0015 * 25) * 0.65 * 25 * 300)
    assert face.moment_resistance[2] == pytest.approx(0.85 * 400 * 750 * (440 - a / 2), rel=1e-9)
    assert (np.diff(face.moment_resistance) >= 0).all()


def test_hooks_and_anchored_ends_along_the_beam() -> None:
    x = np.array([200.0, 200.0 + LDH / 2, 200.0 + LDH, 5800.0 - LDH / 2, 5800.0])
    hooked = beam_with(ANCHOR_HOOK, ANCHOR_FULL, x).sagging
    np.testing.assert_allclose(hooked.tension_area, [0, 750, 1500, 1500, 1500], rtol=1e-9)


def test_top_bars_develop_over_a_longer_length() -> None:
    """More than 300 mm of concrete below: 1.3 times the length, on the top face."""
    x = np.array([200.0 + 1.3 * LD / 2])
    face = beam_with(ANCHOR_STRAIGHT, ANCHOR_STRAIGHT, x, height=390.0).hogging
    assert face.tension_area[0] == pytest.approx(750.0)


def test_a_hook_does_not_shorten_the_way_in_compression() -> None:
    """Where ldh = 12.5 db ends, f'c 64, a hooked bar in compression has 12.5/17.6 of its yield."""
    members = replace(
        members_with(ANCHOR_HOOK, ANCHOR_HOOK, 60.0),
        concrete_strength=np.array([64.0]),
        layer_height=np.array([[60.0, 440.0]]),
        layer_area=np.array([[1500.0, 4500.0]]),
        layer_start_anchor=np.array([[ANCHOR_HOOK, ANCHOR_FULL]]),
        layer_start=np.array([[200.0, 0.0]]),
    )
    hook, push = 12.5 * 25.2, 17.6 * 25.2
    prepared = prepared_at(members, np.array([200.0 + hook, 200.0 + push]))
    np.testing.assert_allclose(prepared.sagging.tension_area, 1500.0, rtol=1e-12)
    displaced = (0.85 - 0.0015 * 64) * 0.65 * 64
    expected = 1500.0 * (0.85 * 400.0 * hook / push - displaced)
    less, full = prepared.hogging.compression_steel_force
    assert less == pytest.approx(expected, rel=1e-9)
    assert full > 1.2 * less


def test_stations_in_any_number_give_the_same() -> None:
    """Neighbours with one state share one solution: dense and single stations agree."""
    x = np.linspace(0.0, 6000.0, 121)
    dense = beam_with(ANCHOR_HOOK, ANCHOR_STRAIGHT, x).sagging
    for row in range(0, 121, 7):
        alone = beam_with(ANCHOR_HOOK, ANCHOR_STRAIGHT, x[row : row + 1]).sagging
        assert alone.moment_resistance[0] == pytest.approx(dense.moment_resistance[row], rel=1e-12)

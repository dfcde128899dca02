"""The sheet of a beam: its loads and how its demand arises, against statics by hand."""

from __future__ import annotations

import math
import re

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from ifccheck.beam import Load, SupportKind
from ifccheck.sheet import LineValues, Sheet, sheet_lines, sheet_maker
from ifccheck.standards import CalculationLine
from tests.made_subjects import CASES, STEEL, line, point, rated, subject

SPAN = 5800.0
"""Between the middles of bearings of 200 mm on a beam of 6 m [mm]"""
WEIGHT = 24e-6 * 300.0 * 600.0
"""24 kN/m3 on 300 x 600 [N/mm]"""


def sheet_of(loads: tuple[Load, ...], ends: tuple[SupportKind, SupportKind]) -> Sheet:
    batch, ratings = rated(subject(loads=loads, ends=ends))
    return sheet_maker(batch, ratings, CASES)(0)


def test_self_weight_is_among_the_loads() -> None:
    sheet = sheet_of((line("floor", 10.0),), ("pinned", "pinned"))
    weight, floor = sheet.loads
    assert (weight.case, weight.start, weight.end) == ("self", 0.0, 6000.0)
    assert weight.values == pytest.approx((WEIGHT, WEIGHT))
    assert weight.text == "4.32 kN/m (self weight, 24 kN/m3)"
    assert floor.case == "floor"


def test_the_demand_of_a_simple_beam_arises_by_hand() -> None:
    """w L^2 / 8 for each line load, P a b / L for the point load, at mid-span."""
    sheet = sheet_of((line("floor", 10.0), point("press", 40e3, 3000.0)), ("pinned", "pinned"))
    flexure = sheet.checks[0]
    shares = {share.case: share for share in flexure.shares}
    assert {name: share.factor for name, share in shares.items()} == pytest.approx(
        {"self": 1.25, "floor": 1.5, "press": 1.5}
    )
    assert shares["self"].moment == pytest.approx(WEIGHT * SPAN**2 / 8.0)
    assert shares["floor"].moment == pytest.approx(10.0 * SPAN**2 / 8.0)
    assert shares["press"].moment == pytest.approx(40e3 * SPAN / 4.0)
    assert [shares[name].nature for name in ("self", "press")] == ["permanent", "imposed"]


def test_reactions_are_unfactored_and_carry_all_the_load() -> None:
    """Point load at 2.1 m: 2.0 m from the middle of the first bearing."""
    sheet = sheet_of((point("press", 40e3, 2100.0),), ("pinned", "pinned"))
    weight, press = sheet.reactions
    assert weight.forces == pytest.approx((WEIGHT * 3000.0, WEIGHT * 3000.0))
    assert press.forces == pytest.approx((40e3 * 3800 / SPAN, 40e3 * 2000 / SPAN))
    assert (press.start_moment, press.end_moment) == pytest.approx((0.0, 0.0), abs=1.0)
    held = sheet_of((line("floor", 10.0),), ("fixed", "fixed")).reactions[1]
    assert held.start_moment == pytest.approx(-10.0 * SPAN**2 / 12.0)
    assert held.end_moment == pytest.approx(-10.0 * SPAN**2 / 12.0)


@settings(deadline=None, max_examples=25)
@example(0.0, 2.2250738585e-313, 300.0, ("pinned", "pinned"))
@example(-3.0, 2.2250738585e-313, 300.0, ("pinned", "pinned"))
@example(0.0, -2.225073858507e-311, 300.0, ("pinned", "pinned"))
@example(3.0, 1e-308, 300.0, ("fixed", "pinned"))
@given(
    st.floats(-20.0, 25.0), st.floats(-200e3, 250e3), st.floats(300.0, 5700.0),
    st.sampled_from([("pinned", "pinned"), ("fixed", "pinned"), ("fixed", "free")]),
)  # fmt: skip
def test_the_shares_of_the_cases_make_the_demand_that_was_rated(
    floor: float, force: float, at: float, ends: tuple[SupportKind, SupportKind]
) -> None:
    batch, ratings = rated(
        subject(loads=(line("floor", floor), point("press", force, at)), ends=ends)
    )
    sheet = sheet_maker(batch, ratings, CASES)(0)
    for found, check in zip(batch.states, sheet.checks, strict=True):
        if not check.shares:
            continue
        place = np.unravel_index(int(found.worst.shown[0]), batch.demand.moment.shape)
        for effect, whole in (("moment", batch.demand.moment), ("shear", batch.demand.shear)):
            parts = [
                share.factor * getattr(share, effect)
                for share in check.shares
                if not math.isnan(share.factor)
            ]
            size = max((abs(part) for part in parts), default=1.0)
            assert sum(parts) == pytest.approx(float(whole[place]), abs=1e-9 * size + 1e-6)


def test_a_case_that_relieves_has_its_lesser_factor() -> None:
    """Uplift of an imposed case counts nothing; self weight counts in full."""
    sheet = sheet_of((line("floor", -3.0), point("press", 40e3, 3000.0)), ("pinned", "pinned"))
    factors = {share.case: share.factor for share in sheet.checks[0].shares}
    assert factors["floor"] == 0.0
    assert factors["self"] == pytest.approx(1.25)


def test_a_sheet_tells_the_yield_that_was_rated() -> None:
    sheet = sheet_of((line("floor", 10.0),), ("pinned", "pinned"))
    assert sheet.bar_yield == (STEEL,) * len(sheet.bars)
    assert sheet.stirrup_yield == (STEEL,)


def test_an_infinite_bound_is_said_not_to_be_applied() -> None:
    lines = (
        CalculationLine("M_max", "greatest moment", "", "most", "N*mm", ""),
        CalculationLine("U", "utilisation", "", "used", "", ""),
    )
    shown = sheet_lines(LineValues({"M_max": math.inf, "U": math.inf}, lines))
    assert [each.result for each in shown] == ["not applied", "infinite"]


def test_a_check_of_which_nothing_is_demanded_says_so() -> None:
    sheet = sheet_of((line("floor", 10.0),), ("pinned", "pinned"))
    hogging = next(check for check in sheet.checks if "hogging" in check.title)
    assert (hogging.outcome, hogging.lines, hogging.shares) == ("nothing demanded", (), ())


def test_the_safe_load_of_a_trapezoid_gives_its_two_intensities() -> None:
    """The factor on 4 kN/m and on 12 kN/m, neither rounded up."""
    press = Load("beam", "press", "line", 1200.0, 4800.0, (4.0, 12.0), text="4 to 12 kN/m")
    _, (rating,) = rated(subject(loads=(press,)))
    (safe,) = rating.safe_loads
    found = re.fullmatch(r"(\S+) x assigned: (\S+) kN/m to (\S+) kN/m", safe.text)
    assert found is not None
    low, high = float(found[2]), float(found[3])
    assert low <= 4.0 * safe.factor < low * 1.01
    assert high <= 12.0 * safe.factor < high * 1.01

"""Ends that columns restrain, through the whole program, against slope and deflection by hand."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.rated_frames import line_on_columns, rated_frame, sheets_of, uniform

BY_COLUMNS = '\n[frame]\nrestraint = "columns"\ncontinuity = "always"\n'
PINNED = '[[supports]]\nbeams = ["ONE"]\nstart = "pinned"\nend = "pinned"\n'
SPAN = 6000.0
BEAM = 300.0 * 600.0**3 / 12.0 / SPAN
COLUMN = 300.0**4 / 12.0 / (3000.0 + 300.0)
"""I / L of 300 x 600 over 6 m, and of 300 x 300 from its foot to the middle of the beam's depth"""


def end_moments(folder: Path, frame: str, *entries: str) -> tuple[float, float]:
    """Of the case floor, unfactored [kN*m]."""
    beams, columns = line_on_columns([SPAN])
    run = rated_frame(folder, beams, columns, uniform("floor", 10.0), *entries, frame=frame)
    (found,) = [each for each in sheets_of(run)["ONE"].reactions if each.case == "floor"]
    return found.start_moment / 1e6, found.end_moment / 1e6


def test_columns_hold_a_part_of_the_fixed_end_moment(tmp_path: Path) -> None:
    """Symmetric: M (1 + L / 2 E I k) = -w L^2 / 12, k = 4 E Ic / Lc with the far end fixed; so
    M = -w L^2 / 12 x 2 Kc / (2 Kc + Kb) with K = I / L."""
    held = 2.0 * COLUMN / (2.0 * COLUMN + BEAM)
    wanted = -10.0 * 6.0**2 / 12.0 * held
    assert end_moments(tmp_path, BY_COLUMNS) == pytest.approx((wanted, wanted), rel=1e-9)


def test_what_the_brief_says_of_an_end_comes_before_its_columns(tmp_path: Path) -> None:
    assert end_moments(tmp_path, BY_COLUMNS, PINNED) == pytest.approx((0.0, 0.0), abs=1e-9)
    fixed = BY_COLUMNS.replace("columns", "fixed")
    assert end_moments(tmp_path, fixed, PINNED) == pytest.approx((0.0, 0.0), abs=1e-9)


def test_columns_hold_inner_supports_of_a_line(tmp_path: Path) -> None:
    """Two equal spans, both loaded: the inner support does not turn, the outer ones do by half of
    what a span with a fixed far end leaves. Slope and deflection: with k = 4 Kc and t the turn of
    the outer end, (4 Kb + k) t = w L^2 / 12, M outer = -k t, M inner = -(w L^2 / 12 + 2 Kb t)."""
    beams, columns = line_on_columns([SPAN, SPAN])
    entry = uniform("floor", 10.0)
    run = rated_frame(tmp_path, beams, columns, entry, frame=BY_COLUMNS, whole=True)
    sheet = sheets_of(run)["ONE"]
    (found,) = [each for each in sheet.reactions if each.case == "floor"]
    fixing = 10.0 * 6.0**2 / 12.0
    turn = fixing / (4.0 * BEAM + 4.0 * COLUMN)
    outer, inner = -4.0 * COLUMN * turn, -(fixing + 2.0 * BEAM * turn)
    assert found.start_moment / 1e6 == pytest.approx(outer, rel=1e-9)
    beyond = 10.0 * 0.15  # on the half of the column that the beam reaches over
    at_end = beyond + 10.0 * 6.0 / 2.0 + (inner - outer) / 6.0
    assert found.forces[0] / 1e3 == pytest.approx(at_end, rel=1e-9)

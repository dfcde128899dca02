"""Published coefficients of continuous beams, propped beams, cantilevers and overhangs, through the
whole program: from an IFC model on columns to what the sheets show."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import yaml

from ifccheck.sheet import Sheet
from tests.models import MadeColumn, load
from tests.rated_frames import (
    ALONE,
    envelope,
    line_on_columns,
    lying,
    rated_frame,
    reactions,
    sheets_of,
    uniform,
)

L, W = 6.0, 10.0
"""Span [m] and load [kN/m]"""
STUB = 0.15
"""How far a line reaches past the middle of its outer columns: what acts there goes straight down
into them [m]"""


@cache
def _published(reference: Path) -> Mapping[str, Any]:
    entries = yaml.safe_load((reference / "statics.yaml").read_text())
    return {entry["id"]: entry for entry in entries}


def sheets(folder: Path, count: int, cut: bool, *entries: str, whole: bool = False) -> list[Sheet]:
    """The sheets of a line of equal spans, in their order."""
    beams, columns = line_on_columns([1e3 * L] * count, cut=cut)
    run = rated_frame(folder, beams, columns, *entries, ALONE, whole=whole)
    found = sheets_of(run)
    return [found[mark] for mark in sorted(found)]


def moments(found: list[Sheet]) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Places along the line from the first column [m], least and greatest moment there."""
    parts, before = [], 0.0
    for number, sheet in enumerate(found):
        x, low, high = envelope(sheet, "bending moment")
        start = sheet.spans[0].span.start
        parts.append(((x - start) / 1e3 + before, low, high))
        before += sum(each.length for each in sheet.spans) / 1e3
        assert number == 0 or start == pytest.approx(0.0, abs=1e-6)
    x, low, high = (np.concatenate(column) for column in zip(*parts, strict=True))
    return x, low, high


def forces(found: list[Sheet], stubs: tuple[float, float] = (0.0, 0.0)) -> np.ndarray:
    """Reactions along the line [kN]: those of two beams that meet over a column together; without
    what acts past the middle of its outer columns."""
    of_beams = [reactions(sheet, "floor") for sheet in found]
    total = np.zeros(sum(len(own) - 1 for own in of_beams) + 1)
    first = 0
    for own in of_beams:
        total[first : first + len(own)] += own
        first += len(own) - 1
    total[[0, -1]] -= stubs
    return total


def at(x: np.ndarray, values: np.ndarray, place: float) -> np.ndarray:
    return values[np.abs(x - place) < 1e-6]


@pytest.mark.parametrize("cut", [False, True])
@pytest.mark.parametrize("count", [2, 3, 4, 6])
def test_full_load_gives_the_published_coefficients(
    reference: Path, tmp_path: Path, count: int, cut: bool
) -> None:
    entry = _published(reference)[f"ST-CONT-{count}"]
    rel = entry["tolerance_pct"] / 100.0
    found = sheets(tmp_path, count, cut, uniform("floor", W), whole=True)
    x, low, high = moments(found)
    for number, value in enumerate(entry["outputs"]["M_support"], 1):
        assert -at(x, low, number * L).min() / (W * L**2) == pytest.approx(value, rel=rel)
    for number, value in enumerate(entry["outputs"]["M_span"]):
        inside = (x >= number * L) & (x <= (number + 1) * L)
        assert high[inside].max() / (W * L**2) == pytest.approx(value, rel=rel, abs=6e-5)
    total = forces(found, (W * STUB, W * STUB)) / (W * L)
    for number, value in enumerate(entry["outputs"]["R"]):
        assert total[number] == pytest.approx(value, rel=rel)
        assert total[-1 - number] == pytest.approx(value, rel=rel)
    assert total.sum() == pytest.approx(count, rel=1e-9)


@pytest.mark.parametrize("cut", [False, True])
@pytest.mark.parametrize("count", [2, 3, 4, 6])
def test_shear_beside_supports_is_that_of_the_published_reactions(
    reference: Path, tmp_path: Path, count: int, cut: bool
) -> None:
    """Beside each support the shear on either side follows from the reactions before it."""
    entry = _published(reference)[f"ST-CONT-{count}"]
    R = entry["outputs"]["R"]
    found = sheets(tmp_path, count, cut, uniform("floor", W), whole=True)
    low, high, before = [], [], 0.0
    for sheet in found:
        x, least, most = envelope(sheet, "shear force")
        along = (x - sheet.spans[0].span.start) / 1e3 + before
        for place in range(count + 1):
            low += [(place, value) for value in at(along, least, place * L)]
            high += [(place, value) for value in at(along, most, place * L)]
        before += sum(each.length for each in sheet.spans) / 1e3
    for place in range(len(R)):
        left = (sum(R[:place]) - place) * W * L
        right = left + R[place] * W * L
        near = pytest.approx
        if place:
            assert min(value for at_, value in low if at_ == place) == near(left, rel=5e-3)
        assert max(value for at_, value in high if at_ == place) == near(right, rel=5e-3)


@pytest.mark.parametrize("cut", [False, True])
@pytest.mark.parametrize("count", [2, 4, 5])
def test_patterns_give_the_published_greatest_moments(
    reference: Path, tmp_path: Path, count: int, cut: bool
) -> None:
    entry = _published(reference)[f"ST-PATT-{count}"]
    rel = entry["tolerance_pct"] / 100.0
    x, low, high = moments(sheets(tmp_path, count, cut, uniform("floor", W)))
    wanted = entry["outputs"]
    assert -at(x, low, L).min() / (W * L**2) == pytest.approx(wanted["Ms1"], rel=rel)
    assert high[x <= L].max() / (W * L**2) == pytest.approx(wanted["M1"], rel=rel)
    if "M2" in wanted:
        second = (x >= L) & (x <= 2.0 * L)
        assert high[second].max() / (W * L**2) == pytest.approx(wanted["M2"], rel=rel)


@pytest.mark.parametrize("cut", [False, True])
def test_alternate_spans_give_the_published_coefficients(
    reference: Path, tmp_path: Path, cut: bool
) -> None:
    entry = _published(reference)["ST-CONT4-ALT"]
    outputs, rel = entry["outputs"], entry["tolerance_pct"] / 100.0
    stubs = (W * STUB, 0.0) if cut else (0.0, 0.0)
    if cut:
        loads = [uniform("floor", W, "T1"), uniform("floor", W, "T3")]
        loads += ['[[beams]]\nbeams = ["T2", "T4"]\nunloaded = true\n']
    else:
        loads = [
            load("floor", 'line = "10 kN/m"', f'from = "{start} m"', f'to = "{start + L} m"')
            for start in (0.15, 0.15 + 2.0 * L)
        ]
    found = sheets(tmp_path, 4, cut, *loads, whole=True)
    x, low, high = moments(found)
    for number, value in enumerate(outputs["R"]):
        assert forces(found, stubs)[number] / (W * L) == pytest.approx(value, rel=rel)
    for number, name in enumerate(("MB", "MC", "MD"), 1):
        assert -at(x, low, number * L).min() / (W * L**2) == pytest.approx(outputs[name], rel=rel)
    for place, name in ((0.0, "M1"), (2.0 * L, "M3")):
        span = (x >= place) & (x <= place + L)
        assert high[span].max() / (W * L**2) == pytest.approx(outputs[name], rel=rel)


HELD = '[[supports]]\nbeams = ["ONE"]\nstart = "fixed"\n'


def one_span(folder: Path, *entries: str) -> tuple[Any, ...]:
    """Moments and reactions of one span, x from its start."""
    found = sheets(folder, 1, False, *entries)
    return (*moments(found), forces(found))


def test_a_propped_beam_under_even_load_has_the_published_coefficients(
    reference: Path, tmp_path: Path
) -> None:
    wanted = _published(reference)["ST-PC-UDL"]["outputs"]
    x, low, high, total = one_span(tmp_path, uniform("floor", W), HELD)
    assert -at(x, low, 0.0).min() / (W * L**2) == pytest.approx(wanted["Mfix"], rel=2e-3)
    assert high.max() / (W * L**2) == pytest.approx(wanted["Mspan"], rel=2e-3)
    ends = wanted["Rfix"] + STUB / L, wanted["Rprop"] + STUB / L
    assert total / (W * L) == pytest.approx(ends, rel=2e-3)


def test_a_propped_beam_under_a_load_at_its_middle_has_the_published_coefficients(
    reference: Path, tmp_path: Path
) -> None:
    wanted = _published(reference)["ST-PC-P"]["outputs"]
    entry = load("floor", 'point = "10 kN"', 'at = "3.15 m"')
    x, low, high, total = one_span(tmp_path, entry, HELD)
    assert -at(x, low, 0.0).min() / (W * L) == pytest.approx(wanted["Mfix"], rel=1e-3)
    assert high.max() / (W * L) == pytest.approx(wanted["Mload"], rel=1e-3)
    assert total / W == pytest.approx([wanted["Rfix"], wanted["Rprop"]], rel=1e-3)


def test_a_beam_fixed_at_both_ends_has_the_published_coefficients(
    reference: Path, tmp_path: Path
) -> None:
    wanted = _published(reference)["ST-FF-Pa"]["outputs"]
    entry = load("floor", 'point = "10 kN"', f'at = "{0.15 + 0.3 * L} m"')
    held = HELD + 'end = "fixed"\n'
    x, low, high, _ = one_span(tmp_path, entry, held)
    assert -at(x, low, 0.0).min() / (W * L) == pytest.approx(wanted["MA"], rel=1e-3)
    assert -at(x, low, L).min() / (W * L) == pytest.approx(wanted["MB"], rel=1e-3)
    assert at(x, high, 0.3 * L).max() / (W * L) == pytest.approx(wanted["Mload"], rel=1e-3)


def test_a_beam_built_into_a_column_that_goes_up_past_it_is_a_cantilever(
    reference: Path, tmp_path: Path
) -> None:
    """2 m from the face of the column, under even load: wL2/2 and wL at the face."""
    wanted = _published(reference)["ST-CANT"]["outputs"]
    beams = [lying("ONE", (150.0, 0.0, 0.0), 2000.0)]
    column = MadeColumn(0.0, z=(-3000.0, 3000.0))
    run = rated_frame(tmp_path, beams, [column], uniform("floor", W), ALONE)
    sheet = sheets_of(run)["ONE"]
    x, low, _ = envelope(sheet, "bending moment")
    assert x[low.argmin()] == pytest.approx(0.0, abs=1e-6)
    assert -low.min() / (W * 2.0**2) == pytest.approx(wanted["M_udl"], rel=1e-3)
    assert reactions(sheet, "floor") == pytest.approx((W * 2.0, 0.0), rel=1e-9)


def test_an_overhang_hangs_over_the_last_column(tmp_path: Path) -> None:
    """By equilibrium: M = wa2/2 over the column, R2 = w (L + a)2 / 2L, R1 the rest."""
    a = 2.0
    beams, columns = line_on_columns([1e3 * L], overhangs=(0.0, 1e3 * a))
    run = rated_frame(tmp_path, beams, columns, uniform("floor", W), ALONE, whole=True)
    sheet = sheets_of(run)["ONE"]
    x, low, _ = envelope(sheet, "bending moment")
    assert -at(x / 1e3, low, L + 0.15).min() == pytest.approx(W * a**2 / 2.0, rel=1e-9)
    right = W * (L + a) ** 2 / (2.0 * L)
    left = W * (L + a) - right + W * STUB
    assert reactions(sheet, "floor") == pytest.approx((left, right, 0.0), rel=1e-9)


def test_the_span_beside_an_overhang_takes_the_worse_of_both(tmp_path: Path) -> None:
    """Sagging without load on the overhang, shear at the inner face with it."""
    a = 2.0
    beams, columns = line_on_columns([1e3 * L], overhangs=(0.0, 1e3 * a))
    run = rated_frame(tmp_path, beams, columns, uniform("floor", W), ALONE)
    sheet = sheets_of(run)["ONE"]
    _, _, high = envelope(sheet, "bending moment")
    assert high.max() == pytest.approx(W * L**2 / 8.0, rel=1e-9)
    x, low, high = envelope(sheet, "shear force")
    left = -W * L / 2.0 - W * a**2 / (2.0 * L)
    assert at(x / 1e3, low, L + 0.15).min() == pytest.approx(left, rel=1e-9)
    assert at(x / 1e3, high, L + 0.15).max() == pytest.approx(W * a, rel=1e-9)

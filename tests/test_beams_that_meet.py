"""Beams in one line that meet over what carries them: where moment passes, and what it leans on."""

from __future__ import annotations

import math
from collections.abc import Mapping
from pathlib import Path

import pytest

from ifccheck.beam import Verdict
from ifccheck.rating.in_line import NOT_HELD
from tests.models import MadeBeam, MadeColumn
from tests.rated_frames import (
    STRONG,
    doubts,
    line_on_columns,
    lying,
    passed,
    rated_frame,
    reactions,
    reasons,
    sheets_of,
    uniform,
    verdicts,
)

WEAK = {**STRONG, "BottomBars": "2-10M"}
SAID = '[[supports]]\nbeams = ["{}"]\n{} = "{}"\n'


def apart() -> tuple[list[MadeBeam], list[MadeColumn]]:
    """A ends over a column and at the face of a girder that stands beside it, whose other face B
    meets."""
    beams = [
        lying("G", (6150.0, -3150.0, 100.0), 6300.0, 90.0, depth=700.0),
        lying("A", (0.0, 0.0, 0.0), 6000.0),
        lying("B", (6300.0, 0.0, 0.0), 6000.0),
    ]
    columns = [MadeColumn(6150.0, y, z=(-3000.0, 100.0)) for y in (-3000.0, 3000.0)]
    return beams, columns + [MadeColumn(x) for x in (150.0, 5850.0, 12150.0)]


def told(path: Path, *entries: str) -> tuple[dict[str, Verdict], str, float]:
    """Verdicts, reasons of B, and what comes down on G [kN]."""
    run = rated_frame(path, *apart(), uniform("floor", 10.0), *entries)
    found = passed(sheets_of(run)["G"], "floor")
    return verdicts(run), reasons(run, "B"), sum(each.values[0] for each in found) / 1e3


def test_beams_that_stand_on_different_members_do_not_go_on_unseen(tmp_path: Path) -> None:
    """B spans 6 m from the girder's axis to the middle of its column, simply: w L / 2."""
    found, why, load = told(tmp_path)
    assert set(found.values()) == {Verdict.NOT_RATED}
    assert "call its start pinned under [[supports]]" in why
    assert load == pytest.approx(10.0 * 6.0 / 2.0, rel=1e-9)
    found, why, load = told(tmp_path / "said", SAID.format("B", "start", "pinned"))
    assert set(found.values()) == {Verdict.ADEQUATE}
    assert load == pytest.approx(10.0 * 6.0 / 2.0, rel=1e-9)


@pytest.mark.parametrize(("beam", "end"), [("T1", "end"), ("T2", "start")])
def test_an_end_that_the_brief_calls_pinned_does_not_go_on(
    tmp_path: Path, beam: str, end: str
) -> None:
    """Each then spans by itself: w L / 2, not the 5 w L / 8 of two spans that go on."""
    beams, columns = line_on_columns([6000.0, 6000.0], cut=True)
    run = rated_frame(
        tmp_path, beams, columns, uniform("floor", 10.0), SAID.format(beam, end, "pinned")
    )
    sheets = sheets_of(run)
    for mark in ("T1", "T2"):
        inner = reactions(sheets[mark], "floor")[mark == "T1"]
        assert inner == pytest.approx(10.0 * 6.0 / 2.0, rel=1e-9)
        texts = [each.text for each in sheets[mark].rating.remarks]
        (text,) = [text for text in texts if text.startswith("meets")]
        whose = "its" if mark == beam else "the other's"
        assert text.endswith(f"takes no moment from it: the brief says that {whose} end holds none")


def test_an_end_that_the_brief_calls_fixed_is_held_by_the_beam_that_it_goes_on_into(
    tmp_path: Path,
) -> None:
    """Not by a support that does not turn: one span of two is loaded, 7/16 of w L at the far
    end, where half a column bears 0.15 m more."""
    beams, columns = line_on_columns([6000.0, 6000.0], cut=True)
    run = rated_frame(
        tmp_path, beams, columns, uniform("floor", 10.0, "T1"), SAID.format("T1", "end", "fixed")
    )
    outer, _ = reactions(sheets_of(run)["T1"], "floor")
    assert outer == pytest.approx(7.0 / 16.0 * 60.0 + 1.5, rel=1e-9)


# --- beams that lean on each other ----------------------------------------------------------------


def line_with(second: Mapping[str, str]) -> tuple[list[MadeBeam], list[MadeColumn]]:
    """Two beams over three columns, the first of them strong."""
    beams, columns = line_on_columns([6000.0, 6000.0], cut=True)
    beams[1] = lying("T2", beams[1].origin, beams[1].length, notation=second)
    return beams, columns


@pytest.mark.parametrize(
    ("second", "why"),
    [({**STRONG, "TopBars": "none"}, "falls short"), ({}, "is not rated")],
)
def test_a_beam_that_goes_on_into_one_that_is_not_adequate_is_not(
    tmp_path: Path, second: Mapping[str, str], why: str
) -> None:
    """T1 alone has all that it needs, but the moment over the support is not carried on."""
    entries = uniform("floor", 10.0), uniform("press", 1.0)
    run = rated_frame(tmp_path, *line_with(second), *entries)
    rating = sheets_of(run)["T1"].rating
    assert rating.verdict is Verdict.NOT_RATED
    assert reasons(run, "T1") == f"{NOT_HELD}: T2, which {why}"
    assert math.isnan(rating.utilisation)
    assert [math.isnan(safe.factor) for safe in rating.safe_loads] == [True]
    assert run.exit_status == 3
    said = SAID.format("T1", "end", "pinned")
    run = rated_frame(tmp_path / "apart", *line_with(second), *entries, said)
    assert verdicts(run)["T1"] is Verdict.ADEQUATE


def test_a_beam_that_falls_short_stays_so_beside_one_that_is_not_rated(tmp_path: Path) -> None:
    beams, columns = line_with({})
    beams[0] = lying("T1", beams[0].origin, beams[0].length, notation=WEAK)
    run = rated_frame(tmp_path, beams, columns, uniform("floor", 30.0), uniform("press", 1.0))
    rating = sheets_of(run)["T1"].rating
    assert rating.verdict is Verdict.FALLS_SHORT
    assert f"also unsettled: {NOT_HELD}: T2, which is not rated" in doubts(run, "T1")
    assert [math.isnan(safe.factor) for safe in rating.safe_loads] == [True]
    assert sheets_of(run)["T2"].rating.reasons[0].text == "no reinforcement found"

"""Beams in one line that meet over what carries them: where moment passes, and what it leans on."""

from __future__ import annotations

from pathlib import Path

import pytest

from ifccheck.beam import Verdict
from tests.models import MadeBeam, MadeColumn
from tests.rated_frames import (
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

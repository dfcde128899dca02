"""A member under a beam between its ends is a support, until the engineer says by name that it
is none: else the beam would be rated as a single span, with nothing in hogging."""

from __future__ import annotations

import io
from pathlib import Path

import pytest
from rich.console import Console

from ifccheck.beam import Verdict
from ifccheck.brief.load import load_brief
from ifccheck.errors import BriefError
from ifccheck.publish.html import render
from ifccheck.publish.terminal_sheet import sheet_text
from ifccheck.surveying import survey
from tests.step_halls import LOAD, Beam, Block, brief, hall, write
from tests.test_rules_that_protect import (
    check_adequate,
    check_not_rated,
    load,
    rated,
    rating_of,
    report_on,
    stated,
)

UNDER = {
    "a column": hall(Beam(), others=[Block("K-1", (3000.0, 0.0, 0.0), (300, 300), 3000)]),
    "a wall": hall(
        Beam(), others=[Block("K-1", (3000.0, 0.0, 0.0), (200, 4000), 3000, "IFCWALL")]
    ),
    "a girder": hall(
        Beam(), Beam("K-1", at=(3000.0, -3000.0, 2400.0), along=(0.0, 1.0, 0.0))
    ),
}  # fmt: skip
HELD = 'start = "pinned"\nend = "pinned"'
COMPLETE = stated("beams", "loads_complete = true", beams="*")
TOLD = 'if it does not hold the beam, write ignore = ["K-1"] under [[supports]]'


@pytest.mark.parametrize("kind", UNDER)
@pytest.mark.parametrize("beams", ["B-1", "B-*", "*"])
def test_an_entry_on_the_ends_does_not_make_it_vanish(
    tmp_path: Path, kind: str, beams: str
) -> None:
    rating = rated(tmp_path, UNDER[kind], LOAD, COMPLETE, stated("supports", HELD, beams=beams))
    check_not_rated(rating, "supports unknown: K-1 ")
    check_not_rated(rating, TOLD)


@pytest.mark.parametrize("kind", UNDER)
@pytest.mark.parametrize("ends", ["", HELD + "\n"])
def test_named_it_is_passed_over_and_the_word_is_seen(tmp_path: Path, kind: str, ends: str) -> None:
    ignored = stated("supports", f'{ends}ignore = ["K-1"]')
    report = report_on(tmp_path, UNDER[kind], LOAD, COMPLETE, ignored)
    rating = rating_of(report)
    check_adequate(rating)
    word = "under it at 2."
    assert any("the engineer states: ignore: K-1 (" in r.text for r in rating.remarks)
    assert any(word in str(item.value) for item in rating.basis)
    assert word in render(report)
    out = io.StringIO()
    console = Console(file=out, width=400)
    console.print(sheet_text(report.sheet(rating.beam), console))
    assert word in out.getvalue()


def test_each_must_be_named(tmp_path: Path) -> None:
    two = hall(
        Beam(),
        others=[
            Block("K-1", (2000.0, 0.0, 0.0), (300, 300), 3000),
            Block("K-2", (4000.0, 0.0, 0.0), (300, 300), 3000),
        ],
    )
    one = stated("supports", 'ignore = ["K-1"]')
    check_not_rated(rated(tmp_path, two, LOAD, one), "supports unknown: K-2 (IfcColumn)")
    check_adequate(rated(tmp_path, two, LOAD, stated("supports", 'ignore = ["K-1", "K-2"]')))


def test_a_girder_that_does_not_hold_it_may_still_load_it(tmp_path: Path) -> None:
    rating = rated(tmp_path, UNDER["a girder"], LOAD, stated("supports", 'ignore = ["K-1"]'))
    check_not_rated(rating, "reactions not included: K-1")


def test_a_member_at_an_end_cannot_be_passed_over(tmp_path: Path) -> None:
    """How an end stands is said by start and end."""
    named = stated("supports", 'ignore = ["C-B-1-start"]')
    with pytest.raises(BriefError, match="'C-B-1-start' touches no beam of this entry from below"):
        rated(tmp_path, UNDER["a column"], LOAD, named)


def test_a_name_that_touches_nothing_is_an_error(tmp_path: Path) -> None:
    wrong = stated("supports", 'ignore = ["K-1", "K-l"]', beams="B-*")
    with pytest.raises(BriefError, match=r"supports\[1\].ignore .*'K-l' touches no beam"):
        rated(tmp_path, UNDER["a column"], LOAD, wrong)
    check_adequate(rated(tmp_path, UNDER["a column"], LOAD, wrong + "optional = true\n"))


@pytest.mark.parametrize("marks", ["[]", '[" "]', '"K-1"'])
def test_a_list_of_marks_is_needed(tmp_path: Path, marks: str) -> None:
    path = tmp_path / "brief.toml"
    path.write_text(brief(load('line = "1 kN/m"'), stated("supports", f"ignore = {marks}")))
    with pytest.raises(BriefError, match="ignore"):
        load_brief(path)


def test_a_survey_says_how_to_settle_it(tmp_path: Path) -> None:
    model, brief_path = write(tmp_path, UNDER["a column"], brief(LOAD, stated("supports", HELD)))
    (found,) = survey([model], brief_path)
    (finding,) = found.survey.findings.values()
    assert any(TOLD in text for text in finding.to_state)


def test_the_sound_twin(tmp_path: Path) -> None:
    apart = hall(Beam(), others=[Block("K-1", (3000.0, 0.0, 0.0), (300, 300), 2900)])
    rating = rated(tmp_path, apart, LOAD, stated("supports", HELD))
    assert rating.verdict is Verdict.ADEQUATE

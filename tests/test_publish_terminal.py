"""What is said on the terminal, and that names cannot steer it."""

from __future__ import annotations

import io
import re
from dataclasses import replace
from pathlib import Path

from rich.console import Console, RenderableType

from ifccheck.beam import Verdict
from ifccheck.publish.terminal import closing_table, sheet_text, survey_table
from tests.reports_made_up import hostile_report, made_up_report

REPORT = made_up_report()
CONTROLS = re.compile("[\x00-\x09\x0b-\x1f\x7f-\x9f\u202a-\u202e\u2066-\u2069]")


def console(color: bool = False) -> Console:
    return Console(
        file=io.StringIO(), width=140, force_terminal=color, color_system=None, markup=False
    )


def said(what: RenderableType) -> str:
    shown = console()
    shown.print(what)
    text = shown.file
    assert isinstance(text, io.StringIO)
    return text.getvalue()


def closing(report: object = REPORT, written: tuple[Path, ...] = ()) -> str:
    shown = console()
    closing_table(report, shown, written)  # type: ignore[arg-type]
    assert isinstance(shown.file, io.StringIO)
    return shown.file.getvalue()


def test_the_closing_table_counts_and_names_what_falls_short() -> None:
    text = closing(written=(Path("out/press-hall-rated.ifc"),))
    counts = REPORT.counts
    assert f"{counts.falls_short} fall short, {counts.not_rated} not rated" in text
    assert f"{counts.adequate} adequate of {counts.in_scope} in scope" in text
    for rating in REPORT.ratings.values():
        mark = REPORT.beam(rating.beam).mark
        assert (re.search(rf"\b{mark}\b", text) is not None) is (
            rating.verdict is Verdict.FALLS_SHORT
        )
    assert "1.0004" in text
    assert "out/press-hall-rated.ifc" in text
    assert "licensed engineer" in text
    for rating in REPORT.ratings.values():
        assert all(reason.text in text for reason in rating.reasons)


def test_many_beams_that_fall_short_are_counted_after_the_first() -> None:
    report = made_up_report(bays=12, rows=4)
    short = report.counts.falls_short
    assert short > 25
    assert f"and {short - 25} more in the summary" in closing(report)


def test_a_sheet_is_printed_line_by_line() -> None:
    rating = next(r for r in REPORT.ratings.values() if r.utilisation == 1.0004)
    sheet = REPORT.sheet(rating.beam)
    text = said(sheet_text(sheet))
    assert "falls short in shear  utilisation 1.0004" in text
    for check in sheet.checks:
        for line in check.lines:
            assert line.symbol in text
            assert line.result in text
    for item in rating.basis:
        assert item.label in text
    assert text.count("assumed: ") == sum(item.assumed for item in rating.basis)
    assert "Not checked: torsion, deflection, crack width." in text


def test_a_survey_groups_beams_and_says_what_is_missing() -> None:
    keys = list(REPORT.ratings)
    missing = {keys[0]: ("reinforcement",), keys[1]: ("reinforcement", "material")}
    text = said(survey_table(REPORT.model, missing))
    assert "press-hall.ifc (IFC4): 35 beams in scope" in text
    assert "reinforcement (2 of 6); material (1 of 6)" in text
    assert "33 of 35 beams lack nothing" in text
    assert "Out of scope: 2 steel, 1 timber." in text


def test_names_cannot_steer_the_terminal() -> None:
    report = hostile_report()
    texts = [
        closing(report, (Path("out/\x1b[2J.ifc"),)),
        said(survey_table(report.model, {})),
        *(said(sheet_text(report.sheet(key))) for key in list(report.ratings)[:8]),
    ]
    for text in texts:
        assert CONTROLS.search(text) is None
        text.encode("utf-8")
    assert any("[bold red]x[/]" in text for text in texts)


def test_a_report_without_rated_cases_has_no_table_of_them() -> None:
    assert "rated case" not in closing(replace(REPORT, cases=()))

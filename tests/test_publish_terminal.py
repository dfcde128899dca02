"""What is said on the terminal, and that names cannot steer it."""

from __future__ import annotations

import io
import re
from collections.abc import Callable
from dataclasses import replace
from functools import partial
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from rich.console import Console, RenderableType
from rich.text import Text

from ifccheck.beam import Remark, Verdict
from ifccheck.findings import Finding, Survey
from ifccheck.publish.quantities import typographic
from ifccheck.publish.terminal import closing_table, standards_table
from ifccheck.publish.terminal_parts import column_widths
from ifccheck.publish.terminal_sheet import sheet_text
from ifccheck.publish.terminal_survey import survey_text
from ifccheck.sheet import NOTHING_DEMANDED, CaseReaction, CaseShare, Sheet, SheetCheck
from ifccheck.standards import Standard
from ifccheck.standards.discovery import all_standards
from tests.reports_made_up import hostile_report, made_up_report
from tests.surveys_made_up import hostile_survey, made_up_survey, survey_of

REPORT = made_up_report()
CONTROLS = re.compile("[\x00-\x09\x0b-\x1f\x7f-\x9f\u202a-\u202e\u2066-\u2069]")


def console(width: int = 140, encoding: str = "utf-8") -> Console:
    file = io.TextIOWrapper(io.BytesIO(), encoding=encoding)
    return Console(file=file, width=width, force_terminal=False, color_system=None, markup=False)


def printed(shown: Console) -> str:
    assert isinstance(shown.file, io.TextIOWrapper)
    shown.file.flush()
    assert isinstance(shown.file.buffer, io.BytesIO)
    return shown.file.buffer.getvalue().decode(shown.encoding)


def said(make: Callable[[Console], RenderableType], width: int = 140, code: str = "utf-8") -> str:
    shown = console(width, code)
    shown.print(make(shown))
    return printed(shown)


def sheet_said(sheet: Sheet, width: int = 140, code: str = "utf-8") -> str:
    return said(partial(sheet_text, sheet), width, code)


def survey_said(survey: Survey, width: int = 140, code: str = "utf-8") -> str:
    return said(partial(survey_text, survey), width, code)


def closing(report: object = REPORT, written: tuple[Path, ...] = ()) -> str:
    shown = console()
    closing_table(report, shown, written)  # type: ignore[arg-type]
    return printed(shown)


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
    text = sheet_said(sheet)
    assert "falls short in shear  utilisation 1.0004" in text
    for check in sheet.checks:
        for line in check.lines:
            assert line.symbol in text
            assert typographic(line.result) in text
    for item in rating.basis:
        assert item.label in text
    assert text.count("assumed: ") == sum(item.assumed for item in rating.basis)
    assert "Not checked: torsion, deflection, crack width." in text


def squeezed(text: str) -> str:
    """Without blanks, ends of lines and the signs between the parts of a line."""
    return re.sub(r"\s", "", text)


@pytest.mark.parametrize("width", [40, 60, 80, 100])
def test_a_narrow_sheet_leaves_out_no_figure(width: int) -> None:
    """Formula, numbers and result stand one under the other, folded where they are long."""
    sheet = shared_out(worst_sheet())
    text = sheet_said(sheet, width)
    assert "…" not in text
    assert max(map(len, text.splitlines())) <= width
    whole = squeezed(text)
    for check in sheet.checks:
        if check.outcome != NOTHING_DEMANDED:
            assert squeezed(f"utilisation {typographic(check.outcome)}") in whole
        for line in check.lines:
            parts = filter(None, (line.formula, line.numbers, line.result))
            told = squeezed(line.symbol + "".join(f"={typographic(part)}" for part in parts))
            assert told in whole


@pytest.mark.parametrize("width", [120, 160])
def test_a_wide_sheet_leaves_out_no_figure(width: int) -> None:
    sheet = shared_out(worst_sheet())
    text = sheet_said(sheet, width)
    assert "…" not in text
    assert max(map(len, text.splitlines())) <= width
    words = set(text.split())
    for check in sheet.checks:
        for line in check.lines:
            assert set(typographic(f"{line.formula} {line.numbers} {line.result}").split()) <= words


def worst_sheet() -> Sheet:
    return REPORT.sheet(next(r.beam for r in REPORT.ratings.values() if r.utilisation == 1.0004))


def shared_out(sheet: Sheet) -> Sheet:
    """With the parts of the cases, reactions, and a doubt."""
    shares = (
        CaseShare("self", "permanent", 1.25, 27.2e6, -3e3),
        CaseShare("press on the mezzanine", "imposed", 1.5, 41.0e6, 5e3),
    )
    checks = tuple(replace(check, shares=shares) for check in sheet.checks if check.lines)
    idle = SheetCheck("flexure, hogging", "10.1", "", (), 0.0, NOTHING_DEMANDED)
    doubt = Remark(sheet.beam.key, "read", "two bars lie outside the body", "doubt")
    rating = replace(sheet.rating, remarks=(*sheet.rating.remarks, doubt))
    reactions = (CaseReaction("self", (15.3e3, 15.4e3), -8.1e6, 0.0),)
    return replace(sheet, rating=rating, checks=(*checks, idle), reactions=reactions)


def test_a_sheet_tells_how_the_demand_arises_and_its_doubts_first() -> None:
    text = sheet_said(shared_out(worst_sheet()), 80)
    assert re.search(r"self +permanent +27\.2 +-3\.00 +1\.25 +34\.0 +-3\.75", text)
    assert re.search(r"together +95\.5 +3\.75", text)
    assert re.search(r"self +15\.3 +15\.4 +-8\.10", text)
    assert "Nothing demanded in flexure, hogging." in text
    assert text.index("doubt: two bars lie outside the body") < text.index("arises from")
    assert text.count("two bars lie outside the body") == 1


def test_units_are_set_as_the_terminal_can_show_them() -> None:
    assert "kN·m" in sheet_said(worst_sheet())
    assert "kN*m" not in sheet_said(worst_sheet())
    plain_text = sheet_said(worst_sheet(), code="ascii")
    assert "kN*m" in plain_text
    survey_said(made_up_survey(), code="ascii")
    closing_table(REPORT, console(encoding="ascii"))


def test_words_of_a_survey_and_of_the_standards_are_whole_at_80_columns() -> None:
    standards = [
        (standard.id, standard) for _, standard in all_standards() if isinstance(standard, Standard)
    ]
    survey = survey_said(made_up_survey(), 80)
    listed = said(lambda shown: standards_table(standards, shown), 80)
    assert {"reinforcement", "obliquely", "Concrete", "C30/37"} <= set(re.split(r"[\s;]+", survey))
    words = {word for _, s in standards for word in f"{s.title} {s.edition} {s.actions}".split()}
    assert words <= set(listed.split())
    for text in (survey, listed):
        assert "…" not in text
        assert max(map(len, text.splitlines())) <= 80


@given(
    st.lists(st.lists(st.text("ab ", max_size=30), min_size=3, max_size=3), min_size=1, max_size=5),
    st.integers(3, 60),
)
def test_columns_share_the_room_and_keep_words_whole_where_they_can(
    rows: list[list[str]], room: int
) -> None:
    widths = column_widths([[Text(cell) for cell in row] for row in rows], room)
    assert sum(widths) <= room
    assert min(widths) >= 1
    longest = [max((len(w) for cell in column for w in cell.split()), default=1)
               for column in zip(*rows, strict=True)]  # fmt: skip
    if sum(max(1, word) for word in longest) <= room:
        assert all(width >= word for width, word in zip(widths, longest, strict=True))


def test_doubts_about_the_run_stand_in_the_closing_table() -> None:
    doubt = Remark(None, "results", "results of an earlier run could not be taken away", "doubt")
    text = closing(replace(REPORT, remarks=(doubt,)))
    assert "doubt: results of an earlier run could not be taken away" in text
    assert text.index("doubt:") < text.index("An aid for a licensed engineer")


def test_reasons_are_told_with_what_settles_them() -> None:
    assert "loads_complete = true" in closing()


def test_a_survey_groups_beams_and_says_what_is_missing() -> None:
    keys = list(REPORT.ratings)
    lacking = Finding(lacks=("no reinforcement found",))
    findings = {keys[0]: lacking, keys[1]: Finding(lacks=("no reinforcement found", "material"))}
    text = survey_said(survey_of(REPORT.model, findings))
    assert "press-hall.ifc (IFC4): 35 beams in scope\nOut of scope: 2 steel, 1 timber\n" in text
    assert "no reinforcement found (2 of 6)" in text
    assert "material (1 of 6)" in text
    assert re.search(r"2 +no reinforcement found +a schedule, a mapping", text)
    assert "Nothing missing: 33 of 35 beams. Loads are the brief's to give." in text
    assert "Information requirement met: 35 of 35 beams." in text


def test_a_survey_tells_doubts_that_differ_by_their_numbers_once() -> None:
    keys = list(REPORT.ratings)
    findings = {
        key: Finding(doubts=(f"bars #{i} and 2 more: cut over {i} mm: measured on the line",))
        for i, key in enumerate(keys[:4])
    }
    text = survey_said(survey_of(REPORT.model, findings))
    assert re.search(r"4 +e\.g\. cut over 0 mm: measured on the line", text)
    assert "bars #" not in text
    assert "Nothing missing: 35 of 35 beams (4 with doubts)." in text


def test_a_survey_of_one_beam_and_of_none_reads_as_people_speak() -> None:
    beams = REPORT.model.beams
    one = survey_said(survey_of(replace(REPORT.model, beams=beams[:1]), {}))
    assert "1 beam in scope" in one
    assert "Nothing missing: 1 of 1 beam." in one
    none = survey_said(survey_of(replace(REPORT.model, beams=()), {}))
    assert none == "press-hall.ifc (IFC4): no concrete beam\nOut of scope: 2 steel, 1 timber\n"


def test_a_survey_with_a_brief_does_not_tell_that_loads_are_its_to_give() -> None:
    survey = survey_of(REPORT.model, {}, brief_name="brief.toml")
    assert "Loads are" not in survey_said(survey)


@pytest.mark.parametrize(
    ("count", "words"),
    [(0, "The file holds no bars."), (1, "The file holds 1 bar; bars were read of 12 beams")],
)
def test_a_survey_tells_how_many_bars_were_left_in_the_file(count: int, words: str) -> None:
    assert words in survey_said(replace(made_up_survey(), bars_in_file=count))


def test_a_survey_of_many_kinds_of_beams_stays_short() -> None:
    """Beyond sixty groups the beams of a storey are told together."""
    beams = tuple(
        replace(beam, material=f"Concrete {i}") for i, beam in enumerate(REPORT.model.beams * 2)
    )
    keyed = tuple(replace(beam, key=str(i)) for i, beam in enumerate(beams))
    text = survey_said(survey_of(replace(REPORT.model, beams=keyed), {}), 80)
    assert len(text.splitlines()) < 40
    assert re.search(r"\d+ materials", text)


def test_names_cannot_steer_the_terminal() -> None:
    report = hostile_report()
    texts = [
        closing(report, (Path("out/\x1b[2J.ifc"),)),
        survey_said(hostile_survey()),
        *(sheet_said(report.sheet(key)) for key in list(report.ratings)[:8]),
    ]
    for text in texts:
        assert CONTROLS.search(text) is None
        text.encode("utf-8")
    assert any("[bold red]x[/]" in text for text in texts)


def test_a_report_without_rated_cases_has_no_table_of_them() -> None:
    assert "rated case" not in closing(replace(REPORT, cases=()))

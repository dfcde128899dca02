"""How beams stand, as pages, terminal and data show it."""

from __future__ import annotations

import json
import math
import re
from dataclasses import replace

import pytest

from ifccheck.framed import Balance, FramedEnd, balances, totals
from ifccheck.publish.equilibrium import equilibrium_rows, equilibrium_words
from ifccheck.publish.framed_words import acting_words, line_words, standing_words
from ifccheck.publish.html import render
from ifccheck.publish.json import ratings_json
from ifccheck.publish.line_drawing import line_drawing, loaded_spans
from ifccheck.publish.sheet_html import sheet_html
from ifccheck.sheet import CaseShare, SheetCheck
from tests.frames_made_up import BALANCE, EVIL, framed_hall, hostile_frame, made_up_frame, patterned
from tests.html_seen import Seen
from tests.reports_made_up import made_up_report
from tests.test_publish_terminal import closing, sheet_said

REPORT = made_up_frame()
FRAMED = REPORT.framed
assert FRAMED is not None
PAGE = Seen(render(REPORT))
FIRST, SECOND, THIRD, *_ = REPORT.model.beams


def marks_of(kind: str) -> int:
    """How many marks of a kind the plans show: each begins a path, a cross two."""
    data = "".join(
        attributes["d"] or ""
        for tag, attributes in PAGE.elements
        if tag == "path"
        and attributes.get("class") == f"seat {kind}"
        and "sample" not in str(attributes)
    )
    legend = 1 if kind != "stated" else 2
    return (data.count("M") - legend) // (2 if kind == "stated" else 1)


def test_the_plans_mark_every_support_by_its_shape() -> None:
    drawn = [beam for beam in REPORT.model.beams if beam.axis]
    others = len(drawn) - 4
    assert marks_of("below") == others + 4  # C-1, C-2 of the first; C-2, C-3 of the second
    assert marks_of("side") == others
    assert marks_of("tip") == 2
    assert marks_of("stated") == marks_of("held") == 1
    assert sum(a.get("class") == "unstood" for t, a in PAGE.elements if t == "text") == 1


def test_beams_in_line_are_joined_by_one_stroke_beside_them() -> None:
    (stroke,) = [
        a["d"] or "" for t, a in PAGE.elements
        if t == "path" and a.get("class") == "joined" and a["d"] != "M1 6H35M18 2V10"
    ]  # fmt: skip
    line, *ticks = stroke.removeprefix("M").split("M")
    places = [tuple(map(float, place.split())) for place in line.split("L")]
    assert len(ticks) == 2
    assert len({y for _, y in places}) == 1
    assert [x for x, _ in places] == sorted(x for x, _ in places)


def test_layers_are_switched_by_check_boxes_alone() -> None:
    boxes = [a for t, a in PAGE.elements if t == "input" and a.get("type") == "checkbox"]
    assert [box["id"] for box in boxes] == ["show-supports", "show-lines"]
    assert all("checked" in box for box in boxes)
    assert not any("style" in attributes for _, attributes in PAGE.elements)
    assert PAGE.unbalanced == []


def test_pointing_at_a_beam_tells_what_it_stands_on() -> None:
    assert any(f"{FIRST.mark}: " in text and "on C-1 and C-2" in text for text in PAGE.texts)


def test_nothing_of_it_is_shown_where_the_brief_states_how_beams_stand() -> None:
    report = made_up_report()
    page = render(report)
    for word in ("show-supports", "seat", "equilibrium", "line-words", "-layer"):
        assert word not in page
    assert "balance" not in closing(report)
    assert "frame" not in json.loads(ratings_json(report))


@pytest.mark.parametrize(
    ("key", "words"),
    [
        (FIRST.key, f"on C-1 and C-2; in line with {SECOND.mark}"),
        (SECOND.key, f"on C-2 and C-3, and hangs over; 2 spans; in line with {FIRST.mark}"),
        (THIRD.key, "no way to stand: nothing carries it"),
        ("nobody", "its body was not read"),
    ],
)
def test_standing_in_words(key: str, words: str) -> None:
    assert standing_words(FRAMED, key) == words


def test_a_beam_on_one_thing_at_two_places_says_so() -> None:
    both = FramedEnd("pinned", 0.0, "W-1 (IfcWall)", direct=True)
    (span,) = FRAMED.lines[REPORT.model.beams[4].key].spans
    line = replace_ends(span, both, both._replace(x=4000.0))
    framed = replace(FRAMED, lines={span.beam: line})
    assert standing_words(framed, span.beam) == "on W-1 at 2 places"
    built_in = replace_ends(span, both._replace(kind="fixed"), FramedEnd("free", 2000.0))
    framed = replace(FRAMED, lines={span.beam: built_in})
    assert standing_words(framed, span.beam) == "built into W-1"


def replace_ends(span, start, end):  # type: ignore[no-untyped-def]
    from ifccheck.framed import FramedLine

    return FramedLine((span._replace(start=start, end=end),))


# Equilibrium -------------------------------------------------------------------------------------


def test_the_table_has_every_storey_and_case_in_which_anything_acts_and_the_sum() -> None:
    found = [
        (row.storey, row.case, row.own, row.received, row.passed_on, row.ground, row.difference)
        for row in equilibrium_rows(FRAMED)
    ]
    assert found == [
        ("Level 1", "self", "100.0", "20.0", "20.0", "100.0", "0"),
        ("Level 1", "press", "60.0", "0", "0", "60.0", "0"),
        ("Level 2", "self", "50.0", "0", "0", "50.0", "0"),
        ("all storeys", "self", "150.0", "20.0", "20.0", "150.0", "0"),
        ("all storeys", "press", "60.0", "0", "0", "60.0", "0"),
    ]
    assert equilibrium_words(FRAMED) == (
        "loads and reactions balance in every case: self 150 kN, press 60.0 kN to the ground"
    )
    assert "Loads and reactions balance in every case" in PAGE.text


@pytest.mark.parametrize(
    ("wrong", "words"),
    [
        (Balance("Roof", "snow", 30e3, 0.0, 0.0, 18e3),
         "snow on Roof by 12.0 kN; snow in all by 12.0 kN"),
        (Balance("Roof", "snow", 30e3, 0.0, 30e3, 0.0), "snow in all by 30.0 kN"),
        (Balance("", "snow", math.nan, 0.0, 0.0, 1e3),
         "snow on no storey by not known; snow in all by not known"),
    ],
)  # fmt: skip
def test_what_does_not_balance_is_told(wrong: Balance, words: str) -> None:
    """Also what one beam passes on and no other receives, which no storey shows by itself."""
    report = framed_hall(made_up_report(), (*BALANCE, wrong))
    said = f"loads and reactions do not balance: {words}"
    assert equilibrium_words(report.framed) == said  # type: ignore[arg-type]
    assert said in re.sub(r"\s+", " ", closing(report))
    assert said[1:] in Seen(render(report)).text
    assert any(not row.balances for row in equilibrium_rows(report.framed))  # type: ignore[arg-type]


def test_opposite_loads_balance_by_what_each_of_them_is() -> None:
    assert balances(Balance("", "wind", 1e9, 0.0, 0.0, 1e9 - 900.0))
    assert not balances(Balance("", "wind", 1e9, 0.0, 0.0, 1e9 - 1100.0))
    assert not balances(Balance("", "wind", 0.0, 0.0, 0.0, 1.5))
    assert [row.difference for row in totals(BALANCE)] == [0.0, 0.0]


def test_the_closing_words_name_the_beams_that_are_left_out() -> None:
    text = re.sub(r"\s+", " ", closing(REPORT))
    assert f"nothing tells how they stand is not in it: {THIRD.mark}" in text


def test_the_data_hold_lines_and_balance() -> None:
    frame = json.loads(ratings_json(REPORT))["frame"]
    assert [row["difference"] for row in frame["balance"]] == [0.0] * 4
    assert frame["unknown"][0]["beam"] == THIRD.key
    (line,) = [spans for spans in frame["lines"] if len(spans) == 3]
    assert [span["beam"] for span in line] == [FIRST.key, SECOND.key, SECOND.key]
    assert line[2]["end"] == {"x": SECOND.length, "kind": "free"}
    assert line[0]["end"]["carrier"] == "C-2 (IfcColumn)"


# Sheets ------------------------------------------------------------------------------------------


def patterned_sheet():  # type: ignore[no-untyped-def]
    sheet = REPORT.sheet(SECOND.key)
    shares = (patterned(sheet.line),)  # type: ignore[arg-type]
    check = SheetCheck("shear", "11.3", "at x = 0", (), 0.5, "0.50: demand", shares)
    return replace(sheet, checks=(check,))


def test_a_sheet_draws_the_line_and_what_is_loaded() -> None:
    sheet = patterned_sheet()
    assert list(loaded_spans(sheet)) == [("press on the filled spans, where shear governs", (0, 2))]
    page = Seen(sheet_html(sheet, "foot"))
    kinds = [a.get("class") for t, a in page.elements if t in {"path", "rect"}]
    assert kinds.count("own") == 2
    assert kinds.count("other") == 1
    rows = [a["class"] for t, a in page.elements if t == "rect" and a["class"] in {"load", "idle"}]
    assert rows == ["load", "idle", "load"]
    assert page.unbalanced == []
    assert "on spans 1 and 3 of 3" in page.text


def test_a_sheet_names_the_spans_of_the_line_in_words() -> None:
    words = line_words(REPORT.sheet(SECOND.key).line, SECOND.key)  # type: ignore[arg-type]
    assert words == (
        f"line of 3 spans: 1 {FIRST.mark} 5.60 m, 2 {SECOND.mark} 4.10 m (this beam),"
        f" 3 {SECOND.mark} 1.50 m hanging over (this beam)"
    )
    said = re.sub(r"\s+", " ", sheet_said(patterned_sheet(), width=240))
    assert words in said
    assert "on spans 1 and 3 of 3" in said


def test_a_beam_alone_has_no_line_on_its_sheet() -> None:
    sheet = REPORT.sheet(REPORT.model.beams[4].key)
    assert sheet.line is not None
    assert line_drawing(sheet) == ""
    assert "line of" not in sheet_html(sheet, "foot")


def test_beams_that_lift_are_told() -> None:
    lifted = CaseShare("press", "imposed", 1.5, 1.0, 1.0, 3, (), (1,))
    assert acting_words(lifted) == "beams that rest on it lift on span 2 of 3"
    both = replace(lifted, spans=(0,))
    assert acting_words(both) == "on span 1 of 3, beams that rest on it lift on span 2 of 3"
    assert acting_words(replace(lifted, of_spans=1, lifting=(0,))) == "beams that rest on it lift"
    assert acting_words(CaseShare("press", "imposed", 1.5, 1.0, 1.0)) == ""


def test_hostile_names_are_shown_as_text() -> None:
    report = made_up_report()
    framed = hostile_frame()
    sheet = report.sheet
    report = replace(
        report, framed=framed, sheet=lambda key: replace(sheet(key), line=framed.lines.get(key))
    )
    page = Seen(render(report))
    assert page.unbalanced == []
    assert {tag for tag, _ in page.elements} == {tag for tag, _ in PAGE.elements}
    drawn = Seen(line_drawing(report.sheet(report.model.beams[0].key)))
    assert {tag for tag, _ in drawn.elements} <= {"svg", "path", "text"}
    assert EVIL in "".join(drawn.texts)

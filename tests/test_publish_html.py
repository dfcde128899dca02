"""The HTML summary: complete, self-contained, inert whatever the names are."""

from __future__ import annotations

import base64
import hashlib
import math
import re
import zlib
from dataclasses import replace
from itertools import pairwise

import pytest

from ifccheck.beam import Given, Reason, Remark
from ifccheck.publish import tint
from ifccheck.publish.html import render
from ifccheck.publish.report import Report
from ifccheck.publish.sheet_html import SEPARATOR, foot_line, packed, sheet_html
from ifccheck.publish.typeset import formula_html, numbers_html
from ifccheck.publish.words import CAUTIONS, plain, reason_groups, utilisation_words
from ifccheck.rating import Rating
from ifccheck.sheet import NOTHING_DEMANDED, CaseReaction, CaseShare, SheetCheck
from tests.html_seen import Seen, sheets_in
from tests.reports_made_up import HOSTILE, hostile_report, made_up_report

REPORT = made_up_report()
PAGE = render(REPORT)
SEEN = Seen(PAGE)


def test_elements_are_balanced() -> None:
    assert SEEN.unbalanced == []
    assert SEEN.open == []
    for sheet in sheets_in(SEEN):
        assert Seen(sheet).unbalanced == []


def test_the_same_report_gives_the_same_file() -> None:
    assert render(made_up_report()) == PAGE


def test_the_policy_names_the_very_script_and_style_in_the_file() -> None:
    policy = next(a["content"] for t, a in SEEN.elements if a.get("http-equiv"))
    assert policy
    assert policy.startswith("default-src 'none'")
    assert "unsafe" not in policy
    (script,) = [text for kind, text in SEEN.scripts if kind is None]
    (style,) = SEEN.styles
    for name, text in (("script-src", script), ("style-src", style)):
        digest = base64.b64encode(hashlib.sha256(text.encode()).digest()).decode()
        assert f"{name} 'sha256-{digest}'" in policy


@pytest.mark.parametrize("report", [REPORT, hostile_report()], ids=["plain", "hostile"])
def test_nothing_in_it_asks_the_network_or_runs(report: Report) -> None:
    page = Seen(render(report))
    for seen in (page, *map(Seen, sheets_in(page))):
        for tag, attributes in seen.elements:
            assert tag not in {"img", "iframe", "object", "embed", "link", "base", "audio", "video"}
            assert not any(name.startswith("on") or name == "style" for name in attributes)
            for name in ("href", "src", "action", "xlink:href"):
                assert (attributes.get(name) or "#").startswith("#")
    assert len([kind for kind, _ in page.scripts if kind is None]) == 1
    assert "http:" not in render(REPORT)
    assert "https:" not in render(REPORT)


def test_hostile_names_are_shown_as_text() -> None:
    seen = Seen(render(hostile_report()))
    for name in HOSTILE:
        assert re.sub(r"\s+", " ", plain(name)) in seen.text
    assert all("alert" not in text for kind, text in seen.scripts if kind is None)
    shown = seen.text + "".join(sheets_in(seen))
    assert not re.search(
        "[\x00-\x08\x0b\x0c\x0e-\x1d\x1f\x7f-\x9f\u202a-\u202e\u2066-\u2069]", shown
    )


def test_a_page_is_utf8_whatever_the_names() -> None:
    render(hostile_report()).encode("utf-8")


def test_everything_asked_for_is_on_the_page() -> None:
    for caution in CAUTIONS:
        assert caution in SEEN.text
    counts = REPORT.counts
    assert f"{counts.in_scope} beams in scope" in SEEN.text
    for words in (
        REPORT.standard_name,
        REPORT.standard_edition,
        REPORT.actions,
        REPORT.brief_name,
        REPORT.brief_sha256,
        REPORT.model.sha256,
        f"ifccheck {REPORT.version}",
        "adequate in flexure, shear and longitudinal tension",
        "material GL24h",
        "1.25 / 0.9",
    ):
        assert words in SEEN.text, words
    for rating in REPORT.ratings.values():
        for reason in rating.reasons:
            assert reason.text in SEEN.text
    for remark in REPORT.remarks:
        assert remark.text in SEEN.text
    for assumption in REPORT.assumptions:
        assert assumption.text in SEEN.text


def test_the_worst_come_first() -> None:
    rows = [a for t, a in SEEN.elements if t == "tr" and (a.get("id") or "").startswith("r")]
    verdicts = [a["data-v"] for a in rows]
    order = {"falls short": 0, "not rated": 1, "adequate": 2}
    assert [order[v or ""] for v in verdicts] == sorted(order[v or ""] for v in verdicts)
    short = [
        REPORT.ratings[a["data-key"] or ""].utilisation
        for a in rows
        if a["data-v"] == "falls short"
    ]
    assert short == sorted(short, reverse=True)
    assert len(rows) == len(REPORT.ratings)


def test_a_beam_that_falls_short_by_a_hair_never_reads_one() -> None:
    rating = next(r for r in REPORT.ratings.values() if r.utilisation == 1.0004)
    row = PAGE.split(f'data-key="{rating.beam}"')[1].split("<tr")[0]
    assert "<b>1.0004</b>" in row
    assert "<b>1.00</b>" not in row
    assert utilisation_words(1.0 + 1e-12) == ">1"


def test_each_beam_has_its_sheet_in_the_order_of_the_rows() -> None:
    rows = [a["data-key"] or "" for t, a in SEEN.elements if t == "tr" and "data-key" in a]
    sheets = sheets_in(SEEN)
    assert len(sheets) == len(rows)
    for key, sheet in zip(rows, sheets, strict=True):
        assert sheet.startswith('<article class="sheet"')
        assert key in Seen(sheet).text


def test_a_sheet_holds_the_whole_calculation() -> None:
    rating = next(r for r in REPORT.ratings.values() if r.utilisation == 1.0004)
    sheet = REPORT.sheet(rating.beam)
    text = Seen(sheet_html(sheet, foot_line(REPORT))).text
    for check in sheet.checks:
        assert check.title in text
        assert check.place in text
        for line in check.lines:
            assert line.text in text
            assert line.result.split()[0].replace("-", "−") in text
            assert line.clause in text
    for item in rating.basis:
        assert item.label in text
        assert item.source in text
    assert text.count("assumed defaults of the brief") == sum(i.assumed for i in rating.basis)
    for load in sheet.loads:
        assert load.text in text
        assert load.origin in text
    for remark in rating.remarks:
        assert remark.text in text
    assert "Not checked: torsion, deflection and crack width." in text


def test_doubts_stand_before_the_figures_that_they_may_undermine() -> None:
    rating = next(r for r in REPORT.ratings.values() if r.limit_states)
    doubt = Remark(rating.beam, "read", "two bars lie outside the body", "doubt")
    doubted = replace(rating, remarks=(*rating.remarks, doubt))
    sheet = Seen(sheet_html(replace(REPORT.sheet(rating.beam), rating=doubted), "")).text
    assert sheet.index(doubt.text) < sheet.index("Limit states")
    assert sheet.count(doubt.text) == 1
    of_run = Remark(None, "results", "results of an earlier run could not be taken away", "doubt")
    ratings = {**REPORT.ratings, rating.beam: doubted}
    page = Seen(render(replace(REPORT, ratings=ratings, remarks=(of_run,)))).text
    assert page.index(of_run.text) < page.index("Rated cases over the whole model")
    row = page[page.index("All beams") :]
    assert doubt.text in row, "and in the table of beams"


def test_a_sheet_tells_how_the_demand_arises() -> None:
    """1.25 x 27.2 + 1.5 x 41 = 95.5 kN*m; a case without effect at the place has no factor."""
    sheet = REPORT.sheet(next(r.beam for r in REPORT.ratings.values() if r.limit_states))
    shares = (
        CaseShare("self", "permanent", 1.25, 27.2e6, -3e3),
        CaseShare("floor", "imposed", 1.5, 41.0e6, 5e3),
        CaseShare("press", "imposed", math.nan, 0.0, 0.0),
    )
    reactions = (CaseReaction("self", (15.3e3, 15.4e3), 0.0, -8.1e6),)
    checks = (replace(sheet.checks[0], shares=shares),)
    text = Seen(sheet_html(replace(sheet, checks=checks, reactions=reactions), "")).text
    rows = text[text.index("how moment and shear arise") :]
    for words in (
        "self permanent 27.2",
        "1.25 34",
        "floor imposed 41",
        "1.5 61.5",
        "together 95.5",
    ):
        assert words in rows
    assert "press imposed 0 0 – 0 0" in rows
    assert "self 15.3 15.4 -8.10" in rows
    assert ", x = 0 m to " in text, "where the span begins"


def test_the_yield_that_was_rated_is_in_the_table_of_reinforcement() -> None:
    sheet = REPORT.sheet(next(r.beam for r in REPORT.ratings.values() if r.limit_states))
    bars = tuple(replace(each, yield_strength=None) for each in sheet.bars)
    rated = tuple(Given(431.0 + i, "brief", assumed=i == 0) for i in range(len(bars)))
    text = Seen(sheet_html(replace(sheet, bars=bars, bar_yield=rated), "")).text
    assert all(f"{given.value:.0f}" in text for given in rated)
    assert "assumed 431" in text
    assert "not known" not in text


def test_a_check_of_which_nothing_is_demanded_has_no_table() -> None:
    sheet = REPORT.sheet(next(r.beam for r in REPORT.ratings.values() if r.limit_states))
    idle = SheetCheck("flexure, hogging", "10.1", "", (), 0.0, NOTHING_DEMANDED)
    text = Seen(sheet_html(replace(sheet, checks=(sheet.checks[0], idle)), "")).text
    assert "Nothing demanded in flexure, hogging." in text
    assert "utilisation nothing" not in text


def test_reasons_that_differ_by_the_members_named_are_one_row() -> None:
    rating = next(iter(REPORT.ratings.values()))

    def unrated(key: str, *texts: str) -> Rating:
        return replace(rating, beam=key, reasons=tuple(map(Reason, texts)))

    groups = reason_groups(
        [
            unrated("a", "reactions not included: C-H1 (IfcColumn)"),
            unrated("b", "reactions not included: T-119 (IfcBeam)", "no load assigned"),
            unrated("c", "shear: the aggregate size is not given"),
            unrated("d", "shear: the legs of the stirrups are not stated (10M)"),
            unrated("e", "supports unknown: its start touches nothing"),
        ]
    )
    assert [(group.text, group.beams) for group in groups] == [
        ("reactions not included: C-H1 (IfcColumn); T-119 (IfcBeam)", ("a", "b")),
        ("no load assigned", ("b",)),
        ("shear: the aggregate size is not given", ("c",)),
        ("shear: the legs of the stirrups are not stated (10M)", ("d",)),
        ("supports unknown: its start touches nothing", ("e",)),
    ]
    many = reason_groups(unrated(f"{i}", f"reactions not included: C-{i}") for i in range(9))
    assert [group.text for group in many] == ["reactions not included: C-0; C-1; C-2; and 6 more"]
    told = [f"bars do not fit from {x} m to 1.50 m: 0.85 m wide" for x in (0, 2, 4)]
    fitting = [reason_groups(map(unrated, "abc", texts)) for texts in (told, told[:1])]
    assert [(group.text, group.beams) for groups in fitting for group in groups] == [
        (f"e.g. {told[0]}", ("a", "b", "c")),
        (told[0], ("a",)),
    ]
    cures = [group.cure for group in groups]
    assert "loads_complete = true" in cures[0]
    assert "unloaded = true" in cures[1]
    assert (cures[2], cures[3]) == ("", "")
    assert "[[supports]]" in cures[4]


def test_a_beam_that_is_not_rated_says_why_on_its_sheet() -> None:
    rating = next(r for r in REPORT.ratings.values() if r.reasons and not r.limit_states)
    text = Seen(sheet_html(REPORT.sheet(rating.beam), "")).text
    assert rating.reasons[0].text in text
    assert "not rated" in text
    assert "adequate" not in text


def test_a_case_with_an_unrated_beam_in_its_path_has_no_factor() -> None:
    row = PAGE.split('<section id="cases">')[1].split("</section>")[0].split("hoist")[1]
    assert "not known" in row
    assert re.search(r"\d\.\d\d", row) is None


def test_a_report_without_beams_still_renders() -> None:
    model = replace(REPORT.model, beams=(), members=())
    empty = replace(REPORT, model=model, ratings={}, cases=(), spans={}, assumptions=())
    seen = Seen(render(empty))
    assert "0 beams in scope" in seen.text
    assert "No beam could be rated." in seen.text


def test_sheets_come_back_from_their_blocks_unchanged() -> None:
    texts = [f"sheet {i} é√" for i in range(19)]
    found: list[str] = []
    for block in packed(iter(texts)):
        data = zlib.decompress(base64.b64decode(block.data), wbits=-15).decode()
        found += data.split(SEPARATOR)
    assert found == texts


def test_the_scale_keeps_its_order_without_colour() -> None:
    bands = [tint.luminance(tint.COLOURS[name]) for _, name, _ in tint.BANDS]
    assert bands == sorted(bands, reverse=True)
    steps = [(a + 0.05) / (b + 0.05) for a, b in pairwise(bands)]
    assert min(steps) > 1.25
    assert tint.luminance("#ffffff") == pytest.approx(1.0)
    assert tint.luminance("#777777") == pytest.approx(0.184, abs=5e-4)  # WCAG: 4.48 to white


def test_a_formula_is_set_and_escaped() -> None:
    assert formula_html("phi_c*f'c") == "<i>φ</i><sub>c</sub>·<i>f′</i><sub>c</sub>"
    assert formula_html("Av_min") == "<i>A</i><sub>v,min</sub>"
    assert formula_html("d**2 - x") == "<i>d</i><sup>2</sup> − <i>x</i>"
    assert formula_html("sqrt(fc) <= 8") == "√(<i>f</i><sub>c</sub>) ≤ 8"
    assert numbers_html("30 MPa * 2") == "30 MPa · 2"
    assert "<b" not in formula_html("<b>\"'&")
    assert "&lt;" in formula_html("<b>")

"""The summary as a person uses it, in headless Chromium."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from urllib.parse import quote

import pytest

from ifccheck.beam import Verdict
from ifccheck.publish.html import render
from ifccheck.publish.words import plain
from tests.chromium import Page, browser, find_browser
from tests.reports_made_up import hostile_report, made_up_report

pytestmark = pytest.mark.chromium

REPORT = made_up_report()
LISTED = "[...document.querySelectorAll('.beams tbody tr')].filter(r => !r.hidden)"


@pytest.fixture(scope="module")
def page() -> Iterator[Page]:
    path = find_browser()
    if path is None:
        pytest.skip("no Chromium on this machine")
    with browser(path) as page:
        page.size(1400, 1000)
        yield page


@pytest.fixture(scope="module")
def summary(tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("summary") / "hall-rating.html"
    path.write_text(render(REPORT), encoding="utf-8")
    return path


@pytest.fixture
def opened(page: Page, summary: Path) -> Iterator[Page]:
    """The summary, freshly opened; afterwards nothing was logged and nothing was fetched."""
    page.errors.clear()
    page.requests.clear()
    page.open(summary)
    yield page
    page.run("1")
    assert page.errors == []
    assert {address.partition("#")[0] for address in page.requests} == {summary.as_uri()}


def marks(page: Page) -> list[str]:
    found: list[str] = page.run(f"{LISTED}.map(r => r.cells[0].textContent)")
    return found


def in_view(page: Page, selector: str) -> bool:
    return bool(page.run(f"document.querySelector('{selector}').checkVisibility()"))


def test_it_opens_with_every_beam_listed(opened: Page) -> None:
    assert opened.run("document.title") == "press-hall – beam rating"
    assert set(marks(opened)) == {beam.mark for beam in REPORT.model.beams}
    assert opened.run("document.querySelector('.shown').textContent") == (
        f"{len(REPORT.ratings)} listed"
    )


def test_a_column_sorts_both_ways_and_keeps_the_unknown_last(opened: Page) -> None:
    values = f"{LISTED}.map(r => r.cells[5].dataset.v)"
    orders = []
    for _ in range(2):
        opened.click(".beams thead th:nth-child(6) button")
        orders.append(opened.run(values))
    known = [float(v) for v in orders[0] if v]
    assert known == sorted(known)
    assert [float(v) for v in orders[1] if v] == sorted(known, reverse=True)
    assert all(v == "" for order in orders for v in order[len(known) :])
    assert opened.run("document.querySelectorAll('th[aria-sort]').length") == 1


def test_marks_sort_by_their_numbers(opened: Page) -> None:
    opened.click(".beams thead th:nth-child(1) button")
    found = [mark for mark in marks(opened) if mark.startswith("B-")]
    assert found == sorted(found, key=lambda mark: int(mark[2:]))


@pytest.mark.parametrize(
    ("typed", "kept"),
    [
        ("B-11*", r"B-11.*"),
        ("b-1102", r"B-1102"),
        ("W-1, R", r"W-1|R-.*"),
        ("*0", r".*0"),
        ("(", ""),
    ],
)
def test_the_table_filters_by_mark(opened: Page, typed: str, kept: str) -> None:
    opened.fill("input[name=mark]", typed)
    wanted = {b.mark for b in REPORT.model.beams if re.fullmatch(kept, b.mark)}
    assert set(marks(opened)) == wanted


def test_the_table_filters_by_verdict_and_fades_the_others_in_the_plan(opened: Page) -> None:
    opened.fill("select[name=verdict]", "falls short")
    short = [r for r in REPORT.ratings.values() if r.verdict is Verdict.FALLS_SHORT]
    assert set(marks(opened)) == {REPORT.beam(r.beam).mark for r in short}
    clear = "document.querySelectorAll('.plan a:not(.faint)').length"
    assert opened.run(clear) == len(short)
    opened.click("button[type=reset]")
    opened.wait(f"{LISTED}.length === {len(REPORT.ratings)}")


def test_the_table_filters_by_storey_and_utilisation(opened: Page) -> None:
    opened.run("document.querySelector('select[name=storey]').selectedIndex = 2")
    opened.fill("input[name=from]", "0.5")
    opened.fill("input[name=to]", "0.9")
    wanted = {
        beam.mark
        for beam in REPORT.model.beams
        if beam.storey == "Level 2" and 0.5 <= REPORT.ratings[beam.key].utilisation <= 0.9
    }
    assert wanted
    assert set(marks(opened)) == wanted


def test_the_table_filters_by_the_factor_of_a_case(opened: Page) -> None:
    opened.fill("input[name=factor]", "1.5")
    wanted = {
        REPORT.beam(r.beam).mark
        for r in REPORT.ratings.values()
        if any(s.case == "press" and s.factor <= 1.5 for s in r.safe_loads)
    }
    assert wanted
    assert set(marks(opened)) == wanted


def test_a_click_on_a_beam_in_the_plan_opens_its_sheet(opened: Page) -> None:
    opened.click(".plan a[data-row='3'] path.body")
    opened.wait("document.querySelector('#sheet-view .sheet h2')")
    mark = opened.run("document.querySelector('#r3').cells[0].textContent")
    assert opened.run("document.querySelector('#sheet-view h2').textContent") == mark
    assert not in_view(opened, "#summary")
    assert opened.run("document.querySelectorAll('#sheet-view .lines').length") == 3
    opened.click("#back")
    opened.wait("document.querySelector('#summary').checkVisibility()")
    assert opened.run("document.activeElement.textContent") == mark


def test_every_sheet_is_the_one_of_its_row(opened: Page) -> None:
    for row in (0, 7, 8, 15, 16, len(REPORT.ratings) - 1):
        opened.run(f"document.querySelector('#r{row} a').click()")
        mark = opened.run(f"document.querySelector('#r{row}').cells[0].textContent")
        opened.wait(f"document.querySelector('#sheet-view h2')?.textContent === '{mark}'")
        opened.press("Escape")
        opened.wait("document.querySelector('#summary').checkVisibility()")


def test_next_and_previous_follow_the_listed_beams(opened: Page) -> None:
    opened.fill("select[name=verdict]", "not rated")
    listed = marks(opened)
    opened.click(".beams tbody tr:not([hidden]) a")
    for mark in listed[:3]:
        opened.wait(f"document.querySelector('#sheet-view h2')?.textContent === '{mark}'")
        opened.click("#next")
    opened.click("#previous")
    opened.wait(f"document.querySelector('#sheet-view h2').textContent === '{listed[2]}'")


def test_a_sheet_has_an_address_of_its_own(page: Page, summary: Path) -> None:
    beam = REPORT.model.beams[4]
    page.errors.clear()
    page.open(summary, f"#beam={quote(beam.key)}")
    page.wait("document.querySelector('#sheet-view h2')")
    assert page.run("document.querySelector('#sheet-view h2').textContent") == beam.mark
    page.open(summary, "#beam=%E0%A4%A")
    assert in_view(page, "#summary")
    assert page.errors == []


def test_a_plan_is_walked_by_keyboard(opened: Page) -> None:
    opened.run("document.querySelector('.plan').focus()")
    opened.press("ArrowRight")
    first = opened.run("document.activeElement.dataset.row")
    assert first is not None
    moved = None
    for key in ("ArrowRight", "ArrowLeft", "ArrowUp", "ArrowDown"):
        opened.press(key)
        moved = opened.run("document.activeElement.dataset.row")
        if moved != first:
            break
    assert moved != first
    opened.press("Enter")
    opened.wait("document.querySelector('#sheet-view h2')")
    mark = opened.run(f"document.querySelector('#r{moved}').cells[0].textContent")
    assert opened.run("document.querySelector('#sheet-view h2').textContent") == mark


def test_one_storey_can_be_shown_alone(opened: Page) -> None:
    opened.click(".storeys button:nth-child(3)")
    shown = "[...document.querySelectorAll('figure')].filter(f => f.checkVisibility()).length"
    assert opened.run(shown) == 1
    opened.click(".storeys button:nth-child(1)")
    assert opened.run(shown) == 3


def pages_of(pdf: bytes) -> int:
    return len(re.findall(rb"/Type\s*/Page\b", pdf))


PAPERS = {"A4": (210.0, 297.0), "Letter": (215.9, 279.4), "A4 across": (297.0, 210.0)}
"""Width and height [mm]"""
MARGINS = (22.0, 26.0)
"""Of the page rule of the style sheet, both sides together [mm]"""
PIXELS = 96.0 / 25.4
BEYOND = """
[...document.querySelectorAll(%r + ' *')]
  .filter((e) => e.checkVisibility() && getComputedStyle(e).position !== 'absolute')
  .filter((e) => e.getBoundingClientRect().right > document.documentElement.clientWidth + 1
    || (getComputedStyle(e).overflowX !== 'visible' && !(e instanceof SVGElement)
      && e.scrollWidth > e.clientWidth + 1))
  .map((e) => e.tagName + '.' + e.className + ': ' + e.textContent.slice(0, 40))
"""


@contextmanager
def on_paper(page: Page, paper: str) -> Iterator[tuple[int, int]]:
    """The page laid out in the width that a paper leaves between its margins."""
    room = [
        round((mm - margin) * PIXELS) for mm, margin in zip(PAPERS[paper], MARGINS, strict=True)
    ]
    page.send("Emulation.setEmulatedMedia", media="print")
    page.size(room[0], room[1])
    try:
        yield room[0], room[1]
    finally:
        page.send("Emulation.setEmulatedMedia", media="")
        page.size(1400, 1000)


@pytest.mark.parametrize("paper", PAPERS)
def test_nothing_of_the_summary_is_cut_on_paper(opened: Page, paper: str) -> None:
    with on_paper(opened, paper) as (_, high):
        assert opened.run(BEYOND % "#summary") == []
        heights = (
            "[...document.querySelectorAll('figure')].map(f => f.getBoundingClientRect().height)"
        )
        assert max(opened.run(heights)) < high, "a plan fits on one page"


@pytest.mark.parametrize("paper", PAPERS)
def test_nothing_of_a_sheet_is_cut_on_paper(opened: Page, paper: str) -> None:
    opened.click(".beams tbody a")
    opened.wait("document.querySelector('#sheet-view .sheet')")
    with on_paper(opened, paper):
        assert opened.run(BEYOND % "#sheet-view") == []


def test_the_summary_prints_without_needless_pages(opened: Page) -> None:
    """The first page, one for every two plans, and two dozen rows of the table on each."""
    pdf = opened.pdf()
    assert pdf.startswith(b"%PDF")
    plans, rows = len({b.storey for b in REPORT.model.beams}), len(REPORT.ratings)
    assert pages_of(pdf) <= 1 + plans // 2 + 1 + math.ceil(rows / 24) + 2


@pytest.mark.parametrize("width", [700, 1400])
def test_a_plan_is_whole_in_a_window(opened: Page, width: int) -> None:
    opened.size(width, 1000)
    inside = (
        "[...document.querySelectorAll('.plan')].every(p => p.getBoundingClientRect().right"
        " <= p.closest('figure').getBoundingClientRect().right)"
    )
    assert opened.run(inside)
    opened.size(1400, 1000)


def test_one_sheet_prints_alone(opened: Page) -> None:
    opened.click(".beams tbody a")
    opened.wait("document.querySelector('#sheet-view .sheet')")
    assert 2 <= pages_of(opened.pdf()) <= 4


def test_all_listed_sheets_print_each_from_a_new_page(opened: Page) -> None:
    opened.fill("select[name=verdict]", "falls short")
    listed = marks(opened)
    opened.click("#print-all")
    opened.wait(f"document.querySelectorAll('#all-view .sheet').length === {len(listed)}")
    opened.wait("!document.querySelector('#print-now').disabled")
    heads = opened.run("[...document.querySelectorAll('#all-view h2')].map(h => h.textContent)")
    assert heads == listed
    assert pages_of(opened.pdf()) >= 2 * len(listed)
    opened.click("#leave")
    opened.wait("document.querySelector('#summary').checkVisibility()")
    assert opened.run("document.querySelectorAll('#all-view .sheet').length") == 0


def test_hostile_names_do_nothing(page: Page, tmp_path: Path) -> None:
    report = hostile_report()
    path = tmp_path / "hostile.html"
    path.write_text(render(report), encoding="utf-8")
    page.errors.clear()
    page.requests.clear()
    page.open(path)
    page.run("window.alert = () => { window.broken = true }")
    for row in range(0, len(report.ratings), 5):
        page.run(f"document.querySelector('#r{row} a').click()")
        mark = page.run(f"document.querySelector('#r{row}').cells[0].textContent")
        page.wait(
            "document.querySelector('#sheet-view h2')?.textContent"
            f" === document.querySelector('#r{row}').cells[0].textContent"
        )
        assert mark in {plain(beam.mark) for beam in report.model.beams}
    assert page.run("document.querySelectorAll('img, [onerror], [onload], iframe').length") == 0
    assert page.run("window.broken") is None
    assert page.errors == []
    assert {address.partition("#")[0] for address in page.requests} == {path.as_uri()}


def test_the_policy_stops_what_a_name_might_have_started(page: Page, summary: Path) -> None:
    page.open(summary)
    page.run(
        "(() => { const s = document.createElement('script');"
        "s.textContent = 'window.ran = true'; document.body.append(s); })()"
    )
    assert page.run("window.ran") is None
    assert page.run("fetch('http://127.0.0.1:9/').then(() => true, () => false)") is False
    page.errors.clear()

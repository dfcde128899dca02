"""The page of a survey as a person uses it, in headless Chromium."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path

import pytest

from ifccheck.findings import State
from ifccheck.publish.survey_html import render_survey
from tests.chromium import Page, browser, find_browser
from tests.surveys_made_up import hostile_survey, made_up_survey, survey_of

pytestmark = pytest.mark.chromium

SURVEY = made_up_survey()
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
def file(tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("survey") / "hall-survey.html"
    path.write_text(render_survey(SURVEY), encoding="utf-8")
    return path


@pytest.fixture
def opened(page: Page, file: Path) -> Iterator[Page]:
    """The page, freshly opened; afterwards nothing was logged and nothing was fetched."""
    page.errors.clear()
    page.requests.clear()
    page.open(file)
    yield page
    page.run("1")
    assert page.errors == []
    assert {address.partition("#")[0] for address in page.requests} == {file.as_uri()}


def marks(page: Page) -> list[str]:
    found: list[str] = page.run(f"{LISTED}.map(r => r.cells[0].textContent)")
    return found


def of_state(state: State) -> set[str]:
    return {beam.mark for beam in SURVEY.model.beams if SURVEY.of(beam).state is state}


def test_it_opens_with_every_beam_listed(opened: Page) -> None:
    assert opened.run("document.title") == "press-hall – survey of beams"
    assert len(marks(opened)) == len(SURVEY.findings)


def test_the_table_filters_by_state_and_fades_the_others_in_the_plan(opened: Page) -> None:
    opened.fill("select[name=verdict]", str(State.DOUBTFUL))
    assert set(marks(opened)) == of_state(State.DOUBTFUL)
    clear = opened.run("document.querySelectorAll('.plan a:not(.faint)').length")
    assert clear == len([b for b in SURVEY.model.beams if b.axis and b.mark in marks(opened)])


def test_the_table_filters_by_the_source_of_the_steel_and_by_mark(opened: Page) -> None:
    none = opened.run(
        "[...document.querySelector('select[name=governs]').options]"
        ".find(o => o.textContent === 'none').value"
    )
    opened.fill("select[name=governs]", none)
    bare = {beam.mark for beam in SURVEY.model.beams if not beam.reinforcement}
    assert set(marks(opened)) == bare
    opened.fill("input[name=mark]", "G-*")
    assert set(marks(opened)) == {mark for mark in bare if mark.startswith("G-")}


def test_a_column_sorts(opened: Page) -> None:
    opened.click(".beams thead th:nth-child(4) button")
    lengths = opened.run(f"{LISTED}.map(r => r.cells[3].textContent)")
    known = [float(text) for text in lengths if text]
    assert known == sorted(known)
    assert all(text == "" for text in lengths[len(known) :])


def test_a_beam_in_the_plan_opens_its_sheet(opened: Page) -> None:
    opened.click(".plan a[data-row='3'] path.body")
    opened.wait("document.querySelector('#sheet-view .sheet h2')")
    mark = opened.run("document.querySelector('#r3').cells[0].textContent")
    assert opened.run("document.querySelector('#sheet-view h2').textContent") == mark
    assert opened.run("document.querySelector('#sheet-view table.basis').checkVisibility()")
    opened.press("Escape")
    opened.wait("document.querySelector('#summary').checkVisibility()")


def test_all_sheets_can_be_printed(opened: Page) -> None:
    opened.fill("select[name=verdict]", str(State.INCOMPLETE))
    opened.click("#print-all")
    opened.wait("document.querySelector('#all-view .where').textContent.includes('ready')")
    count = opened.run("document.querySelectorAll('#all-view .sheet').length")
    assert count == len(of_state(State.INCOMPLETE))
    assert opened.pdf().startswith(b"%PDF")


def test_the_summary_prints(opened: Page) -> None:
    data = opened.pdf()
    assert data.startswith(b"%PDF")
    assert len(data) > 20_000


@pytest.mark.parametrize("width", [360, 980, 1400])
def test_nothing_is_wider_than_the_window(opened: Page, width: int) -> None:
    opened.size(width, 900)
    wide = opened.run("document.documentElement.scrollWidth")
    opened.size(1400, 1000)
    assert wide <= width


def test_hostile_names_do_nothing(page: Page, tmp_path: Path) -> None:
    path = tmp_path / "odd-survey.html"
    path.write_text(render_survey(hostile_survey()), encoding="utf-8")
    page.errors.clear()
    page.open(path)
    page.run("document.querySelector('.beams tbody a').click()")
    page.wait("document.querySelector('#sheet-view .sheet h2')")
    assert page.run("window.hacked === undefined")
    assert page.errors == []


def test_a_page_without_beams_opens(page: Page, tmp_path: Path) -> None:
    path = tmp_path / "none-survey.html"
    empty = survey_of(replace(SURVEY.model, beams=()), {})
    path.write_text(render_survey(empty), encoding="utf-8")
    page.errors.clear()
    page.open(path)
    assert page.errors == []
    assert page.run("document.querySelector('.shown').textContent") == "0 listed"


def test_two_thousand_beams_open_quickly(page: Page, tmp_path: Path) -> None:
    """Each beam of the hall many times over, on sixty storeys."""
    beams, findings = [], {}
    for copy in range(60):
        for beam in SURVEY.model.beams:
            key = f"{beam.key}~{copy}"
            beams.append(replace(beam, key=key, storey=f"{beam.storey} {copy}"))
            findings[key] = SURVEY.of(beam)
    large = survey_of(replace(SURVEY.model, beams=tuple(beams)), findings)
    path = tmp_path / "large-survey.html"
    path.write_text(render_survey(large), encoding="utf-8")
    assert len(beams) > 2000
    assert path.stat().st_size < 25_000_000
    page.errors.clear()
    assert page.open(path) < 5.0
    assert page.errors == []
    assert page.run(f"{LISTED}.length") == len(beams)

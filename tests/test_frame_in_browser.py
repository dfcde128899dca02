"""The switches of the plans as a person uses them, in headless Chromium."""

from __future__ import annotations

from collections.abc import Iterator

import pytest

from ifccheck.publish.html import render
from tests.chromium import Page, browser, find_browser
from tests.frames_made_up import made_up_frame

pytestmark = pytest.mark.chromium


@pytest.fixture(scope="module")
def page(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Page]:
    path = find_browser()
    if path is None:
        pytest.skip("no Chromium on this machine")
    file = tmp_path_factory.mktemp("frame") / "hall-rating.html"
    file.write_text(render(made_up_frame()), encoding="utf-8")
    with browser(path) as page:
        page.size(1400, 1000)
        page.open(file)
        yield page
        assert page.errors == []
        assert {address.partition("#")[0] for address in page.requests} == {file.as_uri()}


def shown(page: Page, layer: str) -> bool:
    found: bool = page.run(
        f"[...document.querySelectorAll('.{layer}-layer')]"
        ".every(g => getComputedStyle(g).display !== 'none')"
    )
    return found


def test_each_switch_hides_its_layer_and_brings_it_back(page: Page) -> None:
    assert page.run("document.querySelectorAll('.supports-layer').length") == 3
    for one, other in (("supports", "lines"), ("lines", "supports")):
        assert shown(page, one)
        page.click(f"#show-{one}")
        assert not shown(page, one)
        assert shown(page, other)
        page.click(f"#show-{one}")
        assert shown(page, one)


def test_marks_do_not_lie_in_the_way_of_a_beam(page: Page) -> None:
    """Whatever is clicked on the plan, a mark is never what is hit."""
    assert page.run(
        "[...document.querySelectorAll('.layer')]"
        ".every(g => getComputedStyle(g).pointerEvents === 'none')"
    )


def test_the_line_is_drawn_on_the_sheet(page: Page) -> None:
    key = made_up_frame().model.beams[0].key
    page.run(f"location.hash = '#beam=' + encodeURIComponent('{key}')")
    page.wait("document.querySelector('.sheet svg.line .own')")

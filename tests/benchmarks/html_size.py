"""How large the pages of 2,000 made-up beams are, and how long they take to make and to open.

Run from the repository: ``python -m tests.benchmarks.html_size``.
"""

from __future__ import annotations

import tempfile
import time
from pathlib import Path

from ifccheck.publish.csv import ratings_csv
from ifccheck.publish.html import render
from ifccheck.publish.json import ratings_json
from ifccheck.publish.property_sets import result_sets
from ifccheck.publish.sheet_html import foot_line, sheet_html
from ifccheck.publish.survey_html import render_survey
from tests.chromium import browser, find_browser
from tests.reports_made_up import made_up_report
from tests.surveys_made_up import survey_of


def main() -> None:
    report = made_up_report(bays=22, rows=14)
    beams = len(report.ratings)
    print(f"{beams} beams, {len(report.cases)} rated cases")
    started = time.perf_counter()
    html = render(report)
    taken = time.perf_counter() - started
    print(f"render: {taken:.2f} s, {taken / beams * 1e3:.2f} ms a beam, {len(html) / 1e6:.1f} MB")
    some = list(report.ratings)[:200]
    started = time.perf_counter()
    sheets = [sheet_html(report.sheet(key), foot_line(report)) for key in some]
    taken = (time.perf_counter() - started) / len(some)
    size = sum(map(len, sheets)) / len(some)
    print(f"a sheet: {taken * 1e3:.2f} ms, {size / 1e3:.1f} kB before deflating")
    for name, make in (("csv", ratings_csv), ("json", ratings_json), ("sets", result_sets)):
        started = time.perf_counter()
        made = make(report)  # type: ignore[operator]
        print(f"{name}: {time.perf_counter() - started:.2f} s, {len(made)} long")
    open_in_browser(html)
    started = time.perf_counter()
    page = render_survey(survey_of(report.model, {}))
    taken = time.perf_counter() - started
    print(f"survey: {taken:.2f} s, {taken / beams * 1e3:.2f} ms a beam, {len(page) / 1e6:.1f} MB")
    open_in_browser(page)


def open_in_browser(html: str) -> None:
    path = find_browser()
    if path is None:
        print("no Chromium: opening not measured")
        return
    with tempfile.TemporaryDirectory() as folder, browser(path) as page:
        file = Path(folder) / "large.html"
        file.write_text(html, encoding="utf-8")
        page.size(1400, 1000)
        print(f"opened in {page.open(file):.2f} s")
        for name, action in (
            ("sort", "document.querySelector('.beams thead th:nth-child(6) button').click()"),
            ("filter", "(e => { e.value = 'B-1*'; e.dispatchEvent(new Event('input',"
                       " {bubbles: true})) })(document.querySelector('input[name=mark]'))"),
        ):  # fmt: skip
            started = time.perf_counter()
            page.run(action)
            page.run("document.body.offsetHeight")
            print(f"{name}: {time.perf_counter() - started:.2f} s")
        started = time.perf_counter()
        page.run("document.querySelector('.beams tbody tr:not([hidden]) a').click()")
        page.wait("document.querySelector('#sheet-view .sheet')")
        print(f"a sheet opens in {time.perf_counter() - started:.2f} s")


if __name__ == "__main__":
    main()

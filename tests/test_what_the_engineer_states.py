"""What the engineer states in place of the program or the code is seen wherever it counts."""

from __future__ import annotations

from pathlib import Path

import pytest

from ifccheck import pipeline
from ifccheck.beam import Verdict
from ifccheck.publish.html import render
from ifccheck.publish.json import ratings_json
from ifccheck.publish.property_sets import result_sets
from ifccheck.publish.report import Report
from tests.step_halls import LOAD, Beam, brief, hall, write

OWN = """
[[combinations]]
name = "ours"
kind = "strength"
factors = { permanent = %s, imposed = %s }
"""


def report_on(folder: Path, *entries: str, text: str = "") -> Report:
    return pipeline.rate(
        [*write(folder, hall(Beam()), text or brief(*entries))][:1], folder / "brief.toml"
    ).reports[0]


@pytest.mark.parametrize(
    ("permanent", "imposed", "short"), [("0.1", "0.1", True), ("[1.4, 0.9]", "1.5", False)]
)
def test_combinations_of_the_brief_are_never_taken_for_the_codes(
    tmp_path: Path, permanent: str, imposed: str, short: bool
) -> None:
    report = report_on(tmp_path, LOAD, OWN % (permanent, imposed))
    texts = [remark.text for remark in report.remarks if remark.kind == "doubt"]
    assert any("brief's own" in text for text in texts)
    assert any("ask for less" in text for text in texts) == short
    assert "the brief's own" in report.actions
    assert "the brief's own" in ratings_json(report)
    assert "the brief&#39;s own" in render(report) or "the brief's own" in render(report)
    written = {p.name: p.value for each in result_sets(report) for p in each.properties}
    assert "the brief's own" in str(written["Actions"])


def test_the_codes_own_combinations_make_no_remark(tmp_path: Path) -> None:
    report = report_on(tmp_path, LOAD)
    assert not [remark for remark in report.remarks if remark.stage == "combinations"]
    assert "National Building Code" in report.actions


def test_statements_that_overrule_a_doubt_stand_on_the_beam(tmp_path: Path) -> None:
    stated = '[[beams]]\nbeams = ["B-1"]\nunloaded = true\nloads_complete = true\n'
    report = report_on(tmp_path, stated)
    (rating,) = report.ratings.values()
    assert rating.verdict is Verdict.ADEQUATE
    remarks = [remark.text for remark in rating.remarks if remark.kind == "assumption"]
    for word in ("unloaded = true", "loads_complete = true"):
        assert any(word in text for text in remarks)
        assert any(word in str(item.value) for item in rating.basis)
        assert word in render(report)

"""The committed results of the sample building are those that the program gives today.

These numbers were made by this program: they guard against change, not against error.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from ifccheck import pipeline
from ifccheck.publish.json import ratings_json

REPOSITORY = Path(__file__).resolve().parents[1]
SAMPLE = REPOSITORY / "sample_models"
COMMITTED = REPOSITORY / "reports" / "print_works-rating.json"


@pytest.fixture(scope="module")
def today() -> dict[str, Any]:
    run = pipeline.rate([SAMPLE / "print_works.ifc"], SAMPLE / "brief.toml")
    found: dict[str, Any] = json.loads(ratings_json(run.reports[0]))
    return found


@pytest.fixture(scope="module")
def committed() -> dict[str, Any]:
    found: dict[str, Any] = json.loads(COMMITTED.read_text(encoding="utf-8"))
    return found


def test_every_beam_has_the_verdict_of_the_report(
    today: dict[str, Any], committed: dict[str, Any]
) -> None:
    def verdicts(report: dict[str, Any]) -> dict[str, tuple[str, list[str]]]:
        return {b["mark"]: (b["verdict"], b["reasons"]) for b in report["beams"]}

    assert verdicts(today) == verdicts(committed)


def test_every_number_is_that_of_the_report(
    today: dict[str, Any], committed: dict[str, Any]
) -> None:
    def utilisations(report: dict[str, Any]) -> dict[str, float]:
        return {
            f"{beam['mark']} {state['name']}": state["utilisation"]
            for beam in report["beams"]
            for state in beam["limit_states"]
            if state["utilisation"] is not None
        }

    assert utilisations(today) == pytest.approx(utilisations(committed), rel=1e-6)


def test_every_case_has_the_factor_of_the_report(
    today: dict[str, Any], committed: dict[str, Any]
) -> None:
    def factors(report: dict[str, Any]) -> dict[str, float]:
        return {case["case"]: case["factor"] for case in report["rated_cases"]}

    assert factors(today) == pytest.approx(factors(committed), rel=1e-6)

"""A load with a minus sign acts upward: a slip of the sign must not make a beam adequate."""

from __future__ import annotations

from pathlib import Path

import pytest

from ifccheck.beam import Verdict
from ifccheck.brief.load import load_brief
from ifccheck.errors import BriefError
from tests.step_halls import brief
from tests.test_rules_that_protect import SOUND, check_not_rated, load, rating_of, report_on

LIFTED = 'line = "-50 kN/m"'
TOLD = "load acts upward: loads[2]; write upward = true there if it is meant"
CASES = """[cases.plant]
nature = "permanent"
[cases.floor]
nature = "imposed"
"""


@pytest.mark.parametrize(
    "amount",
    ['line = "-8 kN/m"', 'line = ["5 kN/m", "-1 kN/m"]\nfrom = "0 m"\nto = "6 m"',
     'point = "-4 kN"\nat = "2 m"', 'area = "-1 kPa"\ntributary_width = "2 m"'],
)  # fmt: skip
def test_an_upward_load_that_nobody_confirms_is_not_rated(tmp_path: Path, amount: str) -> None:
    report = report_on(tmp_path, SOUND, load('line = "10 kN/m"'), load(amount))
    check_not_rated(rating_of(report), TOLD)
    doubts = [remark.text for remark in report.remarks if remark.kind == "doubt"]
    assert any("loads[2] acts upward" in text for text in doubts)


@pytest.mark.parametrize("case", ["plant", "floor"])
def test_it_hides_no_load_of_any_case(tmp_path: Path, case: str) -> None:
    """60 kN/m alone falls short; less 50 kN/m it would pass, be the case permanent or not."""
    heavy, lifting = load('line = "60 kN/m"', case), load(LIFTED, case)
    alone = report_on(tmp_path, SOUND, text=brief(heavy, cases=CASES))
    assert rating_of(alone).verdict is Verdict.FALLS_SHORT
    check_not_rated(
        rating_of(report_on(tmp_path, SOUND, text=brief(heavy, lifting, cases=CASES))), TOLD
    )


def test_confirmed_it_is_rated_and_stands_among_the_statements(tmp_path: Path) -> None:
    report = report_on(
        tmp_path, SOUND, load('line = "10 kN/m"'), load('line = "-1 kN/m"\nupward = true')
    )
    rating = rating_of(report)
    assert rating.verdict is Verdict.ADEQUATE, [reason.text for reason in rating.reasons]
    assert any("upward = true: loads[2] acts upward" in r.text for r in rating.remarks)
    assert any("upward = true: loads[2]" in str(item.value) for item in rating.basis)
    assert not [r for r in report.remarks if "acts upward" in r.text]


def test_it_lowers_no_verdict_of_falling_short(tmp_path: Path) -> None:
    """What falls short with the upward load does so without it, too."""
    rating = rating_of(
        report_on(tmp_path, SOUND, load('line = "90 kN/m"'), load('line = "-1 kN/m"'))
    )
    assert rating.verdict is Verdict.FALLS_SHORT


def test_a_load_that_acts_on_other_beams_is_no_reason(tmp_path: Path) -> None:
    elsewhere = load('line = "-8 kN/m"\noptional = true', beams="X-9")
    rating = rating_of(report_on(tmp_path, SOUND, load('line = "10 kN/m"'), elsewhere))
    assert rating.verdict is Verdict.ADEQUATE


@pytest.mark.parametrize(
    ("amount", "why"),
    [
        ('line = "8 kN/m"', "'8 kN/m' acts downward"),
        ('moment = "-8 kN*m"\nat = "2 m"', "a moment acts neither up nor down"),
    ],
)
def test_a_confirmation_that_fits_nothing_is_an_error(
    tmp_path: Path, amount: str, why: str
) -> None:
    path = tmp_path / "brief.toml"
    path.write_text(brief(load(amount + "\nupward = true")), encoding="utf-8")
    with pytest.raises(BriefError, match=why):
        load_brief(path)


def test_a_moment_of_either_sense_is_no_upward_load(tmp_path: Path) -> None:
    turning = load('moment = "-8 kN*m"\nat = "2 m"')
    rating = rating_of(report_on(tmp_path, SOUND, load('line = "10 kN/m"'), turning))
    assert rating.verdict is Verdict.ADEQUATE

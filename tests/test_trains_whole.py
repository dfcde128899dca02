"""Trains of wheels through the whole program: from the brief to the answer of each beam."""

from __future__ import annotations

import json
from collections.abc import Mapping, Sequence
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from ifccheck import pipeline
from ifccheck.beam import Verdict
from ifccheck.errors import BriefError
from ifccheck.publish.html import render
from ifccheck.publish.json import ratings_json
from ifccheck.sheet import Sheet, SheetCheck
from tests.step_halls import Beam, brief, hall, write

CASES = (
    '[cases.hoist]\nnature = "crane"\nrated = true\n[cases.still]\nnature = "crane"\nrated = true\n'
)
STEEL = {"TopBars": "4-25M", "BottomBars": "8-35M", "Stirrups": "2 legs 15M @ 100"}
HELD = '[[supports]]\nbeams = ["R-1"]\nstart = "{}"\nend = "{}"\n'
PINNED = HELD.format("pinned", "pinned")


def runway(length: float) -> Beam:
    return Beam(
        "R-1", length=length, width=500.0, depth=1100.0, columns=False, notation=STEEL
    )  # fmt: skip


def train(forces: Sequence[float], gaps: Sequence[float] = (), *more: str) -> str:
    wheels, spacing = (
        json.dumps([f"{value:g} {unit}" for value in values])
        for values, unit in ((forces, "kN"), (gaps, "m"))
    )
    rows = ["[[trains]]", 'case = "hoist"', 'beams = ["R-1"]', "dynamic = 1.0"]
    return "\n".join([*rows, f"wheels = {wheels}", f"spacing = {spacing}", *more, ""])


def still(forces: Sequence[float], places: Sequence[float]) -> str:
    """The same wheels where they stand, as points that do not move."""
    return "".join(
        f'[[loads]]\ncase = "still"\nbeams = ["R-1"]\npoint = "{force:g} kN"\nat = "{x:.4f} m"\n'
        for force, x in zip(forces, places, strict=True)
    )


def sheet_of(folder: Path, length: float, *entries: str, supports: str = PINNED) -> Sheet:
    model, text = write(folder, hall(runway(length)), brief(supports, *entries, cases=CASES))
    (sheet,) = pipeline.sheets(model, "R-1", text)
    return sheet


def check_of(sheet: Sheet, title: str) -> SheetCheck:
    return next(check for check in sheet.checks if check.title.startswith(title))


def hoist_share(check: SheetCheck) -> tuple[float, float, tuple[float, ...]]:
    share = next(share for share in check.shares if share.case == "hoist")
    return share.moment, share.shear, share.wheels


# Published maxima: P and spacing, span, M, x of M from the nearer support, greatest reaction
TWO_WHEELS = [
    (241.5, 3.5, 8.0, 589.6, 3.125, 377.34),  # worked example of a gantry girder
    (100.0, 1.6, 8.0, 100 * 0.405 * 8, 3.6, 180.0),  # P/(2L) (L - a/2)^2, P (2 - a/L): from memory
    (100.0, 3.2, 8.0, 100 * 0.32 * 8, 3.2, 160.0),
    (100.0, 5.6, 8.0, 100 * 0.25 * 8, 4.0, 130.0),  # a > 0.586 L: P L / 4
]


@pytest.mark.parametrize(("force", "gap", "span", "moment", "x", "reaction"), TWO_WHEELS)
def test_two_wheels_ask_what_is_published(
    tmp_path: Path, force: float, gap: float, span: float, moment: float, x: float, reaction: float
) -> None:
    own = '[[combinations]]\nname = "all"\nkind = "strength"\n'
    own += "factors = { permanent = 0.001, crane = 1.0 }\n"
    sheet = sheet_of(tmp_path, span * 1000.0, train([force, force], [gap]), own)
    found, _, wheels = hoist_share(check_of(sheet, "flexure, sagging"))
    assert found / 1e6 == pytest.approx(moment, rel=1e-3)
    governing = next(s for s in sheet.rating.limit_states if s.title == "flexure, sagging")
    assert min(governing.position, span * 1e3 - governing.position) / 1e3 == pytest.approx(
        x, abs=0.02
    )
    assert any(abs(wheel - governing.position) < 0.01 for wheel in wheels)
    _, shear, _ = hoist_share(check_of(sheet, "shear"))
    assert abs(shear) / 1e3 == pytest.approx(reaction, rel=1e-3)
    most = next(each for each in sheet.reactions if each.case == "hoist, most")
    assert [force / 1e3 for force in most.forces] == pytest.approx([reaction] * 2, rel=1e-3)


def greatest(folder: Path, beams: Sequence[Beam], *entries: str) -> dict[str, float]:
    """The greatest utilisation of any of the beams, by limit state."""
    model, text = write(folder, hall(*beams), brief(*entries, cases=CASES))
    most: dict[str, float] = {}
    for rating in pipeline.rate([model], text).reports[0].ratings.values():
        for state in rating.limit_states:
            most[state.title] = max(most.get(state.title, 0.0), state.utilisation)
    return most


LAYOUTS = [
    ([90.0, 90.0], [1.8], ("pinned", "pinned"), 6.0),
    ([60.0, 100.0, 40.0], [1.1, 1.7], ("pinned", "pinned"), 7.0),
    ([70.0, 30.0, 90.0], [0.9, 1.4], ("fixed", "fixed"), 7.0),
    ([50.0, 20.0], [1.2], ("fixed", "free"), 3.0),
]
STEP = 0.02
"""Distance between the places that are tried [m]"""


@pytest.mark.parametrize("steel", [STEEL, STEEL | {"Stirrups": "2 legs 10M @ 300"}])
@pytest.mark.parametrize(("forces", "gaps", "ends", "span"), LAYOUTS)
def test_no_place_of_still_wheels_uses_a_beam_more(
    tmp_path: Path,
    steel: Mapping[str, str],
    forces: Sequence[float],
    gaps: Sequence[float],
    ends: tuple[str, str],
    span: float,
) -> None:
    one = replace(runway(span * 1e3), notation=steel)
    assert_no_place_uses_it_more(tmp_path, one, forces, gaps, ends)


def test_no_place_between_those_of_moment_and_shear_uses_a_beam_more(tmp_path: Path) -> None:
    """Shear resistance depends on both: here it is least under a train between the two places."""
    light = STEEL | {"BottomBars": "4-25M", "Stirrups": "2 legs 10M @ 200"}
    one = replace(runway(7000.0), depth=800.0, notation=light)
    wheels = [12.2, 70.6, 92.7, 84.4], [1.99, 1.59, 0.84]
    assert_no_place_uses_it_more(tmp_path, one, *wheels, ("fixed", "fixed"))


def assert_no_place_uses_it_more(
    folder: Path, one: Beam, forces: Sequence[float], gaps: Sequence[float], ends: tuple[str, str]
) -> None:
    """Held against a beam for each place where the train may stand, its wheels as points on it."""
    supports, span = HELD.format(*ends).replace("R-1", "R-*"), one.length / 1e3
    moving = greatest(folder, [one], train(forces, gaps, "turned = false"), supports)
    offsets = np.concatenate([[0.0], np.cumsum(gaps)])
    beams, entries = [], [supports]
    for number, first in enumerate(np.arange(-offsets[-1], span + 1e-9, STEP).tolist()):
        places = [(f, first + o) for f, o in zip(forces, offsets, strict=True)]
        on = [(f, x) for f, x in places if 0.0 <= x <= span]
        mark = f"R-{number + 1}"
        if on:
            beams.append(replace(one, mark=mark, at=(0.0, 2000.0 * number, 3000.0)))
            entries.append(still(*zip(*on, strict=True)).replace("R-1", mark))
    fixed = greatest(folder, beams, *entries)
    for title, value in fixed.items():
        assert value <= moving[title] * (1.0 + 1e-6), title
        if value > 0.0 and title.startswith("flexure"):
            assert moving[title] <= value * 1.02, title


def test_a_second_train_acts_with_the_first_as_near_as_it_may_come(tmp_path: Path) -> None:
    second = ["[trains.second]", 'wheels = ["60 kN", "60 kN"]', 'spacing = ["1.2 m"]']
    near, far = (
        greatest(
            tmp_path, [runway(6000.0)], PINNED,
            train([60.0, 60.0], [1.2], *second, f'approach = "{approach} m"'),
        )
        for approach in (0.8, 9.0)
    )  # fmt: skip
    alone = greatest(tmp_path, [runway(6000.0)], PINNED, train([60.0, 60.0], [1.2]))
    joined = train([60.0] * 4, [1.2, 0.8, 1.2])
    together = greatest(tmp_path, [runway(6000.0)], PINNED, joined)
    assert far == pytest.approx(alone, rel=1e-9)
    assert near["flexure, sagging"] > 1.2 * alone["flexure, sagging"]
    assert near["flexure, sagging"] == pytest.approx(together["flexure, sagging"], rel=1e-9)


def test_stops_keep_a_train_off_the_end(tmp_path: Path) -> None:
    stops = ['from = "2 m"', 'to = "6 m"', "stops = true"]
    sheet = sheet_of(tmp_path, 6000.0, train([100.0, 100.0], [1.0], *stops))
    most = next(each for each in sheet.reactions if each.case == "hoist, most")
    assert most.forces[0] == pytest.approx(100e3 * (4.0 / 6.0 + 3.0 / 6.0), rel=1e-6)
    assert most.forces[1] == pytest.approx(100e3 * (1.0 + 5.0 / 6.0), rel=1e-6)


def test_a_train_may_grow_to_its_rating_factor_and_no_further(tmp_path: Path) -> None:
    forces, gaps = [60.0, 100.0, 40.0], [1.1, 1.7]
    (safe,) = sheet_of(tmp_path, 7000.0, train(forces, gaps)).rating.safe_loads
    assert safe.text.startswith(
        f"{np.floor(safe.factor * 100) / 100:.2f} x train of 3 wheels, 60 kN"
    )
    for more, holds in ((1.0 - 1e-6, True), (1.0 + 1e-4, False)):
        text = train([0], gaps).replace(
            '["0 kN"]', json.dumps([f"{force * safe.factor * more:.9f} kN" for force in forces])
        )
        rating = sheet_of(tmp_path, 7000.0, text).rating
        assert (rating.utilisation <= 1.0) == holds
        assert (rating.verdict is Verdict.ADEQUATE) == holds


def test_dynamic_factor_multiplies_all_wheels(tmp_path: Path) -> None:
    twice = train([60.0, 40.0], [1.5]).replace("dynamic = 1.0", "dynamic = 2.0")
    texts = twice, train([120.0, 80.0], [1.5])
    found = [greatest(tmp_path, [runway(6000.0)], text, PINNED) for text in texts]
    assert found[0] == pytest.approx(found[1], rel=1e-12)


def test_what_is_not_checked_of_wheels_is_told(tmp_path: Path) -> None:
    model, text = write(tmp_path, hall(runway(6000.0)), brief(PINNED, train([50.0]), cases=CASES))
    report = pipeline.rate([model], text).reports[0]
    (rating,) = report.ratings.values()
    assert any("side thrust" in remark.text for remark in rating.remarks)
    assert not any("stand where the brief puts them" in remark.text for remark in rating.remarks)
    assert "train of 1 wheel, 50 kN" in ratings_json(report)
    assert "train of 1 wheel, 50 kN" in render(report)


WRONG = [
    (train([50.0, 50.0]), "2 wheels need 1 distances"),
    (train([50.0]) + train([50.0]), "holds another train already"),
    (train([50.0]).replace('"hoist"', '"hoits"'), "did you mean hoist"),
    (train([50.0]).replace("dynamic = 1.0", "dynamic = 0.5"), "a factor from 1 to 3"),
    (train([50.0]).replace("dynamic = 1.0\n", ""), "dynamic (line 31): is missing"),
    (train([50.0], [], 'from = "1 m"'), "both from and to"),
    (train([50.0], [], "stops = true"), "give from and to"),
    (train([50.0], [], 'from = "1 m"', 'to = "9 m"'), "lies beyond the end"),
    (train([50.0, 50.0], [3.0], 'from = "1 m"', 'to = "3 m"', "stops = true"), "no room"),
    (train([-50.0]), "not above zero"),
    (train([50.0], [], 'speed = "3"'), "unknown key 'speed'"),
    (
        train([50.0]) + still([1.0], [1.0]).replace('"still"', '"hoist"'),
        "no other load may be in it",
    ),
    (
        train([50.0]) + '[[floors]]\ncase = "hoist"\narea = "1 kPa"\n',
        "no other load may be",
    ),
    (train([50.0], [], "[trains.second]", 'wheels = ["1 kN"]'), "approach"),
]


@pytest.mark.parametrize(("text", "told"), WRONG)
def test_a_train_that_is_wrong_is_told_at_its_key(tmp_path: Path, text: str, told: str) -> None:
    with pytest.raises(BriefError) as error:
        sheet_of(tmp_path, 6000.0, text)
    assert told.partition(" (line")[0] in str(error.value)
    assert "\n" not in str(error.value)

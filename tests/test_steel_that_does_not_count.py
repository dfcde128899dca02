"""Beams with steel that is drawn twice, lies in the air or holds nothing, through the program.

Each is set beside the same beam without that steel: it may never make a beam better.
"""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import pytest

from tests.models import (
    BEARINGS,
    Layer,
    MadeBeam,
    Outline,
    Setting,
    Ties,
    answers,
    brief,
    load,
    model,
    rate_model,
    rectangle,
    state,
    tee,
)

LENGTH = 6300.0
PLACES = tuple(150.0 + 200.0 * number for number in range(31))
BOTTOM, TOP = (
    Layer("25M", 60.0, (-90.0, 0.0, 90.0), 40.0, 6260.0),
    Layer("20M", 540.0, (-90.0, 90.0), 40.0, 6260.0),
)
LINKS = Ties("10M", PLACES, 105.0, 40.0, 560.0)


def rated(
    folder: Path,
    layers: Sequence[Layer],
    ties: Sequence[Ties],
    outline: Outline = rectangle(300.0, 600.0),  # noqa: B008
) -> dict[str, Any]:
    beam = MadeBeam(outline, LENGTH, layers=tuple(layers), ties=tuple(ties))
    text = brief(BEARINGS, load("floor", 'line = "20 kN/m"'))
    folder.mkdir(exist_ok=True)
    run = rate_model(folder, model(beam, setting=Setting(strength=30.0)), text)
    found: dict[str, Any] = answers(run)[beam.mark]
    return found


def resistance(answer: dict[str, Any], name: str) -> float:
    return float(state(answer, name)["resistance"])


@pytest.mark.parametrize(("across", "up", "ends"), [(3.0, 0.0, 0.0), (0.0, 2.0, 0.0), (0, 0, 20)])
def test_bars_copied_do_not_strengthen(
    across: float, up: float, ends: float, tmp_path: Path
) -> None:
    plain = rated(tmp_path / "plain", (BOTTOM, TOP), (LINKS,))
    ys = tuple(y + across for y in BOTTOM.ys)
    copy = Layer("25M", 60.0 + up, ys, 40.0 + ends, 6260.0 - ends)
    answer = rated(tmp_path / "copied", (BOTTOM, copy, TOP), (LINKS,))
    flexure = resistance(answer, "FlexureSagging")
    assert flexure <= resistance(plain, "FlexureSagging") * (1.0 + 1e-9)
    assert flexure == pytest.approx(resistance(plain, "FlexureSagging"), rel=0.01)


@pytest.mark.parametrize(("along", "wider"), [(0.0, 3.0), (4.0, 0.0)])
def test_ties_copied_do_not_strengthen(along: float, wider: float, tmp_path: Path) -> None:
    plain = rated(tmp_path / "plain", (BOTTOM, TOP), (LINKS,))
    places = tuple(x + along for x in PLACES)
    copy = Ties("10M", places, 105.0 + wider, 40.0, 560.0)
    answer = rated(tmp_path / "copied", (BOTTOM, TOP), (LINKS, copy))
    assert resistance(answer, "Shear") == pytest.approx(resistance(plain, "Shear"), rel=1e-6)


@pytest.mark.parametrize(("along", "wider", "told"), [(13.0, 0.0, True), (13.0, -60.0, False)])
def test_ties_drawn_side_by_side_are_told(
    along: float, wider: float, told: bool, tmp_path: Path
) -> None:
    """Doubled stirrups are good practice, and a copy that was moved a little looks like them; an
    inner stirrup beside an outer one does not."""
    copy = Ties("10M", tuple(x + along for x in PLACES), 105.0 + wider, 40.0, 560.0)
    answer = rated(tmp_path / "doubled", (BOTTOM, TOP), (LINKS, copy))
    doubts = [remark["text"] for remark in answer["remarks"]]
    assert any("stand side by side at one place" in text for text in doubts) == told
    legs = [item["value"] for item in answer["basis"] if item["name"] == "Stirrups"]
    assert any("4 legs" in str(value) for value in legs)


def test_bars_beside_the_web_of_a_tee_leave_it_unrated(tmp_path: Path) -> None:
    outline = tee(300.0, 600.0, 1200.0, 150.0)
    beside = Layer("25M", 60.0, (-500.0, -400.0, 400.0, 500.0), 40.0, 6260.0)
    assert rated(tmp_path / "web", (BOTTOM, TOP), (LINKS,), outline)["verdict"] != "not rated"
    answer = rated(tmp_path / "air", (beside, TOP), (LINKS,), outline)
    assert answer["verdict"] == "not rated"
    assert any("outside the concrete" in reason for reason in answer["reasons"])


def test_hoops_that_hold_neither_chord_give_nothing_in_shear(tmp_path: Path) -> None:
    none = rated(tmp_path / "none", (BOTTOM, TOP), ())
    hoops = Ties("10M", PLACES, 60.0, 145.0, 460.0)
    answer = rated(tmp_path / "hoops", (BOTTOM, TOP), (hoops,))
    held = rated(tmp_path / "held", (BOTTOM, TOP), (LINKS,))
    assert resistance(answer, "Shear") <= resistance(none, "Shear") * (1.0 + 1e-9)
    assert resistance(held, "Shear") > 1.2 * resistance(answer, "Shear")

"""Bars that are drawn past the end of their beam: what lies in the air develops nothing.

Each beam is set beside the same one whose bars end where its concrete does, which is what the
rest of the first can be worth.
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from ifccheck.rating import Rating
from tests import step_halls
from tests.models import (
    Layer,
    MadeBeam,
    Setting,
    Ties,
    answers,
    brief,
    load,
    model,
    rate_model,
    rectangle,
)
from tests.step_halls import Bar, Beam, Block, hall
from tests.test_rules_that_protect import rated as rated_hall
from tests.test_rules_that_protect import stated, without_extent

LENGTH = 6000.0
LINKS = Ties("10M", tuple(100.0 + 200.0 * number for number in range(30)), 105.0, 40.0, 560.0)
ALONE = """
[[supports]]
beams = ["*"]
start = "pinned"
end = "pinned"
bearing = ["200 mm", "200 mm"]
"""
WHY = "no concrete of the model meets it"


def made(start: float, end: float, hooks: bool = False, **more: Any) -> MadeBeam:
    """A beam 300 x 600 with bars at both faces from ``start`` to ``end``."""
    tail = 350.0 if hooks else 0.0
    layers = (
        Layer("25M", 60.0, (-90.0, 0.0, 90.0), start, end, (hooks, hooks), tail),
        Layer("25M", 540.0, (-90.0, 90.0), start, end),
    )
    return MadeBeam(
        rectangle(300.0, 600.0), LENGTH, layers=layers, ties=(LINKS,), **{"columns": (0, 0), **more}
    )


def rated(folder: Path, beam: MadeBeam, unit: Any = "mm") -> dict[str, Any]:
    text = brief(ALONE, load("floor", 'line = "8 kN/m"', beams="B-1"))
    data = model(beam, setting=Setting(unit=unit))
    found: dict[str, Any] = answers(rate_model(folder, data, text))["B-1"]
    return found


def reasons(answer: dict[str, Any]) -> str:
    return "; ".join(answer["reasons"])


def remarks(answer: dict[str, Any]) -> str:
    return "; ".join(remark["text"] for remark in answer["remarks"])


def used(answer: dict[str, Any]) -> dict[str, float]:
    """Utilisation by each limit state."""
    return {state["name"]: state["utilisation"] for state in answer["limit_states"]}


@pytest.mark.parametrize("unit", ["mm", "m", "inch"])
def test_bars_of_a_beam_that_stands_between_nothing(unit: Any, tmp_path: Path) -> None:
    long = rated(tmp_path / "long", made(-3000.0, 9000.0), unit=unit)
    short = rated(tmp_path / "short", made(0.0, LENGTH), unit=unit)
    assert short["verdict"] == "adequate", reasons(short)
    assert long["verdict"] == "not rated"
    assert f"beyond the start of the beam by up to 3000 mm, where {WHY}" in reasons(long)
    assert f"beyond the end of the beam by up to 3000 mm, where {WHY}" in reasons(long)
    assert used(long) == pytest.approx(used(short))


@pytest.mark.parametrize("past", [0.5, 20.0, 49.0])
def test_bars_that_are_drawn_a_little_too_long_end_at_the_end(past: float, tmp_path: Path) -> None:
    long = rated(tmp_path / "long", made(-past, LENGTH + past))
    short = rated(tmp_path / "short", made(0.0, LENGTH))
    assert long["verdict"] == "adequate", reasons(long)
    assert ("taken as ending there" in remarks(long)) == (past > 1.0)
    assert used(long) == pytest.approx(used(short), rel=5e-3)


def test_a_hook_that_lies_in_the_air_holds_nothing(tmp_path: Path) -> None:
    """Its bend and its tail are beyond the end, and so is what a straight bar lacks there."""
    hooked = rated(tmp_path / "hooked", made(-100.0, LENGTH + 100.0, hooks=True))
    short = rated(tmp_path / "short", made(0.0, LENGTH))
    assert WHY in reasons(hooked)
    assert used(hooked) == pytest.approx(used(short))


# Beside other members ----------------------------------------------------------------------------

LIGHT = step_halls.LOAD.replace("10 kN/m", "1 kN/m")
ENDS = 'start = "pinned"\nend = "pinned"\nbearing = ["300 mm", "300 mm"]'
CANTILEVER = 'start = "fixed"\nend = "free"\nbearing = ["300 mm", "0 mm"]'


def among(
    folder: Path, past: tuple[float, float], *others: Block, stand: str = ENDS, length: float = 6e3
) -> Rating:
    """A beam whose bars pass its ends by so much, with other members round it."""
    bars = [
        Bar(-past[0], length + past[1], y, z) for z in (62.0, 538.0) for y in (-90.0, 0.0, 90.0)
    ]
    made_alone = Beam(notation=None, bars=bars, columns=False, length=length)
    folder.mkdir(exist_ok=True)
    complete = stated("beams", "loads_complete = true")
    text = hall(made_alone, others=list(others))
    return rated_hall(folder, text, LIGHT, stated("supports", stand), complete)


def told(rating: Rating) -> str:
    return "; ".join(reason.text for reason in rating.reasons)


def at_the_start(kind: str, foot: float, height: float, **more: Any) -> Block:
    """A block against the start of the beam, which is at a height of 3000."""
    return Block("N-1", (-150.0, 0.0, foot), (300, 400), height, kind, **more)


def test_bars_of_a_cantilever_that_go_on_past_its_tip(tmp_path: Path) -> None:
    """They are fixed in the column that the start meets, and past the tip there is air."""
    column = Block("N-1", (-400.0, 0.0, 0.0), (800, 400), 3600.0)
    stand: Any = {"stand": CANTILEVER, "length": 2000.0}
    long = among(tmp_path / "long", (760.0, 2000.0), column, **stand)
    short = among(tmp_path / "short", (760.0, 0.0), column, **stand)
    assert short.verdict == "adequate", told(short)
    assert long.verdict == "not rated"
    assert f"beyond the end of the beam by up to 2000 mm, where {WHY}" in told(long)
    assert "start of the beam" not in told(long)
    assert [one.utilisation for one in long.limit_states] == pytest.approx(
        [one.utilisation for one in short.limit_states]
    )


@pytest.mark.parametrize("kind", ["IFCCOLUMN", "IFCWALL", "IFCFOOTING"])
def test_bars_that_run_on_into_other_concrete_stay_as_they_are_drawn(
    kind: str, tmp_path: Path
) -> None:
    rating = among(tmp_path, (280.0, 0.0), at_the_start(kind, 0.0, 3600.0))
    assert "beyond the" not in told(rating)
    assert not any("start of the beam" in remark.text for remark in rating.remarks)


@pytest.mark.parametrize(
    "block",
    [
        at_the_start("IFCCOLUMN", 0.0, 3000.0),
        at_the_start("IFCBUILDINGELEMENTPROXY", 0.0, 3600.0),
        Block("N-1", (150.0, 0.0, 0.0), (300, 400), 3000.0),
        Block("N-1", (-100.0, 300.0, 0.0), (600, 300), 3600.0),
    ],
    ids=["column below", "proxy", "column under it", "column beside it"],
)
def test_what_is_no_concrete_in_their_way_holds_no_bars(block: Block, tmp_path: Path) -> None:
    rating = among(tmp_path, (280.0, 0.0), block)
    assert f"beyond the start of the beam by up to 280 mm, where {WHY}" in told(rating)


def test_bars_do_not_run_on_into_a_steel_beam(tmp_path: Path) -> None:
    """The span goes on to its middle, and the bars end where the concrete does."""
    concrete = at_the_start("IFCBEAM", 3000.0, 600.0)
    assert among(tmp_path, (280.0, 0.0), concrete).verdict == "adequate"
    steel = at_the_start("IFCBEAM", 3000.0, 600.0, material="Structural steel S355")
    assert among(tmp_path, (280.0, 0.0), steel).verdict == "falls short"


def test_a_column_that_the_beam_is_drawn_into_holds_its_bars(tmp_path: Path) -> None:
    """The beam ends in the middle of a column of 600, and its bars go on to the far side."""
    column = Block("N-1", (0.0, 0.0, 0.0), (600, 600), 3600.0)
    assert WHY not in told(among(tmp_path, (260.0, 0.0), column))


def test_a_member_of_which_nobody_knows_the_place_leaves_a_doubt(tmp_path: Path) -> None:
    """Bars count to the end of the beam alone, and it is told."""
    bars = [Bar(-280.0, 6000.0, y, z) for z in (62.0, 538.0) for y in (-90.0, 0.0, 90.0)]
    held = Beam(notation=None, bars=bars, columns=False)
    text = without_extent(hall(held, Beam("R-1", at=(0.0, 0.0, 3600.0))), "R-1")
    complete = stated("beams", "loads_complete = true")
    rating = rated_hall(tmp_path, text, LIGHT, stated("supports", ENDS), complete)
    assert WHY not in told(rating)
    doubt = "beyond the start of the beam by up to 280 mm: counted to there alone"
    assert any(doubt in remark.text and "R-1" in remark.text for remark in rating.remarks)


def test_bars_that_run_out_of_an_edge_column_end_at_its_far_face(tmp_path: Path) -> None:
    """A column 300 thick meets the start: bars 3 m past it are worth those that end in it."""
    column = at_the_start("IFCCOLUMN", 0.0, 3600.0)
    through = among(tmp_path / "through", (3000.0, 0.0), column)
    within = among(tmp_path / "within", (300.0, 0.0), column)
    assert "past what meets it there, taken as ending in that" in "; ".join(
        remark.text for remark in through.remarks
    )
    found, wanted = ([s.utilisation for s in each.limit_states] for each in (through, within))
    assert found == pytest.approx(wanted, rel=1e-9)


def test_bars_that_run_on_from_a_column_into_another_beam_develop_there(tmp_path: Path) -> None:
    column = at_the_start("IFCCOLUMN", 0.0, 3600.0)
    beyond = Block("N-2", (-2300.0, 0.0, 3000.0), (4000, 300), 600.0, "IFCBEAM")
    rating = among(tmp_path, (3000.0, 0.0), column, beyond)
    assert not [remark for remark in rating.remarks if "past what meets it" in remark.text]

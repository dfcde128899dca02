"""What an engineer asks of a result is answered in its words: why there is no resistance, why a
bound is not applied, which combination governs, what settles a thing that is missing."""

from __future__ import annotations

import json
import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner

from ifccheck import cli
from ifccheck.frame.opening_shear import RULE
from ifccheck.publish.quantities import metres
from ifccheck.publish.survey_words import what_settles
from ifccheck.sheet import Sheet, sheet_maker
from tests.made_subjects import CASES, line, rated, subject
from tests.step_halls import LOAD, Bar, Beam, brief, hall, write

HELD = '[[supports]]\nbeams = ["B-1"]\nstart = "pinned"\nend = "pinned"\n'


def answer(folder: Path, model: str, text: str) -> dict[str, Any]:
    """The answer of a run as data."""
    model_path, brief_path = write(folder, model, text)
    arguments = ["rate", str(model_path), "--brief", str(brief_path), "--out", str(folder / "out")]
    result = CliRunner().invoke(cli.main, arguments)
    assert result.stderr == ""
    found: dict[str, Any] = json.loads((folder / "out" / "hall-rating.json").read_text("utf-8"))
    return found


def with_bars(start: float, end: float) -> Beam:
    bars = [Bar(start, end, y, 60.0) for y in (-80.0, 80.0)]
    return Beam(notation=None, bars=bars, columns=False)


def test_bars_that_stop_short_of_the_support_are_told(tmp_path: Path) -> None:
    found = answer(tmp_path, hall(with_bars(40.0, 5960.0)), brief(LOAD, HELD))
    (beam,) = found["beams"]
    assert (beam["verdict"], beam["utilisation_state"]) == ("falls short", "no resistance")
    (told,) = [one["text"] for one in beam["remarks"] if "no tension bars reach" in one["text"]]
    assert told == (
        "no tension bars reach beyond x = 0.04 m: the bottom bars end at x = 0.04 m; the support is"
        " taken at x = 0 m: state the bearing under [[supports]] or the span under [[beams]]"
    )
    whole = answer(tmp_path, hall(with_bars(0.0, 6000.0)), brief(LOAD, HELD))
    assert "no tension bars reach" not in json.dumps(whole)


def test_bars_that_stop_far_from_the_support_are_told_without_it(tmp_path: Path) -> None:
    found = answer(tmp_path, hall(with_bars(0.0, 3000.0)), brief(LOAD, HELD))
    told = json.dumps(found["beams"])
    assert "the bottom bars end at x = 3.00 m" in told
    assert "the support is taken" not in told


def sheet_of(*, side_loaded: bool) -> Sheet:
    one = replace(subject(loads=(line("floor", 10.0),)), side_loaded=side_loaded)
    return sheet_maker(*rated(one), CASES)(0)


def test_a_bound_that_is_not_applied_says_why() -> None:
    for side_loaded in (False, True):
        (check,) = [c for c in sheet_of(side_loaded=side_loaded).checks if c.clause == "11.3.9"]
        (bound,) = [each for each in check.lines if each.symbol == "M_max"]
        assert (bound.result == "not applied") is side_loaded
        assert ("another member frames into the side" in bound.text) is side_loaded
        assert bound.clause == ("11.3.9.4" if side_loaded else "")


def test_every_combination_that_governs_can_be_traced(tmp_path: Path) -> None:
    """Snow acts elsewhere alone: on this beam its combination goes without it."""
    cases = '[cases.floor]\nnature = "imposed"\n[cases.roof]\nnature = "snow"\n'
    snow = LOAD.replace("floor", "roof").replace("B-*", "A-2")
    model = hall(Beam(), Beam("A-2", at=(0.0, 9000.0, 3000.0)))
    found = answer(tmp_path, model, brief(LOAD, snow, cases=cases))
    listed = {one["name"]: one["labels"] for one in found["combinations"]}
    known = {*listed, *(label for labels in listed.values() for label in labels)}
    governing = {
        state["combination"]
        for beam in found["beams"]
        for state in beam["limit_states"]
        if state["combination"]
    }
    assert "1.25D + 1.5L" in governing
    assert governing <= known
    assert "1.25D + 1.5L" not in listed
    assert listed["1.25D + 1.5S + 1.5L"] == ["1.25D + 1.5S", "1.25D + 1.5L"]
    page = (tmp_path / "out" / "hall-rating.html").read_text("utf-8")
    assert "<bdi>1.25D + 1.5S; 1.25D + 1.5L</bdi>" in page.split('<section id="standard">')[1]


def test_no_words_contradict_the_verdict(tmp_path: Path) -> None:
    """Too few bars, of which no one says whether stirrups go with them: the beam falls short, and
    its shear and its rated case cannot be said."""
    beam = Beam(notation={"BottomBars": "2-15M", "TopBars": "2-15M"})
    text = brief(LOAD.replace("10 kN", "90 kN"), LOAD.replace("floor", "press"))
    found = answer(tmp_path, hall(beam), text)
    assert found["beams"][0]["verdict"] == "falls short"
    (case,) = found["rated_cases"]
    assert case["text"].startswith("cannot be said: an input or a check is not settled of 1 beam")
    arguments = ["sheet", str(tmp_path / "hall.ifc"), "B-1", "--brief"]
    said = CliRunner().invoke(cli.main, [*arguments, str(tmp_path / "brief.toml")]).stdout
    words = " ".join(said.split())
    assert "falls short" in words
    assert "not rated" not in words
    assert "cannot be said: no source says whether there are stirrups: write them" in words
    assert 'stirrups = "none"' in words


def test_outputs_name_their_source_and_not_how_it_is_known() -> None:
    assert "from memory" not in RULE
    assert "Mansur and Tan" in RULE


@pytest.mark.parametrize(
    "lack",
    [
        "no longitudinal bar is among the bars that the model ties to it",
        "no longitudinal bar is among the bars that lie in it",
        "bars lie in it or beside it that no relation ties to it",
        "hole in the body at x = 0.25 to 0.30 m: not read",
        "section is in separate parts from 0.74 to 0.80 m along the body",
        "bars do not fit from 0 m to 1.50 m (bottom 9-35M): no room",
    ],
)
def test_there_is_a_cure_for_what_is_missing(lack: str) -> None:
    assert what_settles(lack)


def test_nothing_is_never_negative() -> None:
    assert metres(-0.004) == metres(-0.0) == "0.00"
    assert metres(-6.0) == "-0.01"
    assert metres(math.nan) == "–"


@pytest.mark.parametrize("command", ["rate", "survey"])
def test_a_watched_run_tells_its_stages(
    command: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    stages: list[str] = []

    class Watched(cli._Silent):
        def __enter__(self) -> Any:
            return stages.append

    monkeypatch.setattr(cli, "_progress", Watched)
    model, text = write(tmp_path, hall(Beam()), brief())
    arguments = [command, str(model), "--brief", str(text), "--out", str(tmp_path / "out")]
    CliRunner().invoke(cli.main, arguments)
    assert stages[:3] == [
        "opening hall.ifc", "reading hall.ifc", "gathering loads and supports of hall.ifc",
    ]  # fmt: skip

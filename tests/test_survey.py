"""What a survey finds: what is missing, what only a brief can say, what is doubtful."""

from __future__ import annotations

from pathlib import Path

import pytest
from click.testing import CliRunner, Result

import ifccheck
from ifccheck.cli import main
from ifccheck.findings import Finding, State, Survey
from ifccheck.publish.survey_words import gist
from ifccheck.surveying import survey
from tests.step_halls import Bar, Beam, Block, brief, hall, write

REPOSITORY = Path(__file__).resolve().parents[1]


def surveyed(folder: Path, model: str, brief_text: str | None = None) -> Survey:
    path, brief_path = write(folder, model, brief_text or "")
    (found,) = survey([path], brief_path if brief_text else None)
    return found.survey


def finding(survey: Survey, mark: str) -> Finding:
    return survey.of(next(beam for beam in survey.model.beams if beam.mark == mark))


def command(*arguments: str | Path) -> Result:
    return CliRunner().invoke(main, ["survey", *map(str, arguments)])


@pytest.mark.parametrize(
    ("beam", "missing"),
    [
        (Beam(), ("yield strength of the bars", "yield strength of the stirrups", "cover")),
        (Beam(notation=None), ("no reinforcement found",)),
        (Beam(material="Concrete"), ("concrete strength unknown",)),
        (Beam(material="Something"), ("material unknown",)),
        (Beam(notation={"TopBars": "many", "BottomBars": "3-25M"}), ("cannot be read",)),
        (Beam(notation={"BottomBars": "3-25M", "Stirrups": "10M @ 200"}), ("legs",)),
        (
            Beam(notation={"TopBars": "none", "BottomBars": "3-25M"}),
            ("whether there are stirrups",),
        ),
    ],
)
def test_what_is_missing_is_what_a_rating_would_refuse_for(
    tmp_path: Path, beam: Beam, missing: tuple[str, ...]
) -> None:
    found = finding(surveyed(tmp_path, hall(beam)), "B-1")
    assert found.state is State.INCOMPLETE
    for words in missing:
        assert any(words in text for text in found.lacks), found.lacks


def test_nothing_is_missing_of_a_beam_that_a_brief_completes(tmp_path: Path) -> None:
    """The brief gives yield and cover; what it leaves open is told, and loads are told apart."""
    found = finding(surveyed(tmp_path, hall(Beam()), brief()), "B-1")
    assert (found.lacks, found.to_state, found.state) == ((), (), State.COMPLETE)
    other = brief().replace("B-*", "A-1")
    unloaded = finding(
        surveyed(tmp_path, hall(Beam(), Beam("A-1", at=(0, 9e3, 3e3))), other), "B-1"
    )
    assert unloaded.to_state == ("no load assigned",)
    assert unloaded.lacks == ()


def test_loads_are_not_asked_for_before_there_is_a_brief(tmp_path: Path) -> None:
    found = finding(surveyed(tmp_path, hall(Beam())), "B-1")
    assert "no load assigned" not in (*found.lacks, *found.to_state)


def test_what_only_a_brief_can_say_is_not_missing_from_the_model(tmp_path: Path) -> None:
    post = Block("C-9", (3000.0, 0.0, 3600.0), (300.0, 300.0), 2000.0)
    model = hall(Beam(columns=False), Beam("B-2", at=(0.0, 9e3, 3e3)), others=[
        post, Block("C-8", (3000.0, 9e3, 3600.0), (300.0, 300.0), 2000.0)])  # fmt: skip
    found = surveyed(tmp_path, model)
    assert finding(found, "B-1").to_state[0].startswith("supports unknown")
    assert finding(found, "B-2").to_state == (
        "reactions not included: C-8 (IFCCOLUMN)",
    ) or finding(found, "B-2").to_state[0].startswith("reactions not included: C-8")
    assert not any("supports" in text for text in finding(found, "B-1").lacks)


def test_bars_without_stirrups_are_doubted(tmp_path: Path) -> None:
    beam = Beam(notation=None, bars=[Bar(0.0, 6000.0, 0.0, 60.0)])
    found = finding(surveyed(tmp_path, hall(beam)), "B-1")
    assert found.doubts == ("no stirrups are modelled: none are counted on",)
    assert found.state is State.DOUBTFUL
    assert gist(found.doubts[0]) == found.doubts[0]


def test_the_states_are_counted(tmp_path: Path) -> None:
    found = surveyed(tmp_path, hall(Beam(), Beam("B-2", at=(0, 9e3, 3e3), notation=None)), brief())
    assert [found.count(state) for state in State] == [1, 0, 1]


def test_a_survey_as_a_table(tmp_path: Path) -> None:
    path, _ = write(tmp_path, hall(Beam(), Beam("B-2", at=(0, 9e3, 3e3), notation=None)), "")
    frame = ifccheck.survey(path)
    assert list(frame["mark"]) == ["B-1", "B-2"]
    assert set(frame["model"]) == {"hall.ifc"}
    assert list(frame["reinforcement"]) == ["properties", ""]
    assert list(frame["state"]) == ["incomplete", "incomplete"]
    assert frame["missing"][1] == "no reinforcement found"
    assert frame["requirement_unmet"].str.contains("StrengthClass is not given").all()
    both = ifccheck.survey([path, REPOSITORY / "sample_models" / "print_works.ifc"])
    assert list(both["model"].unique()) == ["hall.ifc", "print_works.ifc"]


def test_several_models_are_told_one_after_the_other(tmp_path: Path) -> None:
    write(tmp_path, hall(Beam()), "", "east")
    write(tmp_path, hall(Beam("W-1")), "", "west")
    done = command(tmp_path / "east.ifc", tmp_path / "west.ifc", "--out", tmp_path / "out")
    assert (done.exit_code, done.stderr) == (0, "")
    assert done.stdout.index("east.ifc (IFC4)") < done.stdout.index("west.ifc (IFC4)")
    assert sorted(path.name for path in (tmp_path / "out").iterdir()) == [
        "east-survey.html", "west-survey.html",
    ]  # fmt: skip


def test_a_file_name_cannot_steer_the_terminal(tmp_path: Path) -> None:
    write(tmp_path, hall(Beam()), "", "a\x1b[31mb")
    done = command(tmp_path / "a\x1b[31mb.ifc", "--out", tmp_path / "out")
    assert done.exit_code == 0
    assert "\x1b" not in done.stdout
    assert "a[31mb-survey.html" in done.stdout


# What must not be written ------------------------------------------------------------------------


def refused(done: Result, status: int, *words: str) -> None:
    """One line on standard error that holds the words, and nothing else said."""
    assert done.exception is None or isinstance(done.exception, SystemExit), done.exception
    assert (done.exit_code, done.stdout) == (status, "")
    assert done.stderr.startswith("ifccheck: ")
    assert done.stderr.count("\n") == 1
    for word in words:
        assert word in done.stderr


def test_two_models_of_one_name_are_refused(tmp_path: Path) -> None:
    for name in ("a", "b"):
        (tmp_path / name).mkdir()
        write(tmp_path / name, hall(Beam()), "")
    paths = [tmp_path / name / "hall.ifc" for name in ("a", "b")]
    refused(command(*paths, "--out", tmp_path / "out"), 2, "b/hall.ifc", "a/hall.ifc", "same names")
    assert not (tmp_path / "out").exists()


def test_a_place_that_cannot_be_written_is_told(tmp_path: Path) -> None:
    path, _ = write(tmp_path, hall(Beam()), "")
    (tmp_path / "out").write_text("in the way")
    starter = tmp_path / "new.toml"
    done = command(path, "--out", tmp_path / "out", "--starter", starter)
    refused(done, 1, "hall-survey.html", "cannot be written")
    assert not starter.exists()
    assert (tmp_path / "out").read_text() == "in the way"


def test_a_page_never_takes_the_place_of_an_input(tmp_path: Path) -> None:
    path, brief_path = write(tmp_path, hall(Beam()), brief())
    odd = tmp_path / "hall-survey.html"
    brief_path.rename(odd)
    before = odd.read_bytes()
    refused(command(path, "--brief", odd, "--out", tmp_path), 2, "overwrite an input", str(odd))
    assert odd.read_bytes() == before


def test_a_failing_file_leaves_the_others_unwritten(tmp_path: Path) -> None:
    path, _ = write(tmp_path, hall(Beam()), "")
    starter = tmp_path / "a-file" / "new.toml"
    (tmp_path / "a-file").write_text("no folder")
    refused(command(path, "--out", tmp_path / "out", "--starter", starter), 1, "new.toml")
    assert not (tmp_path / "out").exists()


def test_a_survey_writes_nothing_unless_asked(tmp_path: Path) -> None:
    path, _ = write(tmp_path, hall(Beam()), "")
    before = sorted(tmp_path.iterdir())
    assert command(path).exit_code == 0
    assert sorted(tmp_path.iterdir()) == before

"""A brief to start from: it loads, it names what the model has, and it rates nothing adequate."""

from __future__ import annotations

import re
import tomllib
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner

from ifccheck.beam import Verdict
from ifccheck.brief.load import load_brief
from ifccheck.brief.starter import StarterModel, quoted, starter_brief
from ifccheck.cli import main
from ifccheck.errors import BriefError
from ifccheck.findings import Finding, PropertySeen, Survey
from ifccheck.pipeline import rate
from tests.reports_made_up import HOSTILE, hostile_report, made_up_report
from tests.step_halls import Beam, Block, hall, write
from tests.surveys_made_up import survey_of

REPOSITORY = Path(__file__).resolve().parents[1]
SAMPLE = REPOSITORY / "sample_models" / "print_works.ifc"
STANDARD = "csa-a23.3-14"
VALUES = {
    "concrete_strength": "30 MPa", "bar_yield": "400 MPa", "stirrup_yield": "400 MPa",
    "cover": "40 mm", "aggregate_size": "20 mm", "line": "0.1 kN/m", "point": "0.1 kN",
    "at": "50 %",
}  # fmt: skip


def starter(folder: Path, *models: Path) -> Path:
    target = folder / "starter.toml"
    done = CliRunner().invoke(main, ["survey", *map(str, models), "--starter", str(target)])
    assert (done.exit_code, done.stderr) == (0, "")
    assert done.stdout.endswith(f"  {target}\n")
    return target


def taken_up(text: str) -> str:
    """The brief as an engineer fills it in: every commented line of TOML, each "?" with a value."""
    lines = []
    for line in text.splitlines():
        line = line[1:] if re.match(r"#[^ ]", line) else line
        if line.startswith(("schedule", "sources")):
            continue
        key = line.partition(" ")[0]
        if key in VALUES and "?" in line:
            line = f'{key} = "{VALUES[key]}"'
        line = line.replace('["?", "?"]', '["pinned", "pinned"]')
        lines.append(re.sub(r'^(start|end) = "\?"', r'\1 = "fixed"', line))
    return "\n".join(lines)


def verdicts(models: list[Path], brief: Path) -> set[Verdict]:
    reports = rate(models, brief).reports
    return {rating.verdict for report in reports for rating in report.ratings.values()}


def test_it_loads_and_rates_nothing_of_the_sample_adequate(tmp_path: Path) -> None:
    path = starter(tmp_path, SAMPLE)
    brief = load_brief(path)
    assert (brief.basis.standard, brief.loads, brief.cases) == (STANDARD, (), ())
    assert {"#[scope]", "#slab_flanges = true"} <= set(path.read_text("utf-8").splitlines())
    assert verdicts([SAMPLE], path) == {Verdict.NOT_RATED}


def test_open_models_give_one_that_loads_and_rates_nothing_adequate(
    tmp_path: Path, open_models: Path
) -> None:
    for model in sorted(open_models.glob("0[1368]*.ifc")):
        folder = tmp_path / model.stem
        folder.mkdir()
        path = starter(folder, model)
        assert verdicts([model], path) <= {Verdict.NOT_RATED}
        assert verdicts([model], _filled(path)) <= {Verdict.NOT_RATED, Verdict.FALLS_SHORT}


def test_a_beam_of_which_nothing_is_missing_is_still_not_rated(tmp_path: Path) -> None:
    """Defaults filled in, no load assigned: not adequate, though it carries its own weight."""
    notation = {"TopBars": "2-20M", "BottomBars": "3-25M", "Stirrups": "2 legs 10M @ 200"}
    model, _ = write(tmp_path, hall(Beam(notation=notation)), "")
    text = taken_up(starter(tmp_path, model).read_text(encoding="utf-8"))
    unloaded = re.sub(r"\[\[loads\]\].*?(?=\n\n|\n#)", "", text, flags=re.DOTALL)
    filled = tmp_path / "filled.toml"
    filled.write_text(unloaded, encoding="utf-8")
    assert load_brief(filled).defaults.bar_yield == 400.0
    assert verdicts([model], filled) == {Verdict.NOT_RATED}


def _filled(path: Path) -> Path:
    filled = path.with_name("filled.toml")
    filled.write_text(taken_up(path.read_text(encoding="utf-8")), encoding="utf-8")
    return filled


def test_taken_up_it_is_a_brief_and_every_selection_reaches_its_beams(tmp_path: Path) -> None:
    """No mark and no query misses: ``rate`` refuses an entry that reaches no beam."""
    path = starter(tmp_path, SAMPLE)
    filled = _filled(path)
    brief = load_brief(filled)
    assert brief.property_mapping == {
        "top": "PrintWorks_Precast.UpperSteel", "bottom": "PrintWorks_Precast.LowerSteel",
        "stirrups": "PrintWorks_Precast.Ties", "cover": "PrintWorks_Precast.ClearCover",
    }  # fmt: skip
    assert {entry.selection.where for entry in brief.loads} >= {
        'IfcBeam, location="Level 1"', 'IfcBeam, location="Roof"',
    }  # fmt: skip
    run = rate([SAMPLE], filled)
    reasons = [r.text for x in run.reports[0].ratings.values() for r in x.reasons]
    assert not [text for text in reasons if text.startswith(("supports", "reactions", "no load"))]
    assert Verdict.ADEQUATE in {x.verdict for x in run.reports[0].ratings.values()}


def test_a_question_mark_that_is_left_is_refused(tmp_path: Path) -> None:
    """Each of them: what was not filled in is never read as a value."""
    path = starter(tmp_path, SAMPLE)
    lines = path.read_text(encoding="utf-8").splitlines()
    asked = [i for i, line in enumerate(lines) if re.match(r"#[^ ].*\?", line)]
    assert len(asked) > 12
    for i in asked:
        text = taken_up("\n".join(lines)).splitlines()
        kept = _with_question(lines, i)
        (tmp_path / "left.toml").write_text(kept, encoding="utf-8")
        with pytest.raises(BriefError, match=r"left\.toml"):
            load_brief(tmp_path / "left.toml")
        assert text


def _with_question(lines: list[str], kept: int) -> str:
    """All taken up, but one line as it stands, without its "#"."""
    marker = "KEPT"
    marked = [*lines]
    marked[kept] = f"{marker}{kept}"
    text = taken_up("\n".join(marked))
    return text.replace(f"{marker}{kept}", lines[kept][1:])


def test_it_lists_marks_storeys_materials_and_what_the_model_is_silent_on(tmp_path: Path) -> None:
    text = starter(tmp_path, SAMPLE).read_text(encoding="utf-8")
    for words in (
        "# Level 1, elevation 4.50 m: 60 beams",
        "#   400 x 700, Concrete C35 in situ: G-101, G-102, G-103, G-104, G-105",
        "# The model gives none for 3 beams: D-231, D-232, N-401.",
        '#beams = ["K-141", "K-142", "K-143"]',
        "#   Concrete, existing, no strength stated: 2 of 70 beams",
    ):
        assert words in text
    assert max(map(len, text.splitlines())) <= 100


def test_several_models_share_a_brief(tmp_path: Path) -> None:
    write(tmp_path, hall(Beam()), "", "east")
    write(tmp_path, hall(Beam("W-1")), "", "west")
    models = [tmp_path / "east.ifc", tmp_path / "west.ifc"]
    path = starter(tmp_path, *models)
    text = path.read_text(encoding="utf-8")
    assert "# Brief for east.ifc, west.ifc" in text
    assert verdicts(models, path) == {Verdict.NOT_RATED}
    filled = rate(models, _filled(path))
    assert [len(report.ratings) for report in filled.reports] == [1, 1]


def test_an_existing_file_is_left_as_it_is(tmp_path: Path) -> None:
    model, brief = write(tmp_path, hall(Beam()), "mine")
    command = ["survey", str(model), "--starter", str(brief), "--out", str(tmp_path / "out")]
    done = CliRunner().invoke(main, command)
    assert (done.exit_code, done.stdout) == (2, "")
    assert done.stderr == (
        f"ifccheck: {brief}: exists already and is left as it is: name another file\n"
    )
    assert brief.read_text() == "mine"
    assert not (tmp_path / "out").exists()


def test_a_dangling_link_is_something_that_exists(tmp_path: Path) -> None:
    model, _ = write(tmp_path, hall(Beam()), "")
    (tmp_path / "link.toml").symlink_to(tmp_path / "elsewhere.toml")
    done = CliRunner().invoke(
        main, ["survey", str(model), "--starter", str(tmp_path / "link.toml")]
    )
    assert done.exit_code == 2
    assert not (tmp_path / "elsewhere.toml").exists()


# Names of strangers ------------------------------------------------------------------------------

TRAPS = (
    'x"\n[[beams]]\nbeams = ["*"]\nunloaded = true',
    "]\n[[loads]]",
    "\r[basis]",
    "\u2028[[beams]]",
    "\ud800",
    "\x7f",
    "*",
    'a "quoted" name',
    "back\\slash",
    "x" * 200,
)


def starter_of(survey: Survey, **more: Any) -> str:
    given = {"loose_ends": {}, "storey_queries": {}, "properties": ()} | more
    return starter_brief([StarterModel(survey, **given)], [STANDARD])


@pytest.mark.parametrize("trap", [*TRAPS, *HOSTILE], ids=lambda text: repr(text)[:24])
def test_a_name_cannot_write_into_the_brief(trap: str, tmp_path: Path) -> None:
    """Whatever the model calls its beams, the brief states no more than one of plain names."""
    model = made_up_report().model
    beams = tuple(
        replace(beam, name=trap if i % 2 else f"B-{i}", tag=trap, storey=trap, material=trap)
        for i, beam in enumerate(model.beams)
    )
    finding = Finding(to_state=(f"reactions not included: {trap}",), lacks=(trap,), doubts=(trap,))
    survey = survey_of(
        replace(model, beams=beams, file_name=trap), {beam.key: finding for beam in beams}
    )
    text = starter_of(
        survey,
        loose_ends={beam.key: ("start",) for beam in beams},
        storey_queries={trap: f"IfcBeam, location={quoted(trap)}"},
        properties=(PropertySeen("top", trap, trap, 3), PropertySeen("bottom", "A.B", trap, 2)),
    )
    path = tmp_path / "brief.toml"
    path.write_text(text, encoding="utf-8")
    brief = load_brief(path)
    assert (brief.loads, brief.beams, brief.supports, brief.materials, brief.cases) == ((),) * 5
    assert brief.property_mapping == {}
    assert tomllib.loads(text).keys() == {"basis", "defaults", "reinforcement"}
    taken = tomllib.loads(taken_up(text))
    assert {"unloaded", "span"}.isdisjoint(key for entry in taken["beams"] for key in entry)


def test_hostile_names_of_a_whole_report(tmp_path: Path) -> None:
    model = hostile_report().model
    path = tmp_path / "brief.toml"
    path.write_text(starter_of(survey_of(model, {})), encoding="utf-8")
    assert load_brief(path).loads == ()


def named(*beams: tuple[str, str]) -> list[str]:
    """How a brief for beams of these Names and Tags names the first three of them."""
    model = made_up_report().model
    made = [
        replace(beam, name=name, tag=tag, key=f"K-{i}", guid=f"K-{i}")
        for i, (beam, (name, tag)) in enumerate(zip(model.beams, beams, strict=False))
    ]
    storey = {beam.key: "here" if i < 3 else "there" for i, beam in enumerate(made)}
    placed = tuple(replace(beam, storey=storey[beam.key]) for beam in made)
    text = starter_of(survey_of(replace(model, beams=placed), {}))
    listed = re.search(r"# here: 3 beams\n(?:#.*\n)*?#beams = (\[.*\])\n", text)
    assert listed
    found: list[str] = tomllib.loads(f"x = {listed[1]}")["x"]
    return found


@pytest.mark.parametrize(
    ("beams", "references"),
    [
        ([("A", "1"), ("B", "2"), ("C", "3"), ("D", "4")], ["A", "B", "C"]),
        ([("A", "1"), ("A", "2"), ("B", "3"), ("D", "4")], ["A", "B"]),
        ([("A", "1"), ("A", "2"), ("B", "3"), ("A", "4")], ["1", "2", "B"]),
        ([("A", "1"), ("B", "D"), ("C", "3"), ("D", "4")], ["A", "B", "C"]),
        ([("D", "1"), ("B", "2"), ("C", "3"), ("E", "D")], ["1", "B", "C"]),
        ([("", ""), ("B*", ""), ("x" * 99, "7"), ("D", "4")], ["K-0", "K-1", "7"]),
        ([("K-3", "1"), ("B", "B"), ("C", "3"), ("D", "4")], ["1", "B", "C"]),
    ],
    ids=["each its own", "shared by those meant", "shared with others", "another's tag",
         "also a tag of another", "no plain mark", "as a GlobalId"],
)  # fmt: skip
def test_beams_are_named_so_that_no_other_is_reached(
    beams: list[tuple[str, str]], references: list[str]
) -> None:
    """By Names or Tags that reach these alone, else by GlobalIds."""
    assert named(*beams) == references


def test_ends_are_asked_for_where_the_rating_would_ask(tmp_path: Path) -> None:
    """A hall of which one beam hangs in the air and one has a column under its middle."""
    middle = Block("C-9", (3000.0, 18e3, 0.0), (300.0, 300.0), 3000.0)
    model = hall(
        Beam(),
        Beam("B-2", at=(0.0, 9e3, 3e3), columns=False),
        Beam("B-3", at=(0.0, 18e3, 3e3)),
        others=[middle],
    )
    path, _ = write(tmp_path, model, "")
    text = starter(tmp_path, path).read_text(encoding="utf-8")
    (entry,) = re.findall(r"^#\[\[supports\]\]\n((?:#[^ ].*\n?)+)", text, re.MULTILINE)
    assert entry.splitlines() == ['#beams = ["B-2", "B-3"]', '#start = "?"', '#end = "?"']

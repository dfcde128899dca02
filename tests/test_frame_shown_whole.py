"""What is shown of beams that stand in the building, through the whole program."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest

from ifccheck import pipeline, surveying
from ifccheck.beam import SELF, Verdict
from ifccheck.framed import Framed, balances, totals
from ifccheck.publish.framed_words import standing_words
from ifccheck.publish.load_words import single_loads
from ifccheck.subjects import framed_by_the_model
from tests.frames_of_beams import (
    Setting,
    face_to_face,
    girders,
    ground,
    one_over_three_columns,
    read,
    walls,
)
from tests.ifc_models import Building
from tests.made_subjects import line, point, rated, subject
from tests.test_rules_that_protect_strength import check_adequate, check_short

SAMPLE = Path(__file__).resolve().parents[1] / "sample_models"


@pytest.fixture(scope="module")
def run(tmp_path_factory: pytest.TempPathFactory) -> pipeline.Run:
    """The sample building, which stands on what its model shows."""
    return rated_in(tmp_path_factory.mktemp("frame"))


def rated_in(folder: Path, more: str = "") -> pipeline.Run:
    text = (SAMPLE / "brief.toml").read_text(encoding="utf-8")
    said = 'supports = ["pinned", "pinned"]\n'
    if said in text:
        text = text.replace(said, "").replace(
            "[reinforcement]\n", "[frame]\n\n[reinforcement]\n", 1
        )
    (folder / "brief.toml").write_text(text + more, encoding="utf-8")
    for table in SAMPLE.glob("*.csv"):
        (folder / table.name).write_bytes(table.read_bytes())
    return pipeline.rate([SAMPLE / "print_works.ifc"], folder / "brief.toml")


def framed_of(run: pipeline.Run) -> Framed:
    framed = run.reports[0].framed
    assert framed is not None
    return framed


def test_what_reaches_the_ground_is_what_the_brief_puts_on_the_beams(run: pipeline.Run) -> None:
    """Summed anew from the loads that stand on beams, without those that beams give each
    other, and those that move."""
    framed, gathered = framed_of(run), run.rated[0].gathered
    put: dict[str, float] = {}
    for load in gathered.loads:
        passed = load.origin.startswith("reaction of ") or load.case in framed.moving
        if load.beam in framed.lines and not passed and load.kind != "moment":
            length = load.end - load.start if load.kind == "line" else 1.0
            mean = sum(load.values) / 2.0 if load.kind == "line" else load.values[0]
            put[load.case] = put.get(load.case, 0.0) + mean * length
    found = {row.case: row.ground for row in totals(framed.balance) if row.case != SELF}
    assert {case: force for case, force in found.items() if force} == pytest.approx(put, rel=1e-9)
    assert all(balances(row) for row in (*framed.balance, *totals(framed.balance)))


def test_the_check_names_what_it_leaves_out_and_nothing_else(tmp_path: Path) -> None:
    """Beams in one line of which a span is stated, and one in the air, do not stand."""
    framed = framed_of(rated_in(tmp_path, '\n[[beams]]\nbeams = ["G-105"]\nspan = "7.2 m"\n'))
    assert set(framed.left_out) == set(framed.unknown)
    assert len(framed.left_out) == 3
    assert [text for text in framed.unknown.values() if "makes several" in text]


def test_a_beam_under_one_whose_stated_span_is_refused_is_not_adequate(tmp_path: Path) -> None:
    """G1 to G3 carry TOP, of whose two spans the engineer states one: nothing is passed on."""
    building = Building("IFC4")
    for make in girders():
        make(building, Setting())
    building.file.write(str(tmp_path / "hall.ifc"))
    (tmp_path / "brief.toml").write_text(
        '[basis]\nstandard = "csa-a23.3-14"\nconcrete_unit_weight = "24 kN/m3"\n[frame]\n'
        '[[beams]]\nbeams = ["*"]\nunloaded = true\n'
        '[[beams]]\nbeams = ["TOP"]\nspan = "4.0 m"\n'
    )
    report = pipeline.rate([tmp_path / "hall.ifc"], tmp_path / "brief.toml").reports[0]
    for beam in report.model.beams:
        texts = " ".join(reason.text for reason in report.ratings[beam.key].reasons)
        assert ("reactions not included: TOP" in texts) == (beam.mark in {"G1", "G2", "G3"})


def test_the_sheet_of_a_beam_shows_its_own_weight_once(run: pipeline.Run) -> None:
    """What it receives of the weight of others is a load at a point, not a line without length."""
    report = run.reports[0]
    (key,) = [beam.key for beam in report.model.beams if beam.mark == "G-105"]
    weights = [load for load in report.sheet(key).loads if load.case == SELF]
    lines = [load for load in weights if load.kind == "line"]
    assert all(load.end > load.start for load in lines)
    assert len(lines) == 1
    assert {load.text.partition(" from ")[2] for load in weights if load.kind == "point"} == {
        "T-119", "T-120",
    }  # fmt: skip
    words = [words for _, words in single_loads(report.sheet(key).loads)]
    assert sum(each.startswith("reaction of T-119: self ") for each in words) == 1


def test_the_sheet_tells_on_which_spans_a_case_governs(run: pipeline.Run) -> None:
    report = run.reports[0]
    (key,) = [beam.key for beam in report.model.beams if beam.mark == "G-105"]
    sheet = report.sheet(key)
    assert sheet.line is not None
    assert [span.mark for span in sheet.line.spans] == ["G-105", "K-142"]
    (flexure,) = [check for check in sheet.checks if check.title == "flexure, sagging"]
    (floor,) = [share for share in flexure.shares if share.case == "floor"]
    assert (floor.of_spans, floor.spans) == (2, (0,))


def test_what_differs_by_the_members_named_is_one_assumption_of_the_run(run: pipeline.Run) -> None:
    """Sheets and data name the supports of every beam; the list of the run stays readable."""
    report = run.reports[0]
    texts = [each.text for each in report.assumptions]
    assert not any("C-1B" in text or "T-112" in text for text in texts)
    (stood,) = [each for each in report.assumptions if each.text.startswith("supported by what")]
    named = {
        key
        for key, rating in report.ratings.items()
        if any(remark.text.startswith("supported at x = ") for remark in rating.remarks)
    }
    assert set(stood.beams) == named
    assert len(named) > 60


def test_weight_that_another_beam_brings_near_a_support_is_a_concentrated_load() -> None:
    """11.3.2.1, as for any other load at a point: 300 kN of self weight at 0.3 m from the face."""
    light = line("floor", 1.0)
    near = point(SELF, 300e3, 500.0)._replace(origin="reaction of B-1 (IfcBeam)")
    _, (brought,) = rated(subject(bottom=6, loads=(light, near)))
    check_short(brought, "Shear")
    shear = next(state for state in brought.limit_states if state.name == "Shear")
    assert shear.demand >= 1.25 * 300e3 * 5400.0 / 5800.0
    _, (little,) = rated(subject(bottom=6, loads=(light, near._replace(values=(90e3, 90e3)))))
    check_adequate(little)
    assert brought.verdict is Verdict.FALLS_SHORT


@pytest.mark.parametrize(
    ("building", "mark", "words"),
    [
        (one_over_three_columns, "ONE", "on C1, C2 and C3, and hangs over; 3 spans"),
        (face_to_face, "F1", "on E1 and E2"),
        (girders, "S1", "on G1 and G2"),
        (girders, "TOP", "on G1, G2 and G3; 2 spans"),
        (walls, "K1", "built into W1"),
        (ground, "AIR", "no way to stand: nothing that could carry it touches it"),
    ],
)
def test_the_model_alone_tells_what_a_beam_would_stand_on(building, mark, words) -> None:  # type: ignore[no-untyped-def]
    model = read(building())
    (key,) = [beam.key for beam in model.beams if beam.mark == mark]
    assert standing_words(framed_by_the_model(model), key) == words


def test_ends_from_the_side_are_told_from_those_from_below() -> None:
    model = read(girders())
    framed = framed_by_the_model(model)
    of = {beam.mark: framed.lines[beam.key].spans[0] for beam in model.beams}
    assert not of["S1"].start.direct
    assert of["TOP"].start.direct
    assert of["G1"].start.direct


def test_a_survey_tells_of_every_beam_what_it_would_stand_on() -> None:
    (surveyed,) = surveying.survey([SAMPLE / "print_works.ifc"])
    framed = surveyed.survey.framed
    assert framed is not None
    keys = {beam.mark: beam.key for beam in surveyed.survey.model.beams}
    assert standing_words(framed, keys["T-111"]) == "on E-131 and G-101"
    assert {*framed.lines, *framed.unknown} == set(keys.values())
    assert framed.balance == ()


def test_without_the_frame_nothing_of_it_is_handed_on(tmp_path: Path) -> None:
    model = read(girders())
    assert framed_by_the_model(replace(model, members=())).lines == {}

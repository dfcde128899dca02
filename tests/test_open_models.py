"""Models that others made go through the whole program: survey, rating, write-back."""

from __future__ import annotations

import json
import re
from collections import Counter
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.util.element
import ifcopenshell.validate
import pytest
from click.testing import CliRunner

from ifccheck.beam import Verdict
from ifccheck.cli import main
from ifccheck.errors import ModelError
from ifccheck.pipeline import Run, publish, rate
from ifccheck.surveying import survey

GENEROUS = """
[basis]
standard = "csa-a23.3-14"
concrete_unit_weight = "24 kN/m3"

[defaults]
concrete_strength = "30 MPa"
bar_yield = "400 MPa"
stirrup_yield = "400 MPa"
aggregate_size = "20 mm"
supports = ["pinned", "pinned"]

[reinforcement]
sources = ["bars", "properties", "schedule"]
schedule = "schedule.csv"

[cases.floor]
nature = "imposed"
rated = true

[[loads]]
case = "floor"
where = "IfcBeam"
line = "0.01 kN/m"
optional = true

[[supports]]
where = "IfcBeam"
start = "fixed"
end = "fixed"
optional = true

[[beams]]
where = "IfcBeam"
loads_complete = true
optional = true
"""
"""States everything that a model may leave open, so that only what the model itself says keeps
a member from being called adequate"""
SCHEDULE = "mark,top,bottom,stirrups,cover\n*,{bars},{bars},{stirrups},15 mm\n"
BARS = {"03_ifc2x3_precast_mixed_rebar": ("1-10M", "none")}

NO_CONCRETE = {"05_ifc2x3_structural_timber_steel": 152, "16_ifc4_timber_mapped_negz": 284}
"""Number of beams of models that hold none of concrete, by those who made them"""
NO_BEAM = "09_ifc4x3_analysis_inch"

FOREIGN_MATERIAL = re.compile(
    r"^(STEEL|REBAR_MESH|MISCELLANEOUS)/|staal|hout|timber|rubber|isol|pvc", re.IGNORECASE
)
FOREIGN_NAME = re.compile(r"fundament|footing|lager|bearing|isolat|insulat", re.IGNORECASE)
"""What the open models call steel, timber, insulation, footings and bearings"""


def model_names() -> list[str]:
    folder = Path(__file__).resolve().parents[1].parent / "shared" / "open_models"
    return sorted(path.stem for path in folder.glob("*.ifc")) or ["none"]


@dataclass
class Rated:
    """One open model with what the program said and wrote."""

    path: Path
    out: Path
    run: Run
    answer: dict[str, Any]

    @property
    def written(self) -> Path:
        return self.out / f"{self.path.stem}-rated.ifc"


@pytest.fixture(scope="module", params=[name for name in model_names() if name != NO_BEAM])
def rated(
    request: pytest.FixtureRequest, open_models: Path, tmp_path_factory: pytest.TempPathFactory
) -> Rated:
    folder = tmp_path_factory.mktemp(request.param)
    path = open_models / f"{request.param}.ifc"
    run = rate([path], generous_brief(folder, request.param))
    publish(run, folder / "out", ("model", "json", "csv"))
    data = json.loads((folder / "out" / f"{path.stem}-rating.json").read_bytes())
    return Rated(path, folder / "out", run, data)


PASSED_OVER = {"06": '[[supports]]\nbeams = ["LANDKAR"]\nignore = ["LAGER"]\n'}
"""An abutment's bearings, which the bridge lies on"""


def generous_brief(folder: Path, name: str) -> Path:
    bars, stirrups = BARS.get(name, ("2-15M", "2 legs 10M @ 100"))
    (folder / "schedule.csv").write_text(SCHEDULE.format(bars=bars, stirrups=stirrups))
    (folder / "brief.toml").write_text(GENEROUS + PASSED_OVER.get(name[:2], ""))
    return folder / "brief.toml"


def raw_beams(path: Path) -> list[tuple[str, str, list[str]]]:
    """GlobalId, name and materials of every beam, read without the program."""
    materials = ifcopenshell.util.element.get_materials
    file = ifcopenshell.open(str(path))  # kept, for an entity does not keep its file
    return [
        (beam.GlobalId, beam.Name or "", [str(getattr(m, "Name", "")) for m in materials(beam)])
        for beam in file.by_type("IfcBeam")
    ]


def foreign(path: Path) -> set[str]:
    """GlobalIds of beams that are no concrete beams by the words of the model."""
    return {
        guid
        for guid, name, materials in raw_beams(path)
        if FOREIGN_NAME.search(name) or any(FOREIGN_MATERIAL.search(m) for m in materials)
    }


@pytest.mark.parametrize("name", model_names())
def test_survey(name: str, open_models: Path) -> None:
    """One line for people where there is no beam; the count of beams elsewhere."""
    path = open_models / f"{name}.ifc"
    if name == NO_BEAM:
        with pytest.raises(ModelError, match="holds no beam"):
            survey([path])
        return
    (found,) = survey([path])
    of_model = found.survey.model
    assert len(of_model.beams) + len(of_model.out_of_scope) == len(raw_beams(path))
    assert set(found.survey.findings) == {beam.key for beam in of_model.beams}


def test_every_beam_is_answered_for(rated: Rated) -> None:
    """In scope with one of three verdicts, and a reason for each that is not rated, or left out
    with a reason."""
    beams, left_out = rated.answer["beams"], rated.answer["out_of_scope"]
    assert len(beams) + len(left_out) == len(raw_beams(rated.path))
    assert {beam["verdict"] for beam in beams} <= set(Verdict)
    for beam in beams:
        assert (beam["verdict"] == Verdict.NOT_RATED) == bool(beam["reasons"])
    for member in left_out:
        assert member["reason"]
        assert member["evidence"]
    assert rated.run.exit_status == (
        0 if beams and all(b["verdict"] == Verdict.ADEQUATE for b in beams) else 3
    )


def test_no_other_member_is_called_adequate(rated: Rated) -> None:
    """Steel, timber, insulation, footings and bearings are left out, with the brief stating all
    that would make a beam of them."""
    verdicts = {beam["global_id"]: beam["verdict"] for beam in rated.answer["beams"]}
    left_out = {member["global_id"] for member in rated.answer["out_of_scope"]}
    others = foreign(rated.path)
    assert others <= left_out
    assert not {guid for guid in others if verdicts.get(guid) == Verdict.ADEQUATE}
    if rated.path.stem in NO_CONCRETE:
        assert len(others) == len(left_out) == NO_CONCRETE[rated.path.stem]
        assert verdicts == {}


def test_concrete_is_found(rated: Rated) -> None:
    """By their makers: 116 members of concrete, of a bridge 5, ten beams on a grid."""
    in_scope = {beam["global_id"] for beam in rated.answer["beams"]}
    concrete = {
        guid
        for guid, _, materials in raw_beams(rated.path)
        if any(name.upper().startswith("CONCRETE") for name in materials)
    }
    assert concrete - foreign(rated.path) <= in_scope
    least = {"03": 116, "06": 5, "08": 10, "01": 1}.get(rated.path.stem[:2], 0)
    assert len(in_scope) >= least


def test_added_lines_come_away(rated: Rated) -> None:
    source, data = rated.path.read_bytes(), rated.written.read_bytes()
    if not rated.answer["beams"]:
        assert data == source
        return
    begin = data.index(b"/* Results of ifccheck begin")
    end = data.index(b"\n", data.index(b"/* Results of ifccheck end. */")) + 1
    assert data[:begin] + data[end:] == source


def test_rating_the_rated_model_gives_the_same_bytes(rated: Rated, tmp_path: Path) -> None:
    run = rate([rated.written], generous_brief(tmp_path, rated.path.stem))
    publish(run, tmp_path / "again", ("model",))
    assert (tmp_path / "again" / rated.written.name).read_bytes() == rated.written.read_bytes()


def faults(path: Path) -> Counter[str]:
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger)
    return Counter(json.dumps(item, default=str, sort_keys=True) for item in logger.statements)


def test_validator_finds_nothing_new(rated: Rated) -> None:
    if rated.written.read_bytes() == rated.path.read_bytes():
        return
    assert faults(rated.written) == faults(rated.path)


def test_beams_that_are_alike_but_for_rounding_resist_alike(rated: Rated) -> None:
    """Two abutments of the bridge have one section, one of them out of level by 4e-6 mm."""
    walls = [b for b in rated.answer["beams"] if b["name"] == "LANDKAR"]
    if rated.path.stem[:2] != "06":
        assert not walls
        return
    shears = [
        next(s for s in b["limit_states"] if s["name"] == "Shear")["utilisation_state"]
        for b in walls
    ]
    assert len(shears) == 2
    assert "no resistance" not in shears


def test_model_without_a_beam_is_one_line(open_models: Path, tmp_path: Path) -> None:
    brief = generous_brief(tmp_path, NO_BEAM)
    path = open_models / f"{NO_BEAM}.ifc"
    command = ["rate", str(path), "--brief", str(brief), "--out", str(tmp_path / "out")]
    done = CliRunner().invoke(main, command)
    assert done.exit_code == 1
    assert done.stderr.startswith("ifccheck: ")
    assert done.stderr.count("\n") == 1
    assert "holds no beam" in done.stderr
    assert not (tmp_path / "out").exists()


def test_a_case_that_no_beam_in_scope_carries_says_so(rated: Rated) -> None:
    (case,) = rated.answer["rated_cases"]
    if rated.answer["beams"]:
        assert case["beams_reached"] == len(rated.answer["beams"])
        return
    assert (case["factor"], case["beams_reached"]) == (None, 0)
    assert case["text"] == "no beam in scope carries it"

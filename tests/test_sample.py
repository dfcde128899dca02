"""The sample building in all three schemas: written, rated, published and read back."""

from __future__ import annotations

import csv
import io
import json
import math
import subprocess
import sys
from collections import Counter
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.validate
import pytest

REPOSITORY = Path(__file__).resolve().parents[1]
SAMPLES = REPOSITORY / "sample_models"
OUTPUTS = ("-rated.ifc", "-rating.html", "-rating.csv", "-rating.json")
SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3")

KILO_NEWTON = 1000.0
"""The sample is in mm, kN and MPa; the JSON in mm, N and MPa"""


@dataclass(frozen=True)
class Sample:
    """The sample of one schema with what the command gave."""

    source: Path
    out: Path
    status: int
    answer: dict[str, Any]

    @property
    def written(self) -> Path:
        return self.out / "print_works-rated.ifc"

    @property
    def by_guid(self) -> dict[str, dict[str, Any]]:
        return {beam["global_id"]: beam for beam in self.answer["beams"]}


def write_sample(schema: str, path: Path) -> bytes:
    script = str(SAMPLES / "write_print_works.py")
    subprocess.run([sys.executable, script, schema, str(path)], check=True, timeout=120)
    return path.read_bytes()


def command(*words: str | Path) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-W", "error", "-m", "ifccheck", *map(str, words)],
        capture_output=True, text=True, check=False, timeout=300, cwd=REPOSITORY,
    )  # fmt: skip


def rate(source: Path, out: Path, *more: str) -> int:
    done = command("rate", source, "--brief", SAMPLES / "brief.toml", "--out", out, *more)
    assert done.stderr == ""
    return done.returncode


@pytest.fixture(scope="module", params=SCHEMAS)
def sample(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Sample:
    folder = tmp_path_factory.mktemp(request.param)
    source, out = folder / "print_works.ifc", folder / "out"
    write_sample(request.param, source)
    status = rate(source, out)
    answer = json.loads((out / "print_works-rating.json").read_bytes())
    return Sample(source, out, status, answer)


def test_the_script_writes_the_committed_model_every_time(tmp_path: Path) -> None:
    first = write_sample("IFC4", tmp_path / "first.ifc")
    assert first == write_sample("IFC4", tmp_path / "second.ifc")
    assert first == (SAMPLES / "print_works.ifc").read_bytes()


def test_command_writes_all_four_outputs(sample: Sample) -> None:
    """Status 3: some beams fall short and some are not rated."""
    assert sample.status == 3
    assert sorted(path.name for path in sample.out.iterdir()) == sorted(
        f"print_works{ending}" for ending in OUTPUTS
    )
    html = (sample.out / "print_works-rating.html").read_text(encoding="utf-8")
    assert html.lower().startswith("<!doctype html>")
    table = (sample.out / "print_works-rating.csv").read_text(encoding="utf-8-sig")
    assert len(list(csv.reader(io.StringIO(table)))) - 1 == len(sample.answer["beams"])


def test_sample_holds_what_it_is_there_to_show(sample: Sample) -> None:
    beams, left_out = sample.answer["beams"], sample.answer["out_of_scope"]
    assert 40 <= len(beams) <= 80
    verdicts = Counter(beam["verdict"] for beam in beams)
    assert set(verdicts) == {"adequate", "falls short", "not rated"}
    assert min(verdicts.values()) >= 5
    assert {member["reason"] for member in left_out} >= {"steel", "timber", "footing", "bearing"}
    short = {beam["governing"] for beam in beams if beam["verdict"] == "falls short"}
    assert len(short) >= 2, "beams fall short in different ways"
    reasons = {r for beam in beams if beam["verdict"] == "not rated" for r in beam["reasons"]}
    assert len({reason.split(":")[0].split("(")[0].strip() for reason in reasons}) >= 5


@pytest.fixture(scope="module")
def committed(tmp_path_factory: pytest.TempPathFactory) -> dict[str, dict[str, Any]]:
    """The answers for the model of the repository, by mark."""
    out = tmp_path_factory.mktemp("committed")
    brief, source = SAMPLES / "brief.toml", SAMPLES / "print_works.ifc"
    done = command("rate", source, "--brief", brief, "--out", out, "--only", "json")
    assert done.returncode == 3
    beams = json.loads((out / "print_works-rating.json").read_bytes())["beams"]
    return {beam["mark"]: beam for beam in beams}


def test_schemas_differ_in_nothing_that_matters(
    sample: Sample, committed: dict[str, dict[str, Any]]
) -> None:
    """Every schema's sample gives the verdicts and utilisations of the committed one."""
    assert {beam["mark"] for beam in sample.answer["beams"]} == set(committed)
    for beam in sample.answer["beams"]:
        same = committed[beam["mark"]]
        assert beam["verdict"] == same["verdict"], beam["mark"]
        found = {state["name"]: state["utilisation"] for state in beam["limit_states"]}
        expected = {state["name"]: state["utilisation"] for state in same["limit_states"]}
        assert set(found) == set(expected)
        for name, value in expected.items():
            known = value is not None
            assert found[name] == (pytest.approx(value, rel=1e-6, abs=1e-9) if known else None)


# Reading back ------------------------------------------------------------------------------------

Values = dict[str, dict[str, Any]]


def result_values(path: Path) -> dict[str, Values]:
    """Values of the result sets by beam, set and property, read by ifcopenshell."""
    file = ifcopenshell.open(str(path))
    found: dict[str, Values] = {}
    for relation in file.by_type("IfcRelDefinesByProperties"):
        definition = relation.RelatingPropertyDefinition
        if not definition.is_a("IfcPropertySet") or not definition.Name.startswith("BeamRating_"):
            continue
        values = {p.Name: p.NominalValue.wrappedValue for p in definition.HasProperties}
        for beam in relation.RelatedObjects:
            found.setdefault(beam.GlobalId, {})[definition.Name] = values
    return found


def expected_result(beam: dict[str, Any]) -> dict[str, Any]:
    """BeamRating_Result by what the JSON says of a beam."""
    governing = next((s for s in beam["limit_states"] if s["name"] == beam["governing"]), None)
    adequate = {"adequate": True, "falls short": False, "not rated": "UNKNOWN"}
    expected = {
        "Verdict": beam["verdict"],
        "Adequate": adequate[beam["verdict"]],
        "Utilisation": beam["utilisation"],
        "LimitStatesChecked": ", ".join(beam["checked"]) or None,
        "LimitStatesNotChecked": ", ".join(beam["not_checked"]) or None,
        "Reason": "; ".join(beam["reasons"]) or None,
    }
    if governing:
        expected["GoverningLimitState"] = governing["title"]
        expected["GoverningClause"] = governing["clause"]
        expected["GoverningCombination"] = governing["combination"]
        expected["GoverningPosition"] = governing["position"]
    factors = [safe["factor"] for safe in beam["rated_cases"] if safe["factor_state"] == "rated"]
    if factors and all(s["factor_state"] != "not rated" for s in beam["rated_cases"]):
        expected["LeastRatingFactor"] = min(factors)
    return {name: value for name, value in expected.items() if value is not None}


def expected_safe_loads(beam: dict[str, Any]) -> dict[str, Any]:
    expected: dict[str, Any] = {}
    for safe in beam["rated_cases"]:
        case = safe["case"]
        if safe["factor"] is not None:
            expected[f"{case} factor"] = safe["factor"]
        single = safe["single_load"]
        in_kilo = single is not None and safe["single_unit"] == "N"
        expected[f"{case} safe load"] = (
            single / KILO_NEWTON if in_kilo else single if single is not None else safe["safe_load"]
        )
    return expected


def expected_limit_states(beam: dict[str, Any]) -> dict[str, Any]:
    return {
        state["name"]: state["utilisation"]
        for state in beam["limit_states"]
        if state["utilisation"] is not None
    }


def assert_values(found: dict[str, Any], expected: dict[str, Any], what: str) -> None:
    for name, value in expected.items():
        same = pytest.approx(value, rel=1e-12) if isinstance(value, float) else value
        assert found[name] == same, (what, name)


def test_rated_model_says_what_the_json_says(sample: Sample) -> None:
    found = result_values(sample.written)
    assert set(found) >= set(sample.by_guid)
    for guid, beam in sample.by_guid.items():
        sets = found[guid]
        mark = beam["mark"]
        assert_values(sets["BeamRating_Result"], expected_result(beam), mark)
        assert ("Utilisation" in sets["BeamRating_Result"]) == (beam["utilisation"] is not None)
        limit_states = expected_limit_states(beam)
        assert sets.get("BeamRating_LimitStates", {}) == pytest.approx(limit_states, rel=1e-12)
        safe_loads = expected_safe_loads(beam)
        assert set(sets.get("BeamRating_SafeLoads", {})) == set(safe_loads)
        assert_values(sets.get("BeamRating_SafeLoads", {}), safe_loads, mark)
    for member in sample.answer["out_of_scope"]:
        assert "BeamRating_Result" not in found.get(member["global_id"], {})


@pytest.fixture(scope="module")
def read_again(sample: Sample, second_parser: Callable[[Path], dict[str, Any]]) -> dict[str, Any]:
    """What the second parser reads of the rated sample."""
    return second_parser(sample.written)


@pytest.mark.node
def test_second_parser_reads_every_result_property(
    sample: Sample, read_again: dict[str, Any]
) -> None:
    """The same sets, properties and values as ifcopenshell reads."""
    assert read_again["instances"] == len(ifcopenshell.open(str(sample.written)).entity_names())
    found: dict[str, Values] = {}
    for item in read_again["sets"]:
        values = {name: p["value"] for name, p in item["properties"].items()}
        found.setdefault(item["beam"], {})[item["set"]] = values
    expected = result_values(sample.written)
    assert set(found) == set(expected)
    for guid, sets in expected.items():
        assert set(found[guid]) == set(sets)
        for name, values in sets.items():
            assert set(found[guid][name]) == set(values)
            for key, value in values.items():
                other = found[guid][name][key]
                if isinstance(value, float):
                    assert other == pytest.approx(value, rel=1e-12)
                else:
                    assert other == (None if value == "UNKNOWN" else value), (guid, name, key)


@pytest.mark.node
def test_second_parser_finds_the_units(read_again: dict[str, Any]) -> None:
    """Places in mm and safe loads in kN, told beside each value."""
    lengths, forces = Counter[Any](), Counter[Any]()
    for item in read_again["sets"]:
        for each in item["properties"].values():
            if each["type"] == "IFCLENGTHMEASURE":
                lengths[each["unit"]["prefix"], each["unit"]["name"]] += 1
            elif each["type"] == "IFCFORCEMEASURE":
                forces[each["unit"]["prefix"], each["unit"]["name"]] += 1
    assert set(lengths) == {("MILLI", "METRE")}
    assert set(forces) == {("KILO", "NEWTON")}


# Writing -----------------------------------------------------------------------------------------


def test_added_lines_come_away(sample: Sample) -> None:
    source, data = sample.source.read_bytes(), sample.written.read_bytes()
    begin = data.index(b"/* Results of ifccheck begin")
    end = data.index(b"\n", data.index(b"/* Results of ifccheck end. */")) + 1
    assert data[:begin] + data[end:] == source
    assert end - begin > 1000


def test_rating_the_rated_model_gives_the_same_bytes(sample: Sample, tmp_path: Path) -> None:
    """And the same answer, but for the name of the file in it."""
    assert rate(sample.written, tmp_path, "--only", "model", "--only", "json") == 3
    assert (tmp_path / sample.written.name).read_bytes() == sample.written.read_bytes()
    name = "print_works-rating.json"
    again = json.loads((tmp_path / name).read_bytes())
    again["model"]["file"] = sample.answer["model"]["file"]
    assert again == sample.answer


@pytest.mark.parametrize("sample", ["IFC4"], indirect=True)
def test_rating_twice_gives_the_same_bytes(sample: Sample, tmp_path: Path) -> None:
    rate(sample.source, tmp_path)
    for ending in OUTPUTS:
        name = f"print_works{ending}"
        assert (tmp_path / name).read_bytes() == (sample.out / name).read_bytes()


def faults(path: Path) -> Counter[str]:
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger)
    return Counter(json.dumps(item, default=str, sort_keys=True) for item in logger.statements)


def test_validator_finds_nothing_new(sample: Sample) -> None:
    assert faults(sample.written) == faults(sample.source)


def test_sample_itself_is_valid(sample: Sample) -> None:
    assert faults(sample.source) == Counter()


def test_figures_are_finite_or_said_not_to_be(sample: Sample) -> None:
    for beam in sample.answer["beams"]:
        for state in beam["limit_states"]:
            if state["utilisation"] is None:
                assert state["utilisation_state"] in ("not known", "no resistance")
            else:
                assert math.isfinite(state["utilisation"])
                assert state["utilisation_state"] == "known"


def test_verdicts_follow_from_the_figures(sample: Sample) -> None:
    """Falls short above 1; adequate with every counted figure known and at most 1."""
    for beam in sample.answer["beams"]:
        counted = [s for s in beam["limit_states"] if s["counted"]]
        above = any(
            s["utilisation_state"] == "no resistance" or (s["utilisation"] or 0.0) > 1.0
            for s in counted
        )
        assert above == (beam["verdict"] == "falls short"), beam["mark"]
        if beam["verdict"] == "adequate":
            assert counted
            assert all(s["utilisation_state"] == "known" for s in counted)
            assert beam["checked"]


# The other commands ------------------------------------------------------------------------------


def test_survey_of_the_sample() -> None:
    done = command("survey", SAMPLES / "print_works.ifc", "--brief", SAMPLES / "brief.toml")
    assert (done.returncode, done.stderr) == (0, "")
    for word in ("Level 1", "Roof", "71 beams", "4 steel", "2 timber"):
        assert word in done.stdout


def test_sheet_of_a_beam() -> None:
    brief = SAMPLES / "brief.toml"
    done = command("sheet", SAMPLES / "print_works.ifc", "G-101", "--brief", brief)
    assert (done.returncode, done.stderr) == (0, "")
    assert "G-101" in done.stdout
    assert "10.1" in done.stdout

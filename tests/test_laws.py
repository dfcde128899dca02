"""Laws that hold through the whole program: units, schema, order, turning and mirroring."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.validate
import pytest

from ifccheck.beam import Beam, Verdict
from ifccheck.pipeline import Run
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
    shuffled,
    state,
)

LENGTH = 6300.0
ELL: Outline = ((-150, 0), (150, 0), (150, 450), (550, 450), (550, 600), (-150, 600))
"""A flange on the left alone, so that left and right differ"""

SOFFIT = Layer("25M", 64.0, (-85.0, 0.0, 85.0), 40.0, LENGTH - 40.0, (True, False), 420.0)
CURTAILED = Layer("20M", 124.0, (-70.0, 30.0), 900.0, 4300.0)
TOP = Layer("15M", 540.0, (-85.0, 85.0), 40.0, LENGTH - 40.0)
CLOSE = Ties("10M", tuple(100.0 + 150.0 * n for n in range(15)), 104.35, 45.65, 554.35)
WIDE = Ties("10M", tuple(2450.0 + 250.0 * n for n in range(16)), 104.35, 45.65, 554.35)

PHYSICAL = MadeBeam(
    ELL,
    LENGTH,
    "L-1",
    layers=(SOFFIT, CURTAILED, TOP),
    ties=(CLOSE, WIDE),
    origin=(2000.0, 500.0, 0.0),
    direction=20.0,
)
DESCRIBED = MadeBeam(
    rectangle(300, 500),
    5200.0,
    "R-2",
    {"TopBars": "2-20M", "BottomBars": "3-20M", "Stirrups": "2 legs 10M @ 200"},
    origin=(-4000.0, 9000.0, 0.0),
    direction=-75.0,
)
BEAMS = (PHYSICAL, DESCRIBED)

ANCHORED = "\n".join(
    load(
        "floor",
        'line = ["4 kN/m", "11 kN/m"]',
        'from = "0.7 m"',
        'to = "3.9 m"',
        f'at_from = "{mark} column at start"',
        beams=mark,
    )
    + load(
        "press",
        'point = "21.7 kN"',
        'at = "1.9 m"',
        f'at_from = "{mark} column at start"',
        beams=mark,
    )
    for mark in ("L-1", "R-2")
)
"""Unsymmetrical loads that stay where they are in the building, whichever end is the start"""
BRIEF = brief(BEARINGS, ANCHORED, load("floor", 'line = "3 kN/m"'))

PLACE = 0.01
"""Places that differ by less than this are one [mm]"""

TURNED = 1e-8
"""Coordinates of a turned building are irrational: they are read to a millionth of a mm"""


def run_of(folder: Path, setting: Setting, beams: tuple[MadeBeam, ...] = BEAMS) -> Run:
    return rate_model(folder, model(*beams, setting=setting), BRIEF)


@pytest.fixture(scope="module")
def plain(tmp_path_factory: pytest.TempPathFactory) -> Run:
    """The building as it is described, in mm and IFC4."""
    return run_of(tmp_path_factory.mktemp("plain"), Setting())


def numbers(answer: dict[str, Any], mirrored: bool = False) -> dict[str, Any]:
    """All that a rating says in numbers and words, by what it is; places are seen from the other
    end where asked.

    The longitudinal tension is limited (11.3.9.4) and so the same along a stretch: which place of
    it is named first depends on the end from which one looks.
    """
    length = answer["length"]

    def place(x: float | None) -> float | None:
        return length - x if mirrored and x is not None else x

    found = {key: answer[key] for key in ("verdict", "utilisation", "governing", "length")}
    for each in answer["limit_states"]:
        for key in ("utilisation", "demand", "resistance", "combination", "clause"):
            found[f"{each['name']} {key}"] = each[key]
        if each["name"] != "LongitudinalTension":
            found[f"{each['name']} position"] = place(each["position"])
    for safe in answer["rated_cases"]:
        for key in ("factor", "single_load", "limited_by", "combination"):
            found[f"{safe['case']} {key}"] = safe[key]
        if safe["limited_by"] != "longitudinal tension":
            found[f"{safe['case']} position"] = place(safe["position"])
    for item in answer["basis"]:
        if not isinstance(item["value"], str):
            found[f"basis {item['name']}"] = item["value"]
    return found


def assert_same(one: Run, other: Run, *, swapped: bool = False, rel: float = 1e-9) -> None:
    """The same answers for the same beams, seen from the other end where asked."""
    first, second = answers(one), answers(other)
    assert set(first) == set(second) == {"L-1", "R-2"}
    for mark, answer in first.items():
        found = numbers(second[mark], mirrored=swapped)
        assert_equal_numbers(numbers(answer), found, rel, mark)


def assert_equal_numbers(
    expected: dict[str, Any], found: dict[str, Any], rel: float, what: str
) -> None:
    assert set(expected) == set(found)
    for key, value in expected.items():
        if isinstance(value, float):
            place = key.endswith("position")
            same = (
                pytest.approx(value, abs=PLACE)
                if place
                else pytest.approx(value, rel=rel, abs=1e-9)
            )
            assert found[key] == same, (what, key)
        else:
            assert found[key] == value, (what, key)


def test_the_building_is_fit_to_test_with(plain: Run) -> None:
    """Rated by numbers that differ from end to end, and valid as IFC."""
    found = answers(plain)
    for answer in found.values():
        assert answer["verdict"] != Verdict.NOT_RATED, answer["reasons"]
        assert answer["utilisation"] > 0.3
        assert answer["rated_cases"][0]["factor"] > 0.0
        assert state(answer, "Shear")["position"] != pytest.approx(answer["length"] / 2.0, abs=100)
    assert sum(bar.count for bar in beam_of(plain, "L-1").reinforcement[0].bars) == 7


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_the_made_models_are_valid(schema: Any, tmp_path: Path) -> None:
    path = tmp_path / "made.ifc"
    path.write_bytes(model(*BEAMS, setting=Setting(schema=schema)))
    logger = ifcopenshell.validate.json_logger()
    ifcopenshell.validate.validate(str(path), logger)
    assert logger.statements == []


def test_the_same_description_gives_the_same_bytes() -> None:
    assert model(*BEAMS) == model(*BEAMS)


@pytest.mark.parametrize("unit", ["m", "inch"])
def test_unit_of_the_model_changes_nothing(unit: Any, plain: Run, tmp_path: Path) -> None:
    assert_same(plain, run_of(tmp_path, Setting(unit=unit)))


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4X3"])
def test_schema_changes_nothing(schema: Any, plain: Run, tmp_path: Path) -> None:
    assert_same(plain, run_of(tmp_path, Setting(schema=schema)))


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_order_and_numbers_of_entities_change_nothing(
    seed: int, plain: Run, tmp_path: Path
) -> None:
    data = model(*BEAMS)
    other = shuffled(data, seed)
    assert sorted(data.splitlines()) != sorted(other.splitlines())
    assert_same(plain, rate_model(tmp_path, other, BRIEF), rel=1e-12)


ANGLES = (37.0, 90.0, 180.0, 217.0, 270.0, 341.5)


@pytest.mark.parametrize("turned_by", ["building", "elements"])
@pytest.mark.parametrize("angle", ANGLES)
def test_turning_the_building_changes_nothing(
    angle: float, turned_by: Any, plain: Run, tmp_path: Path
) -> None:
    """The start of a beam follows its own placement, which turns with the building."""
    assert_same(plain, run_of(tmp_path, Setting(angle=angle, turned_by=turned_by)), rel=TURNED)


def starts_at_the_other_end(beam: MadeBeam, angle: float) -> bool:
    """Whether a beam without a placement of its own starts where its description ends: at the
    lesser X or Y of the building, whichever the beam is more nearly parallel to."""
    way = math.radians(beam.direction + angle)
    x, y = round(math.cos(way), 9), round(math.sin(way), 9)
    return x < 0.0 if abs(x) >= abs(y) else y < 0.0


@pytest.mark.parametrize("angle", [0.0, *ANGLES])
def test_turning_the_bodies_swaps_ends_at_most(angle: float, plain: Run, tmp_path: Path) -> None:
    """Bodies that are placed in the building itself: the start goes by the building's axes."""
    turned = run_of(tmp_path, Setting(angle=angle, turned_by="bodies"))
    first, second = answers(plain), answers(turned)
    swaps = {beam.mark: starts_at_the_other_end(beam, angle) for beam in BEAMS}
    for mark, swapped in swaps.items():
        found = numbers(second[mark], mirrored=swapped)
        assert_equal_numbers(numbers(first[mark]), found, TURNED, f"{mark}, swapped: {swapped}")


def beam_of(run: Run, mark: str) -> Beam:
    return next(b for b in run.reports[0].model.beams if b.mark == mark)


def corners(beam: Beam) -> list[tuple[float, float]]:
    return sorted((round(y, 4), round(z, 4)) for y, z in beam.runs[0].outline.rings[0])


def bar_places(beam: Beam) -> list[tuple[float, float]]:
    bars = beam.reinforcement[0].bars
    return sorted((round(y, 4), round(bar.z, 4)) for bar in bars for y in bar.ys)


def reflected(points: list[tuple[float, float]]) -> list[tuple[float, float]]:
    return sorted((-y + 0.0, z) for y, z in points)


def centred(points: list[tuple[float, float]]) -> list[tuple[float, float]]:
    """The points about the middle of their width, from which y is measured."""
    middle = (min(y for y, _ in points) + max(y for y, _ in points)) / 2.0
    return sorted((round(y - middle, 4), z) for y, z in points)


def test_mirroring_the_building_swaps_left_and_right_alone(plain: Run, tmp_path: Path) -> None:
    mirrored = run_of(tmp_path, Setting(mirrored=True, angle=15.0))
    assert_same(plain, mirrored, rel=TURNED)
    one, other = beam_of(plain, "L-1"), beam_of(mirrored, "L-1")
    assert corners(one) == centred(list(ELL))
    assert corners(other) == reflected(corners(one)) != corners(one)
    assert bar_places(other) == reflected(bar_places(one)) != bar_places(one)


def test_a_beam_described_from_its_other_end_swaps_ends_alone(plain: Run, tmp_path: Path) -> None:
    """Start and end, and with them left and right, change places; nothing else does."""
    assert_same(plain, run_of(tmp_path, Setting(from_end=True)), swapped=True, rel=TURNED)


# The rating factor -------------------------------------------------------------------------------

PRESS = (
    "[[loads]]",
    'case = "press"',
    'beams = ["{mark}"]',
    'point = "{force:.9f} kN"',
    'at = "{place} m"',
)


def pressed(force: dict[str, float], method: str) -> str:
    entries = [
        "\n".join(PRESS).format(mark=mark, force=value, place=1.9) for mark, value in force.items()
    ]
    return brief(BEARINGS, load("floor", 'line = "3 kN/m"'), *entries, method=method)


@pytest.mark.parametrize("method", ["general", "simplified"])
def test_the_rating_factor_is_where_a_beam_begins_to_fall_short(
    method: str, tmp_path: Path
) -> None:
    """The brief's own load, multiplied by the factor that the program gave."""
    data, force = model(*BEAMS), {"L-1": 90.0, "R-2": 60.0}
    first = answers(rate_model(tmp_path / "full", data, pressed(force, method)))
    factors = {mark: answer["rated_cases"][0]["factor"] for mark, answer in first.items()}
    for share, verdict in ((1.0 - 1e-4, "adequate"), (1.0 + 1e-4, "falls short")):
        scaled = {mark: force[mark] * factors[mark] * share for mark in force}
        again = answers(rate_model(tmp_path / verdict, data, pressed(scaled, method)))
        for mark, answer in again.items():
            assert answer["verdict"] == verdict, (mark, share, json.dumps(answer["limit_states"]))
            assert answer["rated_cases"][0]["factor"] * share == pytest.approx(1.0, rel=1e-4)


def test_the_factor_falls_as_the_load_grows(tmp_path: Path) -> None:
    """Twice the assigned load has half the factor, and the same safe load."""
    data = model(*BEAMS)
    one = answers(
        rate_model(tmp_path / "one", data, pressed({"L-1": 40.0, "R-2": 30.0}, "general"))
    )
    two = answers(
        rate_model(tmp_path / "two", data, pressed({"L-1": 80.0, "R-2": 60.0}, "general"))
    )
    for mark in one:
        (once,), (twice,) = one[mark]["rated_cases"], two[mark]["rated_cases"]
        assert twice["factor"] == pytest.approx(once["factor"] / 2.0, rel=1e-3)
        assert twice["single_load"] == pytest.approx(once["single_load"], rel=1e-3)


def test_rated_models_of_all_units_read_alike(tmp_path: Path) -> None:
    """The safe load and the place written into a metre, millimetre and inch model are the same
    force and the same place."""
    from ifccheck.results import files_of

    found = []
    for unit, length in (("mm", 1.0), ("m", 1000.0), ("inch", 25.4)):
        run = run_of(tmp_path / unit, Setting(unit=unit))  # type: ignore[arg-type]
        rated = run.rated[0]
        files = files_of(rated.read.opened, rated.report, tmp_path, ["model"])
        (parts,) = files.values()
        file = ifcopenshell.file.from_string(b"".join(parts).decode("utf-8"))
        beam = next(b for b in file.by_type("IfcBeam") if b.Name == "L-1")
        sets = {
            relation.RelatingPropertyDefinition.Name: relation.RelatingPropertyDefinition
            for relation in beam.IsDefinedBy
            if relation.is_a("IfcRelDefinesByProperties")
        }
        result = {p.Name: p for p in sets["BeamRating_Result"].HasProperties}
        loads = {p.Name: p for p in sets["BeamRating_SafeLoads"].HasProperties}
        found.append(
            (
                result["Utilisation"].NominalValue.wrappedValue,
                result["GoverningPosition"].NominalValue.wrappedValue * length,
                loads["press safe load"].NominalValue.wrappedValue,
            )
        )
    for other in found[1:]:
        assert other == pytest.approx(found[0], rel=1e-9, abs=1e-6)

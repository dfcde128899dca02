"""A second IFC parser, which shares no code with the one in use here, reads the results back."""

from __future__ import annotations

import math
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ifcopenshell
import pytest

from ifccheck.ifc.identity import RESULT_SET_NAMES, set_guid
from ifccheck.ifc.opening import OpenedModel, open_model
from ifccheck.ifc.writeback import rated_bytes
from ifccheck.result_sets import ResultProperty, ResultSet

pytestmark = pytest.mark.node

P = ResultProperty
RESULT, LIMIT_STATES, SAFE_LOADS, BASIS = RESULT_SET_NAMES
SecondParser = Callable[[Path], dict[str, Any]]

INCH, POUND = 25.4, 4.4482216152605  # exact by definition, mm and N
IN_UNITS = {
    "mm": (2100.0, 60.0, 3.2, 12.5, 30.0, 1963.5),
    "m": (2.1, 60e3, 3.2e3, 12.5e3, 30e6, 0.0019635),
    "inch": (
        2100 / INCH,
        60e3 / POUND,
        3.2 * INCH / POUND,
        12.5e6 / (INCH * POUND),
        30 * INCH**2 / POUND,
        1963.5 / INCH**2,
    ),
}
WITH_UNIT = (
    P("GoverningPosition", "length", 2100.0),
    P("press safe load", "force", 60e3),
    P("wall safe load", "line_force", 3.2),
    P("Resistance", "moment", 12.5e6),
    P("Strength", "pressure", 30.0),
    P("SectionArea", "area", 1963.5),
)
TYPES = (
    "IFCLENGTHMEASURE",
    "IFCFORCEMEASURE",
    "IFCLINEARFORCEMEASURE",
    "IFCTORQUEMEASURE",
    "IFCPRESSUREMEASURE",
    "IFCAREAMEASURE",
)
IN_SI = {"length": 2.1, "force": 60e3, "line_force": 3.2e3, "moment": 12.5e3, "pressure": 30e6}
IN_SI["area"] = 1963.5e-6
PREFIXES = {None: 1.0, "MILLI": 1e-3, "KILO": 1e3, "MEGA": 1e6}


def saved(folder: Path, data: bytes | str, name: str = "hall.ifc") -> Path:
    path = folder / name
    path.write_bytes(data.encode() if isinstance(data, str) else data)
    return path


def read_one(
    parser: SecondParser, folder: Path, source: str, properties: tuple[ResultProperty, ...]
) -> dict[str, Any]:
    """Write one set on the beam #101 and read its properties with the second parser."""
    opened = open_model(saved(folder, source))
    result = ResultSet(101, "0000000000000000000101", 0, RESULT, properties)
    found = parser(saved(folder, rated_bytes(opened, [result]), "hall-rated.ifc"))
    (only,) = found["sets"]
    assert (only["beam"], only["express_id"], only["set"]) == (result.guid, 101, RESULT)
    assert only["guid"] == set_guid(result.guid, 0, RESULT)
    properties_found: dict[str, Any] = only["properties"]
    return properties_found


def unit_in_si(unit: dict[str, Any]) -> float:
    """What a unit, as the second parser describes it, is worth in coherent SI units."""
    if "elements" in unit:
        parts = unit["elements"]
        return math.prod(unit_in_si(part["unit"]) ** part["exponent"] for part in parts)
    if "factor" in unit:
        return float(unit["factor"]) * unit_in_si(unit["of"])
    power = 2 if unit["name"] == "SQUARE_METRE" else 1
    return PREFIXES[unit["prefix"]] ** power


@pytest.mark.parametrize(
    ("schema", "units"), [("IFC2X3", "mm"), ("IFC4", "m"), ("IFC4X3_ADD2", "inch"), ("IFC4", "mm")]
)
def test_values_and_units(
    schema: str,
    units: str,
    second_parser: SecondParser,
    two_beams: Callable[..., str],
    tmp_path: Path,
) -> None:
    found = read_one(second_parser, tmp_path, two_beams(schema, units), WITH_UNIT)
    for item, type_name, expected in zip(WITH_UNIT, TYPES, IN_UNITS[units], strict=True):
        read = found[item.name]
        assert read["type"] == type_name
        assert read["value"] == pytest.approx(expected, rel=1e-12)
        assert read["value"] * unit_in_si(read["unit"]) == pytest.approx(IN_SI[item.measure])


def test_texts_and_logicals(
    second_parser: SecondParser, two_beams: Callable[..., str], tmp_path: Path
) -> None:
    texts = ["", "'", "\\", "C:\\S\\'", "Ø16 — ≥ é", "𝔸b", "a\nb", "/*;'*/ ENDSEC; #5="]
    properties = (
        *(P(f"p{index}", "text", text) for index, text in enumerate(texts)),
        P("yes", "logical", True),
        P("no", "logical", False),
        P("unknown", "logical", None),
        P("Basis", "identifier", "0f3a"),
        P("Verdict", "label", "not rated"),
        P("Utilisation", "real", 1.25e-7),
        P("LeastRatingFactor", "real", math.nan),
    )
    found = read_one(second_parser, tmp_path, two_beams(), properties)
    assert [found[f"p{index}"]["value"] for index in range(len(texts))] == texts
    assert [found[name]["value"] for name in ("yes", "no", "unknown")] == [True, False, None]
    assert found["Basis"] == {"type": "IFCIDENTIFIER", "value": "0f3a", "unit": None}
    assert found["Verdict"] == {"type": "IFCLABEL", "value": "not rated", "unit": None}
    assert found["Utilisation"] == {"type": "IFCREAL", "value": 1.25e-7, "unit": None}
    assert "LeastRatingFactor" not in found


def test_joined_lines_and_comments(
    second_parser: SecondParser, two_beams: Callable[..., str], tmp_path: Path
) -> None:
    source = two_beams().replace("\n", "").replace("ENDSEC;END-", "/* it's */ENDSEC;END-")
    assert len(read_one(second_parser, tmp_path, source, WITH_UNIT)) == len(WITH_UNIT)


def result_sets(opened: OpenedModel) -> list[ResultSet]:
    beams = sorted(opened.file.by_type("IfcBeam"), key=lambda beam: int(beam.id()))
    return [
        ResultSet(beam.id(), beam.GlobalId, 0, name, (P("n", "real", float(number)), *WITH_UNIT))
        for number, beam in enumerate(beams)
        for name in RESULT_SET_NAMES
    ]


@pytest.mark.parametrize(
    "name",
    ["01_ifc4x3_beam_34_stirrups", "06_ifc2x3_bridge_concrete", "16_ifc4_timber_mapped_negz"],
)
def test_open_models(
    name: str, second_parser: SecondParser, open_models: Path, tmp_path: Path
) -> None:
    opened = open_model(open_models / f"{name}.ifc")
    sets = result_sets(opened)
    rated = saved(tmp_path, rated_bytes(opened, sets))
    found = second_parser(rated)
    assert found["instances"] == len(ifcopenshell.open(str(rated)).entity_names())
    read = {(item["express_id"], item["beam"], item["set"]): item for item in found["sets"]}
    assert set(read) == {(item.step_id, item.guid, item.name) for item in sets}
    for item in sets:
        properties = read[item.step_id, item.guid, item.name]["properties"]
        assert properties["n"]["value"] == item.properties[0].value
        assert set(properties) == {single.name for single in item.properties}

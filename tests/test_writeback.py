"""Write-back: the source's own bytes with lines added, which come away again without a trace."""

from __future__ import annotations

import json
import math
import re
import uuid
import zipfile
from collections import Counter
from collections.abc import Callable, Iterator, Sequence
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.guid
import ifcopenshell.util.unit
import ifcopenshell.validate
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.errors import ModelError
from ifccheck.ifc.identity import (
    RESULT_SET_NAMES,
    relation_guid,
    set_and_relation_guids,
    set_guid,
)
from ifccheck.ifc.lexer import LARGEST_ID
from ifccheck.ifc.opening import OpenedModel, open_model
from ifccheck.ifc.step_text import step_real, step_string
from ifccheck.ifc.writeback import fresh_ids, packed, rated_bytes, rated_parts
from ifccheck.result_sets import ResultProperty, ResultSet

P = ResultProperty
RESULT, LIMIT_STATES, SAFE_LOADS, BASIS = RESULT_SET_NAMES
SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3_ADD2")
TwoBeams = Callable[..., str]


def results_of(beam_id: int, guid: str, ordinal: int = 0) -> list[ResultSet]:
    """Make up all four sets, with every measure, awkward text and values that are none."""
    result = (
        P("Verdict", "label", "falls short"),
        P("Adequate", "logical", False),
        P("Utilisation", "real", 1.0345),
        P("GoverningPosition", "length", 2100.0),
        P("LeastRatingFactor", "real", math.nan),
        P("Reason", "text", "it's \\ Ø16 \N{MATHEMATICAL BOLD CAPITAL A}\n; ENDSEC; /* #5= */"),
        P("Basis", "identifier", "0f3a"),
    )
    basis = (
        P("SectionArea", "area", 1963.5),
        P("Strength", "pressure", 30.0),
        P("Resistance", "moment", 12.5e6),
    )
    loads = (
        P("press factor", "real", math.inf),
        P("press safe load", "force", 60e3),
        P("wall safe load", "line_force", 3.2),
    )
    return [
        ResultSet(beam_id, guid, ordinal, RESULT, result),
        ResultSet(beam_id, guid, ordinal, LIMIT_STATES, (P("Shear", "real", 1.0345),)),
        ResultSet(beam_id, guid, ordinal, SAFE_LOADS, loads),
        ResultSet(beam_id, guid, ordinal, BASIS, basis),
    ]


def results_for(opened: OpenedModel) -> list[ResultSet]:
    beams = sorted(opened.file.by_type("IfcBeam"), key=lambda beam: int(beam.id()))
    seen: Counter[str] = Counter()
    sets: list[ResultSet] = []
    for beam in beams:
        sets += results_of(beam.id(), beam.GlobalId, seen[beam.GlobalId])
        seen[beam.GlobalId] += 1
    return sets


def saved(folder: Path, data: bytes | str, name: str = "hall.ifc") -> Path:
    path = folder / name
    path.write_bytes(data.encode("utf-8") if isinstance(data, str) else data)
    return path


def rate(folder: Path, data: bytes | str, name: str = "hall.ifc") -> bytes:
    opened = open_model(saved(folder, data, name))
    return rated_bytes(opened, results_for(opened))


def without_added_lines(data: bytes) -> bytes:
    """Take the marked lines away as anyone would, with a text editor's idea of a line."""
    lines = re.split(rb"(?<=\n)|(?<=\r)(?!\n)", data)
    marks = [index for index, line in enumerate(lines) if line.startswith(b"/* Results of ifcch")]
    first, last = marks
    before = b"".join(lines[:first])
    if b"with the line break before this line" in lines[first]:
        before = re.sub(rb"(\r\n|\r|\n)\Z", b"", before)
    return before + b"".join(lines[last + 1 :])


def faults(path: Path, numbers: set[int] | None = None) -> Counter[str]:
    """What ifcopenshell's validator finds in a model, or in some instances of it alone."""
    logger = ifcopenshell.validate.json_logger()
    every = ifcopenshell.file.__iter__

    def chosen(file: Any) -> Iterator[Any]:
        return (item for item in every(file) if numbers is None or item.id() in numbers)

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(ifcopenshell.file, "__iter__", chosen)
        ifcopenshell.validate.validate(str(path), logger)
    return Counter(json.dumps(item, default=str, sort_keys=True) for item in logger.statements)


def touched_by_lines(opened: OpenedModel, rated: Path) -> set[int]:
    """Numbers of the added instances and of those that they refer to.

    All others keep their attributes and their inverses, which is what the validator looks at.
    """
    file = ifcopenshell.open(str(rated))
    added = set(file.entity_names()) - set(opened.scan.ids.tolist())
    parts = (part.id() for number in added for part in file.traverse(file.by_id(number), 1))
    return added | set(parts)


def resaved(data: bytes, folder: Path) -> bytes:
    """What ifcopenshell makes of a model: everything written anew, comments left out."""
    ifcopenshell.open(str(saved(folder, data, "before.ifc"))).write(str(folder / "after.ifc"))
    return (folder / "after.ifc").read_bytes()


def values(file: Any, beam_id: int) -> dict[str, dict[str, Any]]:
    """Read a beam's property sets: (value, unit entity) by set and property."""
    found: dict[str, dict[str, Any]] = {}
    for relation in file.by_id(beam_id).IsDefinedBy:
        definition = relation.RelatingPropertyDefinition
        found[definition.Name] = {
            item.Name: (item.NominalValue.wrappedValue, item.Unit)
            for item in definition.HasProperties
        }
    return found


OTHER_SHAPES: dict[str, Callable[[str], bytes]] = {
    "LF": lambda text: text.encode(),
    "CRLF": lambda text: text.replace("\n", "\r\n").encode(),
    "CR": lambda text: text.replace("\n", "\r").encode(),
    "one line": lambda text: text.replace("\n", "").encode(),
    "end on the last line": lambda text: text.replace("\nENDSEC;\nEND-", "ENDSEC;\nEND-").encode(),
    "end on the last line, CRLF": lambda text: (
        text.replace("\nENDSEC;\nEND-", " ENDSEC;\nEND-").replace("\n", "\r\n").encode()
    ),
    "indented": lambda text: text.replace("\nENDSEC;\nEND-", "\n\t ENDSEC;\nEND-").encode(),
    "comment before the end": lambda text: text.replace(
        "\nENDSEC;\nEND-", "\n/* it's; ENDSEC; */ENDSEC;\nEND-"
    ).encode(),
    "byte order mark": lambda text: b"\xef\xbb\xbf" + text.encode(),
    "two DATA sections": lambda text: text.replace("#102=", "ENDSEC;\nDATA;\n#102=").encode(),
    "signature": lambda text: (text + "SIGNATURE\nMIIB+/a==\nENDSEC;\n").encode(),
    "no last line break": lambda text: text.removesuffix("\n").encode(),
    "Latin-1": lambda text: text.replace("B-1", "Tr\xe4ger").encode("latin-1"),
    "repeated GlobalId": lambda text: text.replace("0102'", "0101'").encode(),
}


@pytest.mark.parametrize("shape", OTHER_SHAPES.values(), ids=OTHER_SHAPES.keys())
def test_added_lines_come_away_again(
    shape: Callable[[str], bytes], two_beams: TwoBeams, tmp_path: Path
) -> None:
    source = shape(two_beams())
    rated = rate(tmp_path, source)
    assert without_added_lines(rated) == source
    assert open_model(saved(tmp_path, rated)).source == source
    assert rate(tmp_path, rated) == rated
    file = open_model(saved(tmp_path, rated.removeprefix(b"\xef\xbb\xbf"))).file
    assert len(file.by_type("IfcBeam")) == 2
    parsed = ifcopenshell.open(str(saved(tmp_path, rated.removeprefix(b"\xef\xbb\xbf"))))
    for beam in parsed.by_type("IfcBeam"):
        assert set(values(parsed, beam.id())) == set(RESULT_SET_NAMES)
    guids = [root.GlobalId for root in parsed.by_type("IfcRelDefinesByProperties")]
    guids += [root.GlobalId for root in parsed.by_type("IfcPropertySet")]
    assert len(set(guids)) == 16


def test_line_breaks_are_those_of_the_source(two_beams: TwoBeams, tmp_path: Path) -> None:
    rated = rate(tmp_path, two_beams().replace("\n", "\r\n"))
    assert rated.count(b"\n") == rated.count(b"\r\n")
    rated = rate(tmp_path, two_beams().replace("\n", "\r"))
    assert b"\n" not in rated


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
PLACES = (
    (RESULT, "GoverningPosition", "IfcLengthMeasure"),
    (SAFE_LOADS, "press safe load", "IfcForceMeasure"),
    (SAFE_LOADS, "wall safe load", "IfcLinearForceMeasure"),
    (BASIS, "Resistance", "IfcTorqueMeasure"),
    (BASIS, "Strength", "IfcPressureMeasure"),
    (BASIS, "SectionArea", "IfcAreaMeasure"),
)
UNIT_TYPES = (
    "LENGTHUNIT",
    "FORCEUNIT",
    "LINEARFORCEUNIT",
    "TORQUEUNIT",
    "PRESSUREUNIT",
    "AREAUNIT",
)


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("units", IN_UNITS)
def test_values_are_in_the_models_own_units(
    schema: str, units: str, two_beams: TwoBeams, tmp_path: Path
) -> None:
    rated = saved(tmp_path, rate(tmp_path, two_beams(schema, units)), "hall-rated.ifc")
    file = ifcopenshell.open(str(rated))
    found = values(file, 101)
    declared = {unit.UnitType: unit for unit in file.by_type("IfcUnitAssignment")[0].Units}
    for (name, item, measure), expected, unit_type in zip(
        PLACES, IN_UNITS[units], UNIT_TYPES, strict=True
    ):
        value, unit = found[name][item]
        assert value == pytest.approx(expected, rel=1e-12)
        assert unit.UnitType == unit_type
        assert unit == declared.get(unit_type, unit)
        named = [p for p in file.by_type("IfcPropertySingleValue") if p.Name == item]
        assert {p.NominalValue.is_a() for p in named} == {measure}
    assert ("FORCEUNIT" in declared) == (units != "mm")


def test_added_units_are_what_they_say(two_beams: TwoBeams, tmp_path: Path) -> None:
    """ifcopenshell's own conversions bring the added units back to SI."""
    file = ifcopenshell.open(str(saved(tmp_path, rate(tmp_path, two_beams()))))
    found = values(file, 101)
    for (name, item), si in {
        (RESULT, "GoverningPosition"): 2.1,
        (SAFE_LOADS, "press safe load"): 60e3,
        (BASIS, "Strength"): 30e6,
        (BASIS, "SectionArea"): 1963.5e-6,
    }.items():
        value, unit = found[name][item]
        scale = ifcopenshell.util.unit.convert(1.0, unit.Prefix, unit.Name, None, unit.Name)
        assert value * scale == pytest.approx(si)
    for item, exponent in (("wall safe load", -1), ("Resistance", 1)):
        _, unit = (found[SAFE_LOADS] | found[BASIS])[item]
        elements = {part.Unit.Name: (part.Unit.Prefix, part.Exponent) for part in unit.Elements}
        assert elements == {"NEWTON": ("KILO", 1), "METRE": (None, exponent)}


def test_each_unit_is_added_once(two_beams: TwoBeams, tmp_path: Path) -> None:
    source = two_beams()
    rated = rate(tmp_path, source).decode()
    added = rated.count("IFCSIUNIT") - source.count("IFCSIUNIT")
    assert added == 4  # kN, m for its products, MPa, mm2; the length unit is the model's own
    assert rated.count("IFCDERIVEDUNIT(") == 2
    assert rate(tmp_path, two_beams(units="m")).count(b"IFCSIUNIT") == two_beams(units="m").count(
        "IFCSIUNIT"
    )


def test_unit_of_wrong_dimensions_is_not_used(two_beams: TwoBeams, tmp_path: Path) -> None:
    source = two_beams(units="m").replace("((#15,#17),.TORQUEUNIT.", "((#15,#15),.TORQUEUNIT.")
    file = ifcopenshell.open(str(saved(tmp_path, rate(tmp_path, source))))
    value, unit = values(file, 101)[BASIS]["Resistance"]
    assert value == pytest.approx(12.5)
    assert unit.id() != 19


def test_texts_and_logicals_come_back(two_beams: TwoBeams, tmp_path: Path) -> None:
    opened = open_model(saved(tmp_path, two_beams()))
    texts = ["", "'", "''", "\\", "\\X2\\", "\x01\x7f\x1f", "Ø16 — ≥", "𝔸𝔹c", "a\r\nb", "/*;'*/"]
    properties = tuple(P(f"p{index}", "text", text) for index, text in enumerate(texts))
    logicals = tuple(P(str(value), "logical", value) for value in (True, False, None))
    name = P("Ø's name", "label", "x")
    sets = [ResultSet(101, "0000000000000000000101", 0, RESULT, (*properties, *logicals, name))]
    file = ifcopenshell.open(str(saved(tmp_path, rated_bytes(opened, sets))))
    found = values(file, 101)[RESULT]
    assert [found[f"p{index}"][0] for index in range(len(texts))] == texts
    assert (found["True"][0], found["False"][0], found["None"][0]) == (True, False, "UNKNOWN")
    assert found["Ø's name"][0] == "x"


@given(st.text(min_size=1, max_size=30).filter(lambda text: "\0" not in text))
def test_strings_decode_again(text: str) -> None:
    spelled = step_string(text)
    assert spelled.isascii()
    assert spelled.isprintable()
    assert re.fullmatch(r"'(?:[^']|'')*'", spelled)
    assert ifcopenshell.decode_spf_string(spelled) == text


@pytest.mark.parametrize("character", ["\ud800", "\0"])
def test_characters_that_no_reader_takes_are_replaced(character: str) -> None:
    assert step_string(f"a{character}b") == "'a\\X2\\FFFD\\X0\\b'"


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_reals_are_exact(value: float) -> None:
    spelled = step_real(value)
    assert re.fullmatch(r"[+-]?[0-9]+\.[0-9]*(E[+-]?[0-9]+)?", spelled)
    assert float(spelled) == value


def test_values_that_are_none_are_left_out(two_beams: TwoBeams, tmp_path: Path) -> None:
    opened = open_model(saved(tmp_path, two_beams()))
    none = (P("a", "real", math.nan), P("b", "force", -math.inf), P("c", "text", None))
    guid = "0000000000000000000101"
    with_one = ResultSet(101, guid, 0, RESULT, (*none, P("d", "real", 1.0)))
    file = ifcopenshell.open(
        str(saved(tmp_path, rated_bytes(opened, [with_one, ResultSet(101, guid, 0, BASIS, none)])))
    )
    assert {name: set(found) for name, found in values(file, 101).items()} == {RESULT: {"d"}}
    assert not file.by_type("IfcSIUnit")[1:], "no unit without a value"
    assert rated_bytes(opened, [ResultSet(101, guid, 0, BASIS, none)]) == opened.source
    assert rated_bytes(opened, []) == opened.source


def bad_sets() -> dict[str, tuple[list[ResultSet], str]]:
    guid = "0000000000000000000101"

    def one(*properties: ResultProperty, name: str = RESULT, at: int = 101) -> list[ResultSet]:
        return [ResultSet(at, guid, 0, name, properties)]

    fine = P("a", "label", "x")
    return {
        "long label": (one(P("a", "label", "x" * 256)), "longer than 255"),
        "long identifier": (one(P("a", "identifier", "x" * 256)), "longer than 255"),
        "long name": (one(P("n" * 256, "text", "x")), "longer than 255"),
        "repeated property": (one(fine, fine), "gives a property twice"),
        "repeated set": (one(fine) * 2, "given twice"),
        "input set": (one(fine, name="BeamRating_Reinforcement"), "not a result set"),
        "other set": (one(fine, name="Pset_BeamCommon"), "not a result set"),
        "no such instance": (one(fine, at=999), "#999 is not the beam"),
        "another beam": (one(fine, at=102), "#102 is not the beam"),
    }


@pytest.mark.parametrize(("sets", "words"), bad_sets().values(), ids=bad_sets().keys())
def test_unsound_sets_are_refused(
    sets: list[ResultSet], words: str, two_beams: TwoBeams, tmp_path: Path
) -> None:
    opened = open_model(saved(tmp_path, two_beams()))
    with pytest.raises(ValueError, match=words):
        rated_bytes(opened, sets)


@pytest.mark.parametrize("item", [P("a", "label", 1.0), P("a", "real", "x"), P("a", "real", True)])
def test_values_of_another_kind_are_refused(
    item: ResultProperty, two_beams: TwoBeams, tmp_path: Path
) -> None:
    opened = open_model(saved(tmp_path, two_beams()))
    with pytest.raises(TypeError, match="property a"):
        rated_bytes(opened, [ResultSet(101, "0000000000000000000101", 0, RESULT, (item,))])


def test_longest_label_is_kept(two_beams: TwoBeams, tmp_path: Path) -> None:
    opened = open_model(saved(tmp_path, two_beams()))
    label, text = P("a", "label", "Ø" * 255), P("b", "text", "x" * 5000)
    sets = [ResultSet(101, "0000000000000000000101", 0, RESULT, (label, text))]
    found = values(ifcopenshell.open(str(saved(tmp_path, rated_bytes(opened, sets)))), 101)
    assert found[RESULT]["a"][0] == "Ø" * 255
    assert found[RESULT]["b"][0] == "x" * 5000


def test_globalids_are_uuids_of_version_5() -> None:
    space = uuid.UUID("5b0b2f6e-6a53-4c0e-9d43-3f1d6a0c8e21")
    for beam, ordinal, name in (("0000000000000000000101", 0, RESULT), ("Ø", 12, BASIS)):
        expected = uuid.uuid5(space, f"{beam}\n{ordinal}\n{name}")
        assert set_guid(beam, ordinal, name) == ifcopenshell.guid.compress(expected.hex)
        related = uuid.uuid5(space, f"{beam}\n{ordinal}\n{name}\nrelation")
        assert relation_guid(beam, ordinal, name) == ifcopenshell.guid.compress(related.hex)
        assert uuid.UUID(ifcopenshell.guid.expand(set_guid(beam, ordinal, name))).version == 5


def test_globalids_of_many_sets_are_those_of_each() -> None:
    identities = [(f"beam {n}", n % 3, name) for n in range(7) for name in RESULT_SET_NAMES]
    assert set_and_relation_guids(identities) == [
        (set_guid(*identity), relation_guid(*identity)) for identity in identities
    ]
    assert set_and_relation_guids([]) == []


def test_fresh_numbers_use_the_gaps() -> None:
    used = np.array([LARGEST_ID - 1, 2, 5, 7, 8], np.int64)
    numbers = fresh_ids(used)
    assert [next(numbers) for _ in range(7)] == [LARGEST_ID, 1, 3, 4, 6, 9, 10]
    assert next(fresh_ids(np.array([], np.int64))) == 1


@given(st.sets(st.integers(1, 40), min_size=1), st.integers(0, 30))
def test_fresh_numbers_are_fresh(used: set[int], count: int) -> None:
    numbers = fresh_ids(np.array(sorted(used, reverse=True), np.int64))
    found = [next(numbers) for _ in range(count)]
    assert len(set(found) | used) == count + len(used)


def test_model_with_the_greatest_number(two_beams: TwoBeams, tmp_path: Path) -> None:
    source = two_beams().replace("#102=", f"#{LARGEST_ID}=")
    rated = rate(tmp_path, source)
    numbers = ifcopenshell.open(str(saved(tmp_path, rated))).entity_names()
    assert len(numbers) == len(set(numbers))
    assert max(numbers) == LARGEST_ID
    assert rate(tmp_path, rated) == rated


@pytest.mark.parametrize("schema", SCHEMAS)
def test_validator_finds_nothing_new(schema: str, two_beams: TwoBeams, tmp_path: Path) -> None:
    source = two_beams(schema)
    assert faults(saved(tmp_path, rate(tmp_path, source), "rated.ifc")) == faults(
        saved(tmp_path, source, "source.ifc")
    )


def test_validator_sees_what_is_wrong(two_beams: TwoBeams, tmp_path: Path) -> None:
    """The referee of the test above is awake."""
    broken = rate(tmp_path, two_beams()).replace(
        b"IFCLABEL(", b"IFCTHERMODYNAMICTEMPERATUREMEASURE("
    )
    assert faults(saved(tmp_path, broken, "broken.ifc"))


def test_ifc2x3_shares_the_models_owner_history(two_beams: TwoBeams, tmp_path: Path) -> None:
    source = two_beams("IFC2X3")
    rated = rate(tmp_path, source)
    assert rated.count(b"IFCOWNERHISTORY") == source.count("IFCOWNERHISTORY")
    file = ifcopenshell.open(str(saved(tmp_path, rated)))
    assert {item.OwnerHistory.id() for item in file.by_type("IfcPropertySet")} == {5}


def test_ifc2x3_without_an_owner_history_gets_one(two_beams: TwoBeams, tmp_path: Path) -> None:
    text = re.sub(r"#[1-5]=.*\n", "", two_beams("IFC2X3")).replace("',#5,", "',$,")
    rated = rate(tmp_path, text)
    file = ifcopenshell.open(str(saved(tmp_path, rated)))
    (owner,) = file.by_type("IfcOwnerHistory")
    assert {item.OwnerHistory for item in file.by_type("IfcPropertySet")} == {owner}
    assert {item.OwnerHistory for item in file.by_type("IfcRelDefinesByProperties")} == {owner}
    assert owner.OwningUser.ThePerson.FamilyName
    assert owner.OwningApplication.ApplicationDeveloper.Name
    assert rate(tmp_path, rated) == rated
    again = open_model(saved(tmp_path, resaved(rated, tmp_path)))
    assert not again.file.by_type("IfcOwnerHistory")
    assert not again.file.by_type("IfcApplication")


REINFORCEMENT = """#200=IFCPROPERTYSINGLEVALUE('TopBars',$,IFCLABEL('3-25M'),$);
#201=IFCPROPERTYSET('0000000000000000000201',#5,'BeamRating_Reinforcement',$,(#200));
#202=IFCRELDEFINESBYPROPERTIES('0000000000000000000202',#5,$,$,(#101),#201);
"""


def with_lines(text: str, lines: str) -> str:
    return text.replace("ENDSEC;\nEND-", f"{lines}ENDSEC;\nEND-")


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("units", IN_UNITS)
def test_resaved_results_are_taken_away(
    schema: str, units: str, two_beams: TwoBeams, tmp_path: Path
) -> None:
    source = with_lines(two_beams(schema, units), REINFORCEMENT).encode()
    plain = resaved(source, tmp_path)
    written = resaved(rate(tmp_path, source), tmp_path)
    assert written.count(b"BeamRating_") == 9
    opened = open_model(saved(tmp_path, written))
    assert opened.source == plain
    assert opened.remarks == ()
    assert b"BeamRating_Reinforcement" in opened.source
    assert rate(tmp_path, written) == rate(tmp_path, plain)


def test_results_are_taken_away_after_the_model_was_edited(
    two_beams: TwoBeams, tmp_path: Path
) -> None:
    """The hash in the mark no longer fits, the marks are still there."""
    source = two_beams()
    rated = rate(tmp_path, source)
    edited, wanted = rated.replace(b"'B-2'", b"'C-2'"), source.replace("'B-2'", "'C-2'").encode()
    assert open_model(saved(tmp_path, edited)).source == wanted
    assert rate(tmp_path, edited) == rate(tmp_path, wanted)


def test_results_are_taken_away_after_a_result_was_edited(
    two_beams: TwoBeams, tmp_path: Path
) -> None:
    source = two_beams()
    edited = rate(tmp_path, source).replace(b"falls short", b"adequate")
    assert open_model(saved(tmp_path, edited)).source == source.encode()


def test_results_are_taken_away_from_two_blocks(two_beams: TwoBeams, tmp_path: Path) -> None:
    """Somebody pasted the lines twice, under other numbers and GlobalIds of our making."""
    rated = rate(tmp_path, two_beams()).decode()
    block = rated[rated.index("/* Results") : rated.index("ENDSEC;\nEND-")]
    numbers = sorted({int(n) for n in re.findall(r"#(\d+)=", block)})
    copied = re.sub(
        r"#(\d+)", lambda m: f"#{int(m[1]) + 5000}" if int(m[1]) in numbers else m[0], block
    )
    assert open_model(saved(tmp_path, with_lines(rated, copied))).source == two_beams().encode()


def test_results_are_cut_out_of_joined_lines(two_beams: TwoBeams, tmp_path: Path) -> None:
    written = resaved(rate(tmp_path, two_beams()), tmp_path).replace(b"\n", b"")
    plain = resaved(two_beams().encode(), tmp_path).replace(b"\n", b"")
    assert open_model(saved(tmp_path, written)).source == plain


def test_values_that_something_else_uses_stay(two_beams: TwoBeams, tmp_path: Path) -> None:
    written = resaved(rate(tmp_path, two_beams()), tmp_path).decode()
    value = re.search(r"#(\d+)=IFCPROPERTYSINGLEVALUE\('press safe load'", written)
    assert value is not None
    other = (
        f"#900=IFCPROPERTYSET('0000000000000000000900',#5,'Site',$,(#{value[1]}));\n"
        "#901=IFCRELDEFINESBYPROPERTIES('0000000000000000000901',#5,$,$,(#102),#900);\n"
    )
    opened = open_model(saved(tmp_path, with_lines(written, other)))
    assert [item.Name for item in opened.file.by_type("IfcPropertySingleValue")] == [
        "press safe load"
    ]
    (kept,) = opened.file.by_type("IfcPropertySingleValue")
    assert (kept.Unit.Prefix, kept.Unit.Name) == ("KILO", "NEWTON")
    assert not opened.file.by_type("IfcDerivedUnit")


def test_results_in_use_elsewhere_are_refused(two_beams: TwoBeams, tmp_path: Path) -> None:
    written = resaved(rate(tmp_path, two_beams()), tmp_path).decode()
    found = re.search(r"#(\d+)=IFCPROPERTYSET\('[^']*',\$,'BeamRating_Result'", written)
    assert found is not None
    other = (
        f"#900=IFCRELASSOCIATESCLASSIFICATION('0000000000000000000900',$,$,$,(#{found[1]}),$);\n"
    )
    path = saved(tmp_path, with_lines(written, other))
    with pytest.raises(ModelError, match="#900 IfcRelAssociatesClassification uses") as caught:
        open_model(path)
    assert "delete the BeamRating_ sets" in str(caught.value)


def test_sets_of_others_with_our_names_stay(two_beams: TwoBeams, tmp_path: Path) -> None:
    source = with_lines(
        two_beams(), REINFORCEMENT.replace("BeamRating_Reinforcement", RESULT)
    ).encode()
    opened = open_model(saved(tmp_path, source))
    assert opened.source == source
    (remark,) = opened.remarks
    assert remark.kind == "doubt"
    assert f"1 sets named {RESULT} (the first is #201)" in remark.text
    assert rate(tmp_path, rate(tmp_path, source)) == rate(tmp_path, source)


def test_marks_in_a_comment_of_the_source_stay(two_beams: TwoBeams, tmp_path: Path) -> None:
    source = two_beams().replace("DATA;", "DATA;\n/* Results of ifccheck begin? */", 1)
    rated = rate(tmp_path, source)
    assert open_model(saved(tmp_path, rated)).source == source.encode()


def test_set_names_in_texts_are_no_results(two_beams: TwoBeams, tmp_path: Path) -> None:
    source = two_beams().replace("'B-1'", f"'{RESULT}'").encode()
    assert open_model(saved(tmp_path, source)).source == source


def test_archive_comes_back_as_archive(two_beams: TwoBeams, tmp_path: Path) -> None:
    source = two_beams().encode()
    with zipfile.ZipFile(tmp_path / "hall.ifczip", "w", zipfile.ZIP_DEFLATED) as file:
        file.writestr("in/hall.ifc", source)
    opened = open_model(tmp_path / "hall.ifczip")
    (data,) = packed(opened, rated_parts(opened, results_for(opened)))
    again = open_model(saved(tmp_path, bytes(data), "hall-rated.ifczip"))
    assert again.source == source
    assert again.zipped_member == "in/hall.ifc"
    assert packed(again, rated_parts(again, results_for(again))) == (data,)
    plain = open_model(saved(tmp_path, source))
    assert packed(plain, (b"x", b"y")) == (b"x", b"y")


def model_names() -> Sequence[str]:
    folder = Path(__file__).resolve().parents[1].parent / "shared" / "open_models"
    return sorted(path.name for path in folder.glob("*.ifc")) or ["none"]


@pytest.mark.parametrize("name", model_names())
def test_open_models_come_back(name: str, open_models: Path, tmp_path: Path) -> None:
    path = open_models / name
    source = path.read_bytes()
    opened = open_model(path)
    sets = results_for(opened)
    rated = rated_bytes(opened, sets)
    assert (rated == source) == (not sets)
    if sets:
        assert without_added_lines(rated) == source
    again = open_model(saved(tmp_path, rated))
    assert again.source == source
    assert rated_bytes(again, sets) == rated
    rated_path = saved(tmp_path, rated, "rated.ifc")
    touched = None if len(source) < 1e6 else touched_by_lines(opened, rated_path)
    assert faults(rated_path, touched) == faults(path, touched)
    written = open_model(saved(tmp_path, resaved(rated, tmp_path)))
    plain = resaved(source, tmp_path)
    assert written.source == plain
    assert rated_bytes(written, sets) == rated_bytes(open_model(saved(tmp_path, plain)), sets)

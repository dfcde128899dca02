"""The information requirement: valid, understood by a checker made by others, met when it is met.

ifctester, which shares no code with the check of the survey, is the referee.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from pathlib import Path
from typing import Any
from xml.etree import ElementTree

import ifcopenshell
import ifcopenshell.guid
import pytest
from click.testing import CliRunner
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ifccheck.beam import Verdict
from ifccheck.cli import main
from ifccheck.ifc.described import LIMITS, OWN_PROPERTIES, OWN_SET
from ifccheck.ifc.opening import open_model
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.requirement import (
    SPACES,
    requirement_bytes,
    specifications,
    unmet_requirements,
)
from ifccheck.ifc.strength_texts import Reading, read_strength_text
from ifccheck.ifc.vocabulary import CONCRETE, families_of_material
from ifccheck.notation import parse_bars, parse_stirrups
from ifccheck.pipeline import rate
from tests.step_halls import Beam, brief, guid_of, hall, write

REPOSITORY = Path(__file__).resolve().parents[1]
UNHURRIED = settings(max_examples=200, deadline=None, suppress_health_check=[HealthCheck.too_slow])
GIVEN = {"TopBars": "2-20M", "BottomBars": "3-25M + 2-20M", "Stirrups": "2 legs 10M @ 200"}


@pytest.fixture(scope="module")
def referee(tmp_path_factory: pytest.TempPathFactory) -> Callable[[Any], Any]:
    """Runs the requirement by ifctester on an open model; returns its specifications."""
    ids = pytest.importorskip("ifctester.ids", reason="ifctester is not installed")
    path = tmp_path_factory.mktemp("ids") / "beam-information.ids"
    path.write_bytes(requirement_bytes())
    requirement = ids.open(str(path), validate=True)  # against the schema of IDS 1.0

    def run(file: Any) -> Any:
        requirement.validate(file)
        return requirement.specifications

    return run


def failures(specification_list: Any, entity: Any) -> tuple[int, bool]:
    """How many things the referee finds unmet of a beam, and whether all is asked of it."""
    of_beams = [s for s in specification_list if s.applicability[0].name == "IFCBEAM"]
    assert len(of_beams) == len(specifications())
    unmet = sum(
        failure["element"] == entity
        for specification in of_beams
        for facet in specification.requirements
        for failure in facet.failures
    )
    return unmet, all(entity in s.applicable_entities for s in of_beams)


def compare(path: Path, referee: Callable[[Any], Any]) -> dict[str, tuple[str, ...]]:
    """Hold what the survey finds unmet against the referee, beam by beam."""
    opened = open_model(path)
    beams = read_model(opened, {}).beams
    unmet = unmet_requirements(opened, beams)
    found = referee(opened.file)
    for beam in beams:
        told = unmet[beam.key]
        count, is_asked = failures(found, opened.file.by_id(beam.step_id))
        left = [text for text in told if "not named as concrete" in text]
        assert (len(told) - len(left), not left) == (count, is_asked), (beam.mark, told)
    return unmet


def test_the_units_of_the_project_are_asked_for(referee: Callable[[Any], Any]) -> None:
    """A model without units is refused before any survey, so this is for the modeller alone."""
    file = ifcopenshell.file(schema="IFC4")
    file.create_entity("IfcProject", GlobalId=ifcopenshell.guid.new())
    units = next(s for s in referee(file) if s.applicability[0].name == "IFCPROJECT")
    assert units.status is False


@pytest.mark.parametrize("name", ["01", "03", "06", "08"])
def test_open_models(name: str, open_models: Path, referee: Callable[[Any], Any]) -> None:
    (path,) = open_models.glob(f"{name}_*.ifc")
    assert compare(path, referee)


def test_the_sample(referee: Callable[[Any], Any]) -> None:
    unmet = compare(REPOSITORY / "sample_models" / "print_works.ifc", referee)
    assert any("Stirrups is '10M @ 250'" in text for texts in unmet.values() for text in texts)


# Models in which one thing after the other is amiss -----------------------------------------------


def asked_model(schema: str, unit: str = "MILLI") -> tuple[Any, Any]:
    """A model whose one beam meets the requirement, and the beam; it has no body to speak of."""
    file = ifcopenshell.file(schema=schema)
    project = file.create_entity("IfcProject", GlobalId=guid_of("project"))
    if schema == "IFC2X3":
        project.OwnerHistory = _history(file)
    metre = file.create_entity("IfcSIUnit", None, "LENGTHUNIT", unit or None, "METRE")
    pascal = file.create_entity("IfcSIUnit", None, "PRESSUREUNIT", "MEGA", "PASCAL")
    project.UnitsInContext = file.create_entity("IfcUnitAssignment", [metre, pascal])
    axes = file.create_entity(
        "IfcAxis2Placement3D", file.create_entity("IfcCartesianPoint", (0.0, 0.0, 0.0))
    )
    context = file.create_entity("IfcGeometricRepresentationContext", None, "Model", 3, 1e-5, axes)
    project.RepresentationContexts = [context]
    beam = file.create_entity("IfcBeam", guid_of("beam"), project.OwnerHistory, "B-1")
    beam.ObjectPlacement = file.create_entity("IfcLocalPlacement", None, axes)
    block = file.create_entity("IfcBlock", axes, 6000.0, 300.0, 600.0)
    shape = file.create_entity("IfcShapeRepresentation", context, "Body", "CSG", [block])
    beam.Representation = file.create_entity("IfcProductDefinitionShape", None, None, [shape])
    concrete = file.create_entity("IfcMaterial", "Concrete C30/37")
    file.create_entity(
        "IfcRelAssociatesMaterial", guid_of("made of"), project.OwnerHistory, None, None,
        [beam], concrete,
    )  # fmt: skip
    add_set(file, beam, "Pset_ConcreteElementGeneral", {"StrengthClass": ("IfcLabel", "C30/37")})
    labels = {name: ("IfcLabel", text) for name, text in GIVEN.items()}
    cover = 40.0 if unit == "MILLI" else 0.04
    add_set(file, beam, OWN_SET, {**labels, "Cover": ("IfcPositiveLengthMeasure", cover)})
    return file, beam


def _history(file: Any) -> Any:
    person = file.create_entity("IfcPerson", None, "Engineer")
    organisation = file.create_entity("IfcOrganization", None, "Office")
    both = file.create_entity("IfcPersonAndOrganization", person, organisation)
    application = file.create_entity("IfcApplication", organisation, "1", "Writer", "writer")
    return file.create_entity(
        "IfcOwnerHistory", both, application, None, "ADDED", None, None, None, 0
    )


def add_set(file: Any, beam: Any, name: str, values: dict[str, tuple[str, Any]]) -> None:
    properties = [
        file.create_entity(
            "IfcPropertySingleValue", key, None, file.create_entity(kind, value) if kind else None
        )
        for key, (kind, value) in values.items()
    ]
    own = beam.OwnerHistory
    held = file.create_entity("IfcPropertySet", guid_of(name), own, name, None, properties)
    file.create_entity(
        "IfcRelDefinesByProperties", guid_of(f"has {name}"), own, None, None, [beam], held
    )


def property_of(file: Any, name: str) -> Any:
    return next(p for p in file.by_type("IfcPropertySingleValue") if p.Name == name)


def given_as(kind: str, name: str, value: Any) -> Callable[[Any, Any], None]:
    def change(file: Any, beam: Any) -> None:
        property_of(file, name).NominalValue = file.create_entity(kind, value)

    return change


def without(name: str) -> Callable[[Any, Any], None]:
    def change(file: Any, beam: Any) -> None:
        held = next(s for s in file.by_type("IfcPropertySet") if s.Name == name.split(".")[0])
        kept = [p for p in held.HasProperties if p.Name != name.split(".")[-1]]
        if kept and "." in name:
            held.HasProperties = kept
        else:
            held.Name = "Other"

    return change


def with_extra(name: str, kind: str, value: Any) -> Callable[[Any, Any], None]:
    def change(file: Any, beam: Any) -> None:
        held = next(s for s in file.by_type("IfcPropertySet") if s.Name == OWN_SET)
        extra = file.create_entity(
            "IfcPropertySingleValue", name, None, file.create_entity(kind, value)
        )
        held.HasProperties = [*held.HasProperties, extra]

    return change


def attribute(name: str, value: Any) -> Callable[[Any, Any], None]:
    return lambda file, beam: setattr(beam, name, value)


def material(name: str | None, category: str = "") -> Callable[[Any, Any], None]:
    def change(file: Any, beam: Any) -> None:
        if name is None:
            file.remove(file.by_type("IfcRelAssociatesMaterial")[0])
            return
        one = file.by_type("IfcMaterial")[0]
        one.Name = name
        if category and file.schema != "IFC2X3":
            one.Category = category

    return change


def in_layers(file: Any, beam: Any) -> None:
    concrete = file.by_type("IfcMaterial")[0]
    concrete.Name = "grey"
    layer = file.create_entity("IfcMaterialLayer", concrete, 300.0)
    layers = file.create_entity("IfcMaterialLayerSet", [layer], "Concrete, one layer")
    file.by_type("IfcRelAssociatesMaterial")[0].RelatingMaterial = layers


def blank(name: str) -> Callable[[Any, Any], None]:
    def change(file: Any, beam: Any) -> None:
        property_of(file, name).NominalValue = None

    return change


def nothing(file: Any, beam: Any) -> None:
    """As it is: all that is asked is given."""


CHANGES: dict[str, tuple[Callable[[Any, Any], None], int]] = {
    "as it is": (nothing, 0),
    "no mark": (attribute("Name", None), 1),
    "an empty mark": (attribute("Name", ""), 1),
    "no place": (attribute("ObjectPlacement", None), 1),
    "no body": (attribute("Representation", None), 1),
    "no material": (material(None), 2),
    "not named as concrete": (material("C30/37"), 1),
    "another language": (material("Béton C30/37"), 0),
    "capitals": (material("CONCRETE/C30/37"), 0),
    "a word within a word": (material("Stahlbeton"), 0),
    "in layers": (in_layers, 0),
    "no strength": (without("Pset_ConcreteElementGeneral"), 1),
    "a blank strength": (blank("StrengthClass"), 1),
    "an empty strength": (given_as("IfcLabel", "StrengthClass", ""), 1),
    "a doubtful strength": (given_as("IfcLabel", "StrengthClass", "B35"), 1),
    "a strength in MPa": (given_as("IfcLabel", "StrengthClass", "32.5 MPa"), 0),
    "a strength in psi": (given_as("IfcLabel", "StrengthClass", "5000 psi"), 0),
    "a strength as text": (given_as("IfcText", "StrengthClass", "C30/37"), 1),
    "a strength as pressure": (given_as("IfcPressureMeasure", "StrengthClass", 30.0), 1),
    "no set": (without(OWN_SET), 4),
    "no top bars": (without(f"{OWN_SET}.TopBars"), 1),
    "no bottom bars": (without(f"{OWN_SET}.BottomBars"), 1),
    "no stirrups": (without(f"{OWN_SET}.Stirrups"), 1),
    "no cover": (without(f"{OWN_SET}.Cover"), 1),
    "none at the top": (given_as("IfcLabel", "TopBars", "none"), 0),
    "no notation": (given_as("IfcLabel", "TopBars", "some"), 1),
    "notation as text": (given_as("IfcText", "BottomBars", "3-25M"), 1),
    "a number": (given_as("IfcInteger", "BottomBars", 3), 1),
    "stirrups without legs": (given_as("IfcLabel", "Stirrups", "10M @ 200"), 1),
    "stirrups in inches": (given_as("IfcLabel", "Stirrups", "2 legs #4 @ 6 in"), 0),
    "imperial without a unit": (given_as("IfcLabel", "Stirrups", "2 legs #4 @ 6"), 1),
    "legs at the end": (given_as("IfcLabel", "Stirrups", "H10 @ 150 4 legs"), 0),
    "cover as a length": (given_as("IfcLengthMeasure", "Cover", 40.0), 1),
    "cover as a number": (given_as("IfcReal", "Cover", 40.0), 1),
    "too much cover": (given_as("IfcPositiveLengthMeasure", "Cover", 400.0), 1),
    "too little cover": (given_as("IfcPositiveLengthMeasure", "Cover", 0.04), 1),
    "side bars": (with_extra("SideBars", "IfcLabel", "4-15M"), 0),
    "odd side bars": (with_extra("SideBars", "IfcLabel", "a few"), 1),
    "a yield": (with_extra("BarYield", "IfcPressureMeasure", 400.0), 0),
    "a yield in Pa": (with_extra("BarYield", "IfcPressureMeasure", 400e6), 1),
    "a yield as text": (with_extra("StirrupYield", "IfcLabel", "400"), 1),
}
"""What is changed, and how many things are then unmet"""


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
@pytest.mark.parametrize("change", CHANGES, ids=str)
def test_one_thing_amiss_is_found_by_both(
    change: str, schema: str, tmp_path: Path, referee: Callable[[Any], Any]
) -> None:
    file, beam = asked_model(schema)
    alter, count = CHANGES[change]
    alter(file, beam)
    path = tmp_path / "made.ifc"
    file.write(str(path))
    ((_, told),) = compare(path, referee).items()
    assert len(told) == count, told


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_what_is_asked_is_asked_in_the_unit_of_the_project(
    schema: str, tmp_path: Path, referee: Callable[[Any], Any]
) -> None:
    file, _ = asked_model(schema, unit="")
    path = tmp_path / "made.ifc"
    file.write(str(path))
    assert set(compare(path, referee).values()) == {()}


def test_a_set_of_the_type_counts_as_the_beams_own(
    tmp_path: Path, referee: Callable[[Any], Any]
) -> None:
    file, beam = asked_model("IFC4")
    relation = next(
        r for r in file.by_type("IfcRelDefinesByProperties")
        if r.RelatingPropertyDefinition.Name == OWN_SET
    )  # fmt: skip
    kind = file.create_entity("IfcBeamType", guid_of("type"), None, "T", PredefinedType="BEAM")
    kind.HasPropertySets = [relation.RelatingPropertyDefinition]
    file.create_entity("IfcRelDefinesByType", guid_of("typed"), None, None, None, [beam], kind)
    file.remove(relation)
    path = tmp_path / "made.ifc"
    file.write(str(path))
    assert set(compare(path, referee).values()) == {()}


# What is asked can be read ------------------------------------------------------------------------


def pattern_of(name: str) -> str:
    root = ElementTree.fromstring(requirement_bytes())
    for element in root.iterfind(".//ids:property", SPACES):
        if element.findtext("ids:baseName/ids:simpleValue", "", SPACES) == name:
            found = element.find("ids:value/xs:restriction/xs:pattern", SPACES)
            assert found is not None
            return found.attrib["value"]
    raise AssertionError(name)


@given(st.from_regex(re.compile(pattern_of("TopBars"), re.ASCII), fullmatch=True))
@UNHURRIED
def test_every_bar_notation_that_is_asked_for_is_read(text: str) -> None:
    groups = parse_bars(text)
    assert (groups == ()) == (text == "none")
    assert sum(group.count for group in groups) == sum(
        int(found) for found in re.findall(r"(?:^|\+ )(\d+)[-#HTBØx]", text)
    )


@given(st.from_regex(re.compile(pattern_of("Stirrups"), re.ASCII), fullmatch=True))
@UNHURRIED
def test_every_stirrup_notation_that_is_asked_for_is_read(text: str) -> None:
    group = parse_stirrups(text)
    assert (group is None) == (text == "none")
    assert group is None or group.legs is not None


@given(st.from_regex(re.compile(pattern_of("StrengthClass"), re.ASCII), fullmatch=True))
@UNHURRIED
def test_every_strength_that_is_asked_for_is_read_in_one_way(text: str) -> None:
    reading = read_strength_text(text, "StrengthClass", bare=True)
    assert isinstance(reading, Reading), text
    assert not reading.doubtful
    assert reading.others == ()


@pytest.mark.parametrize(
    "name",
    ["Concrete C30/37", "CONCRETE", "in situ concrete", "Beton C30/37", "Stahlbeton", "béton armé",
     "Hormigón HA-30", "hormigon", "Calcestruzzo", "concreto", "Betong B35"],
)  # fmt: skip
def test_what_the_requirement_takes_for_concrete_is_concrete(name: str) -> None:
    (of_material,) = {s.of_material for s in specifications()[1:2]}
    assert of_material
    assert of_material(name)
    assert CONCRETE in families_of_material(name)


def test_bounds_are_those_that_the_reading_believes() -> None:
    factors = {"Cover": 1e3, "BarYield": 1e-6, "StirrupYield": 1e-6}
    root = ElementTree.fromstring(requirement_bytes())
    own = {name: field for field, name in OWN_PROPERTIES.items()}
    seen = set()
    for element in root.iterfind(".//ids:property", SPACES):
        name = element.findtext("ids:baseName/ids:simpleValue", "", SPACES)
        least = element.find("ids:value/xs:restriction/xs:minInclusive", SPACES)
        most = element.find("ids:value/xs:restriction/xs:maxInclusive", SPACES)
        if least is not None and most is not None:
            low, high = (float(e.attrib["value"]) * factors[name] for e in (least, most))
            assert LIMITS[own[name]][0] <= low < high <= LIMITS[own[name]][1]
            seen.add(name)
    assert seen == set(factors)


def test_every_property_of_the_own_set_is_asked_for() -> None:
    asked = {a.name for s in specifications() for a in s.asked if a.property_set == OWN_SET}
    assert asked == set(OWN_PROPERTIES.values())


def test_a_beam_that_meets_it_is_rated_with_nothing_but_a_brief(tmp_path: Path) -> None:
    """What is asked is enough: the brief adds loads, yields and supports."""
    path, brief_path = write(tmp_path, hall(Beam(notation=GIVEN)), brief())
    file = ifcopenshell.open(str(path))
    (beam,) = file.by_type("IfcBeam")
    add_set(file, beam, "Pset_ConcreteElementGeneral", {"StrengthClass": ("IfcLabel", "C30/37")})
    held = next(s for s in file.by_type("IfcPropertySet") if s.Name == OWN_SET)
    cover = file.create_entity("IfcPositiveLengthMeasure", 40.0)
    held.HasProperties = [
        *held.HasProperties, file.create_entity("IfcPropertySingleValue", "Cover", None, cover),
    ]  # fmt: skip
    file.write(str(path))
    opened = open_model(path)
    assert set(unmet_requirements(opened, read_model(opened, {}).beams).values()) == {()}
    silent = brief_path.read_text().replace('concrete_strength = "30 MPa"\n', "")
    brief_path.write_text(silent.replace('cover = "40 mm"\n', ""))
    (rating,) = rate([path], brief_path).reports[0].ratings.values()
    assert (rating.verdict, rating.reasons) == (Verdict.ADEQUATE, ())


# The command -------------------------------------------------------------------------------------


def test_it_is_written_for_the_modeller_and_never_over_a_file(tmp_path: Path) -> None:
    target = tmp_path / "for the modeller.ids"
    done = CliRunner().invoke(main, ["requirement", str(target)])
    assert (done.exit_code, done.stdout) == (0, f"  {target}\n")
    assert target.read_bytes() == requirement_bytes()
    target.write_text("mine")
    done = CliRunner().invoke(main, ["requirement", str(target)])
    assert (done.exit_code, done.stdout) == (2, "")
    assert "exists already" in done.stderr
    assert target.read_text() == "mine"


def test_a_place_that_cannot_be_written_is_told(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("")
    done = CliRunner().invoke(main, ["requirement", str(tmp_path / "file" / "x.ids")])
    assert (done.exit_code, done.stdout, done.stderr.count("\n")) == (1, "", 1)
    assert "cannot be written" in done.stderr
    assert "--out" not in done.stderr

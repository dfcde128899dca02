"""Materials wherever models state them: strengths, densities and grades in any unit.

Factors of units are written out from their definitions: 1 lbf = 4.4482216152605 N,
1 in = 25.4 mm, 1 kgf = 9.80665 N.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from pathlib import Path
from typing import Any

import ifcopenshell
import pytest

from ifccheck.beam import Beam, Verdict
from ifccheck.ifc.bar_sizes import settle_grade
from ifccheck.ifc.section_bars import read_bars
from ifccheck.ifc.units import read_units
from ifccheck.pipeline import rate
from tests import step_halls
from tests.barred_beams import ModelWithBars, straight
from tests.ifc_models import Building, only_beam
from tests.step_halls import BASIS, LOAD, NOTATION, Bar, brief, hall, write

SCHEMAS = ("IFC2X3", "IFC4", "IFC4X3")
PSI = 4.4482216152605 / 25.4**2
"""MPa"""
PRESSURES = {
    "Pa": 1e-6,
    "kPa": 1e-3,
    "MPa": 1.0,
    "psi": PSI,
    "ksi": 1000.0 * PSI,
    "kgf/cm2": 0.0980665,
    "N/mm2 derived": 1.0,
    "kip/in2 derived": 1000.0 * PSI,
}


def pressure_unit(building: Building, name: str) -> Any:
    """A unit of pressure: SI, conversion-based or derived."""
    pascal = building.si("PRESSUREUNIT", "PASCAL")
    if name in ("Pa", "kPa", "MPa"):
        prefix = {"Pa": None, "kPa": "KILO", "MPa": "MEGA"}[name]
        return building.si("PRESSUREUNIT", "PASCAL", prefix)
    if not name.endswith("derived"):
        return building.conversion("PRESSUREUNIT", name, PRESSURES[name] * 1e6, pascal)
    newton, metre = building.si("FORCEUNIT", "NEWTON"), building.si("LENGTHUNIT", "METRE")
    if name.startswith("N"):
        force, length = newton, building.si("LENGTHUNIT", "METRE", "MILLI")
    else:
        force = building.conversion("FORCEUNIT", "kip", 4448.2216152605, newton)
        length = building.conversion("LENGTHUNIT", "INCH", 0.0254, metre)
    parts = [building.entity("IfcDerivedUnitElement", *each) for each in ((force, 1), (length, -2))]
    return building.entity("IfcDerivedUnit", parts, "USERDEFINED")


def declare_pressure(building: Building, name: str | None) -> None:
    """Declare a unit of pressure in place of the one there is, or none."""
    assignment = building.project.UnitsInContext
    others = [unit for unit in assignment.Units if unit.UnitType != "PRESSUREUNIT"]
    units = [*others, pressure_unit(building, name)] if name else others
    if name and name.endswith("derived"):
        units[-1].UnitType = "MODULUSOFELASTICITYUNIT"
    assignment.Units = units


def solid(building: Building) -> Any:
    return building.extrusion(building.rectangle(), 6000.0, z=(1, 0, 0), x=(0, 1, 0))


def give_properties(building: Building, material: Any, name: str, *singles: Any) -> None:
    """A property set of a material, in the way of the schema."""
    if building.history is None:
        building.entity("IfcMaterialProperties", name, None, list(singles), material)
    else:
        building.entity(
            "IfcExtendedMaterialProperties",
            Material=material,
            ExtendedProperties=list(singles),
            Name=name,
        )


def single(building: Building, name: str, measure: str, value: Any, unit: Any = None) -> Any:
    return building.entity(
        "IfcPropertySingleValue", name, None, building.entity(measure, value), unit
    )


# Places of a strength ----------------------------------------------------------------------------


def on_beam_as_class(building: Building, beam: Any, material: Any) -> None:
    label = building.entity("IfcLabel", "C32/40")
    building.give_set(beam, "Pset_ConcreteElementGeneral", StrengthClass=label)


def on_type_as_class(building: Building, beam: Any, material: Any) -> None:
    label = single(building, "StrengthClass", "IfcLabel", "C32/40")
    held = building.root(
        "IfcPropertySet", Name="Pset_ConcreteElementGeneral", HasProperties=[label]
    )
    building.give_type(beam, HasPropertySets=[held], PredefinedType="BEAM")


def on_beam_as_pressure(building: Building, beam: Any, material: Any) -> None:
    value = single(building, "CompressiveStrength", "IfcPressureMeasure", 32e6)
    building.give_set(beam, "Pset_MaterialConcrete", a=value)


def on_material_as_pressure(building: Building, beam: Any, material: Any) -> None:
    value = single(building, "CompressiveStrength", "IfcPressureMeasure", 32e6)
    give_properties(building, material, "Pset_MaterialConcrete", value)


def on_material_as_class(building: Building, beam: Any, material: Any) -> None:
    value = single(building, "StrengthClass", "IfcLabel", "C32/40")
    give_properties(building, material, "Pset_MaterialConcrete", value)


def in_name(building: Building, beam: Any, material: Any) -> None:
    material.Name = "Concrete C32/40"


PLACES: list[Callable[[Building, Any, Any], None]] = [
    on_beam_as_class, on_type_as_class, on_beam_as_pressure, on_material_as_pressure,
    on_material_as_class, in_name,
]  # fmt: skip


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("place", PLACES, ids=lambda place: place.__name__)
def test_a_strength_is_read_wherever_it_stands(
    schema: str, place: Callable[[Building, Any, Any], None]
) -> None:
    building = Building(schema)
    material = building.entity("IfcMaterial", "Concrete")
    beam = building.beam(solid(building), material="")
    building.give_material(beam, material)
    place(building, beam, material)
    found = only_beam(building.read())
    assert found.concrete_strength is not None
    assert found.concrete_strength.value == pytest.approx(32.0)
    assert not found.remarks


# Units -------------------------------------------------------------------------------------------


def with_pressure(schema: str, value: float, declared: str | None, own: str | None = None) -> Beam:
    building = Building(schema)
    declare_pressure(building, declared)
    material = building.entity("IfcMaterial", "Concrete")
    building.give_material(building.beam(solid(building), material=""), material)
    unit = pressure_unit(building, own) if own else None
    given = single(building, "CompressiveStrength", "IfcPressureMeasure", value, unit)
    give_properties(building, material, "Pset_MaterialConcrete", given)
    return only_beam(building.read())


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("unit", [name for name in PRESSURES if "derived" not in name])
def test_a_strength_in_the_models_unit_of_pressure(schema: str, unit: str) -> None:
    beam = with_pressure(schema, 32.0 / PRESSURES[unit], unit)
    assert beam.concrete_strength is not None
    assert beam.concrete_strength.value == pytest.approx(32.0, rel=1e-6)


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("unit", PRESSURES)
@pytest.mark.parametrize("declared", ["Pa", "psi", None])
def test_a_strength_with_a_unit_of_its_own(schema: str, unit: str, declared: str | None) -> None:
    beam = with_pressure(schema, 32.0 / PRESSURES[unit], declared, unit)
    assert beam.concrete_strength is not None
    assert beam.concrete_strength.value == pytest.approx(32.0, rel=1e-6)


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("value", [32.0, 4.6, 4641.0, 326.0, 32_000.0])
def test_a_strength_without_a_declared_unit_is_never_guessed(schema: str, value: float) -> None:
    """32 MPa, and the same in ksi, psi, kgf/cm2 and kPa: none of them says which it is."""
    beam = with_pressure(schema, value, None)
    assert beam.concrete_strength is None
    assert beam.strength_reason is not None
    assert beam.strength_reason.blocking


@pytest.mark.parametrize("schema", SCHEMAS)
def test_a_strength_that_only_pascals_bear_out_is_told_to_be_taken_so(schema: str) -> None:
    beam = with_pressure(schema, 32e6, None)
    assert beam.concrete_strength is not None
    assert beam.concrete_strength.value == pytest.approx(32.0)
    assert beam.concrete_strength.source.endswith("(no unit declared, taken in SI units)")
    declared = with_pressure(schema, 32e6, "Pa").concrete_strength
    assert declared is not None
    assert "no unit" not in declared.source


def test_a_pressure_whose_unit_is_none_is_a_reason() -> None:
    building = Building()
    material = building.entity("IfcMaterial", "Concrete")
    building.give_material(building.beam(solid(building), material=""), material)
    newton = building.si("FORCEUNIT", "NEWTON")
    given = single(building, "CompressiveStrength", "IfcPressureMeasure", 32e6, newton)
    give_properties(building, material, "Pset_MaterialConcrete", given)
    assert only_beam(building.read()).strength_reason is not None


@pytest.mark.parametrize(
    ("measure", "value", "strength"),
    [
        ("IfcLabel", "4000 psi", 4000.0 * PSI),
        ("IfcText", "f'c = 5 ksi", 5000.0 * PSI),
        ("IfcLabel", "300 kgf/cm2", 29.41995),
        ("IfcLabel", "35 N/mm2", 35.0),
        ("IfcReal", 35.0, 28.0),  # a number alone can be a cube strength
        ("IfcReal", 35.0e6, None),
        ("IfcInteger", 40, 32.0),
    ],
)
def test_a_strength_that_is_no_pressure_is_read_as_a_text(
    measure: str, value: Any, strength: float | None
) -> None:
    building = Building()
    material = building.entity("IfcMaterial", "Concrete")
    building.give_material(building.beam(solid(building), material=""), material)
    given = single(building, "CompressiveStrength", measure, value)
    give_properties(building, material, "Pset_MaterialConcrete", given)
    found = only_beam(building.read())
    if strength is None:
        assert found.strength_reason is not None
    else:
        assert found.concrete_strength is not None
        assert found.concrete_strength.value == pytest.approx(strength, rel=1e-6)


# Definitions of several materials ----------------------------------------------------------------


def definitions(building: Building, first: Any, second: Any) -> dict[str, Any]:
    """Every definition that holds two materials, by the class that is given to the beam."""
    make = building.entity
    layers = [make("IfcMaterialLayer", one, 100.0) for one in (first, second)]
    layer_set = make("IfcMaterialLayerSet", layers, "wall")
    usage = make("IfcMaterialLayerSetUsage", layer_set, "AXIS2", "POSITIVE", 0.0)
    found = {
        "IfcMaterialList": make("IfcMaterialList", [first, second]),
        "IfcMaterialLayerSet": layer_set,
        "IfcMaterialLayerSetUsage": usage,
    }
    if building.history is None:
        parts = [make("IfcMaterialConstituent", name, None, one)
                 for name, one in (("core", first), ("shell", second))]  # fmt: skip
        found["IfcMaterialConstituentSet"] = make("IfcMaterialConstituentSet", None, None, parts)
        profiles = [make("IfcMaterialProfile", None, None, one, building.rectangle())
                    for one in (first, second)]  # fmt: skip
        profile_set = make("IfcMaterialProfileSet", None, None, profiles)
        found["IfcMaterialProfileSet"] = profile_set
        found["IfcMaterialProfileSetUsage"] = make("IfcMaterialProfileSetUsage", profile_set)
    return found


@pytest.mark.parametrize("schema", SCHEMAS)
def test_the_weakest_of_several_materials_counts_in_any_definition(schema: str) -> None:
    kinds = set(definitions(*_two_concretes(schema)))
    assert len(kinds) == (3 if schema == "IFC2X3" else 6)
    for kind in sorted(kinds):
        building, first, second = _two_concretes(schema)
        given = definitions(building, first, second)[kind]
        building.give_material(building.beam(solid(building), material=""), given)
        found = only_beam(building.read())
        assert found.concrete_strength is not None, kind
        assert found.concrete_strength.value == pytest.approx(25.0), kind
        assert "differs between sources" in found.remarks[0].text


def _two_concretes(schema: str) -> tuple[Building, Any, Any]:
    building = Building(schema)
    first = building.entity("IfcMaterial", "Concrete C30/37")
    return building, first, building.entity("IfcMaterial", "Concrete C25/30")


@pytest.mark.parametrize("schema", ["IFC4", "IFC4X3"])
@pytest.mark.parametrize("holder", ["the set", "a part"])
def test_properties_of_a_set_of_materials_and_of_its_parts_count(schema: str, holder: str) -> None:
    for kind in ("IfcMaterialLayerSet", "IfcMaterialConstituentSet", "IfcMaterialProfileSet"):
        building = Building(schema)
        one = building.entity("IfcMaterial", "Concrete")
        given = definitions(building, one, one)[kind]
        parts = given[0] if kind == "IfcMaterialLayerSet" else given[2]
        building.give_material(building.beam(solid(building), material=""), given)
        value = single(building, "CompressiveStrength", "IfcPressureMeasure", 27e6)
        weight = single(building, "MassDensity", "IfcMassDensityMeasure", 1900.0)
        held = given if holder == "the set" else parts[0]
        give_properties(building, held, "Pset_MaterialConcrete", value)
        give_properties(building, held, "Pset_MaterialCommon", weight)
        found = only_beam(building.read())
        assert found.concrete_strength is not None, kind
        assert found.concrete_strength.value == pytest.approx(27.0), kind
        assert found.concrete_density is not None
        assert found.concrete_density.value == pytest.approx(1900.0)


# Density -----------------------------------------------------------------------------------------


@pytest.mark.parametrize(("density", "factor"), [(2400.0, 1.0), (1900.0, 0.85), (1700.0, 0.75)])
def test_a_stated_density_lowers_what_rests_on_the_tension_of_concrete(
    tmp_path: Path, density: float, factor: float
) -> None:
    """CSA A23.3-14, 8.6.5, from memory: 1.00, 0.85 and 0.75; Vc is in proportion to it."""
    text = hall(step_halls.Beam(notation={**NOTATION, "Stirrups": "none"}))
    (number,) = re.findall(r"#(\d+)=IFCMATERIAL\(", text.replace("Concrete C30/37 col", ""))
    more = (
        f"#90=IFCPROPERTYSINGLEVALUE('MassDensity',$,IFCMASSDENSITYMEASURE({density}),$);\n"
        f"#91=IFCMATERIALPROPERTIES('Pset_MaterialCommon',$,(#90),#{number});\n"
    )
    resistances = []
    for name, model in (("plain", text), ("stated", text.replace("#100=", more + "#100=", 1))):
        folder = tmp_path / name
        folder.mkdir()
        paths = write(folder, model, brief(basis=BASIS + 'shear_method = "simplified"\n'))
        (rating,) = rate([paths[0]], paths[1]).reports[0].ratings.values()
        (shear,) = [each for each in rating.limit_states if each.name == "Shear"]
        resistances.append(shear.resistance)
    assert resistances[1] / resistances[0] == pytest.approx(factor, rel=1e-6)


# Steel -------------------------------------------------------------------------------------------


def grade_attribute(model: ModelWithBars, bar: Any) -> None:
    bar.SteelGrade = "350R"


def grade_property(model: ModelWithBars, bar: Any) -> None:
    model.properties(
        bar, "Office_Bars", {"Steel Grade": model.file.create_entity("IfcLabel", "350")}
    )


def yield_property(model: ModelWithBars, bar: Any) -> None:
    stress = model.file.create_entity("IfcPressureMeasure", 350.0)
    model.properties(bar, "Office_Bars", {"YieldStrength": stress})


def _type(model: ModelWithBars, bar: Any, **attributes: Any) -> None:
    if model.schema == "IFC2X3":
        kind = model.root("IfcBuildingElementProxyType", PredefinedType="NOTDEFINED", **attributes)
    else:
        kind = model.root("IfcReinforcingBarType", PredefinedType="MAIN", **attributes)
    model.root("IfcRelDefinesByType", RelatedObjects=[bar], RelatingType=kind)


def type_name(model: ModelWithBars, bar: Any) -> None:
    _type(model, bar, Name="Bar 350R")


def type_property(model: ModelWithBars, bar: Any) -> None:
    label = model.file.create_entity("IfcLabel", "350")
    single = model.file.create_entity("IfcPropertySingleValue", "Grade", None, label, None)
    _type(
        model, bar, HasPropertySets=[model.root("IfcPropertySet", Name="S", HasProperties=[single])]
    )


def _steel(model: ModelWithBars, bar: Any, name: str) -> Any:
    steel = model.file.create_entity("IfcMaterial", name)
    model.root("IfcRelAssociatesMaterial", RelatedObjects=[bar], RelatingMaterial=steel)
    return steel


def material_name(model: ModelWithBars, bar: Any) -> None:
    _steel(model, bar, "Rebar 350R")


def material_strength(model: ModelWithBars, bar: Any) -> None:
    create, steel = model.file.create_entity, _steel(model, bar, "Rebar")
    if model.schema == "IFC2X3":
        create("IfcMechanicalSteelMaterialProperties", Material=steel, YieldStress=350.0)
    else:
        value = create("IfcPressureMeasure", 350.0)
        single = create("IfcPropertySingleValue", "YieldStress", None, value, None)
        create("IfcMaterialProperties", "Pset_MaterialSteel", None, [single], steel)


def material_grade(model: ModelWithBars, bar: Any) -> None:
    create, steel = model.file.create_entity, _steel(model, bar, "Rebar")
    label = create("IfcLabel", "350R")
    single = create("IfcPropertySingleValue", "StructuralGrade", None, label, None)
    if model.schema == "IFC2X3":
        create(
            "IfcExtendedMaterialProperties", Material=steel, ExtendedProperties=[single], Name="S"
        )
    else:
        create("IfcMaterialProperties", "S", None, [single], steel)


GRADES: list[Callable[[ModelWithBars, Any], None]] = [
    grade_attribute, grade_property, yield_property, type_name, type_property, material_name,
    material_strength, material_grade,
]  # fmt: skip


def bar_of(schema: str) -> tuple[ModelWithBars, Any, Any]:
    model = ModelWithBars(schema=schema)
    beam = model.beam()
    (bar,) = model.bars(beam, straight(50, 5950, 0, 60), diameter=20.0)
    return model, beam, bar


@pytest.mark.parametrize("schema", SCHEMAS)
@pytest.mark.parametrize("place", GRADES, ids=lambda place: place.__name__)
def test_a_grade_is_read_wherever_it_stands(
    schema: str, place: Callable[[ModelWithBars, Any], None]
) -> None:
    model, beam, bar = bar_of(schema)
    place(model, bar)
    (bars,) = model.read(beam).bars
    assert bars.yield_strength is not None
    assert bars.yield_strength.value == pytest.approx(350.0)


@pytest.mark.parametrize("place", GRADES[1:], ids=lambda place: place.__name__)
def test_the_lowest_of_two_grades_counts_wherever_it_stands(
    place: Callable[[ModelWithBars, Any], None],
) -> None:
    model, beam, bar = bar_of("IFC4")
    bar.SteelGrade = "500W"
    place(model, bar)
    found = model.read(beam)
    assert found.bars[0].yield_strength is not None
    assert found.bars[0].yield_strength.value == pytest.approx(350.0)
    assert "yield strengths differ" in found.remarks


@pytest.mark.parametrize(
    ("texts", "unread"),
    [
        ([("grade", "A240")], "grade 'A240'"),
        ([("Office.Grade", "CA-50")], "Office.Grade 'CA-50'"),
        ([("material 'Rebar' S.YieldStress", "0.0004 MPa")], "0.0004 MPa"),
        ([("grade", "STEEL")], ""),
        ([("grade", "A240"), ("material", "B500B")], ""),
        ([("material", "Mix 12"), ("name", "Rebar 16")], ""),
    ],
)
def test_a_grade_that_is_stated_and_cannot_be_read_is_no_silence(
    texts: list[tuple[str, str]], unread: str
) -> None:
    grade = settle_grade(texts)
    assert unread in grade.unread
    assert bool(unread) == bool(grade.unread)
    assert (grade.given is not None and math.isnan(grade.given.value)) == bool(unread)


@pytest.mark.parametrize(
    ("grade", "entry", "rated"),
    [
        ("A240", "", False),
        ("A240", 'bar_yield = "240 MPa"\n', True),
        ("STEEL", "", True),
        ("400W", "", True),
    ],
)
def test_no_default_fills_a_grade_that_cannot_be_read(
    tmp_path: Path, grade: str, entry: str, rated: bool
) -> None:
    bars = [Bar(y=y, z=60.0, start=-50.0, end=6050.0) for y in (-90.0, 0.0, 90.0)]
    text = hall(step_halls.Beam(notation=None, bars=bars)).replace("'400W'", f"'{grade}'")
    entries = [LOAD, f'[[materials]]\nbeams = ["B-*"]\n{entry}'] if entry else [LOAD]
    paths = write(tmp_path, text, brief(*entries))
    (rating,) = rate([paths[0]], paths[1]).reports[0].ratings.values()
    assert (rating.verdict is not Verdict.NOT_RATED) is rated
    told = "; ".join(reason.text for reason in rating.reasons)
    assert ("yield strength of the bars cannot be read from grade 'A240'" in told) is not rated


def test_a_grade_of_a_section_definition_that_cannot_be_read_is_no_silence() -> None:
    make = ifcopenshell.file(schema="IFC4").create_entity
    entity = make("IfcReinforcementBarProperties", 3 * 300e-6, "A240", None, None, 0.0195, 3.0)
    units = read_units(Building("IFC4", "METRE").file)
    assert math.isnan(read_bars(entity, units).yield_strength or 0.0)
    entity.SteelGrade = "400W"
    assert read_bars(entity, units).yield_strength == 400.0

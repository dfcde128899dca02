"""Units, relationships, placements and properties: what is gathered of a model once."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import ifcopenshell
import ifcopenshell.util.element
import ifcopenshell.util.placement
import ifcopenshell.util.unit
import numpy as np
import pytest
from pint import UnitRegistry

from ifccheck.errors import ModelError
from ifccheck.ifc.bodies import body_items, read_prism
from ifccheck.ifc.context import Context, make_context
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.units import read_units, scale_of
from tests.ifc_models import Building, volume_and_points

PINT = UnitRegistry()
MODELS = (
    "01_ifc4x3_beam_34_stirrups.ifc",
    "03_ifc2x3_precast_mixed_rebar.ifc",
    "05_ifc2x3_structural_timber_steel.ifc",
    "06_ifc2x3_bridge_concrete.ifc",
    "08_ifc4x3_grid_concrete_beams.ifc",
    "16_ifc4_timber_mapped_negz.ifc",
)


def context_of(file: Any) -> Context:
    return make_context(file, str(file.schema))


@pytest.fixture(params=MODELS)
def opened(request: pytest.FixtureRequest, open_models: Path) -> Any:
    return ifcopenshell.open(str(open_models / request.param))


# units


def test_inch_model_by_others_in_its_own_units(open_models: Path) -> None:
    """Factors by pint; the model rounds its square inch to 0.0006452 m2."""
    units = read_units(ifcopenshell.open(str(open_models / "09_ifc4x3_analysis_inch.ifc")))
    assert units.length == pytest.approx(25.4)
    assert units.force == pytest.approx(PINT("1 lbf").to("N").magnitude, rel=1e-6)
    assert units.pressure == pytest.approx(PINT("1 psi").to("MPa").magnitude, rel=1e-5)
    assert units.line_force == pytest.approx(PINT("1 lbf/inch").to("N/mm").magnitude, rel=1e-6)
    assert units.area == pytest.approx(645.16, rel=1e-4)
    assert units.density == pytest.approx(PINT("1 lb/inch**3").to("kg/m**3").magnitude, rel=1e-3)
    assert units.angle == pytest.approx(math.pi / 180)
    assert "moment" not in units.declared  # a moment per angle or per length is none


@pytest.mark.parametrize(
    ("kind", "name", "prefix", "factor"),
    [
        ("LENGTHUNIT", "METRE", "CENTI", 10.0),
        ("AREAUNIT", "SQUARE_METRE", "MILLI", 1.0),
        ("AREAUNIT", "SQUARE_METRE", "CENTI", 100.0),
        ("VOLUMEUNIT", "CUBIC_METRE", "CENTI", 1000.0),
        ("FORCEUNIT", "NEWTON", "KILO", 1000.0),
        ("PRESSUREUNIT", "PASCAL", "MEGA", 1.0),
        ("PRESSUREUNIT", "PASCAL", None, 1e-6),
        ("MASSUNIT", "GRAM", "KILO", 1.0),
        ("PLANEANGLEUNIT", "RADIAN", None, 1.0),
    ],
)
def test_si_units_with_prefixes(kind: str, name: str, prefix: str | None, factor: float) -> None:
    building = Building()
    assert scale_of(building.si(kind, name, prefix))[1] == pytest.approx(factor)


def test_conversion_based_and_derived_units() -> None:
    building = Building()
    newton = building.si("FORCEUNIT", "NEWTON")
    kip = building.conversion("FORCEUNIT", "kip", 4448.2216152605, newton)
    foot = building.conversion("LENGTHUNIT", "FOOT", 0.3048, building.si("LENGTHUNIT", "METRE"))
    inch = building.conversion("LENGTHUNIT", "INCH", 1 / 12, foot)

    def derived(kind: str, *parts: tuple[Any, int]) -> Any:
        elements = [building.entity("IfcDerivedUnitElement", *part) for part in parts]
        return building.entity("IfcDerivedUnit", elements, kind)

    assert scale_of(inch)[1] == pytest.approx(25.4)
    assert scale_of(derived("LINEARFORCEUNIT", (kip, 1), (foot, -1))) == (
        "line_force",
        pytest.approx(PINT("1 kip/ft").to("N/mm").magnitude),
    )
    assert scale_of(derived("TORQUEUNIT", (kip, 1), (foot, 1))) == (
        "moment",
        pytest.approx(PINT("1 kip*ft").to("N*mm").magnitude),
    )
    assert scale_of(derived("USERDEFINED", (kip, 1), (inch, -2))) == (
        "pressure",
        pytest.approx(PINT("1 ksi").to("MPa").magnitude, rel=1e-6),
    )
    with pytest.raises(UnreadableError, match="other dimensions"):
        scale_of(derived("LINEARFORCEUNIT", (kip, 1), (foot, -2)))


def test_missing_kinds_are_not_declared() -> None:
    units = read_units(Building().file)
    assert units.declared == {"length", "area", "angle", "pressure"}
    assert units.force == 1.0


def test_length_scale_agrees_with_the_library(opened: Any) -> None:
    expected = ifcopenshell.util.unit.calculate_unit_scale(opened) * 1000
    assert read_units(opened).length == pytest.approx(expected)


def test_model_without_a_length_unit_is_an_error_that_names_it() -> None:
    building = Building()
    building.beam(building.extrusion(building.rectangle(), 6000.0, z=(1, 0, 0)))
    building.project.UnitsInContext.Units = [building.si("PLANEANGLEUNIT", "RADIAN")]
    with pytest.raises(ModelError, match=r"made\.ifc: declares no unit of length"):
        building.read()


# relationships


def test_parts_through_several_relations_and_nesting() -> None:
    building = Building()
    whole, first, second, nested = (building.member("IfcBeam") for _ in range(4))
    building.give_parts(whole, first)
    building.give_parts(whole, second)
    building.root("IfcRelNests", RelatingObject=second, RelatedObjects=[nested])
    relations = context_of(building.file).relations
    assert set(relations.parts[whole.id()]) == {first.id(), second.id()}
    assert set(relations.descendants(whole.id())) == {first.id(), second.id(), nested.id()}
    assert list(relations.ancestors(nested.id())) == [second.id(), whole.id()]


def test_circles_of_parts_come_to_an_end() -> None:
    building = Building()
    first, second = building.member("IfcBeam"), building.member("IfcBeam")
    building.give_parts(first, second)
    building.give_parts(second, first)
    relations = context_of(building.file).relations
    assert list(relations.ancestors(first.id())) == [second.id()]
    assert set(relations.descendants(first.id())) == {second.id()}
    assert relations.container(first.id()) is None


def test_relations_agree_with_the_library(opened: Any) -> None:
    relations = context_of(opened).relations
    element = ifcopenshell.util.element
    for product in opened.by_type("IfcBeam")[:60]:
        step_id = product.id()
        defined = element.get_type(product)
        assert relations.type_of(step_id) == (defined.id() if defined else None)
        container = element.get_container(product)
        assert relations.container(step_id) == (container.id() if container else None)
        material = element.get_material(product)
        assert relations.material_of(step_id) == (material.id() if material else None)
        parts = {part.id() for part in element.get_decomposition(product)}
        assert (
            set(relations.descendants(step_id)) | set(relations.openings.get(step_id, ())) == parts
        )


# placements


def test_placements_agree_with_the_library(opened: Any) -> None:
    placements = context_of(opened).placements
    scale = ifcopenshell.util.unit.calculate_unit_scale(opened) * 1000
    for product in opened.by_type("IfcProduct"):
        placement = product.ObjectPlacement
        if placement is None or not placement.is_a("IfcLocalPlacement"):
            continue
        expected = ifcopenshell.util.placement.get_local_placement(placement)
        expected[:3, 3] *= scale
        assert placements.matrix(product) == pytest.approx(expected, abs=1e-6)


def test_grid_placement_stands_where_the_axes_cross(open_models: Path) -> None:
    """The model's columns stand on the 5 x 5 crossings of its grid, which it lists as polylines."""
    file = ifcopenshell.open(str(open_models / "08_ifc4x3_grid_concrete_beams.ifc"))
    placements = context_of(file).placements
    (grid,) = file.by_type("IfcGrid")
    lines = {}
    for name in ("UAxes", "VAxes"):
        lines[name] = [
            np.array([p.Coordinates for p in a.AxisCurve.Points]) for a in getattr(grid, name)
        ]
    fixed = {
        name: next(n for n in (0, 1) if np.ptp(axes[0][:, n]) == 0.0)
        for name, axes in lines.items()
    }
    assert sorted(fixed.values()) == [0, 1]
    crossings = set()
    for u in lines["UAxes"]:
        for v in lines["VAxes"]:
            place = [0.0, 0.0]
            place[fixed["UAxes"]] = u[0, fixed["UAxes"]]
            place[fixed["VAxes"]] = v[0, fixed["VAxes"]]
            crossings.add((round(place[0], 3), round(place[1], 3)))
    offset = placements.matrix(grid)[:2, 3]
    found = {
        tuple(np.round(placements.matrix(column)[:2, 3] - offset, 3).tolist())
        for column in file.by_type("IfcColumn")
    }
    assert found == crossings


def test_grid_offsets_and_skew_axes() -> None:
    """Lines y = 0 and y = x - 1000, each moved 100 to its left."""
    building = Building("IFC4")
    first = building.entity("IfcPolyline", [building.point(0, 0), building.point(1000, 0)])
    second = building.entity("IfcPolyline", [building.point(1000, 0), building.point(2000, 1000)])
    u, v = (building.entity("IfcGridAxis", "A", curve, True) for curve in (first, second))
    building.root("IfcGrid", UAxes=[u], VAxes=[v], ObjectPlacement=building.placement((0, 0, 500)))
    crossing = building.entity("IfcVirtualGridIntersection", [u, v], [100.0, 100.0, 50.0])
    product = building.member("IfcColumn")
    product.ObjectPlacement = building.entity("IfcGridPlacement", crossing)
    matrix = context_of(building.file).placements.matrix(product)
    assert matrix[:3, 3] == pytest.approx((1100 - 100 * math.sqrt(2), 100.0, 550.0))
    assert matrix[:3, 0] == pytest.approx((1, 0, 0))


def test_linear_placement_by_its_cartesian_position() -> None:
    building = Building("IFC4X3")
    product = building.member("IfcColumn")
    product.ObjectPlacement = building.entity(
        "IfcLinearPlacement", CartesianPosition=building.axes((10, 20, 30), (0, 0, 1), (0, 1, 0))
    )
    other = building.member("IfcColumn")
    other.ObjectPlacement = building.entity("IfcLinearPlacement")
    placements = context_of(building.file).placements
    assert placements.matrix(product)[:3, 3] == pytest.approx((10, 20, 30))
    with pytest.raises(UnreadableError, match="without a Cartesian position"):
        placements.matrix(other)


def test_placement_that_refers_to_itself_is_a_reason() -> None:
    building = Building()
    product = building.beam(building.extrusion(building.rectangle(), 6000.0, z=(1, 0, 0)))
    product.ObjectPlacement.PlacementRelTo = building.placement(within=product.ObjectPlacement)
    (beam,) = building.read().beams
    assert "refers to itself" in beam.reasons[0].text


def corners_of(building: Building, product: Any) -> np.ndarray:
    """Corners of an extruded product as it is read, before any cut."""
    context = context_of(building.file)
    (placed,) = body_items(context, product)
    return read_prism(context, Profiles(context.placements), placed).corners()


def assert_same_corners(building: Building, product: Any) -> None:
    _, expected = volume_and_points(product)
    found = corners_of(building, product)
    apart = np.linalg.norm(found[:, None, :] - expected[None, :, :], axis=2)
    assert apart.min(axis=0).max() < 1e-3
    assert apart.min(axis=1).max() < 1e-3


@pytest.mark.parametrize("seed", range(10))
def test_axes_that_are_not_square_agree_with_the_engine(seed: int) -> None:
    rng = np.random.default_rng(seed)
    building = Building()
    (z, x, inner_z, inner_x), at = rng.normal(size=(4, 3)).tolist(), rng.normal(size=3) * 1000
    solid = building.extrusion(building.rectangle(), 2000.0, z=inner_z, x=inner_x)
    product = building.member("IfcColumn", solid, placement=building.placement(at, z, x))
    assert_same_corners(building, product)


@pytest.mark.parametrize("seed", range(10))
def test_transformation_operators_agree_with_the_engine(seed: int) -> None:
    """Axes at random, some left out; scaled alike or differently along each."""
    rng = np.random.default_rng(seed)
    building = Building()
    operator: dict[str, Any] = {
        name: building.direction(rng.normal(size=3))
        for name in ("Axis1", "Axis2", "Axis3")
        if rng.random() < 0.8
    }
    operator["Scale"] = 0.5
    if seed % 2:
        operator |= {"Scale2": 2.0, "Scale3": 1.5}
    operator["LocalOrigin"] = building.point(*(rng.normal(size=3) * 1000))
    solid = building.extrusion(building.rectangle(), 2000.0, z=(1, 2, 3), x=(0, 1, 0))
    product = building.member("IfcColumn", building.mapped(solid, **operator))
    assert_same_corners(building, product)


def test_mapping_origin_that_is_moved_and_turned_agrees_with_the_engine() -> None:
    building = Building()
    solid = building.extrusion(building.rectangle(), 2000.0, z=(1, 2, 3), x=(0, 1, 0))
    origin = building.axes((100, 200, 300), (1, 0, 0), (0, 0, 1))
    operator = {"Axis1": building.direction((0, 1, 0)), "LocalOrigin": building.point(1000, 0, 0)}
    product = building.member("IfcColumn", building.mapped(solid, origin=origin, **operator))
    assert_same_corners(building, product)


# properties


def test_properties_agree_with_the_library(opened: Any) -> None:
    properties = context_of(opened).properties
    for product in opened.by_type("IfcBeam")[:25]:
        expected = ifcopenshell.util.element.get_psets(product)
        found = properties.of(product.id())
        assert set(found) == set(expected)
        for name, values in expected.items():
            del values["id"]
            assert {key: value.value for key, value in found[name].items()} == values


def test_occurrence_goes_before_its_type() -> None:
    building = Building("IFC4")
    beam = building.beam()
    text = building.file.create_entity
    building.give_set(beam, "Set", A=text("IfcLabel", "own"))
    held = building.root(
        "IfcPropertySet",
        Name="Set",
        HasProperties=[
            building.entity("IfcPropertySingleValue", "A", None, text("IfcLabel", "type")),
            building.entity("IfcPropertySingleValue", "B", None, text("IfcLabel", "type")),
        ],
    )
    building.give_type(beam, Name="T", PredefinedType="BEAM", HasPropertySets=[held])
    values = context_of(building.file).properties.of(beam.id())["Set"]
    assert (values["A"].value, values["B"].value) == ("own", "type")


def test_set_of_definitions_in_one_relation() -> None:
    building = Building("IFC4")
    beam = building.beam()
    sets = [
        building.root("IfcPropertySet", Name=name, HasProperties=[
            building.entity("IfcPropertySingleValue", "A", None,
                            building.file.create_entity("IfcInteger", 3))])
        for name in ("One", "Two")
    ]  # fmt: skip
    relation = building.root(
        "IfcRelDefinesByProperties", RelatedObjects=[beam], RelatingPropertyDefinition=sets[0]
    )
    # written by hand: the library does not let a defined type of a set be made
    one, two = (f"#{entity.id()}" for entity in sets)
    line = relation.to_string()
    wrapped = line[: line.rindex(one)] + f"IFCPROPERTYSETDEFINITIONSET(({one},{two})))"
    text = building.file.to_string().replace(line, wrapped)
    assert wrapped in text
    file = ifcopenshell.file.from_string(text)
    assert set(context_of(file).properties.of(beam.id())) == {"One", "Two"}


def test_a_property_may_carry_its_own_unit() -> None:
    building = Building("IFC4", "METRE")
    beam = building.beam()
    make = building.file.create_entity
    centimetre = building.si("LENGTHUNIT", "METRE", "CENTI")
    newton = building.si("FORCEUNIT", "NEWTON")

    def single(name: str, measure: str, value: float, unit: Any = None) -> Any:
        return building.entity("IfcPropertySingleValue", name, None, make(measure, value), unit)

    building.give_set(
        beam,
        "Set",
        own=single("own", "IfcLengthMeasure", 4.0, centimetre),
        project=single("project", "IfcLengthMeasure", 4.0),
        bare=single("bare", "IfcReal", 4.0),
        told=single("told", "IfcReal", 4.0, centimetre),
        wrong=single("wrong", "IfcLengthMeasure", 4.0, newton),
        stress=single("stress", "IfcPressureMeasure", 3e7),
    )
    values = context_of(building.file).properties.of(beam.id())["Set"]
    assert values["own"].number == pytest.approx(40.0)
    assert values["project"].number == pytest.approx(4000.0)
    assert values["told"].number == pytest.approx(40.0)
    assert values["stress"].number == pytest.approx(30.0)
    assert values["bare"].number is None
    assert values["wrong"].number is None


def test_lists_bounds_and_complex_properties() -> None:
    building = Building("IFC4")
    beam = building.beam()
    make = building.file.create_entity
    lengths = [make("IfcLengthMeasure", value) for value in (10.0, 20.0)]
    inner = building.entity("IfcPropertySingleValue", "Inner", None, make("IfcBoolean", True))
    building.give_set(
        beam,
        "Set",
        a=building.entity("IfcPropertyListValue", "List", None, lengths),
        b=building.entity("IfcPropertyEnumeratedValue", "One", None, [make("IfcLabel", "x")]),
        c=building.entity("IfcPropertyBoundedValue", "Range", None, *reversed(lengths)),
        e=building.entity("IfcPropertyBoundedValue", "AtMost", None, lengths[1]),
        d=building.entity("IfcComplexProperty", "Outer", None, "usage", [inner]),
    )
    values = context_of(building.file).properties.of(beam.id())["Set"]
    assert values["List"].value == (10.0, 20.0)
    assert values["One"].value == "x"
    assert values["Range"].value == (10.0, 20.0)
    assert (values["AtMost"].value, values["AtMost"].number) == ((20.0,), None)
    assert values["Outer.Inner"].value is True
    assert values["Outer.Inner"].number is None

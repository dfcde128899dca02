"""Slabs as they are read, against the geometry engine; and what says that a member is precast."""

from __future__ import annotations

from typing import Any

import pytest
from shapely import Polygon

from ifccheck.beam import Slab
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.scoping import Choice
from tests.ifc_models import Building, only_beam, volume_and_points

LENGTH = 6000.0


def with_beam(building: Building, **named: Any) -> Any:
    profile = building.rectangle(300.0, 600.0)
    return building.beam(building.extrusion(profile, LENGTH, z=(1, 0, 0), x=(0, 1, 0)), **named)


def slab(building: Building, *items: Any, material: str = "Concrete C30/37", **named: Any) -> Any:
    ring = building.outline((0, 0), (4000, 0), (4000, 2500), (0, 2500))
    items = items or (building.extrusion(ring, 200.0, at=(100.0, 200.0, 3000.0)),)
    product = building.member("IfcSlab", *items, **named)
    if material:
        building.give_material(product, building.entity("IfcMaterial", material))
    return product


def slabs_of(building: Building) -> tuple[Slab, ...]:
    return read_model(building.open(), {}, None, Choice(slabs=True)).slabs


def only_slab(building: Building) -> Slab:
    (found,) = slabs_of(building)
    return found


def test_slabs_are_read_only_where_they_are_asked_for() -> None:
    building = Building()
    with_beam(building)
    slab(building)
    assert building.read().slabs == ()


def area(found: Slab) -> float:
    return float(Polygon(found.rings[0], found.rings[1:]).area)


@pytest.mark.parametrize("unit", ["MILLIMETRE", "METRE", "FOOT"])
@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_a_plain_slab(schema: str, unit: str) -> None:
    building = Building(schema, unit)
    with_beam(building)
    product = slab(building, Name="S-1")
    found = only_slab(building)
    assert (found.bottom, found.top) == pytest.approx((3000, 3200))
    assert found.name == "S-1 (IfcSlab)"
    assert found.doubt == ""
    assert found.strength == pytest.approx(30.0)
    xs, ys = zip(*found.rings[0], strict=True)
    assert (min(xs), max(xs), min(ys), max(ys)) == pytest.approx((100, 4100, 200, 2700))
    volume, _ = volume_and_points(product)
    assert area(found) * 200.0 == pytest.approx(volume, rel=1e-6)


def test_a_slab_extruded_downwards_in_a_turned_placement() -> None:
    building = Building()
    with_beam(building)
    ring = building.outline((0, 0), (4000, 0), (4000, 2500), (0, 2500))
    solid = building.extrusion(ring, 200.0, direction=(0, 0, -1))
    product = slab(
        building, solid, placement=building.placement((1e3, 2e3, 3200.0), x=(0.6, 0.8, 0))
    )
    found = only_slab(building)
    assert (found.bottom, found.top) == pytest.approx((3000, 3200))
    _, points = volume_and_points(product)
    figure = Polygon(found.rings[0]).buffer(0.01)
    assert all(figure.covers(place) for place in map(_point, points))


def _point(place: Any) -> Any:
    from shapely import Point

    return Point(place[0], place[1])


def test_openings_and_voids_are_taken_off() -> None:
    building = Building()
    with_beam(building)
    ring = building.outline(
        (0, 0), (4000, 0), (4000, 2500), (0, 2500),
        voids=[[(500, 500), (900, 500), (900, 900), (500, 900)]],
    )  # fmt: skip
    product = slab(building, building.extrusion(ring, 200.0))
    shaft = building.extrusion(building.rectangle(600.0, 400.0), 400.0, at=(2000.0, 1500.0, -100.0))
    building.void(product, shaft)
    found = only_slab(building)
    assert len(found.rings) == 3
    volume, _ = volume_and_points(product)
    assert area(found) * 200.0 == pytest.approx(volume, rel=1e-6)


def test_an_opening_that_divides_a_slab_leaves_two() -> None:
    building = Building()
    with_beam(building)
    product = slab(building, Name="S-1")
    across = building.extrusion(building.rectangle(300.0, 9000.0), 400.0, at=(2000.0, 0.0, 2900.0))
    building.void(product, across)
    found = slabs_of(building)
    assert len(found) == 2
    assert {one.step_id for one in found} == {product.id()}


def test_a_circular_opening_counts_as_the_box_round_its_corners() -> None:
    building = Building()
    with_beam(building)
    product = slab(building)
    hole = building.profile("IfcCircleProfileDef", Radius=400.0)
    building.void(product, building.extrusion(hole, 400.0, at=(2000.0, 1200.0, 2900.0)))
    volume, _ = volume_and_points(product)
    assert area(only_slab(building)) * 200.0 == pytest.approx(volume, rel=1e-3)


@pytest.mark.parametrize(
    ("material", "named", "doubt"),
    [
        ("Timber C24", {}, "it is of timber"),
        ("", {}, "material unknown"),
        ("Steel S355", {}, "it is of steel"),
        ("Concrete C30/37", {"Name": "Precast plank"}, 'it is precast: name "Precast plank"'),
        ("Concrete C30/37", {"Name": "Hollow-core 265"}, "it is precast"),
        ("Concrete C30/37", {"Name": "Hollow core 265"}, "it is precast"),
        ("Concrete C30/37", {"Name": "HCS 265"}, "it is precast"),
        ("Concrete C30/37", {"Name": "Pre_cast plank"}, "it is precast"),
        ("Concrete C30/37", {"Name": "Prédalle 60"}, "it is precast"),
        ("Concrete C30/37", {"Name": "Post tensioned slab"}, "it is prestressed"),
        ("Concrete C30/37", {"Name": "Spannbeton"}, "it is prestressed"),
        ("Concrete C30/37", {"Name": "Slab on insulation"}, "contradictory"),
    ],
)
def test_slabs_that_count_for_nothing(material: str, named: dict[str, str], doubt: str) -> None:
    building = Building()
    with_beam(building)
    slab(building, material=material, **named)
    assert doubt in only_slab(building).doubt


def test_a_slab_of_layers_counts_for_nothing() -> None:
    building = Building()
    with_beam(building)
    product = slab(building, material="")
    layers = [
        building.entity("IfcMaterialLayer", building.entity("IfcMaterial", name), thick, None)
        for name, thick in (("Concrete C30/37", 150.0), ("Screed concrete", 50.0))
    ]
    building.give_material(product, building.entity("IfcMaterialLayerSet", layers, "Floor"))
    assert only_slab(building).doubt == "it is made of several materials"


def test_a_cut_slab_and_one_with_an_unreadable_opening_count_for_nothing() -> None:
    building = Building()
    with_beam(building)
    ring = building.outline((0, 0), (4000, 0), (4000, 2500), (0, 2500))
    plain = building.extrusion(ring, 200.0)
    slab(building, building.clipped(plain, building.half_space((0, 0, 150.0), (0, 0, 1))))
    opened = slab(building, building.extrusion(ring, 200.0))
    building.void(opened)
    cut, unread = slabs_of(building)
    assert cut.doubt == "its body is cut"
    assert "in it cannot be read" in unread.doubt


def test_sloping_slabs_and_other_bodies_are_passed_over() -> None:
    building = Building()
    with_beam(building)
    ring = building.outline((0, 0), (4000, 0), (4000, 2500), (0, 2500))
    slab(building, building.extrusion(ring, 200.0, z=(0.0, 0.1, 1.0), x=(1, 0, 0)))
    slab(building, building.extrusion(ring, 200.0, direction=(0.1, 0.0, 1.0)))
    edge = building.outline((0, 0), (4000, 0), (4000, 200), (0, 200))
    slab(building, building.extrusion(edge, 2500.0, z=(0, -1, 0), x=(1, 0, 0)))
    building.member("IfcSlab")
    assert slabs_of(building) == ()


def test_no_slab_is_read_where_there_is_no_beam_in_scope() -> None:
    building = Building()
    with_beam(building, material="Steel S355")
    slab(building)
    assert slabs_of(building) == ()


# What says that a beam is precast -----------------------------------------------------------------


@pytest.mark.parametrize(
    ("name", "told"),
    [
        ("Precast beam 300x600", 'name "Precast beam 300x600"'),
        ("PREFAB BALK", 'name "PREFAB BALK"'),
        ("Fertigteilträger", 'name "Fertigteilträger"'),
        ("Beam 300x600", ""),
    ],
)
def test_by_its_name(name: str, told: str) -> None:
    building = Building()
    with_beam(building, Name=name)
    assert only_beam(building.read()).precast == told


def test_by_its_type() -> None:
    building = Building()
    building.give_type(with_beam(building), Name="Pre-cast 300", PredefinedType="BEAM")
    assert only_beam(building.read()).precast == 'name "Pre-cast 300"'


@pytest.mark.parametrize(
    ("value", "told"), [("PRECAST", True), ("Off-site", True), ("In-situ", False)]
)
def test_by_how_it_is_made(value: str, told: bool) -> None:
    building = Building()
    product = with_beam(building)
    building.give_set(
        product, "Pset_ConcreteElementGeneral",
        ConstructionMethod=building.entity("IfcLabel", value),
    )  # fmt: skip
    assert bool(only_beam(building.read()).precast) == told


def test_by_a_set_that_only_precast_members_have() -> None:
    building = Building()
    product = with_beam(building)
    building.give_set(
        product,
        "Pset_PrecastConcreteElementGeneral",
        TypeDesignator=building.entity("IfcLabel", "A"),
    )
    assert only_beam(building.read()).precast == "Pset_PrecastConcreteElementGeneral"


def test_by_the_assembly_of_a_factory() -> None:
    building = Building()
    product = with_beam(building)
    building.give_parts(building.member("IfcElementAssembly", AssemblyPlace="FACTORY"), product)
    assert only_beam(building.read()).precast.endswith("of the factory")

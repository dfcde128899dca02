"""Boxes round members against the corners that ifcopenshell's engine gives the same bodies."""

from __future__ import annotations

import math
from pathlib import Path
from typing import Any

import ifcopenshell
import numpy as np
import pytest

from ifccheck.beam import Box
from tests.bodies_of_beams import Bodies
from tests.ifc_models import Building, Opened, volume_and_points


def overhang(box: Box, points: np.ndarray) -> np.ndarray:
    """How far the farthest corners stand out of the box along its axes [mm]."""
    inner = (points - np.array(box.centre)) @ np.array(box.axes).T
    return np.abs(inner).max(axis=0) - np.array(box.half)


def assert_right_handed(box: Box) -> None:
    x, y, z = np.array(box.axes)
    assert np.cross(x, y) == pytest.approx(z, abs=1e-8)
    assert [x @ x, y @ y, x @ y] == pytest.approx([1.0, 1.0, 0.0], abs=1e-8)


MODELS = {
    "01_ifc4x3_beam_34_stirrups.ifc": 1,
    "03_ifc2x3_precast_mixed_rebar.ifc": 40,
    "05_ifc2x3_structural_timber_steel.ifc": 50,
    "06_ifc2x3_bridge_concrete.ifc": 28,
    "08_ifc4x3_grid_concrete_beams.ifc": 35,
    "16_ifc4_timber_mapped_negz.ifc": 50,
}


@pytest.mark.parametrize("name", MODELS)
def test_every_member_of_the_open_models_lies_in_its_box(name: str, open_models: Path) -> None:
    from ifccheck.ifc.reader import read_model

    file = ifcopenshell.open(str(open_models / name))
    model = read_model(Opened(file, str(file.schema)), {})
    step = max(1, len(model.members) // MODELS[name])
    for member in model.members[::step]:
        product = file.by_id(member.step_id)
        if product.HasOpenings or product.ObjectPlacement.is_a("IfcGridPlacement"):
            continue  # the engine cuts openings out of the body, and knows no grid placement
        _, points = volume_and_points(product)
        assert_right_handed(member.box)
        assert overhang(member.box, points).max() < 0.5, product


def only_member(building: Building) -> Box:
    (member,) = building.read().members
    return member.box


@pytest.mark.parametrize("turn", [0.0, 0.3, 1.2])
def test_box_of_a_skew_wall_follows_the_wall(turn: float) -> None:
    """A wall drawn as a polygon askew to its placement: the box is as thick as the wall."""
    along = np.array((math.cos(turn), math.sin(turn)))
    left = np.array((-along[1], along[0]))
    corners = [(0 * along), 5000 * along, 5000 * along + 200 * left, 200 * left]
    building = Building()
    outline = building.outline(*[corner.tolist() for corner in corners])
    product = building.member("IfcWall", building.extrusion(outline, 3000.0))
    box = only_member(building)
    assert sorted(box.half) == pytest.approx([100.0, 1500.0, 2500.0])
    assert overhang(box, volume_and_points(product)[1]) == pytest.approx(0.0, abs=1e-3)


def test_box_of_an_oblique_extrusion_encloses_it() -> None:
    building = Building()
    solid = building.extrusion(building.rectangle(400, 300), 3000.0, (0.5, 0.2, 1.0))
    product = building.member("IfcColumn", solid)
    assert overhang(only_member(building), volume_and_points(product)[1]).max() < 1e-3


def test_box_of_a_cut_column_ends_at_the_cut() -> None:
    building = Building()
    solid = building.extrusion(building.rectangle(400, 400), 3000.0)
    cut = building.clipped(solid, building.half_space((0, 0, 2500), (0, 0, 1)))
    product = building.member("IfcColumn", cut)
    box = only_member(building)
    assert box.half == pytest.approx((200.0, 200.0, 1250.0))
    assert overhang(box, volume_and_points(product)[1]) == pytest.approx(0.0, abs=1e-3)


def test_box_of_a_brep_lies_along_its_placement() -> None:
    building = Building()
    placement = building.placement((100, 200, 300), (0, 0, 1), (0.6, 0.8, 0))
    bodies = Bodies(building.file)
    outline = ((0.0, 0.0), (300.0, 0.0), (300.0, 500.0), (0.0, 500.0))
    ends = [(0.0, outline), (6000.0, outline)]
    brep = bodies.brep(bodies.corners(ends), bodies.rings(ends))
    product = building.member("IfcColumn", brep, placement=placement)
    box = only_member(building)
    assert box.half == pytest.approx((3000.0, 150.0, 250.0))
    assert box.axes[0] == pytest.approx((0.6, 0.8, 0.0))
    assert overhang(box, volume_and_points(product)[1]) == pytest.approx(0.0, abs=1e-3)


def test_box_round_several_items_and_tapered_ones() -> None:
    building = Building("IFC4")
    base = building.extrusion(building.rectangle(1000, 1000), 300.0)
    shaft = building.entity(
        "IfcExtrudedAreaSolidTapered",
        building.rectangle(400, 400),
        building.axes((0, 0, 300)),
        building.direction((0, 0, 1)),
        2000.0,
        building.rectangle(1200, 200),
    )
    building.member("IfcColumn", base, shaft)
    assert only_member(building).half == pytest.approx((600.0, 500.0, 1150.0))


def test_a_revolved_member_has_a_rough_box() -> None:
    """200 x 200, 1000 mm from an axis along y, turned by 1 rad: x from -100 to 1000 - 900 cos 1,
    z from 0 to 1100 sin 1, and 300 mm more all round."""
    building = Building("IFC4")
    axis = building.entity(
        "IfcAxis1Placement", building.point(1000, 0, 0), building.direction((0, 1, 0))
    )
    revolved = building.entity(
        "IfcRevolvedAreaSolid", building.rectangle(200, 200), building.axes(), axis, 1.0
    )
    building.member("IfcColumn", revolved)
    building.member("IfcMember", revolved)
    model = building.read()
    assert [member.ifc_class for member in model.members] == ["IfcColumn", "IfcMember"]
    assert {member.doubt for member in model.members} == {"its extent is known only roughly"}
    wide, high = 1100.0 - 900.0 * math.cos(1.0), 1100.0 * math.sin(1.0)
    half = [wide / 2.0 + 300.0, 100.0 + 300.0, high / 2.0 + 300.0]
    assert model.members[0].box.half == pytest.approx(half, abs=1e-6)
    (remark,) = model.remarks
    assert remark.kind == "doubt"
    assert "2 members is known only roughly (1 IfcColumn, 1 IfcMember)" in remark.text


def test_members_whose_extent_is_unknown_are_counted() -> None:
    """A column without a body, too, may stand on any beam of its storey; a slab may not."""
    building = Building("IFC4")
    hollow = building.entity("IfcFacetedBrep", building.entity("IfcClosedShell", ()))
    building.member("IfcMember", hollow)
    building.member("IfcColumn")
    building.member("IfcSlab")
    model = building.read()
    assert model.members == ()
    assert sorted((each.ifc_class, each.storey) for each in model.unmeasured) == [
        ("IfcColumn", "Level 1"),
        ("IfcMember", "Level 1"),
    ]
    (remark,) = model.remarks
    assert remark.kind == "doubt"
    assert remark.text.startswith(
        "the extent of 2 members cannot be read (1 IfcColumn, 1 IfcMember)"
    )


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4"])
def test_plan_of_an_upright_member_that_does_not_fill_its_box(schema: str) -> None:
    building = Building(schema)
    corners = [(0, 0), (4000, 0), (4000, 200), (200, 200), (200, 4000), (0, 4000)]
    solid = building.extrusion(building.outline(*corners), 3000.0)
    placement = building.placement((100, 200, 300), (0, 0, 1), (0.6, 0.8, 0))
    building.member("IfcWall", solid, placement=placement)
    building.member("IfcWall", building.extrusion(building.rectangle(4000, 200), 3000.0))
    bent, straight = building.read().members
    turned = [(100 + 0.6 * x - 0.8 * y, 200 + 0.8 * x + 0.6 * y) for x, y in corners]
    assert np.array(sorted(bent.plan)) == pytest.approx(np.array(sorted(turned)))
    assert (bent.doubt, straight.plan, straight.doubt) == ("", (), "")


@pytest.mark.parametrize(("turn", "doubted"), [(0.0, False), (math.pi / 4.0, True)])
def test_a_wall_of_facets_across_its_box_is_doubtful(turn: float, doubted: bool) -> None:
    """4000 x 200 at 45 degrees: its box is (4000 + 200) / sqrt 2 = 2970 mm thick."""
    c, s = math.cos(turn), math.sin(turn)
    corners = [
        (c * x - s * y, s * x + c * y, z)
        for x in (0.0, 4000.0) for y in (0.0, 200.0) for z in (0.0, 3000.0)
    ]  # fmt: skip
    building = Building("IFC4")
    points = building.entity("IfcCartesianPointList3D", corners)
    faces = building.entity("IfcTriangulatedFaceSet", points, None, None, [(1, 2, 3)], None)
    building.member("IfcWall", faces)
    (wall,) = building.read().members
    assert ("fills too little of the box" in wall.doubt) is doubted


def test_what_cannot_touch_a_beam_is_left_out() -> None:
    building = Building("IFC4")
    solid: Any = building.extrusion(building.rectangle(400, 400), 3000.0)
    for kind in (
        "IfcFurniture",
        "IfcCovering",
        "IfcReinforcingBar",
        "IfcSpace",
        "IfcOpeningElement",
    ):
        building.member(kind, solid)
    building.member("IfcWallStandardCase", solid, Name="W-1", Tag="w1")
    (member,) = building.read().members
    assert (member.ifc_class, member.name, member.storey) == (
        "IfcWallStandardCase",
        "W-1",
        "Level 1",
    )

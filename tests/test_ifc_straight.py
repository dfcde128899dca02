"""Beams of every body that is read: axis, outline and length against formulae, and against
ifcopenshell's geometry engine as a referee."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.beam import Beam
from tests.ifc_models import (
    Building,
    area,
    local,
    only_beam,
    reasons,
    volume_and_points,
)

UNITS = ("MILLIMETRE", "METRE", "INCH", "FOOT")
LENGTH = 6000.0


def width_height(beam: Beam) -> tuple[float, float]:
    (run,) = beam.runs
    ys, zs = zip(*run.outline.rings[0], strict=True)
    assert min(ys) == pytest.approx(-max(ys), abs=1e-6)
    assert min(zs) == pytest.approx(0.0, abs=1e-6)
    return max(ys) - min(ys), max(zs)


def assert_encloses(product: Any, beam: Beam, *, share: float = 1e-4) -> None:
    """The engine's body has the beam's volume and fills its axes from end to end."""
    volume, points = volume_and_points(product)
    assert area(beam) * beam.length == pytest.approx(volume, rel=share)
    inner = local(beam, points)
    width, height = width_height(beam)
    (low_x, low_y, low_z), (high_x, high_y, high_z) = inner.min(axis=0), inner.max(axis=0)
    assert (low_y, high_y) == pytest.approx((-width / 2, width / 2), abs=0.11)
    assert (low_z, high_z) == pytest.approx((0.0, height), abs=0.11)
    assert low_x <= 1e-3
    assert high_x >= beam.length - 1e-3


@pytest.mark.parametrize("unit", UNITS)
@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_rectangle_along_the_span_in_every_unit(schema: str, unit: str) -> None:
    building = Building(schema, unit)
    solid = building.extrusion(building.rectangle(300, 500), LENGTH)
    product = building.beam(
        solid, placement=building.placement((1000, 2000, 3000), (1, 0, 0), (0, 1, 0))
    )
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(LENGTH, rel=1e-9)
    assert width_height(beam) == pytest.approx((300.0, 500.0), abs=1e-6)
    assert beam.axis is not None
    assert beam.axis.origin == pytest.approx((1000.0, 2000.0, 2750.0), abs=1e-6)
    assert beam.axis.x == (1.0, 0.0, 0.0)
    assert beam.axis.y == (0.0, 1.0, 0.0)
    assert beam.axis.z == (0.0, 0.0, 1.0)
    assert reasons(beam) == ""
    assert_encloses(product, beam)


def test_height_follows_the_placement_not_the_name_of_the_dimension() -> None:
    """XDim is the height here: the profile's x points up."""
    building = Building()
    solid = building.extrusion(building.rectangle(700, 250), LENGTH)
    product = building.beam(solid, placement=building.placement((0, 0, 0), (1, 0, 0), (0, 0, 1)))
    beam = only_beam(building.read())
    assert width_height(beam) == pytest.approx((250.0, 700.0))
    assert_encloses(product, beam)


# Each way of extruding the same beam of 300 x 500 x 6000 along the building's x axis:
# profile, depth, then the solid's axes z and x in the product.
WAYS = {
    "along": ((300, 500), LENGTH, (1, 0, 0), (0, 1, 0)),
    "against": ((300, 500), LENGTH, (-1, 0, 0), (0, 1, 0)),
    "across its width": ((LENGTH, 500), 300.0, (0, -1, 0), (1, 0, 0)),
    "across, profile upright": ((500, LENGTH), 300.0, (0, 1, 0), (0, 0, 1)),
    "upwards": ((LENGTH, 300), 500.0, (0, 0, 1), (1, 0, 0)),
    "downwards": ((300, LENGTH), 500.0, (0, 0, -1), (0, 1, 0)),
}


@pytest.mark.parametrize("way", WAYS)
def test_extrusion_in_any_direction_is_the_same_beam(way: str) -> None:
    sides, depth, z, x = WAYS[way]
    building = Building()
    product = building.beam(building.extrusion(building.rectangle(*sides), depth, z=z, x=x))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(LENGTH)
    assert width_height(beam) == pytest.approx((300.0, 500.0))
    assert beam.axis is not None
    assert beam.axis.x == pytest.approx((1.0, 0.0, 0.0))
    assert_encloses(product, beam)


@pytest.mark.parametrize("way", ["along", "across its width", "downwards"])
def test_extrusion_direction_of_the_solid_may_turn_down(way: str) -> None:
    sides, depth, z, x = WAYS[way]
    building = Building()
    profile = building.rectangle(*sides)
    product = building.beam(building.extrusion(profile, depth, direction=(0, 0, -1), z=z, x=x))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(LENGTH)
    assert width_height(beam) == pytest.approx((300.0, 500.0))
    assert_encloses(product, beam)


def test_oblique_extrusion_keeps_its_axis_and_narrows_its_section() -> None:
    """A profile pushed along a direction 30 degrees off its normal: the length is that of the
    push, the section square to it is narrower by cos 30."""
    building = Building()
    slant = (math.sin(math.radians(30)), 0.0, math.cos(math.radians(30)))
    solid = building.extrusion(
        building.rectangle(300, 500), LENGTH, slant, z=(1, 0, 0), x=(0, 1, 0)
    )
    product = building.beam(solid)
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(LENGTH)
    assert width_height(beam) == pytest.approx((300.0 * math.cos(math.radians(30)), 500.0))
    assert area(beam) * beam.length == pytest.approx(volume_and_points(product)[0], rel=1e-6)


@given(
    turn=st.floats(0.0, 2.0 * math.pi),
    slope=st.floats(-0.6, 0.6),
    at=st.tuples(*[st.floats(-1e5, 1e5)] * 3),
)
@settings(max_examples=40, deadline=None)
def test_turned_and_sloped_beams_keep_their_section(
    turn: float, slope: float, at: tuple[float, float, float]
) -> None:
    """z of the beam lies in the vertical plane through its axis; nothing else changes."""
    along = np.array(
        (math.cos(turn) * math.cos(slope), math.sin(turn) * math.cos(slope), math.sin(slope))
    )
    sideways = np.array((-math.sin(turn), math.cos(turn), 0.0))
    building = Building()
    solid = building.extrusion(building.rectangle(300, 500), LENGTH)
    building.beam(solid, placement=building.placement(at, along, sideways))
    beam = only_beam(building.read())
    assert beam.axis is not None
    assert beam.length == pytest.approx(LENGTH, rel=1e-9)
    assert width_height(beam) == pytest.approx((300.0, 500.0), abs=1e-5)
    assert beam.axis.x == pytest.approx(along, abs=1e-8)  # the start is where its own z is less
    assert beam.axis.z[2] > 0.0
    assert np.dot(beam.axis.y, (0.0, 0.0, 1.0)) == pytest.approx(0.0, abs=1e-9)
    assert np.cross(beam.axis.x, beam.axis.y) == pytest.approx(beam.axis.z, abs=1e-8)
    middle = np.array(at) - 250.0 * np.array(beam.axis.z)
    assert beam.axis.origin == pytest.approx(middle, abs=1e-4)


def test_start_is_the_lesser_end_along_the_placements_own_axis() -> None:
    """The same body seen from a placement that is turned round starts at its other end."""
    origins = []
    for x in ((1, 0, 0), (-1, 0, 0)):
        building = Building()
        placement = building.placement((0, 0, 0), (0, 0, 1), x)
        at = (0, 0, 0) if x[0] > 0 else (-LENGTH, 0, 0)
        solid = building.extrusion(building.rectangle(), LENGTH, at=at, z=(1, 0, 0), x=(0, 1, 0))
        building.beam(solid, placement=placement)
        beam = only_beam(building.read())
        assert beam.axis is not None
        assert beam.axis.x == pytest.approx(x)
        origins.append(beam.axis.origin[0])
    assert origins == pytest.approx([0.0, LENGTH])


def test_start_of_a_beam_at_45_degrees_to_its_placement_is_by_x_before_y() -> None:
    building = Building()
    solid = building.extrusion(building.rectangle(), LENGTH, z=(1, -1, 0), x=(0, 0, 1))
    building.beam(solid)
    beam = only_beam(building.read())
    assert beam.axis is not None
    assert beam.axis.x == pytest.approx((math.sqrt(0.5), -math.sqrt(0.5), 0.0))


def test_rolled_section_is_an_outline_with_turned_corners() -> None:
    """A 300 x 500 rolled by 30 degrees: bounding width and height by projection."""
    roll = math.radians(30)
    building = Building()
    solid = building.extrusion(building.rectangle(300, 500), LENGTH)
    axis_x = (0.0, math.cos(roll), math.sin(roll))
    product = building.beam(solid, placement=building.placement((0, 0, 0), (1, 0, 0), axis_x))
    beam = only_beam(building.read())
    assert width_height(beam) == pytest.approx(
        (
            300 * math.cos(roll) + 500 * math.sin(roll),
            300 * math.sin(roll) + 500 * math.cos(roll),
        )
    )
    assert area(beam) == pytest.approx(300 * 500)
    assert_encloses(product, beam)


def test_nested_placements_add_up() -> None:
    building = Building()
    outer = building.placement((10000, 0, 0), (0, 0, 1), (0, 1, 0))
    inner = building.placement((0, -500, 2000), within=outer)
    solid = building.extrusion(building.rectangle(), LENGTH, z=(1, 0, 0), x=(0, 1, 0))
    product = building.beam(solid, placement=inner)
    beam = only_beam(building.read())
    assert beam.axis is not None
    assert beam.axis.origin == pytest.approx((10500.0, 0.0, 1750.0))
    assert beam.axis.x == pytest.approx((0.0, 1.0, 0.0))
    assert_encloses(product, beam)


L_SHAPE = ((0, 0), (600, 0), (600, 200), (250, 200), (250, 500), (0, 500))


def mapped_l(building: Building, **operator: Any) -> Any:
    solid = building.extrusion(building.outline(*L_SHAPE), LENGTH, z=(1, 0, 0), x=(0, 1, 0))
    return building.mapped(solid, **operator)


@pytest.mark.parametrize(
    "operator",
    [
        {},
        {"Scale": 0.5},
        {"Axis1": (0, 1, 0), "Axis2": (-1, 0, 0)},
        {"Axis1": (1, 0, 0), "Axis2": (0, -1, 0)},  # mirrored
        {"Axis1": (-1, 0, 0)},  # mirrored: without Axis2 the y axis stays
        {"Scale": 1.0, "Scale2": 1.5, "Scale3": 0.8},
        {"Axis1": (1, 0, 0), "Axis2": (0, -1, 0), "Scale": 2.0, "Scale2": 0.5, "Scale3": 1.25},
    ],
)
def test_mapped_items_with_transformations(operator: dict[str, Any]) -> None:
    building = Building()
    values = {
        key: building.direction(value) if isinstance(value, tuple) else value
        for key, value in operator.items()
    }
    product = building.beam(mapped_l(building, **values))
    beam = only_beam(building.read())
    assert_encloses(product, beam, share=1e-6)
    along, across, up = (
        operator.get(key, operator.get("Scale", 1.0)) for key in ("Scale", "Scale2", "Scale3")
    )
    assert area(beam) == pytest.approx((600 * 200 + 250 * 300) * across * up)
    assert beam.length == pytest.approx(LENGTH * along)


def test_mirrored_item_mirrors_the_outline_left_to_right() -> None:
    plain, mirrored = Building(), Building()
    plain.beam(mapped_l(plain))
    flip = {"Axis1": mirrored.direction((1, 0, 0)), "Axis2": mirrored.direction((0, -1, 0))}
    mirrored.beam(mapped_l(mirrored, **flip))
    first, second = only_beam(plain.read()), only_beam(mirrored.read())
    corners = {(round(y, 6), round(z, 6)) for y, z in first.runs[0].outline.rings[0]}
    others = {(round(-y, 6), round(z, 6)) for y, z in second.runs[0].outline.rings[0]}
    assert corners == others
    assert area(second) == pytest.approx(area(first))
    assert area(second) > 0.0  # the ring runs anticlockwise again


def rectangular(building: Building, *half_spaces: Any, **named: Any) -> Any:
    solid = building.extrusion(building.rectangle(300, 500), LENGTH, z=(1, 0, 0), x=(0, 1, 0))
    return building.beam(building.clipped(solid, *half_spaces), **named)


def test_mitre_in_plan_is_measured_on_the_centroid() -> None:
    """45 degrees in plan through the middle of the width, 200 mm before the end."""
    building = Building()
    product = rectangular(building, building.half_space((5800, 0, 0), (1, 1, 0)))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(5800.0)
    assert width_height(beam) == pytest.approx((300.0, 500.0))
    assert reasons(beam) == ""
    assert ["300 mm" in remark.text for remark in beam.remarks] == [True]
    assert_encloses(product, beam)


def test_mitres_at_both_ends_with_either_agreement_flag() -> None:
    building = Building()
    start = building.half_space((300, 0, 0), (1, -1, 0), agrees=True)
    end = building.half_space((5700, 0, 0), (1, 1, 0))
    product = rectangular(building, start, end)
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(5400.0)
    assert beam.axis is not None
    assert beam.axis.origin == pytest.approx((300.0, 0.0, -250.0))
    assert_encloses(product, beam)


def test_square_cut_shortens_the_beam_without_a_remark() -> None:
    building = Building()
    product = rectangular(building, building.half_space((4500, 0, 0), (1, 0, 0)))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(4500.0)
    assert beam.remarks == ()
    assert_encloses(product, beam)


def test_steep_cut_in_elevation_puts_the_depth_in_doubt() -> None:
    """45 degrees in elevation: over 500 mm at the end the depth is not whole."""
    building = Building()
    rectangular(building, building.half_space((5700, 0, 0), (1, 0, -1)))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(5700.0)
    assert [reason.blocking for reason in beam.reasons] == [False]
    assert "depth is reduced by the oblique cut at the end" in reasons(beam)


def test_plumb_cut_of_a_gently_sloped_beam_is_no_doubt() -> None:
    building = Building()
    rise = math.radians(10)
    along, up = (math.cos(rise), 0, math.sin(rise)), (-math.sin(rise), 0, math.cos(rise))
    solid = building.extrusion(building.rectangle(), LENGTH, z=along, x=(0, 1, 0))
    assert up[2] > 0
    cut = building.half_space((5000, 0, 0), (1, 0, 0))
    building.beam(building.clipped(solid, cut))
    beam = only_beam(building.read())
    assert reasons(beam) == ""
    assert beam.length == pytest.approx(5000 / math.cos(rise))


def test_cut_that_leaves_nothing_is_a_reason() -> None:
    building = Building()
    rectangular(building, building.half_space((-10, 0, 0), (1, 0, 0)))
    beam = only_beam(building.read())
    assert beam.axis is None
    assert "nothing is left" in reasons(beam)
    assert beam.reasons[0].blocking


def test_cut_along_its_length_leaves_a_lesser_section() -> None:
    building = Building()
    product = rectangular(building, building.half_space((0, 0, 200), (0, 0, 1)))
    beam = only_beam(building.read())
    assert width_height(beam) == pytest.approx((300.0, 450.0))
    assert_encloses(product, beam)


def test_cut_that_misses_the_body_changes_nothing() -> None:
    building = Building()
    rectangular(building, building.half_space((6500, 0, 0), (1, 1, 0)))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(LENGTH)
    assert reasons(beam) == ""


def test_bounded_half_space_over_the_whole_end_is_a_mitre() -> None:
    building = Building()
    bound = ((5000, -1000), (7000, -1000), (7000, 1000), (5000, 1000))
    product = rectangular(building, building.bounded_half_space((5800, 0, 0), (1, 1, 0), *bound))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(5800.0)
    assert_encloses(product, beam)


def test_bounded_half_space_elsewhere_changes_nothing() -> None:
    building = Building()
    bound = ((5000, 500), (7000, 500), (7000, 1000), (5000, 1000))
    rectangular(building, building.bounded_half_space((5800, 0, 0), (1, 1, 0), *bound))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(LENGTH)
    assert reasons(beam) == ""


def test_cut_through_a_mapped_mirrored_item() -> None:
    building = Building()
    solid = building.extrusion(building.outline(*L_SHAPE), LENGTH, z=(1, 0, 0), x=(0, 1, 0))
    cut = building.clipped(solid, building.half_space((5600, 300, 0), (1, 1, 0)))
    flip = {"Axis1": building.direction((1, 0, 0)), "Axis2": building.direction((0, -1, 0))}
    product = building.beam(building.mapped(cut, Scale=0.5, **flip))
    beam = only_beam(building.read())
    assert_encloses(product, beam, share=1e-6)


MITRED = ((0, 0), (6000, 0), (5800, 500), (150, 500))


@pytest.mark.parametrize("order", [1, -1])
def test_elevation_with_mitred_ends_extruded_across_its_width(order: int) -> None:
    """A trapezium as elevation: 500 deep, its length that at mid-depth."""
    building = Building()
    product = building.beam(
        building.extrusion(building.outline(*MITRED[::order]), 300.0, z=(0, -1, 0), x=(1, 0, 0))
    )
    beam = only_beam(building.read())
    assert width_height(beam) == pytest.approx((300.0, 500.0))
    assert beam.length == pytest.approx((6000 + 5650) / 2)
    assert_encloses(product, beam)


def test_parallelogram_as_elevation_of_a_sloped_beam() -> None:
    """Plumb ends: corners of an elevation that rises 1000 over 6000."""
    building = Building()
    corners = ((0, 0), (6000, 1000), (6000, 1500), (0, 500))
    product = building.beam(
        building.extrusion(building.outline(*corners), 300.0, z=(0, -1, 0), x=(1, 0, 0))
    )
    beam = only_beam(building.read())
    slope = math.atan2(1000, 6000)
    assert width_height(beam) == pytest.approx((300.0, 500.0 * math.cos(slope)))
    assert beam.length == pytest.approx(6000.0 / math.cos(slope))
    assert_encloses(product, beam)


def test_stub_as_wide_as_long_has_no_clear_span() -> None:
    building = Building()
    building.beam(building.extrusion(building.rectangle(1000, 400), 1050.0, z=(1, 0, 0)))
    assert "span direction unclear" in reasons(only_beam(building.read()))


@pytest.mark.parametrize("degrees", [90, 81, 99])
def test_standing_members_are_not_read(degrees: float) -> None:
    building = Building()
    rise = math.radians(degrees)
    along = (math.cos(rise), 0, math.sin(rise))
    building.beam(building.extrusion(building.rectangle(), LENGTH, z=along, x=(0, 1, 0)))
    assert reasons(only_beam(building.read())) == "vertical member"


def test_steep_but_leaning_member_is_read() -> None:
    building = Building()
    rise = math.radians(75)
    along = (math.cos(rise), 0, math.sin(rise))
    building.beam(building.extrusion(building.rectangle(), LENGTH, z=along, x=(0, 1, 0)))
    beam = only_beam(building.read())
    assert beam.length == pytest.approx(LENGTH)
    assert beam.axis is not None
    assert beam.axis.x == pytest.approx(along)


def test_hollow_outline_keeps_its_void() -> None:
    building = Building()
    outer = ((-300, -400), (300, -400), (300, 400), (-300, 400))
    void = ((-200, -250), (200, -250), (200, 250), (-200, 250))
    solid = building.extrusion(
        building.outline(*outer, voids=[void]), LENGTH, z=(1, 0, 0), x=(0, 1, 0)
    )
    product = building.beam(solid)
    beam = only_beam(building.read())
    assert len(beam.runs[0].outline.rings) == 2
    assert area(beam) == pytest.approx(600 * 800 - 400 * 500)
    assert_encloses(product, beam)


def test_element_without_a_body_is_a_reason() -> None:
    building = Building()
    building.beam()
    assert reasons(only_beam(building.read())) == "no body in the model"


def test_openings_and_projections_keep_a_beam_from_being_rated() -> None:
    building = Building()
    product = rectangular(building)
    for kind, relation, feature in (
        ("IfcOpeningElement", "IfcRelVoidsElement", "RelatedOpeningElement"),
        ("IfcProjectionElement", "IfcRelProjectsElement", "RelatedFeatureElement"),
    ):
        relating = "RelatingBuildingElement" if "Voids" in relation else "RelatingElement"
        building.root(relation, **{relating: product, feature: building.root(kind)})
    beam = only_beam(building.read())
    assert "opening cannot be read: " in reasons(beam)
    assert "1 projecting feature not read yet" in reasons(beam)
    assert all(reason.blocking for reason in beam.reasons)


@pytest.mark.parametrize("attribute", ["SweptArea", "Depth", "ExtrudedDirection"])
def test_body_without_what_it_needs_is_a_reason(attribute: str) -> None:
    building = Building()
    solid = building.extrusion(building.rectangle(), LENGTH, z=(1, 0, 0))
    solid[["SweptArea", "Position", "ExtrudedDirection", "Depth"].index(attribute)] = None
    building.beam(solid)
    assert "without a profile, a direction or a depth" in reasons(only_beam(building.read()))


@pytest.mark.parametrize("depth", [0.0, -100.0])
def test_depth_that_is_none_is_a_reason(depth: float) -> None:
    building = Building()
    building.beam(building.extrusion(building.rectangle(), depth, z=(1, 0, 0)))
    assert "extruded by" in reasons(only_beam(building.read()))

"""Longitudinal bars read from bodies: places, ends, hooks, layers, units and turned beams.

What is expected is written out from the geometry that each test draws. The standard hooks are
those of CSA A23.1 and CSA A23.3-14, from memory: 90 degrees with 12 diameters, 180 degrees with
4 diameters and at least 60 mm of straight extension.
"""

from __future__ import annotations

import math
from dataclasses import replace

import ifcopenshell
import numpy as np
import pytest

from ifccheck.beam import Anchor, Bars, Outline, Run
from ifccheck.ifc.bar_paths import Path, path_length, rounded
from ifccheck.ifc.bar_samples import sample, tabulate
from ifccheck.ifc.entity import UnreadableError
from tests.barred_beams import HEIGHT, LENGTH, Curve, Found, ModelWithBars, bent, straight

# CSA G30.18: nominal diameter [mm] and area [mm2], published
CSA_BARS = {
    "10M": (11.3, 100.0),
    "15M": (16.0, 200.0),
    "20M": (19.5, 300.0),
    "25M": (25.2, 500.0),
    "30M": (29.9, 700.0),
    "35M": (35.7, 1000.0),
    "45M": (43.7, 1500.0),
    "55M": (56.4, 2500.0),
}


@pytest.mark.parametrize(("name", "diameter", "area"), [(k, *v) for k, v in CSA_BARS.items()])
def test_a_named_metric_bar_has_the_area_of_the_standard(
    name: str, diameter: float, area: float
) -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(50, 5950, 0, 100), diameter=diameter, Name=f"bottom {name}")
    (bars,) = model.read(beam).bars
    assert (bars.area, bars.diameter, bars.designation) == (area, diameter, name)


def test_equal_bars_of_a_layer_are_one_group_from_right_to_left() -> None:
    model = ModelWithBars()
    beam = model.beam()
    curves = [straight(40, 5960, y, 60) for y in (90.0, -90.0, 0.0)]
    model.bars(beam, *curves, diameter=20.0, SteelGrade="400W")
    (bars,) = model.read(beam).bars
    assert bars.count == 3
    assert bars.ys == pytest.approx((-90.0, 0.0, 90.0))
    assert (bars.start, bars.end, bars.z) == pytest.approx((40.0, 5960.0, 60.0))
    assert bars.area == pytest.approx(math.pi * 100.0)
    assert (bars.start_anchor, bars.end_anchor) == (Anchor.STRAIGHT, Anchor.STRAIGHT)
    assert bars.yield_strength is not None
    assert bars.yield_strength.value == 400.0
    assert model.read(beam).reasons == ""


def test_a_bar_drawn_from_the_end_to_the_start_is_the_same() -> None:
    model = ModelWithBars()
    beam = model.beam()
    tail = [(5900.0, 0.0, 320.0), (5900.0, 0.0, 60.0), (100.0, 0.0, 60.0)]
    model.bars(beam, bent(tail, 56.0), bent(tail[::-1], 56.0))
    first, second = model.file.by_type("IfcReinforcingBar")
    (bars,) = model.read(beam).bars
    assert bars.count == 1
    assert "modelled twice" in model.read(beam).remarks
    assert f"#{second.id()}" in model.read(beam).remarks
    assert f"#{first.id()}" in model.read(beam).remarks
    assert (bars.start_anchor, bars.end_anchor) == (Anchor.STRAIGHT, Anchor.HOOK)
    assert (bars.start, bars.end) == pytest.approx((100.0, 5900.0 + 8.0))


def square_hook(diameter: float, extension: float) -> Curve:
    """A bar at 60 mm with a 90 degree hook up at its start, 100 mm from the beam's end."""
    radius = 3.6 * diameter
    tail = 60.0 + radius + extension
    return bent([(100.0, 0.0, tail), (100.0, 0.0, 60.0), (5900.0, 0.0, 60.0)], radius)


def test_a_square_hook_of_twelve_diameters_is_standard() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, square_hook(20.0, 12.0 * 20.0), diameter=20.0)
    (bars,) = model.read(beam).bars
    assert (bars.start_anchor, bars.end_anchor) == (Anchor.HOOK, Anchor.STRAIGHT)
    assert bars.start == pytest.approx(100.0 - 10.0)  # the outside of the hook
    assert bars.end == pytest.approx(5900.0)
    assert bars.z == pytest.approx(60.0)


def test_a_square_hook_short_of_twelve_diameters_ends_straight_before_its_bend() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, square_hook(20.0, 11.5 * 20.0), diameter=20.0)
    found = model.read(beam)
    (bars,) = found.bars
    assert bars.start_anchor is Anchor.STRAIGHT
    assert bars.start == pytest.approx(100.0 + 3.6 * 20.0)
    assert "short of a standard hook" in found.remarks


def full_hook(diameter: float, extension: float) -> Curve:
    """A bar at 60 mm whose start turns back by 180 degrees above it."""
    r = 3.6 * diameter
    start = 150.0
    points = (
        (start + extension, 0.0, 60.0 + 2.0 * r),
        (start, 0.0, 60.0 + 2.0 * r),
        (start - r, 0.0, 60.0 + r),
        (start, 0.0, 60.0),
        (5900.0, 0.0, 60.0),
    )
    return Curve(points, (1,))


@pytest.mark.parametrize(
    ("diameter", "extension", "anchor"),
    [
        (10.0, 60.0, Anchor.HOOK),  # the least of 60 mm governs
        (10.0, 45.0, Anchor.STRAIGHT),  # more than 4 diameters, less than 60 mm
        (25.0, 100.0, Anchor.HOOK),
        (25.0, 90.0, Anchor.STRAIGHT),
    ],
)
def test_a_full_hook_needs_four_diameters_and_sixty_millimetres(
    diameter: float, extension: float, anchor: Anchor
) -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, full_hook(diameter, extension), diameter=diameter)
    (bars,) = model.read(beam).bars
    assert bars.start_anchor is anchor
    outside = 150.0 - 3.6 * diameter - diameter / 2.0
    assert bars.start == pytest.approx(outside if anchor is Anchor.HOOK else 150.0)
    assert bars.z == pytest.approx(60.0)


@pytest.mark.parametrize(("tail", "anchor"), [(12.0, Anchor.STRAIGHT), (15.7, Anchor.HOOK)])
def test_a_corner_drawn_sharp_gives_its_bend_from_the_tail(tail: float, anchor: Anchor) -> None:
    model = ModelWithBars()
    beam = model.beam()
    sharp = Curve(((100.0, 0.0, 60.0 + tail * 20.0), (100.0, 0.0, 60.0), (5900.0, 0.0, 60.0)))
    model.bars(beam, sharp, diameter=20.0)
    (bars,) = model.read(beam).bars
    assert bars.start_anchor is anchor


@pytest.mark.parametrize(("radius", "anchor"), [(60.0, Anchor.HOOK), (70.0, Anchor.STRAIGHT)])
def test_a_polygonal_solid_has_bends_of_its_radius(radius: float, anchor: Anchor) -> None:
    """A tail of 305 mm from the corner keeps 245 or 235 mm: 12 diameters of 20 are 240 mm."""
    model = ModelWithBars()
    beam = model.beam()
    corners = ((100.0, 0.0, 365.0), (100.0, 0.0, 60.0), (5900.0, 0.0, 60.0))
    line = model.file.create_entity("IfcPolyline", [model.point(corner) for corner in corners])
    solid = model.file.create_entity(
        "IfcSweptDiskSolidPolygonal", line, 10.0, None, None, None, radius
    )
    model.aggregate(beam, [model.bar([solid], 20.0, beam)])
    (bars,) = model.read(beam).bars
    assert bars.start_anchor is anchor
    assert bars.start == pytest.approx(90.0 if anchor is Anchor.HOOK else 100.0 + radius)


def test_rounding_a_polyline_is_rounding_its_corners() -> None:
    corners = ((0.0, 0.0, 0.0), (300.0, 0.0, 0.0), (300.0, 400.0, 0.0), (500.0, 400.0, 150.0))
    expected = bent(corners, 40.0)
    made = rounded(Path(corners), 40.0)
    assert made.arcs == expected.arcs
    assert np.array(made.points) == pytest.approx(np.array(expected.points))
    with pytest.raises(UnreadableError, match="too wide"):
        rounded(Path(corners), 500.0)


def test_the_legs_of_a_hairpin_hook_round_each_other() -> None:
    model = ModelWithBars()
    beam = model.beam()
    hairpin = bent(
        [(1500.0, -90.0, 300.0), (60.0, -90.0, 300.0), (60.0, 90.0, 300.0), (1500.0, 90.0, 300.0)],
        40.0,
    )
    model.bars(beam, hairpin, diameter=12.0)
    (bars,) = model.read(beam).bars
    assert bars.count == 2
    assert bars.ys == pytest.approx((-90.0, 90.0))
    assert (bars.start_anchor, bars.end_anchor) == (Anchor.HOOK, Anchor.STRAIGHT)
    assert (bars.start, bars.end) == pytest.approx((54.0, 1500.0))


def test_layers_and_curtailed_bars_stay_apart() -> None:
    model = ModelWithBars()
    beam = model.beam()
    lower = [straight(40, 5960, y, 60) for y in (-90.0, 0.0, 90.0)]
    upper = [straight(1500, 4500, y, 110) for y in (-90.0, 90.0)]
    top = [straight(40, 5960, y, 540) for y in (-90.0, 90.0)]
    support = [straight(40, 1800, 0, 540)]
    model.bars(beam, *lower, *upper, *top, *support, diameter=20.0)
    bars = model.read(beam).bars
    assert [(b.count, b.z, b.start, b.end) for b in bars] == [
        (3, 60.0, 40.0, 5960.0),
        (2, 110.0, 1500.0, 4500.0),
        (1, 540.0, 40.0, 1800.0),
        (2, 540.0, 40.0, 5960.0),
    ]


def test_bars_within_a_millimetre_share_a_layer_and_the_shortest_counts() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(40, 5960, -90, 60.0), straight(43, 5957, 90, 60.8))
    (bars,) = model.read(beam).bars
    assert (bars.count, bars.start, bars.end) == (2, 43.0, 5957.0)
    assert bars.z == pytest.approx(60.4)


def test_bent_up_parts_are_not_counted_and_said() -> None:
    model = ModelWithBars()
    beam = model.beam()
    corners = [(50, 0, 540), (1000, 0, 540), (1480, 0, 60), (4520, 0, 60), (5000, 0, 540)]
    model.bars(beam, bent([*corners, (5950, 0, 540)], 80.0), diameter=20.0)
    found = model.read(beam)
    cut = 80.0 * math.tan(math.radians(22.5))  # where the bend of 45 degrees begins
    assert [(b.z, b.start, b.end) for b in found.bars] == [
        pytest.approx((60.0, 1480.0 + cut, 4520.0 - cut)),
        pytest.approx((540.0, 50.0, 1000.0 - cut)),
        pytest.approx((540.0, 5000.0 + cut, 5950.0)),
    ]
    # chords are a little shorter than their arcs
    inclined = 2.0 * 80.0 * math.radians(45.0) + 480.0 * math.sqrt(2.0) - 2.0 * cut
    far = 1000.0 - cut - 50.0
    assert [(b.start_beyond, b.end_beyond) for b in found.bars] == [
        pytest.approx((inclined + far, inclined + far), abs=2.0),
        pytest.approx((0.0, 2.0 * inclined + 3040.0 - 2.0 * cut + far), abs=2.0),
        pytest.approx((2.0 * inclined + 3040.0 - 2.0 * cut + far, 0.0), abs=2.0),
    ]
    assert all(b.start_anchor is b.end_anchor is Anchor.STRAIGHT for b in found.bars)
    assert "inclined parts are not counted" in found.remarks
    assert found.reasons == ""


def test_a_bar_that_slopes_is_taken_in_pieces_where_each_does_least() -> None:
    model = ModelWithBars()
    beam = model.beam()
    low = Curve(((50.0, 0.0, 60.0), (5950.0, 0.0, 80.0)))
    high = Curve(((5950.0, 50.0, 500.0), (50.0, 50.0, 520.0)))
    model.bars(beam, low, high)
    found = model.read(beam)
    assert [(b.z, b.start, b.end) for b in found.bars] == [
        pytest.approx((70.0, 50.0, 3000.0)),
        pytest.approx((80.0, 3000.0, 5950.0)),
        pytest.approx((500.0, 3000.0, 5950.0)),
        pytest.approx((510.0, 50.0, 3000.0)),
    ]
    assert {(b.start_beyond, b.end_beyond) for b in found.bars} == {(0.0, 2950.0), (2950.0, 0.0)}
    assert {b.along for b in found.bars} == {1.0}
    assert "slopes" in found.remarks


def test_a_bar_through_the_middle_is_not_counted_there() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, Curve(((50.0, 0.0, 245.0), (5950.0, 0.0, 355.0))), straight(50, 5950, 0, 60))
    found = model.read(beam)
    lower, *pieces = found.bars
    assert lower.z == 60.0
    below, above = [b for b in pieces if b.z < 300.0], [b for b in pieces if b.z > 300.0]
    assert max(b.z for b in below) == pytest.approx(295.0)
    assert min(b.z for b in above) == pytest.approx(305.0)
    assert min(b.start for b in above) - max(b.end for b in below) > 500.0
    assert "crosses the middle" in found.remarks


def test_a_skewed_bar_keeps_the_beam_from_being_rated() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, Curve(((50.0, -100.0, 60.0), (2050.0, 100.0, 60.0))))
    found = model.read(beam)
    assert "neither along the beam nor square to it: not read" in found.reasons
    assert found.bars == ()


def test_a_curved_bar_keeps_the_beam_from_being_rated() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, Curve(((50.0, 0.0, 400.0), (3000.0, 0.0, 60.0), (5950.0, 0.0, 400.0)), (0,)))
    assert "not read" in model.read(beam).reasons


@pytest.mark.parametrize(
    ("y", "z", "fits"),
    [
        (0.0, 60.0, True),
        (0.0, 7.5, True),
        (0.0, 6.0, False),
        (144.0, 60.0, False),
        (0.0, 596.0, False),
    ],
)
def test_steel_outside_the_concrete_is_a_reason(y: float, z: float, fits: bool) -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(50, 5950, y, z), diameter=16.0)
    assert ("outside the concrete" in model.read(beam).reasons) is not fits


def test_bars_may_run_on_into_the_supports() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(-300, 6400, 0, 60))
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end) == pytest.approx((-300.0, LENGTH + 400.0))
    assert model.read(beam).reasons == ""


@pytest.mark.parametrize("unit", ["mm", "m", "in"])
@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_units_and_schemas_give_the_same_bars(unit: str, schema: str) -> None:
    model = ModelWithBars(schema, unit)
    beam = model.beam(origin=(5000.0, -2000.0, 3000.0))
    sharp = Curve(((100.0, 0.0, 500.0), (100.0, 0.0, 60.0), (5900.0, 0.0, 60.0)))
    model.bars(beam, sharp, diameter=25.0)
    (bars,) = model.read(beam).bars
    assert (bars.diameter, bars.area) == pytest.approx((25.0, math.pi * 25.0**2 / 4.0))
    assert (bars.start, bars.end, bars.z) == pytest.approx((87.5, 5900.0, 60.0))
    assert (bars.start_anchor, bars.end_anchor) == (Anchor.HOOK, Anchor.STRAIGHT)


@pytest.mark.parametrize(
    "along",
    [(0.0, 1.0, 0.0), (-1.0, 0.0, 0.0), (3.0, 4.0, 0.0), (4.0, -1.0, 0.5), (1.0, 1.0, -1.0)],
)
def test_turned_and_sloped_beams_hold_the_same_bars(along: tuple[float, float, float]) -> None:
    """The bars are drawn in the building, by the beam's own axes worked out here."""
    model = ModelWithBars(unit="m")
    origin = (12000.0, 7000.0, 4000.0)
    beam = model.beam(origin, along)
    x = np.array(along) / np.linalg.norm(along)
    y = np.array((-x[1], x[0], 0.0)) / math.hypot(x[0], x[1])
    z = np.array((-x[2] * y[1], x[2] * y[0], x[0] * y[1] - x[1] * y[0]))
    local = bent([(100.0, 40.0, 60.0), (5900.0, 40.0, 60.0), (5900.0, 40.0, 500.0)], 72.0)
    world = tuple(tuple(np.array(origin) + a * x + b * y + c * z) for a, b, c in local.points)
    bar = model.bar(Curve(world, local.arcs), 20.0, world=True)
    model.aggregate(beam, [bar])
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end, bars.z) == pytest.approx((100.0, 5910.0, 60.0))
    assert bars.ys == pytest.approx((40.0,))
    assert bars.end_anchor is Anchor.HOOK


def test_one_mapped_entity_may_be_many_bars() -> None:
    model = ModelWithBars()
    beam = model.beam()
    solid = model.swept(straight(0, 5900, 0, 0), 20.0)
    items = model.mapped(solid, [(50.0, y, 60.0) for y in (-100.0, -50.0, 0.0, 50.0, 100.0)])
    model.aggregate(beam, [model.bar(items, 20.0, beam)])
    (bars,) = model.read(beam).bars
    assert bars.count == 5
    assert bars.ys == pytest.approx((-100.0, -50.0, 0.0, 50.0, 100.0))
    assert (bars.start, bars.end) == pytest.approx((50.0, 5950.0))


def test_a_mapped_bar_may_be_turned() -> None:
    model = ModelWithBars("IFC4", "in")
    beam = model.beam()
    solid = model.swept(Curve(((0.0, 0.0, 0.0), (0.0, 0.0, 5900.0))), 20.0)
    (item,) = model.mapped(solid, [(50.0, 30.0, 60.0)])
    target = item.MappingTarget
    target.Axis1, target.Axis2, target.Axis3 = (
        model.direction((0, 1, 0)),
        model.direction((0, 0, 1)),
        model.direction((1, 0, 0)),
    )
    model.aggregate(beam, [model.bar([item], 20.0, beam)])
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end, bars.z) == pytest.approx((50.0, 5950.0, 60.0))
    assert bars.ys == pytest.approx((30.0,))


def test_an_extruded_circle_is_a_straight_bar() -> None:
    model = ModelWithBars(unit="m")
    beam = model.beam()
    create = model.file.create_entity
    profile = create("IfcCircleProfileDef", "AREA", None, None, 10.0 * model.scale)
    axes = create(
        "IfcAxis2Placement3D",
        model.point((40.0, -70.0, 65.0)),
        model.direction((1, 0, 0)),
        model.direction((0, 1, 0)),
    )
    up = model.direction((0, 0, 1))
    solid = create("IfcExtrudedAreaSolid", profile, axes, up, 5920.0 * model.scale)
    model.aggregate(beam, [model.bar([solid], None, beam)])
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end, bars.z) == pytest.approx((40.0, 5960.0, 65.0))
    assert bars.ys == pytest.approx((-70.0,))
    assert (bars.diameter, bars.area) == pytest.approx((20.0, 100.0 * math.pi))


@pytest.mark.parametrize("degrees", [False, True])
def test_composite_curves_of_trimmed_lines_and_circles(degrees: bool) -> None:
    model = ModelWithBars("IFC2X3")
    create = model.file.create_entity
    if degrees:
        exponents = create("IfcDimensionalExponents", 0, 0, 0, 0, 0, 0, 0)
        radian = create("IfcSIUnit", UnitType="PLANEANGLEUNIT", Name="RADIAN")
        value = create("IfcPlaneAngleMeasure", math.pi / 180.0)
        factor = create("IfcMeasureWithUnit", value, radian)
        unit = create("IfcConversionBasedUnit", exponents, "PLANEANGLEUNIT", "DEGREE", factor)
        assignment = model.file.by_type("IfcUnitAssignment")[0]
        assignment.Units = (*assignment.Units, unit)
    beam = model.beam()
    quarter = 90.0 if degrees else math.pi / 2.0
    r = 80.0
    level = trimmed_line(model, (100.0, 0.0, 60.0), (1.0, 0.0, 0.0), 5700.0)
    centre = create(
        "IfcAxis2Placement3D",
        model.point((5800.0, 0.0, 60.0 + r)),
        model.direction((0, 1, 0)),
        model.direction((0, 0, -1)),
    )
    circle = create("IfcCircle", centre, r)
    # about y an angle turns from -z towards -x, so the bend to +x runs backwards
    bend = create(
        "IfcTrimmedCurve",
        circle,
        [create("IfcParameterValue", 0.0)],
        [create("IfcParameterValue", -quarter)],
        False,
        "PARAMETER",
    )
    upright = trimmed_line(model, (5800.0 + r, 0.0, 60.0 + r), (0.0, 0.0, 1.0), 300.0)
    segments = [
        create("IfcCompositeCurveSegment", "CONTINUOUS", True, part)
        for part in (level, bend, upright)
    ]
    curve = create("IfcCompositeCurve", segments, False)
    length = 5700.0 + quarter + 300.0
    solid = create("IfcSweptDiskSolid", curve, 10.0, None, 0.0, length)
    model.aggregate(beam, [model.bar([solid], 20.0, beam)])
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end, bars.z) == pytest.approx((100.0, 5890.0, 60.0))
    assert bars.end_anchor is Anchor.HOOK


def trimmed_line(
    model: ModelWithBars,
    start: tuple[float, float, float],
    along: tuple[float, float, float],
    length: float,
) -> ifcopenshell.entity_instance:
    create = model.file.create_entity
    vector = create("IfcVector", model.direction(along), 1.0)
    line = create("IfcLine", model.point(start), vector)
    first, last = (create("IfcParameterValue", value) for value in (0.0, length))
    return create("IfcTrimmedCurve", line, [first], [last], True, "PARAMETER")


def test_a_solid_swept_over_a_part_of_a_polyline() -> None:
    model = ModelWithBars("IFC2X3")
    beam = model.beam()
    line = model.curve(Curve(((0.0, 0.0, 60.0), (2000.0, 0.0, 60.0), (6000.0, 0.0, 60.0))))
    solid = model.file.create_entity("IfcSweptDiskSolid", line, 8.0, None, 0.5, 1.75)
    model.aggregate(beam, [model.bar([solid], 16.0, beam)])
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end) == pytest.approx((1000.0, 5000.0))


def test_a_solid_swept_over_an_unclear_part_is_a_reason() -> None:
    model = ModelWithBars("IFC2X3")
    beam = model.beam()
    line = model.curve(straight(0, 6000, 0, 60))
    solid = model.file.create_entity("IfcSweptDiskSolid", line, 8.0, None, 0.0, 3000.0)
    model.aggregate(beam, [model.bar([solid], 16.0, beam)])
    assert "beyond its ends" in model.read(beam).reasons


def test_a_bar_of_no_faces_is_a_reason_and_its_axis_helps() -> None:
    model = ModelWithBars()
    beam = model.beam()
    create = model.file.create_entity
    shell = create("IfcClosedShell", [])
    brep = create("IfcFacetedBrep", shell)
    bar = model.bar([brep], 16.0, beam)
    model.aggregate(beam, [bar])
    found = model.read(beam)
    assert "IfcFacetedBrep: its axis is not found" in found.reasons
    assert f"#{bar.id()}" in found.reasons
    axis = model.representation([model.curve(straight(50, 5950, 0, 60))], "Axis")
    bar.Representation.Representations = (*bar.Representation.Representations, axis)
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end, bars.diameter) == pytest.approx((50.0, 5950.0, 16.0))


def test_a_bar_that_is_both_stretched_and_mapped_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    (item,) = model.mapped(model.swept(straight(0, 1000, 0, 60), 16.0), [(0.0, 0.0, 0.0)])
    origin = model.point((0.0, 0.0, 0.0))
    item.MappingTarget = model.file.create_entity(
        "IfcCartesianTransformationOperator3DnonUniform", None, None, origin, 5.0, None, 1.0, 1.0
    )
    model.aggregate(beam, [model.bar([item], 16.0, beam)])
    assert "stretch" in model.read(beam).reasons


def test_stirrups_alone_do_not_make_a_reinforced_beam() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, *(Curve(((x, -100.0, 60.0), (x, 100.0, 60.0))) for x in (100.0, 200.0)))
    assert "no longitudinal bar" in model.read(beam).reasons


def test_shape_decides_over_role() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, straight(50, 5950, 0, 60), PredefinedType="LIGATURE")
    found = model.read(beam)
    assert found.bars[0].count == 1
    assert "by its role" in found.remarks


def test_arcs_are_sampled_on_their_circle() -> None:
    half_circle = Path(((50.0, 0.0, 0.0), (0.0, 50.0, 0.0), (-50.0, 0.0, 0.0)), (0,))
    points = sample(tabulate((half_circle,))).points
    assert np.hypot(points[:, 0], points[:, 1]) == pytest.approx(50.0)
    assert path_length(half_circle) == pytest.approx(50.0 * math.pi)
    turned = np.degrees(np.unwrap(np.arctan2(points[:, 1], points[:, 0])))
    assert (np.diff(turned) > 0.0).all()
    assert np.diff(turned).max() <= 180.0 / 7.0 + 1e-9


def test_heights_are_measured_from_the_soffit() -> None:
    model = ModelWithBars()
    beam = model.beam(origin=(0.0, 0.0, 9000.0))
    model.bars(beam, straight(50, 5950, 0, HEIGHT - 60.0))
    assert model.read(beam).bars[0].z == pytest.approx(540.0)


# the same steel modelled twice: centres nearer than two bars can lie


def twice(
    *shapes: Curve, diameter: float = 25.0, second: float | None = None
) -> tuple[float, str, tuple[Bars, ...]]:
    """Steel area at midspan of bars drawn one by one, remarks and bars."""
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, shapes[0], diameter=diameter)
    model.bars(beam, *shapes[1:], diameter=second or diameter)
    found = model.read(beam)
    middle = [bars for bars in found.bars if bars.start < LENGTH / 2.0 < bars.end]
    return sum(bars.count * bars.area for bars in middle), found.remarks, found.bars


ONE_25 = math.pi * 25.0**2 / 4.0


@pytest.mark.parametrize(
    "copy",
    [
        straight(40, 5960, 3, 60),
        straight(40, 5960, 0, 62),
        straight(60, 5940, 0, 60),
        straight(20, 5980, 0, 60),
        straight(60, 5980, 15, 75),
        Curve(((40, -60, 60), (5960, 60, 60))),
    ],
)
def test_bars_nearer_than_they_can_lie_count_once(copy: Curve) -> None:
    area, remarks, _ = twice(straight(40, 5960, 0, 60), copy)
    assert area == pytest.approx(ONE_25)
    assert "modelled twice" in remarks


def test_bars_of_a_bundle_touch_and_count_each() -> None:
    area, remarks, _ = twice(
        straight(40, 5960, 0, 60), straight(40, 5960, 25, 60), straight(40, 5960, 0, 85)
    )
    assert area == pytest.approx(3.0 * ONE_25)
    assert remarks == ""


def test_of_bars_in_one_another_the_weaker_counts() -> None:
    area, remarks, (bars,) = twice(
        straight(40, 5960, 0, 60), straight(40, 5960, 1, 60), second=14.0
    )
    assert area == pytest.approx(math.pi * 49.0)
    assert "modelled twice" in remarks
    assert bars.diameter == 14.0


def test_a_short_bar_in_a_long_one_of_its_size_is_left_out() -> None:
    area, remarks, (bars,) = twice(straight(40, 5960, 0, 60), straight(2000, 4000, 1, 60))
    assert area == pytest.approx(ONE_25)
    assert (bars.start, bars.end) == pytest.approx((40.0, 5960.0))
    assert "modelled twice" in remarks


def test_bars_lapped_on_one_axis_never_give_more_than_one_bar() -> None:
    """Each develops over 300 mm or more (200 mm in compression): CSA A23.3-14, 12.2.1, 12.3.1."""
    _, remarks, bars = twice(straight(40, 4000, 0, 60), straight(2000, 5960, 0, 60))
    assert "lap on one axis" in remarks
    one, other = sorted(bars, key=lambda b: b.start)
    assert (one.start, other.end) == pytest.approx((40.0, 5960.0))
    assert one.end > other.start
    for x in np.linspace(other.start, one.end, 50):
        developed = [min(x - b.start, b.end - x, 200.0) / 200.0 for b in (one, other)]
        assert sum(developed) <= 1.0 + 1e-9


def test_bars_that_meet_end_to_end_or_cross_count_each() -> None:
    area, remarks, _ = twice(straight(40, 3200, 0, 60), straight(3000, 5960, 25, 60))
    assert area == pytest.approx(ONE_25)
    area, remarks, _ = twice(straight(40, 3010, 0, 60), straight(2990, 5960, 0, 60))
    assert "modelled twice" not in remarks
    assert "meet end to end" in remarks


def test_of_bars_that_cross_flat_the_one_that_leans_is_left_out() -> None:
    leaning = Curve(((40.0, -100.0, 60.0), (5960.0, 100.0, 60.0)))
    others = [straight(40, 5960, y, 60) for y in (-50.0, 0.0, 50.0)]
    area, remarks, (bars,) = twice(leaning, *others)
    assert area == pytest.approx(3.0 * ONE_25)
    assert bars.ys == pytest.approx((-50.0, 0.0, 50.0))
    assert "modelled twice" in remarks


def test_twice_the_cage_of_a_long_beam_counts_once() -> None:
    ys = [-90.0, -30.0, 30.0, 90.0]
    cage = [straight(40, 5960, y, z) for y in ys for z in (60.0, 540.0)]
    copy = [straight(40, 5960, y + 3.0, z) for y in ys for z in (60.0, 540.0)]
    area, remarks, _ = twice(*cage, *copy)
    assert area == pytest.approx(8.0 * ONE_25)
    assert remarks.count("modelled twice") == 1


# bars in the box round a section that is no rectangle, but not in the concrete


TEE = [(-150, 0), (150, 0), (150, 450), (600, 450), (600, 600), (-600, 600), (-600, 450)]
TEE.append((-150, 450))
INVERTED = [(y, 600 - z) for y, z in reversed(TEE)]
ELL = [(-150, 0), (150, 0), (150, 450), (600, 450), (600, 600), (-150, 600)]


def outline_reasons(outline: list[tuple[int, int]], *bars: Curve) -> tuple[str, list[str]]:
    """Reasons of a beam, and the labels of its bars."""
    model = ModelWithBars()
    beam = model.beam(outline=[(float(y), float(z)) for y, z in outline])
    model.bars(beam, *bars, diameter=25.0)
    labels = [f"#{bar.id()}" for bar in model.file.by_type("IfcReinforcingBar")]
    source = model.read(beam).source("bars")
    assert all(reason.blocking for reason in source.reasons)
    return "; ".join(reason.text for reason in source.reasons), labels


@pytest.mark.parametrize("y", [-500.0, -400.0, 400.0, 500.0, 150.0, 145.0])
def test_bars_beside_the_web_are_a_reason(y: float) -> None:
    reasons, (inside, beside) = outline_reasons(
        TEE, straight(40, 5960, 0, 60), straight(40, 5960, y, 60)
    )
    assert f"bar {beside}: lies outside the concrete" in reasons
    assert inside not in reasons


def test_bars_within_the_web_and_the_flange_are_none() -> None:
    inside = [straight(40, 5960, y, 60) for y in (-137.5, 0.0, 137.5)]
    flange = [straight(40, 5960, y, z) for y in (-560.0, 560.0) for z in (490.0, 560.0)]
    assert outline_reasons(TEE, *inside, *flange)[0] == ""


def test_a_hook_that_turns_out_of_the_web_is_none() -> None:
    """It stays in the box round the section, under the flange."""
    hook = [(300, 100, 60), (5700, 100, 60), (5700, 100, 520)]
    aside = [(300, 100, 60), (5700, 100, 60), (5700, 530, 60)]
    found = []
    for shape in (hook, aside):
        model = ModelWithBars()
        beam = model.beam(outline=[(float(y), float(z)) for y, z in TEE])
        model.bars(beam, bent(shape, 100.0), diameter=25.0)
        found.append(model.read(beam))
        assert found[-1].reasons == ""
    (hooked,), (straight_end,) = (one.bars for one in found)
    assert (hooked.end_anchor, straight_end.end_anchor) == (Anchor.HOOK, Anchor.STRAIGHT)
    assert (hooked.end, straight_end.end) == pytest.approx((5712.5, 5600.0))
    assert "its hook leaves the concrete" in found[1].remarks


@pytest.mark.parametrize(("rise", "fits"), [(0.0, False), (190.0, True)])
def test_a_bent_bar_under_a_haunch_is_a_reason(rise: float, fits: bool) -> None:
    """The soffit rises by 200 mm over the first half."""
    deep, shallow = Outline((box(300, 0, 600),)), Outline((box(300, 200, 600),))
    runs = (Run(0, 3000, deep, shallow), Run(3000, LENGTH, shallow))
    bar = Curve(((50, 0, 60), (2900, 0, 60 + rise), (5900, 0, 260)))
    found = with_runs(runs, bar)
    assert ("outside" not in found.reasons) is fits


@pytest.mark.parametrize(
    ("outline", "y", "z", "fits"),
    [
        (INVERTED, 400.0, 540.0, False),
        (INVERTED, 400.0, 60.0, True),
        (ELL, 400.0, 60.0, False),
        (ELL, 400.0, 540.0, True),
        (ELL, -120.0, 60.0, True),
    ],
)
def test_bars_of_other_outlines(
    outline: list[tuple[int, int]], y: float, z: float, fits: bool
) -> None:
    reasons, _ = outline_reasons(outline, straight(40, 5960, y, z))
    assert ("outside the concrete" in reasons) is not fits


def with_runs(runs: tuple[Run, ...], *bars: Curve) -> Found:
    model = ModelWithBars()
    beam = model.beam()
    model.frames[beam.id()] = replace(model.frames[beam.id()], runs=runs)
    model.bars(beam, *bars, diameter=25.0)
    return model.read(beam)


def box(width: float, bottom: float, top: float) -> tuple[tuple[float, float], ...]:
    return (
        (-width / 2, bottom),
        (width / 2, bottom),
        (width / 2, top),
        (-width / 2, top),
    )


def test_bars_in_a_void_are_a_reason() -> None:
    hollow = Outline((box(300, 0, 600), box(100, 200, 400)))
    run = (Run(0.0, LENGTH, hollow),)
    assert "outside" in with_runs(run, straight(40, 5960, 0, 300)).reasons
    assert "outside" in with_runs(run, straight(40, 5960, 55, 300)).reasons
    assert with_runs(run, straight(40, 5960, 0, 100), straight(40, 5960, 100, 300)).reasons == ""


def test_a_bar_that_leaves_the_concrete_between_its_ends_is_a_reason() -> None:
    """The middle third of the beam is less deep."""
    deep, shallow = Outline((box(300, 0, 600),)), Outline((box(300, 200, 600),))
    thirds = (Run(0, 2000, deep), Run(2000, 4000, shallow), Run(4000, LENGTH, deep))
    assert "outside" in with_runs(thirds, straight(40, 5960, 0, 60)).reasons
    short = [straight(40, 1960, 0, 60), straight(4040, 5960, 0, 60), straight(40, 5960, 0, 260)]
    assert with_runs(thirds, *short).reasons == ""

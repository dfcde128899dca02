"""Openings as they are read, against first principles and ifcopenshell's geometry engine."""

from __future__ import annotations

import math

import numpy as np
import pytest

from ifccheck.beam import Beam, Opening
from ifccheck.frame.net_outlines import net_runs
from ifccheck.mechanics.width_profile import strips_of
from tests.ifc_models import Building, local, only_beam, reasons, volume_and_points

LENGTH, WIDTH, DEPTH = 6000.0, 300.0, 600.0
TEE = (
    (-150, 0), (150, 0), (150, 450), (600, 450), (600, 600), (-600, 600), (-600, 450), (-150, 450),
)  # fmt: skip


def rectangular(building: Building):
    """A beam along X from (0, 0, 0): the profile's x is the beam's y, its y the beam's z."""
    profile = building.rectangle(WIDTH, DEPTH, Position=building.axes_2d((0, DEPTH / 2)))
    return building.beam(building.extrusion(profile, LENGTH, z=(1, 0, 0), x=(0, 1, 0)))


def tee(building: Building):
    return building.beam(
        building.extrusion(building.outline(*TEE), LENGTH, z=(1, 0, 0), x=(0, 1, 0))
    )


def across(building: Building, profile, x: float, z: float, width: float = 500.0, y: float = 250.0):
    """An extrusion against y, its profile's x along the beam and its y up."""
    return building.extrusion(profile, width, at=(x, y, z), z=(0, -1, 0), x=(1, 0, 0))


def box_of(opening: Opening) -> tuple[float, ...]:
    return (
        opening.start, opening.end, opening.right, opening.left, opening.bottom, opening.top,
    )  # fmt: skip


def net_volume(beam: Beam) -> float:
    """Of what the boxes of its openings leave of a beam, by the width profile [mm3]."""
    runs, gone = net_runs(beam.runs, beam.openings)
    assert not gone
    volume = 0.0
    for run in runs:
        z0, z1, w0, w1 = strips_of(run.outline.rings).T
        volume += (run.end - run.start) * float(((z1 - z0) * (w0 + w1) / 2.0).sum())
    return volume


def test_what_the_geometry_engine_prints_is_kept_off_our_output(
    capfd: pytest.CaptureFixture[str],
) -> None:
    """It complains of a tapered extrusion past the streams of Python."""
    building = Building("IFC4")
    product = rectangular(building)
    item = building.entity(
        "IfcExtrudedAreaSolidTapered", building.rectangle(200.0, 120.0),
        building.axes((2000, 250, 300), (0, -1, 0), (1, 0, 0)), building.direction((0, 0, 1)),
        500.0, building.rectangle(200.0, 120.0),
    )  # fmt: skip
    building.void(product, item)
    assert only_beam(building.read()).openings
    assert capfd.readouterr() == ("", "")


@pytest.mark.parametrize("unit", ["MILLIMETRE", "METRE", "FOOT"])
@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_a_rectangle_through_the_web(schema: str, unit: str) -> None:
    building = Building(schema, unit)
    product = rectangular(building)
    building.void(product, across(building, building.rectangle(200.0, 120.0), 2000.0, 300.0))
    beam = only_beam(building.read())
    (opening,) = beam.openings
    assert box_of(opening) == pytest.approx((1900, 2100, -150, 150, 240, 360), abs=1e-3)
    assert opening.shape == "rectangle"
    assert not beam.reasons
    assert net_volume(beam) == pytest.approx(LENGTH * WIDTH * DEPTH - 200 * 120 * WIDTH)
    volume, _ = volume_and_points(product)
    assert net_volume(beam) == pytest.approx(volume, rel=1e-6)


def test_a_circle_through_the_web_counts_as_the_box_round_it() -> None:
    building = Building()
    product = rectangular(building)
    hole = building.profile("IfcCircleProfileDef", Radius=75.0)
    building.void(product, across(building, hole, 3000.0, 300.0))
    beam = only_beam(building.read())
    (opening,) = beam.openings
    assert box_of(opening) == pytest.approx((2925, 3075, -150, 150, 225, 375))
    assert opening.shape == "circle"
    volume, _ = volume_and_points(product)
    true = LENGTH * WIDTH * DEPTH - math.pi * 75**2 * WIDTH
    assert volume == pytest.approx(true, rel=1e-4)
    assert net_volume(beam) == pytest.approx(true - (4 - math.pi) * 75**2 * WIDTH)


def test_any_profile_counts_as_the_box_round_it() -> None:
    building = Building()
    product = rectangular(building)
    hexagon = [(100 * math.cos(a), 100 * math.sin(a)) for a in np.radians(range(0, 360, 60))]
    building.void(product, across(building, building.outline(*hexagon), 3000.0, 300.0))
    (opening,) = only_beam(building.read()).openings
    high = 100 * math.sqrt(3) / 2
    expected = (2900, 3100, -150, 150, 300 - high, 300 + high)
    assert box_of(opening) == pytest.approx(expected)
    assert opening.shape == "other"


def test_a_profile_with_curves_counts_as_a_little_more_than_its_tracing() -> None:
    building = Building()
    product = rectangular(building)
    ellipse = building.profile("IfcEllipseProfileDef", SemiAxis1=100.0, SemiAxis2=60.0)
    building.void(product, across(building, ellipse, 3000.0, 300.0))
    (opening,) = only_beam(building.read()).openings
    assert box_of(opening) == pytest.approx((2900, 3100, -150, 150, 240, 360), abs=0.2)
    assert opening.start <= 2900
    assert opening.top >= 360


RECESSES = {
    "recess in the side": ((400.0, 200.0), (2000.0, 300.0), 100.0, 200.0,
                           (1800, 2200, 100, 150, 200, 400)),
    "notch in the soffit": ((400.0, 200.0), (2000.0, 0.0), 500.0, 250.0,
                            (1800, 2200, -150, 150, 0, 100)),
    "notch in the top": ((400.0, 200.0), (2000.0, 600.0), 500.0, 250.0,
                         (1800, 2200, -150, 150, 500, 600)),
    "dap": ((400.0, 500.0), (6000.0, 0.0), 500.0, 250.0, (5800, 6000, -150, 150, 0, 250)),
}  # fmt: skip


@pytest.mark.parametrize("kind", RECESSES)
def test_recesses_and_notches(kind: str) -> None:
    size, (x, z), width, y, expected = RECESSES[kind]
    building = Building()
    product = rectangular(building)
    building.void(product, across(building, building.rectangle(*size), x, z, width, y))
    beam = only_beam(building.read())
    (opening,) = beam.openings
    assert box_of(opening) == pytest.approx(expected)
    volume, _ = volume_and_points(product)
    assert net_volume(beam) == pytest.approx(volume, rel=1e-6)


def test_from_above_through_the_flange_and_through_the_whole_depth() -> None:
    building = Building()
    product = tee(building)
    sleeve = building.rectangle(100.0, 80.0)
    for y in (400.0, 0.0):
        building.void(product, building.extrusion(sleeve, 900.0, at=(2000.0, y, -100.0)))
    beam = only_beam(building.read())
    flange, whole = beam.openings
    assert box_of(flange) == pytest.approx((1950, 2050, 360, 440, 0, 600))
    assert box_of(whole) == pytest.approx((1950, 2050, -40, 40, 0, 600))
    volume, _ = volume_and_points(product)
    # what lies beyond the sleeve in the flange is not counted either
    assert net_volume(beam) == pytest.approx(volume - 100 * 160 * 150, rel=1e-6)


def test_a_slanting_pipe_is_cut_off_at_the_sides_of_the_beam() -> None:
    """It rises 100 over the width of 300, and sticks out a metre on either side."""
    building = Building()
    product = rectangular(building)
    rise = 100.0 / 300.0
    size = math.hypot(1.0, rise)
    up = (0.0, rise / size, -1.0 / size)
    solid = building.extrusion(
        building.rectangle(100.0, 60.0), 2300.0 * size, direction=(0, 0, 1),
        at=(3000.0, 1150.0, 300.0 - 1150.0 * rise), z=(0, -1 / size, rise / size), x=(1, 0, 0),
    )  # fmt: skip
    assert up[1] > 0.0
    building.void(product, solid)
    (opening,) = only_beam(building.read()).openings
    half = 30.0 * size + 50.0
    expected = (2950, 3050, -150, 150, 300 - half, 300 + half)
    assert box_of(opening) == pytest.approx(expected, abs=1e-6)


def faceted(building: Building, low, high):
    """A faceted Brep of a box."""
    x0, y0, z0 = low
    x1, y1, z1 = high
    corners = [(x, y, z) for x in (x0, x1) for y in (y0, y1) for z in (z0, z1)]
    points = [building.point(*corner) for corner in corners]
    faces = []
    for loop in (
        (0, 1, 3, 2),
        (4, 6, 7, 5),
        (0, 4, 5, 1),
        (2, 3, 7, 6),
        (0, 2, 6, 4),
        (1, 5, 7, 3),
    ):
        ring = building.entity("IfcPolyLoop", [points[i] for i in loop])
        bound = building.entity("IfcFaceOuterBound", ring, True)
        faces.append(building.entity("IfcFace", [bound]))
    return building.entity("IfcFacetedBrep", building.entity("IfcClosedShell", faces))


def test_other_bodies_by_their_points_or_by_the_geometry_engine() -> None:
    low, high = (1900.0, -200.0, 240.0), (2100.0, 200.0, 360.0)
    building = Building()
    made = {
        "Brep": faceted(building, low, high),
        "block": building.entity(
            "IfcCsgSolid", building.entity("IfcBlock", building.axes(low), 200.0, 400.0, 120.0)
        ),
        "pipe": building.entity(
            "IfcSweptDiskSolid",
            building.entity(
                "IfcPolyline", [building.point(2e3, y, 300.0) for y in (200.0, -200.0)]
            ),
            60.0,
        ),
        "clipped": building.clipped(
            across(building, building.rectangle(200.0, 120.0), 2000.0, 300.0),
            building.half_space((2000.0, 0.0, 300.0), (0, 1, 0)),
        ),
    }  # fmt: skip
    for solid in made.values():
        building.void(rectangular(building), solid)
    beams = building.read().beams
    for beam, kind in zip(beams, made, strict=True):
        assert len(beam.openings) == 1, (kind, reasons(beam))
        opening = beam.openings[0]
        half = 60.0 if kind == "pipe" else 100.0
        expected = (2000 - half, 2000 + half, -150, 150, 240, 360)
        assert box_of(opening) == pytest.approx(expected, abs=0.6), kind
        assert opening.start <= 2000 - half + 1e-6, kind
        assert opening.top >= 360 - 1e-6, kind


def test_mapped_bodies_turned_beams_and_the_geometry_engine_agree() -> None:
    building = Building()
    place = building.placement((10e3, 4e3, 3e3), x=(math.cos(0.7), math.sin(0.7), 0.0))
    profile = building.rectangle(WIDTH, DEPTH, Position=building.axes_2d((0, DEPTH / 2)))
    body = building.extrusion(profile, LENGTH, z=(1, 0, 0), x=(0, 1, 0))
    product = building.beam(body, placement=place)
    hole = across(building, building.rectangle(200.0, 120.0), 0.0, 0.0)
    moved = building.mapped(hole, LocalOrigin=building.point(2000.0, 0.0, 300.0))
    opening = building.void(product, moved)
    beam = only_beam(building.read())
    (found,) = beam.openings
    _, points = volume_and_points(opening)
    low, high = local(beam, points).min(axis=0), local(beam, points).max(axis=0)
    assert (found.start, found.end) == pytest.approx((low[0], high[0]))
    assert (found.bottom, found.top) == pytest.approx((low[2], high[2]))
    assert net_volume(beam) == pytest.approx(volume_and_points(product)[0], rel=1e-6)


def test_several_items_and_several_openings_are_each_taken_off() -> None:
    building = Building()
    product = rectangular(building)
    hole = building.rectangle(100.0, 100.0)
    building.void(product, *(across(building, hole, x, 300.0) for x in (1500.0, 2000.0)))
    building.void(product, across(building, hole, 4000.0, 300.0))
    beam = only_beam(building.read())
    assert [opening.start for opening in beam.openings] == pytest.approx([1450, 1950, 3950])
    volume, _ = volume_and_points(product)
    assert net_volume(beam) == pytest.approx(volume, rel=1e-6)


def test_openings_of_the_assembly_cut_the_beam_in_it() -> None:
    building = Building()
    product = rectangular(building)
    assembly = building.member("IfcElementAssembly")
    building.give_parts(assembly, product)
    hole = building.rectangle(100.0, 100.0)
    for x in (1500.0, 50e3):
        building.void(assembly, across(building, hole, x, 300.0))
    building.void(product, across(building, hole, 1500.0, 300.0))
    beam = only_beam(building.read())
    assert [opening.start for opening in beam.openings] == pytest.approx([1450])
    assert not beam.remarks


def test_openings_of_a_part_cut_the_beam_that_shows_it_whole() -> None:
    building = Building()
    product = rectangular(building)
    profile = building.rectangle(WIDTH, DEPTH, Position=building.axes_2d((0, DEPTH / 2)))
    solid = building.extrusion(profile, LENGTH, z=(1, 0, 0), x=(0, 1, 0))
    part = building.member("IfcBuildingElementPart", solid, Name="concrete")
    building.give_parts(product, part)
    building.void(part, across(building, building.rectangle(200.0, 200.0), 1000.0, 300.0))
    (opening,) = only_beam(building.read()).openings
    assert box_of(opening)[:2] == pytest.approx((900.0, 1100.0))


def test_an_opening_that_misses_the_beam_is_remarked_and_takes_nothing() -> None:
    building = Building()
    product = tee(building)
    # beside the web and under the flange there is no concrete
    beside = building.extrusion(building.rectangle(100, 100), 300.0, at=(2000.0, 400.0, 100.0))
    building.void(product, beside, Name="Duct")
    beam = only_beam(building.read())
    assert not beam.openings
    assert not beam.reasons
    assert '"Duct" does not meet the beam' in beam.remarks[0].text


def test_an_opening_without_a_readable_body_is_a_reason() -> None:
    building = Building()
    building.void(rectangular(building))
    building.void(rectangular(building), across(building, building.rectangle(0.0, 50.0), 2e3, 300))
    first, second = building.read().beams
    assert "opening cannot be read: " in reasons(first)
    assert "it has no body" in reasons(first)
    assert "profile of no width or height" in reasons(second)
    assert all(reason.blocking for beam in (first, second) for reason in beam.reasons)


def test_a_voiding_feature_is_an_opening() -> None:
    building = Building()
    product = rectangular(building)
    hole = across(building, building.rectangle(100.0, 100.0), 3000.0, 300.0)
    building.void(product, hole, kind="IfcVoidingFeature")
    assert len(only_beam(building.read()).openings) == 1

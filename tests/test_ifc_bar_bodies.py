"""Bars drawn as bodies: faces flat and curved, pushed and swung circles.

Thickness and length are those that each test draws; volumes are by the divergence theorem or by
ifcopenshell's geometry engine.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ifccheck.beam import Anchor, Bars
from ifccheck.ifc.bar_paths import path_length
from ifccheck.ifc.bar_sizes import SizeSource, settle_size
from ifccheck.ifc.bar_solids import BarSolids
from ifccheck.ifc.context import make_context
from ifccheck.ifc.entity import UnreadableError
from tests.barred_beams import Curve, Found, ModelWithBars, bent, closed_stirrup, straight
from tests.drawn_bodies import (
    BODIES,
    Advanced,
    Mesh,
    engine_volume,
    faceted,
    polygonal,
    triangulated,
    tube,
    volume,
)

HOOKED = bent([(100.0, 0.0, 460.0), (100.0, 0.0, 60.0), (5900.0, 0.0, 60.0),
               (5900.0, 0.0, 460.0)], 80.0)  # fmt: skip
HOOKED_LENGTH = 2.0 * 320.0 + 5640.0 + 80.0 * math.pi


def reader(model: ModelWithBars) -> BarSolids:
    context = make_context(model.file, model.schema)
    return BarSolids(context.units, context.placements)


@pytest.mark.parametrize("corners", [3, 4, 5, 6, 8, 12, 24])
@pytest.mark.parametrize("kind", BODIES)
def test_the_axis_and_both_circles_of_a_polygon_are_found(kind: str, corners: int) -> None:
    model = ModelWithBars()
    mesh = tube(HOOKED, 20.0, corners)
    (bar,) = reader(model).of(BODIES[kind](model.file, mesh))
    assert path_length(bar.path) == pytest.approx(HOOKED_LENGTH, rel=1e-6)
    assert bar.least == pytest.approx(20.0 * math.cos(math.pi / corners))
    assert bar.most == pytest.approx(20.0)
    drawn = volume(mesh.points, mesh.faces)
    assert math.pi / 4.0 * bar.least**2 * path_length(bar.path) <= drawn * 1.001


@pytest.mark.parametrize("kind", BODIES)
@pytest.mark.parametrize("unit", ["mm", "m"])
def test_a_cage_of_faces_is_that_of_swept_disks(kind: str, unit: str) -> None:
    swept, faces = cage(None, unit), cage(kind, unit)
    assert faces.reasons == ""
    assert "found from the faces" in faces.remarks
    assert len(swept.bars) == len(swept.stirrups) == 1
    for one, other in zip(swept.bars, faces.bars, strict=True):
        assert (other.count, other.area, other.designation) == (
            one.count,
            one.area,
            one.designation,
        )
        assert (other.start_anchor, other.end_anchor) == (one.start_anchor, one.end_anchor)
        place = (one.start, one.end, one.z, *one.ys)
        assert (other.start, other.end, other.z, *other.ys) == pytest.approx(place, abs=0.05)
    for tie, same in zip(swept.stirrups, faces.stirrups, strict=True):
        assert (same.legs, same.leg_area) == (tie.legs, tie.leg_area)
        assert (same.spacing, same.bottom) == pytest.approx((tie.spacing, tie.bottom), abs=0.05)


def cage(kind: str | None, unit: str = "mm") -> Found:
    model = ModelWithBars(unit=unit)
    beam = model.beam()
    bars = [bent([(100.0, y, 460.0), (100.0, y, 60.0), (5900.0, y, 60.0), (5900.0, y, 460.0)], 80.0)
            for y in (-80.0, 80.0)]  # fmt: skip
    open_tie = closed_stirrup(0.0, 100.0, 40.0, 560.0)
    ties = [Curve(tuple((x, *p[1:]) for p in open_tie.points[:-1]), open_tie.arcs)
            for x in (100.0, 300.0, 500.0)]  # fmt: skip
    made = [body(model, beam, kind, curve, 20.0) for curve in bars]
    made += [body(model, beam, kind, curve, 10.0) for curve in ties]
    model.aggregate(beam, made)
    return model.read(beam)


def body(
    model: ModelWithBars, beam: Any, kind: str | None, curve: Curve, diameter: float, **said: Any
) -> Any:
    if kind is None:
        return model.bar(curve, diameter, beam)
    mesh = tube(curve, diameter, 12)
    mesh = Mesh(mesh.points * model.scale, mesh.faces)
    return model.bar([BODIES[kind](model.file, mesh)], said.get("stated", diameter), beam)


def one_bar(corners: int, stated: float | None, diameter: float = 20.0) -> tuple[Bars, str]:
    model = ModelWithBars()
    beam = model.beam()
    mesh = tube(straight(50, 5950, 0, 60), diameter, corners)
    bar = model.bar([polygonal(model.file, mesh)], stated, beam)
    model.aggregate(beam, [bar])
    found = model.read(beam)
    return found.bars[0], found.remarks


def test_nobody_states_the_diameter_of_a_polygon_and_its_inner_circle_counts() -> None:
    bars, _ = one_bar(6, None)
    assert bars.area == pytest.approx(math.pi * 100.0 * 0.75)  # cos(30 deg) squared


@pytest.mark.parametrize("stated", [20.0, 18.9])
def test_a_stated_diameter_between_both_circles_is_that_of_the_bar(stated: float) -> None:
    bars, remarks = one_bar(8, stated)
    assert bars.diameter == pytest.approx(stated)
    assert "sizes differ" not in remarks


@pytest.mark.parametrize(("stated", "least"), [(25.0, 18.478), (16.0, 16.0)])
def test_a_stated_diameter_beyond_them_is_told_and_the_smallest_counts(
    stated: float, least: float
) -> None:
    bars, remarks = one_bar(8, stated)
    assert bars.diameter == pytest.approx(least, rel=1e-3)
    assert "sizes differ" in remarks
    assert "18.48 to 20 mm" in remarks


def test_a_name_may_tell_which_circle_is_meant() -> None:
    size = settle_size([SizeSource("body", 18.5, most=20.0), SizeSource("name", designation="20M")])
    assert size is not None
    assert (size.designation, size.area) == ("20M", 300.0)


@pytest.mark.parametrize("curve", [straight(50, 5950, 0, 60), HOOKED])
def test_a_body_of_cylinders_and_tori(curve: Curve) -> None:
    model = ModelWithBars()
    brep = Advanced(model.file, curve, 20.0, (0.0, 1.0, 0.0)).item
    swept = model.swept(curve, 20.0)
    model.representation([brep, swept])
    (bar,) = reader(model).of(brep)
    assert (bar.least, bar.most) == (20.0, 20.0)
    expected = engine_volume(swept)
    assert math.pi * 100.0 * path_length(bar.path) == pytest.approx(expected, rel=1e-3)


@pytest.mark.parametrize("turn", [90.0, 135.0, 180.0])
def test_bends_of_curved_bodies_go_on_from_their_legs(turn: float) -> None:
    angle = math.radians(turn)
    ends = [
        (60.0 * math.sin(a) + 800.0, 0.0, 60.0 - 60.0 * math.cos(a)) for a in (angle / 2, angle)
    ]
    back = (math.cos(angle), 0.0, math.sin(angle))
    tail = tuple(e + 200.0 * b for e, b in zip(ends[1], back, strict=True))
    curve = Curve(((0.0, 0.0, 0.0), (800.0, 0.0, 0.0), *ends, tail), (1,))  # type: ignore[arg-type]
    model = ModelWithBars()
    brep = Advanced(model.file, curve, 12.0, (0.0, 1.0, 0.0)).item
    model.representation([brep])
    (bar,) = reader(model).of(brep)
    assert path_length(bar.path) == pytest.approx(1000.0 + 60.0 * angle)
    assert {tuple(np.round(p, 6)) for p in bar.path.points} >= {tuple(np.round(ends[0], 6))}


def box(model: ModelWithBars) -> Any:
    corners = [(x, y, z) for z in (0.0, 9.0) for y in (0.0, 20.0) for x in (0.0, 900.0)]
    faces = [[0, 2, 3, 1], [4, 5, 7, 6], [0, 1, 5, 4], [1, 3, 7, 5], [3, 2, 6, 7], [2, 0, 4, 6]]
    return faceted(model.file, Mesh(np.array(corners), faces))


def cone(model: ModelWithBars) -> Any:
    mesh = tube(straight(0, 1000, 0, 0), 20.0, 8)
    mesh.points[8:] = mesh.points[8:] * np.array([1.0, 0.5, 0.5])
    return triangulated(model.file, mesh)


def hollow(model: ModelWithBars) -> Any:
    outer, inner = (tube(straight(0, 1000, 0, 0), d, 8) for d in (20.0, 12.0))
    make = model.file.create_entity
    both = Mesh(
        np.concatenate((outer.points, inner.points)),
        [*outer.faces[1:-1], *([k + 16 for k in face[::-1]] for face in inner.faces[1:-1])],
    )
    brep = faceted(model.file, both)
    points = [make("IfcCartesianPoint", [float(v) for v in place]) for place in both.points]
    ends = []
    for first in (0, 8):
        loops = [make("IfcPolyLoop", [points[at + first + k] for k in range(8)]) for at in (0, 16)]
        bounds = [make("IfcFaceOuterBound", loops[0], True), make("IfcFaceBound", loops[1], False)]
        ends.append(make("IfcFace", bounds))
    brep.Outer.CfsFaces = (*brep.Outer.CfsFaces, *ends)
    return brep


def torn(model: ModelWithBars) -> Any:
    mesh = tube(HOOKED, 20.0, 8)
    return triangulated(model.file, Mesh(mesh.points, mesh.faces[:-20]))


def dented(model: ModelWithBars) -> Any:
    mesh = tube(HOOKED, 20.0, 8)
    mesh.points[27] += 9.0
    return triangulated(model.file, mesh)


def headed(model: ModelWithBars) -> Any:
    """A bar with a plate at its end, one body."""
    mesh = tube(Curve(((0.0, 0, 0), (900.0, 0, 0), (910.0, 0, 0), (930.0, 0, 0))), 20.0, 8)
    mesh.points[16:] *= np.array([1.0, 3.0, 3.0])
    return triangulated(model.file, mesh)


@pytest.mark.parametrize("draw", [box, cone, hollow, torn, dented, headed])
def test_a_body_that_is_surely_no_plain_bar_is_a_reason(draw: Any) -> None:
    model = ModelWithBars()
    beam = model.beam()
    bar = model.bar([draw(model)], 20.0, beam)
    model.aggregate(beam, [bar])
    found = model.read(beam)
    assert "its axis is not found" in found.reasons
    assert f"#{bar.id()}" in found.reasons


def test_a_body_of_several_tubes_is_several_bars() -> None:
    one, other = (tube(straight(50, 5950, y, 60), 20.0, 8) for y in (-50.0, 50.0))
    faces = [*one.faces, *([k + len(one.points) for k in face] for face in other.faces)]
    model = ModelWithBars()
    beam = model.beam()
    both = triangulated(model.file, Mesh(np.concatenate((one.points, other.points)), faces))
    model.aggregate(beam, [model.bar([both], 20.0, beam)])
    (bars,) = model.read(beam).bars
    assert (bars.count, bars.area) == (2, pytest.approx(100.0 * math.pi))


def test_stirrups_of_faces_with_hooks_round_one_corner_are_closed() -> None:
    model = ModelWithBars()
    beam = model.beam()
    tail = 80.0 / math.sqrt(2.0)
    ties = [
        bent([(x - 6.0, 110 - tail, 560 - tail), (x - 6.0, 110, 560), (x, -110, 560), (x, -110, 40),
              (x, 110, 40), (x + 6.0, 110, 560), (x + 6.0, 110 - tail, 560 - tail)], 20.0)
        for x in (200.0, 350.0, 500.0)
    ]  # fmt: skip
    meshes = [tube(tie, 10.0, 8) for tie in ties]
    made = [model.bar([triangulated(model.file, mesh)], 10.0, beam) for mesh in meshes]
    model.aggregate(beam, [*made, model.bar(straight(40, 5960, 0, 60), 20.0, beam)])
    (found,) = model.read(beam).stirrups
    assert (found.legs, found.closed, found.spacing) == (2, True, pytest.approx(150.0))
    assert found.leg_area == pytest.approx(25.0 * math.pi)


@pytest.mark.parametrize("schema", ["IFC2X3", "IFC4", "IFC4X3"])
def test_breps_of_every_schema(schema: str) -> None:
    model = ModelWithBars(schema=schema)
    beam = model.beam()
    places = [tube(straight(50, 5950, y, 60), 20.0, 12) for y in (-80.0, 0.0, 80.0)]
    made = [model.bar([faceted(model.file, mesh)], 20.0, beam) for mesh in places]
    model.aggregate(beam, made)
    (bars,) = model.read(beam).bars
    assert bars.ys == pytest.approx((-80.0, 0.0, 80.0))
    assert (bars.start, bars.end, bars.area) == pytest.approx((50.0, 5950.0, 100.0 * math.pi))


# Pushed and swung profiles -------------------------------------------------------------------


def pushed(model: ModelWithBars, at: Any, way: Any, depth: float, profile: Any = None) -> Any:
    make = model.file.create_entity
    x = (1.0, 0.0, 0.0) if abs(way[0]) < 0.5 else (0.0, 1.0, 0.0)
    axes = make("IfcAxis2Placement3D", model.point(at), model.direction(way), model.direction(x))
    up = model.direction((0.0, 0.0, 1.0))
    return make("IfcExtrudedAreaSolid", profile or disk(model), axes, up, depth * model.scale)


def disk(model: ModelWithBars, kind: str = "IfcCircleProfileDef", *more: Any) -> Any:
    make = model.file.create_entity
    axes = make("IfcAxis2Placement2D", make("IfcCartesianPoint", (0.0, 0.0)))
    return make(kind, "AREA", None, axes, 10.0 * model.scale, *more)


def swung(model: ModelWithBars, at: Any, way: Any, x: Any, radius: float, angle: float) -> Any:
    """The centre of the bend lies along the profile's x, and its axis along its y."""
    make = model.file.create_entity
    axes = make("IfcAxis2Placement3D", model.point(at), model.direction(way), model.direction(x))
    centre = make("IfcAxis1Placement", model.point((radius, 0, 0)), model.direction((0, 1, 0)))
    return make("IfcRevolvedAreaSolid", disk(model), axes, centre, angle)


@pytest.mark.parametrize("unit", ["mm", "m"])
def test_legs_and_bends_of_one_bar_are_joined(unit: str) -> None:
    model = ModelWithBars(unit=unit)
    beam = model.beam()
    level = pushed(model, (100.0, 0.0, 60.0), (1, 0, 0), 5700.0)
    bend = swung(model, (5800.0, 0.0, 60.0), (1, 0, 0), (0, 0, 1), 80.0, math.pi / 2.0)
    up = pushed(model, (5880.0, 0.0, 140.0), (0, 0, 1), 300.0)
    swept = model.swept(bent([(100.0, 0, 60), (5880.0, 0, 60), (5880.0, 0, 440)], 80.0), 20.0)
    model.aggregate(beam, [model.bar([bend, up, level], 20.0, beam)])
    parts = sum(engine_volume(item) for item in (level, bend, up))
    assert parts == pytest.approx(engine_volume(swept), rel=2e-3)
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end, bars.z) == pytest.approx((100.0, 5890.0, 60.0))
    assert bars.end_anchor is Anchor.HOOK


@pytest.mark.parametrize("angle", [0.0, 7.0, -1.0])
def test_a_bend_of_no_angle_is_a_reason(angle: float) -> None:
    model = ModelWithBars()
    solid = swung(model, (0, 0, 0), (1, 0, 0), (0, 0, 1), 80.0, 1.0)
    solid.Angle = angle
    with pytest.raises(UnreadableError, match="an angle that is not read"):
        reader(model).of(solid)


def test_profiles_that_are_no_circle() -> None:
    model = ModelWithBars()
    hollow = disk(model, "IfcCircleHollowProfileDef", 2.0)
    with pytest.raises(UnreadableError, match="IfcCircleHollowProfileDef"):
        reader(model).of(pushed(model, (0, 0, 0), (1, 0, 0), 900.0, hollow))
    aslant = pushed(model, (0, 0, 0), (1, 0, 0), 900.0)
    aslant.ExtrudedDirection = model.direction((0.0, 0.5, 1.0))
    with pytest.raises(UnreadableError, match="aslant"):
        reader(model).of(aslant)


@pytest.mark.parametrize("corners", [4, 6, 16])
def test_a_regular_polygon_pushed_along_is_a_bar(corners: int) -> None:
    model = ModelWithBars()
    make = model.file.create_entity
    angles = 2.0 * math.pi * np.arange(corners + 1) / corners
    ring = [make("IfcCartesianPoint", (10.0 * math.cos(a), 10.0 * math.sin(a))) for a in angles]
    profile = make("IfcArbitraryClosedProfileDef", "AREA", None, make("IfcPolyline", ring))
    (bar,) = reader(model).of(pushed(model, (0, 0, 0), (1, 0, 0), 900.0, profile))
    assert (bar.least, bar.most) == pytest.approx((20.0 * math.cos(math.pi / corners), 20.0))
    ring[0].Coordinates = (14.0, 0.0)
    with pytest.raises(UnreadableError, match="no regular polygon"):
        reader(model).of(pushed(model, (0, 0, 0), (1, 0, 0), 900.0, profile))


def test_an_outline_that_is_a_circle_is_a_circle() -> None:
    model = ModelWithBars()
    make = model.file.create_entity
    axes = make("IfcAxis2Placement2D", make("IfcCartesianPoint", (5.0, 0.0)))
    profile = make("IfcArbitraryClosedProfileDef", "AREA", None, make("IfcCircle", axes, 8.0))
    (bar,) = reader(model).of(pushed(model, (0, 0, 0), (0, 0, 1), 900.0, profile))
    assert (bar.least, bar.most) == (16.0, 16.0)
    assert bar.path.points[0] == pytest.approx((5.0, 0.0, 0.0))


def test_an_outline_of_two_half_circles_is_nearly_one() -> None:
    model = ModelWithBars()
    make = model.file.create_entity
    axes = make("IfcAxis2Placement2D", make("IfcCartesianPoint", (0.0, 0.0)))
    circle = make("IfcCircle", axes, 8.0)
    halves = []
    for ends in ((0.0, math.pi), (math.pi, 2.0 * math.pi)):
        trims = [[make("IfcParameterValue", value)] for value in ends]
        half = make("IfcTrimmedCurve", circle, *trims, True, "PARAMETER")
        halves.append(make("IfcCompositeCurveSegment", "CONTINUOUS", True, half))
    outline = make("IfcCompositeCurve", halves, False)
    profile = make("IfcArbitraryClosedProfileDef", "AREA", None, outline)
    (bar,) = reader(model).of(pushed(model, (0, 0, 0), (0, 0, 1), 900.0, profile))
    assert bar.least is not None
    assert bar.most is not None
    assert 15.4 < bar.least <= 16.0 <= bar.most + 1e-9 < 16.5


@given(
    st.lists(st.tuples(st.floats(-1.0, 1.0), st.floats(-1.0, 1.0)), min_size=2, max_size=4),
    st.integers(3, 10),
    st.lists(st.tuples(st.integers(0, 200), st.floats(-30.0, 30.0)), max_size=2),
    st.lists(st.integers(0, 200), max_size=2),
)
def test_whatever_body_there_is_no_more_steel_is_read_than_drawn(
    ways: list[tuple[float, float]],
    corners: int,
    dents: list[tuple[int, float]],
    lost: list[int],
) -> None:
    """Random bent bars, dented and torn: a bar of no more volume than the body, or a reason."""
    places = [(0.0, 0.0, 0.0)]
    for n, (y, z) in enumerate(ways):
        places.append((400.0 * (n + 1), 200.0 * y, 200.0 * z))
    mesh = tube(Curve(tuple(places)), 20.0, corners)
    for at, by in dents:
        mesh.points[at % len(mesh.points)] += by
    drawn = volume(mesh.points, mesh.faces)
    faces = [face for at, face in enumerate(mesh.faces) if at not in lost]
    model = ModelWithBars()
    try:
        bars = reader(model).of(triangulated(model.file, Mesh(mesh.points, faces)))
    except UnreadableError:
        return
    read = sum(math.pi / 4.0 * (bar.least or 0.0) ** 2 * path_length(bar.path) for bar in bars)
    assert read <= abs(drawn) * 1.001

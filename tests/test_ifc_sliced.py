"""Beams of every body, read by slices: against formulae and ifcopenshell's geometry engine."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.beam import Beam, Opening, Outline
from tests.bodies_of_beams import (
    EYE,
    KINDS,
    OUTLINES,
    TEE,
    Bodies,
    Moments,
    Places,
    engine_moments,
    outline_moments,
    run_moments,
)
from tests.ifc_models import Building, only_beam, reasons

LENGTH = 6000.0
CASES = [
    (kind, schema, outline)
    for kind, each in KINDS.items()
    for schema in each.schemas
    for outline in (OUTLINES if schema == each.schemas[-1] else ["ell"])
]


def assert_close(found: Moments, wanted: Moments, share: float = 1e-3) -> None:
    """Within a part of the volume, or of the moments; those of y may cancel out."""
    assert found.volume == pytest.approx(wanted.volume, rel=share)
    assert found.second == pytest.approx(wanted.second, rel=share)
    assert found.first[1] == pytest.approx(wanted.first[1], rel=share)
    breadth = (wanted.second[0] / wanted.volume) ** 0.5
    assert found.first[0] == pytest.approx(wanted.first[0], abs=share * wanted.volume * breadth)


def drawn(building: Building, items: list[Any], **placed: Any) -> tuple[Any, Beam]:
    product = building.beam(*items, placement=building.placement(**placed))
    return product, only_beam(building.read())


@pytest.mark.parametrize(("kind", "schema", "outline"), CASES)
def test_the_same_beam_drawn_in_every_way(kind: str, schema: str, outline: str) -> None:
    """One outline from end to end, by formula; and what the geometry engine makes of it."""
    building, places = Building(schema), OUTLINES[outline]
    items = KINDS[kind].make(Bodies(building.file), places, LENGTH)
    product, beam = drawn(building, items, at=(3000, -2000, 4000), x=(0.6, 0.8, 0))
    assert reasons(beam) == ""
    assert beam.axis is not None
    (run,) = beam.runs
    assert (run.start, run.end, run.outline_end) == (0.0, beam.length, None)
    assert beam.length == pytest.approx(LENGTH, abs=0.01)
    assert beam.axis.x == pytest.approx((0.6, 0.8, 0.0), abs=1e-8)
    ys = [y for y, _ in places]
    middle = (min(ys) + max(ys)) / 2.0
    wanted = outline_moments(Outline((tuple((y - middle, z) for y, z in places),)))
    assert outline_moments(run.outline) == pytest.approx(wanted, rel=1e-6, abs=10.0)
    origin = np.array((3000, -2000, 4000)) + middle * np.array((-0.8, 0.6, 0.0))
    assert beam.axis.origin == pytest.approx(origin, abs=0.01)
    if KINDS[kind].engine:
        assert_close(run_moments(beam), engine_moments(product, beam)[0])


UNITS = ("METRE", "INCH", "FOOT")


@pytest.mark.parametrize("unit", UNITS)
@pytest.mark.parametrize(
    "kind",
    ["faceted Brep", "cut by solids", "advanced Brep", "sectioned solid", "polygonal face set",
     "blocks put together", "mapped item, mirrored"],
)  # fmt: skip
def test_the_unit_of_the_model_changes_nothing(kind: str, unit: str) -> None:
    building = Building("IFC4X3", unit)
    items = KINDS[kind].make(Bodies(building.file, building.mm), TEE, LENGTH)
    _, beam = drawn(building, items)
    assert reasons(beam) == ""
    assert beam.length == pytest.approx(LENGTH, abs=0.01)
    assert outline_moments(beam.runs[0].outline) == pytest.approx(
        outline_moments(Outline((tuple(TEE),))), rel=1e-6, abs=10.0
    )


# Sections that vary ----------------------------------------------------------------------------

Stations = list[tuple[float, Places]]


def box_of(width: float, low: float, high: float) -> Places:
    half = width / 2.0
    return ((-half, low), (half, low), (half, high), (-half, high))


HAUNCHED: Stations = [
    (0.0, box_of(300, -300, 500)), (1200.0, box_of(300, 0, 500)),
    (4800.0, box_of(300, 0, 500)), (6000.0, box_of(300, -300, 500)),
]  # fmt: skip
PITCHED: Stations = [
    (0.0, box_of(240, 0, 400)), (3000.0, box_of(240, 0, 700)), (6000.0, box_of(240, 0, 400)),
]  # fmt: skip
FISH: Stations = [(0.0, box_of(300, 100, 500)), (2500.0, box_of(300, 0, 600)),
                  (6000.0, box_of(300, 100, 500))]  # fmt: skip
WIDENING: Stations = [(0.0, box_of(250, 0, 500)), (6000.0, box_of(400, 0, 500))]
VARYING = {"haunched": HAUNCHED, "pitched": PITCHED, "fish-bellied": FISH, "widening": WIDENING}


def elevation_of(stations: Stations) -> Places:
    low = [(x, min(z for _, z in places)) for x, places in stations]
    high = [(x, max(z for _, z in places)) for x, places in stations]
    return [*low, *high[::-1]]


def widths(beam: Beam) -> list[tuple[float, float, float, float, float]]:
    """Start, end, the start's depth and the end's, and the start's width of each run."""
    found = []
    for run in beam.runs:
        first, last = (np.ptp(np.array(o.rings[0]), axis=0)
                       for o in (run.outline, run.outline_end or run.outline))  # fmt: skip
        found.append((run.start, run.end, first[1], last[1], first[0]))
    return found


WAYS: dict[str, Any] = {
    "faceted Brep": lambda b, s: b.brep(b.corners(s), b.rings(s)),
    "triangulated face set": lambda b, s: b.triangles(b.corners(s), b.rings(s)),
    "sectioned spine": lambda b, s: b.spine(s),
    "elevation": lambda b, s: b.elevation(elevation_of(s), 2 * s[0][1][1][0]),
}


@pytest.mark.parametrize(
    ("name", "way"),
    [(name, way) for name in VARYING for way in WAYS if way != "elevation" or name != "widening"],
)
def test_tapers_are_read_as_they_are(name: str, way: str) -> None:
    stations = VARYING[name]
    building = Building("IFC4")
    product, beam = drawn(building, [WAYS[way](Bodies(building.file), stations)], x=(0, 1, 0))
    assert reasons(beam) == ""
    assert beam.axis is not None
    assert beam.axis.x == pytest.approx((0, 1, 0), abs=1e-9)
    assert beam.length == pytest.approx(LENGTH, abs=0.01)
    first = np.array(stations[0][1])
    lowest = min(z for _, places in stations for _, z in places)
    wanted = [
        (x0, x1, np.ptp(np.array(a), axis=0)[1], np.ptp(np.array(b), axis=0)[1],
         np.ptp(np.array(a), axis=0)[0])
        for (x0, a), (x1, b) in pairwise(stations)
    ]  # fmt: skip
    assert np.array(widths(beam)) == pytest.approx(np.array(wanted), abs=0.01)
    assert beam.axis.origin == pytest.approx((0, 0, lowest), abs=0.01)
    assert np.array(beam.runs[0].outline.rings[0]).min(axis=0)[1] == pytest.approx(
        first.min(axis=0)[1] - lowest, abs=0.01
    )
    if way != "sectioned spine":
        assert_close(run_moments(beam), engine_moments(product, beam)[0])


def test_a_step_is_two_runs() -> None:
    """A nib of 300 at the start of a beam of 600, its top level."""
    building = Building()
    places = [(0, 300), (250, 300), (250, 0), (6000, 0), (6000, 600), (0, 600)]
    product, beam = drawn(building, [Bodies(building.file).elevation(places, 300.0)])
    assert np.array(widths(beam)) == pytest.approx(
        np.array([(0, 250, 300, 300, 300), (250, 6000, 600, 600, 300)]), abs=0.01
    )
    assert min(z for _, z in beam.runs[0].outline.rings[0]) == pytest.approx(300.0, abs=0.01)
    assert_close(run_moments(beam), engine_moments(product, beam)[0])


def test_an_end_block_is_a_step_in_width() -> None:
    building = Building()
    bodies = Bodies(building.file)
    solid = bodies.joined(
        bodies.extrusion(EYE, 0.0, 6000.0), bodies.extrusion(box_of(500, 0, 800), 0.0, 700.0)
    )
    product, beam = drawn(building, [solid])
    assert [(run.start, run.end) for run in beam.runs] == [(0.0, 700.0), (700.0, 6000.0)]
    assert_close(run_moments(beam), engine_moments(product, beam)[0])


def mitred_brep(bodies: Bodies) -> Any:
    ends = [(0.0, box_of(300, 0, 500)), (5800.0, box_of(300, 0, 500))]
    corners = [(x - y if x else x, y, z) for x, y, z in bodies.corners(ends)]
    return bodies.brep(corners, bodies.rings(ends))


MITRED: dict[str, Any] = {
    "Brep": mitred_brep,
    "clipped": lambda b: b.less(
        b.extrusion(box_of(300, 0, 500), 0.0, 6000.0), b.half_space((5800, 0, 0), (1, 1, 0))
    ),
    "cut by a prism": lambda b: b.less(b.extrusion(box_of(300, 0, 500), 0.0, 6000.0), wedge(b)),
}


@pytest.mark.parametrize("way", MITRED)
def test_a_mitred_end_is_measured_on_the_centroid_however_it_is_drawn(way: str) -> None:
    """45 degrees in plan through the middle of the width, 200 mm before the end."""
    building = Building()
    product, beam = drawn(building, [MITRED[way](Bodies(building.file))])
    assert beam.length == pytest.approx(5800.0, abs=0.01)
    assert reasons(beam) == ""
    assert ["300 mm" in remark.text for remark in beam.remarks] == [True]
    assert run_moments(beam).volume == pytest.approx(engine_moments(product, beam)[0].volume)


def wedge(bodies: Bodies) -> Any:
    """An upright prism that takes off what lies beyond the mitre."""
    places = [(6100, -300), (9000, -300), (9000, 300), (5500, 300)]
    axes = bodies.axes((0, 0, -100), (0, 0, 1), (1, 0, 0))
    return bodies.make(
        "IfcExtrudedAreaSolid", bodies.profile(places), axes, bodies.up(), bodies.length(900.0)
    )


def test_a_steep_cut_in_elevation_puts_the_depth_in_doubt_however_it_is_drawn() -> None:
    building = Building()
    bodies = Bodies(building.file)
    places = [(0, 0), (5500, 0), (6000, 500), (0, 500)]
    stations = [(0.0, box_of(300, 0, 500)), (6000.0, box_of(300, 0, 500))]
    corners = [(x - (500 - z) if x else x, y, z) for x, y, z in bodies.corners(stations)]
    building.beam(bodies.brep(corners, bodies.rings(stations)))
    building.beam(bodies.elevation(places, 300.0))
    for beam in building.read().beams:
        assert beam.length == pytest.approx(5750.0, abs=0.01)
        assert [reason.blocking for reason in beam.reasons] == [False]
        assert "depth is reduced by the oblique cut at the end" in reasons(beam)


# Holes and recesses ----------------------------------------------------------------------------


def cylinder(bodies: Bodies, place: tuple[float, float, float], radius: float) -> Any:
    """Across the beam."""
    axes = bodies.axes(place, (0, 1, 0), (1, 0, 0))
    lengths = bodies.length(800.0), bodies.length(radius)
    return bodies.make("IfcRightCircularCylinder", axes, *lengths)


HOLES = {
    "round": (-150.0, 150.0, 190.0, 310.0),
    "square": (-150.0, 150.0, 190.0, 310.0),
    "upright": (-60.0, 60.0, 0.0, 500.0),
}


def box_round(opening: Opening) -> tuple[float, ...]:
    return (
        opening.start, opening.end, opening.right, opening.left, opening.bottom, opening.top,
    )  # fmt: skip


@pytest.mark.parametrize("what", list(HOLES))
def test_a_hole_in_the_body_is_an_opening_and_the_section_goes_on(what: str) -> None:
    building = Building()
    bodies = Bodies(building.file)
    cut = {
        "round": lambda: cylinder(bodies, (2000, -400, 250), 60.0),
        "square": lambda: bodies.block((1940, -400, 190), (2060, 400, 310)),
        "upright": lambda: bodies.block((1940, -60, -50), (2060, 60, 900)),
    }[what]()
    _, beam = drawn(building, [bodies.less(bodies.extrusion(box_of(300, 0, 500), 0, 6000), cut)])
    assert reasons(beam) == ""
    assert np.array(widths(beam)) == pytest.approx(np.array([(0, 6000, 500, 500, 300)]), abs=0.01)
    (found,) = beam.openings
    drawn_box = (1940.0, 2060.0, *HOLES[what])
    assert box_round(found) == pytest.approx(drawn_box, abs=0.5)
    for low, value in zip(drawn_box[::2], box_round(found)[::2], strict=True):
        assert value <= low + 1e-6  # never smaller than the hole
    for high, value in zip(drawn_box[1::2], box_round(found)[1::2], strict=True):
        assert value >= high - 1e-6
    assert found.origin == "hole in the body"


def test_a_round_recess_in_the_side_is_an_opening() -> None:
    building = Building()
    bodies = Bodies(building.file)
    solid = bodies.less(
        bodies.extrusion(box_of(300, 0, 500), 0, 6000), cylinder(bodies, (2000, 100, 250), 60.0)
    )
    _, beam = drawn(building, [solid])
    assert reasons(beam) == ""
    assert len(beam.runs) == 1
    (found,) = beam.openings
    assert box_round(found) == pytest.approx((1940, 2060, 100, 150, 190, 310), abs=0.5)


def test_two_holes_are_two_openings_and_one_that_the_model_names_is_not_told_twice() -> None:
    building = Building()
    bodies = Bodies(building.file)
    first = bodies.block((1940, -400, 190), (2060, 400, 310))
    second = bodies.block((3940, -400, 190), (4060, 400, 310))
    solid = bodies.less(bodies.less(bodies.extrusion(box_of(300, 0, 500), 0, 6000), first), second)
    product, beam = drawn(building, [solid])
    assert [round(one.start, -1) for one in beam.openings] == [1940, 3940]
    building.void(product, bodies.block((3935, -400, 185), (4065, 400, 315)))
    (again,) = building.read().beams
    assert len(again.openings) == 2
    assert ["IfcOpeningElement" in one.origin for one in again.openings] == [True, False]


def test_a_hole_in_a_tapered_body_lies_where_it_lies() -> None:
    building = Building()
    bodies = Bodies(building.file)
    side = [(0, 0), (6000, 300), (6000, 600), (0, 600)]
    solid = bodies.less(
        bodies.elevation(side, 300.0), bodies.block((1940, -400, 390), (2060, 400, 450))
    )
    _, beam = drawn(building, [solid])
    (found,) = beam.openings
    assert box_round(found)[:2] == pytest.approx((1940, 2060), abs=0.5)
    assert box_round(found)[4:] == pytest.approx((390, 450), abs=0.5)


def test_a_square_recess_in_the_top_is_two_steps() -> None:
    building = Building()
    bodies = Bodies(building.file)
    block = bodies.block((2000, -400, 440), (2600, 400, 900))
    _, beam = drawn(building, [bodies.less(bodies.extrusion(box_of(300, 0, 500), 0, 6000), block)])
    assert [(run.start, run.end) for run in beam.runs] == [(0, 2000), (2000, 2600), (2600, 6000)]


# What is no straight member ----------------------------------------------------------------------


def arch(bodies: Bodies, pieces: int) -> Any:
    """A soffit that rises along a parabola."""
    xs = [6000.0 * k / pieces for k in range(pieces + 1)]
    low = [(x, 400.0 * x * (6000.0 - x) / 9e6) for x in xs]
    return bodies.elevation([*low, (6000, 900), (0, 900)], 300.0)


def cranked(bodies: Bodies) -> Any:
    places = [(0, 0), (3000, 0), (6000, 1500), (6000, 2000), (2900, 500), (0, 500)]
    return bodies.elevation(places, 300.0)


def bent_in_plan(bodies: Bodies) -> Any:
    places = [(0, 0), (3000, 0), (6000, 900), (6000, 1200), (2955, 300), (0, 300)]
    axes = bodies.axes((0, 0, 0), (0, 0, 1), (1, 0, 0))
    return bodies.make("IfcExtrudedAreaSolid", bodies.profile(places), axes, bodies.up(), 500.0)


def twisted(bodies: Bodies) -> Any:
    turned = [
        (y * math.cos(0.5) - z * math.sin(0.5), y * math.sin(0.5) + z * math.cos(0.5))
        for y, z in box_of(300, -250, 250)
    ]
    return bodies.spine([(0.0, box_of(300, -250, 250)), (6000.0, turned)])


def revolved(bodies: Bodies) -> Any:
    axis = bodies.make("IfcAxis1Placement", bodies.point(0, 20000, 0), bodies.direction(0, 0, 1))
    axes = bodies.axes((0, 0, 0), (1, 0, 0), (0, 1, 0))
    profile = bodies.profile(box_of(300, 0, 500))
    return bodies.make("IfcRevolvedAreaSolid", profile, axes, axis, 0.3)


def bent_rod(bodies: Bodies) -> Any:
    points = [bodies.point(*place) for place in ((0, 0, 0), (3000, 0, 0), (6000, 800, 0))]
    curve = bodies.make("IfcPolyline", points)
    return bodies.make("IfcSweptDiskSolid", curve, bodies.length(150.0), None, 0.0, 2.0)


def fixed(bodies: Bodies) -> Any:
    axes = bodies.axes()
    return bodies.make("IfcFixedReferenceSweptAreaSolid", bodies.profile(box_of(300, 0, 500)), axes,
                       bodies.line(0.0, 6000.0), None, None, bodies.direction(0, 1, 0))  # fmt: skip


def open_shell(bodies: Bodies) -> Any:
    ends = [(0.0, box_of(300, 0, 500)), (6000.0, box_of(300, 0, 500))]
    corners, faces = bodies.corners(ends), bodies.rings(ends)
    return bodies.shells(corners, [face for k, face in enumerate(faces) if k != 2])


def apart(bodies: Bodies) -> Any:
    return bodies.joined(
        bodies.block((0, 0, 0), (6000, 200, 500)), bodies.block((0, 500, 0), (6000, 700, 500))
    )


REFUSED: dict[str, tuple[Any, str]] = {
    "arched": (lambda b: arch(b, 40), "curved"),
    "cranked": (cranked, "bent or cranked"),
    "bent in plan": (bent_in_plan, "bent or cranked"),
    "twisted": (twisted, "twisted"),
    "revolved": (revolved, "not straight, for it is revolved about an axis"),
    "bent rod": (bent_rod, "which bends"),
    "swept along a line": (fixed, "which way its section stands is unclear"),
    "open shell": (open_shell, "not closed"),
    "two beams in one": (apart, "separate parts"),
    "upright": (lambda b: b.block((0, 0, 0), (300, 500, 6000)), "vertical member"),
    "stub": (lambda b: b.block((0, 0, 0), (1000, 950, 400)), "span direction unclear"),
    "wedge": (lambda b: b.elevation([(0, 0), (6000, 0), (6000, 500)], 300.0), "runs out"),
    "sphere": (lambda b: b.make("IfcSphere", b.axes(), 300.0), "sphere"),
    "cut along a cylinder": (
        lambda b: b.less(
            b.extrusion(box_of(300, 0, 500), 0, 6000),
            b.make("IfcHalfSpaceSolid", b.make("IfcCylindricalSurface", b.axes(), 4000.0), True),
        ),
        "cut along an IfcCylindricalSurface",
    ),
}


@pytest.mark.parametrize("what", REFUSED)
def test_what_is_no_straight_member_is_told(what: str) -> None:
    make, words = REFUSED[what]
    building = Building("IFC4")
    _, beam = drawn(building, [make(Bodies(building.file))])
    assert words in reasons(beam)
    assert beam.axis is None
    assert beam.runs == ()
    assert [reason.blocking for reason in beam.reasons] == [True]


def test_a_rod_along_a_line_is_a_round_beam() -> None:
    building = Building()
    product, beam = drawn(building, [Bodies(building.file).rod(200.0, 6000.0)])
    assert reasons(beam) == ""
    assert beam.length == pytest.approx(6000.0, abs=0.01)
    assert outline_moments(beam.runs[0].outline)[0] == pytest.approx(math.pi * 200**2, rel=1e-3)
    assert_close(run_moments(beam), engine_moments(product, beam)[0])


def test_a_void_in_a_brep_is_a_hollow_section_between_steps() -> None:
    building = Building()
    bodies = Bodies(building.file)
    outer: Stations = [(0.0, box_of(600, 0, 800)), (6000.0, box_of(600, 0, 800))]
    inner: Stations = [(1000.0, box_of(300, 200, 600)), (5000.0, box_of(300, 200, 600))]
    brep = bodies.brep(bodies.corners(outer), bodies.rings(outer))
    void = bodies.brep(bodies.corners(inner), bodies.rings(inner))
    hollow = bodies.make("IfcFacetedBrepWithVoids", brep.Outer, [void.Outer])
    _, beam = drawn(building, [hollow])
    assert [(run.start, run.end, len(run.outline.rings)) for run in beam.runs] == [
        (0.0, 1000.0, 1), (1000.0, 5000.0, 2), (5000.0, 6000.0, 1),
    ]  # fmt: skip
    assert run_moments(beam).volume == pytest.approx(600 * 800 * 6000 - 300 * 400 * 4000)


@given(
    widths=st.lists(st.floats(150.0, 900.0), min_size=2, max_size=5),
    lows=st.lists(st.floats(-300.0, 0.0), min_size=5, max_size=5),
    depths=st.lists(st.floats(250.0, 1500.0), min_size=5, max_size=5),
    steps=st.lists(st.floats(20.0, 4000.0), min_size=4, max_size=4),
    turn=st.floats(0.0, 6.3),
    mirrored=st.booleans(),
)
@settings(max_examples=60, deadline=None)
def test_random_bodies_are_read_or_refused_with_a_reason(
    widths: list[float], lows: list[float], depths: list[float], steps: list[float],
    turn: float, mirrored: bool,
) -> None:  # fmt: skip
    """No traceback, and where it is read, the volume of its runs and of its ends is the body's."""
    building = Building()
    bodies = Bodies(building.file)
    places, stations = 0.0, []
    for width, low, depth, step in zip(widths, lows, depths, [0.0, *steps], strict=False):
        places += step
        stations.append((places, box_of(width, low, low + depth)))
    item = bodies.brep(bodies.corners(stations), bodies.rings(stations))
    if mirrored:
        axes = [building.direction(each) for each in ((1, 0, 0), (0, -1, 0))]
        item = bodies.mapped(item, Axis1=axes[0], Axis2=axes[1])
    product = building.beam(
        item, placement=building.placement(x=(math.cos(turn), math.sin(turn), 0))
    )
    beam = only_beam(building.read())
    if beam.axis is None:
        assert all(reason.text for reason in beam.reasons)
        assert beam.reasons
    elif not any("oblique" in remark.text for remark in beam.remarks) and not any(
        "read" in reason.text for reason in beam.reasons
    ):
        assert_close(run_moments(beam), engine_moments(product, beam)[0])


def round_topped(bodies: Bodies) -> Any:
    """An advanced Brep: 300 wide, upright sides of 350, a half disc on top as a cylinder's face."""
    make, length = bodies.make, 6000.0
    flat = [(-150.0, 0.0), (150.0, 0.0), (150.0, 350.0), (-150.0, 350.0)]
    points = {(x, k): bodies.point(x, *flat[k]) for x in (0.0, length) for k in range(4)}
    vertices = {key: make("IfcVertexPoint", point) for key, point in points.items()}

    def line(one: Any, other: Any) -> Any:
        (x0, k0), (x1, k1) = one, other
        along = np.subtract((x1, *flat[k1]), (x0, *flat[k0]))
        size = float(np.linalg.norm(along))
        vector = make("IfcVector", bodies.direction(*(along / size)), bodies.length(size))
        curve = make("IfcLine", points[one], vector)
        return make("IfcEdgeCurve", vertices[one], vertices[other], curve, True)

    def arc(x: float) -> Any:
        axes = bodies.axes((x, 0, 350), (1, 0, 0), (0, 1, 0))
        circle = make("IfcCircle", axes, bodies.length(150.0))
        return make("IfcEdgeCurve", vertices[x, 2], vertices[x, 3], circle, True)

    ends = {x: [line((x, 0), (x, 1)), line((x, 1), (x, 2)), arc(x), line((x, 3), (x, 0))]
            for x in (0.0, length)}  # fmt: skip
    longs = [line((0.0, k), (length, k)) for k in range(4)]

    def face(sides: Any, surface: Any) -> Any:
        edges = [make("IfcOrientedEdge", None, None, edge, way) for edge, way in sides]
        loop = make("IfcEdgeLoop", edges)
        return make("IfcAdvancedFace", [make("IfcFaceOuterBound", loop, True)], surface, True)

    def plane(place: Any, normal: Any, x: Any) -> Any:
        return make("IfcPlane", bodies.axes(place, normal, x))

    start, end = ends[0.0], ends[length]
    surfaces = [
        plane((0, 0, 0), (0, 0, -1), (1, 0, 0)), plane((0, 150, 0), (0, 1, 0), (1, 0, 0)),
        make("IfcCylindricalSurface", bodies.axes((0, 0, 350), (1, 0, 0), (0, 1, 0)),
             bodies.length(150.0)),
        plane((0, -150, 0), (0, -1, 0), (1, 0, 0)),
    ]  # fmt: skip
    faces = [
        face([(start[k], False), (longs[k], True), (end[k], True), (longs[(k + 1) % 4], False)],
             surface)
        for k, surface in enumerate(surfaces)
    ]  # fmt: skip
    caps = (
        face([(edge, True) for edge in end], plane((length, 0, 0), (1, 0, 0), (0, 1, 0))),
        face([(edge, False) for edge in start[::-1]], plane((0, 0, 0), (-1, 0, 0), (0, -1, 0))),
    )
    return make("IfcAdvancedBrep", make("IfcClosedShell", [*faces, *caps]))


@pytest.mark.parametrize("unit", ["MILLIMETRE", "METRE", "FOOT"])
def test_a_brep_with_curved_faces_is_traced_within_a_tenth_of_a_millimetre(unit: str) -> None:
    """By formula: a rectangle and half a disc."""
    building = Building("IFC4", unit)
    _, beam = drawn(building, [round_topped(Bodies(building.file, building.mm))])
    assert reasons(beam) == ""
    assert beam.length == pytest.approx(6000.0, abs=0.01)
    (run,) = beam.runs
    assert max(z for _, z in run.outline.rings[0]) == pytest.approx(500.0, abs=0.11)
    half = math.pi * 150**2 / 2
    found = outline_moments(run.outline)
    assert found[0] == pytest.approx(300 * 350 + half, rel=1e-3)
    assert found[0] <= 300 * 350 + half
    centroid = 350 + 4 * 150 / (3 * math.pi)
    assert found[2] == pytest.approx(300 * 350**2 / 2 + half * centroid, rel=1e-3)
    about_own = (math.pi / 8 - 8 / (9 * math.pi)) * 150**4
    assert found[4] == pytest.approx(300 * 350**3 / 3 + about_own + half * centroid**2, rel=1e-3)


def test_what_the_geometry_engine_cannot_build_is_a_reason() -> None:
    building = Building("IFC4")
    item = round_topped(Bodies(building.file))
    item.Outer.CfsFaces = item.Outer.CfsFaces[:1]
    _, beam = drawn(building, [item])
    assert beam.axis is None
    assert beam.reasons


# Nested booleans -----------------------------------------------------------------------------


def test_a_tree_of_booleans_is_worked_out_on_the_slices() -> None:
    """((box + box) - cylinder through both) within a block, less a half-space: by formula."""
    building = Building()
    bodies = Bodies(building.file)
    whole = bodies.joined(
        bodies.block((-500, -200, 0), (6500, 200, 400)),
        bodies.block((-500, -100, 300), (6500, 100, 700)),
    )
    axes = bodies.axes((-1000, 0, 200), (1, 0, 0), (0, 1, 0))
    duct = bodies.make("IfcRightCircularCylinder", axes, bodies.length(9000.0), bodies.length(80.0))
    hollow = bodies.less(whole, duct)
    within = bodies.make(
        "IfcBooleanResult", "INTERSECTION", hollow, bodies.block((0, -900, -900), (6000, 900, 900))
    )
    item = bodies.less(within, bodies.half_space((0, 0, 650), (0, 0, 1)))
    _, beam = drawn(building, [item])
    assert reasons(beam) == ""
    (run,) = beam.runs
    assert len(run.outline.rings) == 2
    wanted = 400 * 400 + 200 * 250 - math.pi * 80**2
    assert outline_moments(run.outline)[0] == pytest.approx(wanted, rel=1e-3)
    assert beam.length == pytest.approx(6000.0, abs=0.01)

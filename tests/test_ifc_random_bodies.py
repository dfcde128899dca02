"""Random bodies: never a traceback, and what is read holds the points that the body holds."""

from __future__ import annotations

from typing import Any

import numpy as np
import numpy.typing as npt
import pytest
import shapely
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.beam import Beam
from tests.bodies_of_beams import Bodies, outline_between
from tests.ifc_models import Building, only_beam

Floats = npt.NDArray[np.float64]
Bools = npt.NDArray[np.bool_]
STATIONS, POINTS = 24, 400
numbers = st.floats(-1.0, 1.0, width=32)
"""Each is stretched to the size that it stands for."""
Numbers = list[float]


def operand(bodies: Bodies, kind: str, n: Numbers) -> Any:
    """A block, a cylinder, a prism or a half-space somewhere near a beam of 6 m."""
    x, y, z = 3000.0 + 3300.0 * n[0], 300.0 * n[1], 300.0 + 400.0 * n[2]
    if kind == "block":
        half = [60.0 + 900.0 * abs(n[3]), 40.0 + 300.0 * abs(n[4]), 40.0 + 300.0 * abs(n[5])]
        return bodies.block(
            (x - half[0], y - half[1], z - half[2]), (x + half[0], y + half[1], z + half[2])
        )
    if kind == "cylinder":
        axes = bodies.axes((x, -500.0, z), (n[3] / 2.0, 1.0, n[4] / 2.0), (1.0, 0.0, 0.1))
        lengths = bodies.length(1200.0), bodies.length(20.0 + 150.0 * abs(n[5]))
        return bodies.make("IfcRightCircularCylinder", axes, *lengths)
    if kind == "half-space":
        normal = (n[3] + 0.01, n[4], n[5])
        return bodies.half_space((x, y, z), normal)
    places = [(x - 500.0, z - 200.0), (x + 600.0 + 400.0 * n[3], z - 150.0), (x, z + 300.0)]
    return bodies.elevation(places, 900.0)


def read(kinds: list[tuple[str, str, Numbers]], turn: Numbers) -> Beam:
    building = Building("IFC4")
    bodies = Bodies(building.file)
    item = bodies.block((0, -150, 0), (6000, 150, 600))
    for operator, kind, values in kinds:
        second = operand(bodies, kind, values)
        operator = "DIFFERENCE" if kind == "half-space" else operator
        item = bodies.make("IfcBooleanResult", operator, item, second)
    building.beam(item, placement=building.placement((0, 0, 0), x=(1.0, turn[0], 0.0)))
    return only_beam(building.read())


def within(kind: str, n: Numbers, points: Floats) -> Bools:
    """Which points (N, 3) an operand holds; of a half-space those on its material's side."""
    place = np.array([3000.0 + 3300.0 * n[0], 300.0 * n[1], 300.0 + 400.0 * n[2]])
    if kind == "block":
        half = [60.0 + 900.0 * abs(n[3]), 40.0 + 300.0 * abs(n[4]), 40.0 + 300.0 * abs(n[5])]
        return np.asarray((np.abs(points - place) <= half).all(axis=1))
    if kind == "cylinder":
        way = np.array([n[3] / 2.0, 1.0, n[4] / 2.0])
        way /= np.sqrt(way @ way)
        from_foot = points - [place[0], -500.0, place[2]]
        along = from_foot @ way
        away = np.sqrt(np.maximum((from_foot**2).sum(axis=1) - along**2, 0.0))
        return (along >= 0.0) & (along <= 1200.0) & (away <= 20.0 + 150.0 * abs(n[5]))
    if kind == "half-space":
        return np.asarray((points - place) @ np.array([n[3] + 0.01, n[4], n[5]]) >= 0.0)
    x, _, z = place
    corners = [(x - 500.0, z - 200.0), (x + 600.0 + 400.0 * n[3], z - 150.0), (x, z + 300.0)]
    inside = shapely.contains_xy(shapely.Polygon(corners), points[:, 0], points[:, 2])
    return np.asarray(inside & (np.abs(points[:, 1]) <= 450.0))


def held(kinds: list[tuple[str, str, Numbers]], points: Floats) -> Bools:
    """Which points the body holds."""
    inside = (points >= [0.0, -150.0, 0.0]).all(axis=1) & (points <= [6e3, 150.0, 600.0]).all(
        axis=1
    )
    for operator, kind, values in kinds:
        other = within(kind, values, points)
        if kind == "half-space" or operator == "DIFFERENCE":
            inside &= ~other
        else:
            inside = inside | other if operator == "UNION" else inside & other
    return inside


def looked_at(beam: Beam) -> tuple[Floats, Bools, Bools]:
    """Points in the axes of a beam, which of them its runs hold, and which its openings take."""
    chance = np.random.default_rng(7)
    found, inside = [], []
    for x in chance.uniform(0.0, beam.length, STATIONS):
        run = next(run for run in beam.runs if x <= run.end)
        share = (x - run.start) / max(run.end - run.start, 1e-9)
        outline = outline_between(run.outline, run.outline_end or run.outline, float(share))
        ring = np.array(outline.rings[0])
        low, high = ring.min(axis=0) - 20.0, ring.max(axis=0) + 20.0
        y, z = chance.uniform(low, high, (POINTS, 2)).T
        figure = shapely.Polygon(outline.rings[0], list(outline.rings[1:]))
        found.append(np.stack([np.full(POINTS, x), y, z], axis=1))
        inside.append(shapely.contains_xy(figure, y, z))
    points, taken = np.concatenate(found), np.zeros(STATIONS * POINTS, dtype=bool)
    for one in beam.openings:
        low, high = (one.start, one.right, one.bottom), (one.end, one.left, one.top)
        taken |= ((points >= low) & (points <= high)).all(axis=1)
    return points, np.concatenate(inside), taken


@given(
    kinds=st.lists(
        st.tuples(
            st.sampled_from(["UNION", "DIFFERENCE", "DIFFERENCE", "INTERSECTION"]),
            st.sampled_from(["block", "cylinder", "prism", "half-space"]),
            st.lists(numbers, min_size=6, max_size=6),
        ),
        min_size=1,
        max_size=4,
    ),
    turn=st.lists(numbers, min_size=1, max_size=1),
)
@settings(max_examples=30, deadline=None)
def test_any_tree_of_booleans_is_read_or_told(
    kinds: list[tuple[str, str, Numbers]], turn: Numbers
) -> None:
    beam = read(kinds, turn)
    if beam.axis is None:
        assert beam.reasons
        assert all(reason.text and reason.blocking for reason in beam.reasons)
        return
    assert beam.runs[0].start == 0.0
    assert beam.runs[-1].end == pytest.approx(beam.length)
    for before, after in zip(beam.runs, beam.runs[1:], strict=False):
        assert after.start == pytest.approx(before.end)
    if beam.reasons or any("oblique" in remark.text for remark in beam.remarks):
        return
    points, inside, taken = looked_at(beam)
    axis, turned = beam.axis, np.array([[1.0, turn[0], 0.0], [-turn[0], 1.0, 0.0], [0, 0, 1.0]])
    turned[:2] /= np.hypot(1.0, turn[0])
    world = points @ np.array([axis.x, axis.y, axis.z]) + axis.origin
    there = held(kinds, world @ turned.T)
    few = 0.004 * len(points)  # as near to a face as rounding, and as joints of a millimetre
    assert (inside & ~taken & ~there).sum() <= few  # nothing is read that is not there
    assert (there & ~inside).sum() <= few


@given(
    rows=st.lists(st.lists(numbers, min_size=3, max_size=3), min_size=3, max_size=12),
    faces=st.lists(st.lists(st.integers(0, 13), min_size=0, max_size=5), max_size=14),
)
@settings(max_examples=80, deadline=None)
def test_faces_that_make_no_body_are_told(rows: list[Numbers], faces: list[list[int]]) -> None:
    """Random corners and faces: open, crossed, degenerate or pointing nowhere."""
    building = Building("IFC4")
    bodies = Bodies(building.file)
    corners = [(6000.0 * x, 300.0 * y, 400.0 * z) for x, y, z in rows]
    made = [
        bodies.make("IfcIndexedPolygonalFace", [row + 1 for row in face])
        for face in faces
        if len(face) > 2
    ]
    points = bodies.make("IfcCartesianPointList3D", [list(corner) for corner in corners])
    building.beam(bodies.make("IfcPolygonalFaceSet", points, True, made))
    beam = only_beam(building.read())
    assert beam.axis is not None or beam.reasons

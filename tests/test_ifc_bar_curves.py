"""Centre lines of bars by every kind of curve: lines and lengths are worked out by hand, and by
ifcopenshell's geometry engine and scipy where they draw the same curve."""

from __future__ import annotations

import contextlib
import itertools
import math
from typing import Any

import ifcopenshell
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.interpolate import BSpline
from scipy.spatial import cKDTree

from ifccheck.beam import Anchor
from ifccheck.ifc.bar_curves import read_path, read_swept_path
from ifccheck.ifc.bar_paths import Path, path_length
from ifccheck.ifc.bar_samples import sample, tabulate
from ifccheck.ifc.context import make_context
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.units import ModelUnits
from tests.barred_beams import Curve, ModelWithBars, bent, closed_stirrup, hooked_stirrup, straight
from tests.drawn_curves import EXACT, KINDS, Arc, Drawing, drawn, pieces_of

HOOKED = bent([(100.0, 0.0, 460.0), (100.0, 0.0, 60.0), (5900.0, 0.0, 60.0),
               (5900.0, 0.0, 460.0)], 80.0)  # fmt: skip


def opened() -> tuple[Any, ModelUnits, Drawing]:
    model = ModelWithBars()
    return model.file, make_context(model.file, "IFC4").units, Drawing(model.file)


def length_by_hand(curve: Curve) -> float:
    return sum(
        piece.radius * piece.turn
        if isinstance(piece, Arc)
        else float(np.linalg.norm(piece[1] - piece[0]))
        for piece in pieces_of(curve.points, curve.arcs)
    )


@pytest.mark.parametrize("kind", KINDS)
def test_every_kind_of_curve_has_the_same_length_and_ends(kind: str) -> None:
    file, units, _ = opened()
    path = read_path(drawn(file, kind, HOOKED.points, HOOKED.arcs), units)
    assert path_length(path) == pytest.approx(length_by_hand(HOOKED), rel=1e-4)
    assert path_length(path) <= length_by_hand(HOOKED) * (1.0 + 1e-6)
    assert path.points[0] == pytest.approx(HOOKED.points[0], abs=1e-6)
    assert path.points[-1] == pytest.approx(HOOKED.points[-1], abs=1e-6)


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("unit", ["mm", "m", "in"])
def test_every_kind_of_curve_gives_the_same_cage(kind: str, unit: str) -> None:
    """Hooked bars at the bottom, straight ones at the top, closed stirrups."""
    found = [cage(each, unit) for each in ("indexed", kind)]
    for given_bars, bars in zip(found[0].bars, found[1].bars, strict=True):
        assert (bars.count, bars.designation) == (given_bars.count, given_bars.designation)
        assert bars.start_anchor is given_bars.start_anchor
        assert bars.end_anchor is given_bars.end_anchor
        place = (given_bars.start, given_bars.end, given_bars.z, *given_bars.ys)
        assert (bars.start, bars.end, bars.z, *bars.ys) == pytest.approx(place, abs=0.1)
    for given_ties, ties in zip(found[0].stirrups, found[1].stirrups, strict=True):
        assert (ties.legs, ties.closed) == (given_ties.legs, given_ties.closed)
        reach = (given_ties.start, given_ties.end, given_ties.spacing, given_ties.bottom)
        assert (ties.start, ties.end, ties.spacing, ties.bottom) == pytest.approx(reach, abs=0.1)
    assert found[1].reasons == ""


def cage(kind: str, unit: str = "mm") -> Any:
    model = ModelWithBars(unit=unit)
    beam = model.beam()
    hooked = [bent([(100.0, y, 460.0), (100.0, y, 60.0), (5900.0, y, 60.0),
                    (5900.0, y, 460.0)], 80.0) for y in (-80.0, 0.0, 80.0)]  # fmt: skip
    level = [straight(40.0, 5960.0, y, 540.0) for y in (-80.0, 80.0)]
    ties = [closed_stirrup(100.0 + 200.0 * n, 100.0, 40.0, 560.0) for n in range(30)]
    made = [bar(model, beam, kind, curve, 20.0) for curve in (*hooked, *level)]
    made += [bar(model, beam, kind, curve, 10.0) for curve in ties]
    model.aggregate(beam, made)
    return model.read(beam)


def bar(model: ModelWithBars, beam: Any, kind: str, curve: Curve, diameter: float) -> Any:
    points = np.array(curve.points) * model.scale
    directrix = drawn(model.file, kind, points, curve.arcs)
    radius = diameter / 2.0 * model.scale
    solid = model.file.create_entity("IfcSweptDiskSolid", directrix, radius)
    return model.bar([solid], diameter, beam)


def test_a_smooth_spline_along_a_line_and_bends_is_that_bar() -> None:
    _file, units, drawing = opened()
    curve = drawing.smooth_spline(pieces_of(HOOKED.points, HOOKED.arcs))
    path = read_path(curve, units)
    assert path_length(path) == pytest.approx(length_by_hand(HOOKED), rel=2e-4)
    model = ModelWithBars()
    beam = model.beam()
    line = Drawing(model.file).smooth_spline(pieces_of(straight(50, 5950, 0, 60).points, ()))
    solid = model.file.create_entity("IfcSweptDiskSolid", line, 10.0)
    model.aggregate(beam, [model.bar([solid], 20.0, beam)])
    (bars,) = model.read(beam).bars
    assert (bars.start, bars.end, bars.z) == pytest.approx((50.0, 5950.0, 60.0))


@pytest.mark.parametrize("weights", [None, [1.0, 0.6, 1.5, 1.0, 2.0, 1.0]])
def test_a_traced_spline_lies_on_that_of_scipy(weights: list[float] | None) -> None:
    _file, units, drawing = opened()
    poles = [(0, 0, 0), (900, 40, 0), (1500, 0, 300), (2100, -60, 300), (2500, 0, 10), (3300, 0, 0)]
    counts, knots = [4, 1, 1, 4], [0.0, 1.0, 2.5, 3.0]
    path = read_path(drawing.spline(3, poles, counts, knots, weights or ()), units)
    w = np.array(weights or [1.0] * len(poles))
    exact = BSpline(np.repeat(knots, counts), np.column_stack([np.array(poles) * w[:, None], w]), 3)
    fine = exact(np.linspace(0.0, 3.0, 200_001))
    fine = fine[:, :3] / fine[:, 3:]
    sampled = sample(tabulate([path])).points
    assert cKDTree(fine).query(sampled)[0].max() < 0.05
    length = np.linalg.norm(np.diff(fine, axis=0), axis=1).sum()
    assert path_length(path) == pytest.approx(length, rel=1e-4)


def test_a_whole_ellipse_has_the_length_of_the_elliptic_integral() -> None:
    from scipy.special import ellipe

    _file, units, drawing = opened()
    axes = drawing.make("IfcAxis2Placement3D", drawing.point((5, 6, 7)),
                        drawing.direction((1, 0, 0)), drawing.direction((0, 1, 0)))  # fmt: skip
    path = read_path(drawing.make("IfcEllipse", axes, 200.0, 120.0), units)
    exact = 4.0 * 200.0 * ellipe(1.0 - (120.0 / 200.0) ** 2)
    assert path_length(path) == pytest.approx(exact, rel=1e-4)
    assert {round(x, 6) for x, _, _ in path.points} == {5.0}


def on(start: float, end: float) -> Path:
    return Path(((start, 0.0, 0.0), (end, 0.0, 0.0)))


@pytest.mark.parametrize(
    ("kind", "start", "end", "expected"),
    [
        ("linear spline", 0.25, 0.5, (1000.0, 2000.0)),
        ("rational spline", 0.25, 0.5, (1000.0, 2000.0)),
        ("polyline", 0.25, None, (1000.0, 4000.0)),
        ("composite", 1000.0, 2500.0, (1000.0, 2500.0)),
        ("against its sense", 1000.0, 2500.0, (1000.0, 2500.0)),
        ("nested", None, 2500.0, (0.0, 2500.0)),
    ],
)
def test_parts_by_the_parameter_of_each_kind(
    kind: str, start: float | None, end: float | None, expected: tuple[float, float]
) -> None:
    file, units, _ = opened()
    curve = drawn(file, kind, [(0, 0, 0), (4000, 0, 0)])
    path = read_swept_path(curve, start, end, units)
    assert path.points[0] == pytest.approx((expected[0], 0.0, 0.0), abs=1e-6)
    assert path.points[-1] == pytest.approx((expected[1], 0.0, 0.0), abs=1e-6)


def test_a_composite_curve_counts_lengths_along_lines_and_angles_along_arcs() -> None:
    """IfcCompositeCurve: the parameters of its segments add up."""
    file, units, _ = opened()
    curve = drawn(file, "composite", HOOKED.points, HOOKED.arcs)
    first = 400.0 - 80.0
    path = read_swept_path(curve, first, first + math.pi / 2.0, units)
    assert path.points[0] == pytest.approx((100.0, 0.0, 140.0))
    assert path.points[-1] == pytest.approx((180.0, 0.0, 60.0))
    assert path_length(path) == pytest.approx(80.0 * math.pi / 2.0)
    half = read_swept_path(curve, first + math.pi / 4.0, None, units)
    assert path_length(half) == pytest.approx(length_by_hand(HOOKED) - first - 20.0 * math.pi)


@pytest.mark.parametrize("way", [Drawing.trimmed_whole, Drawing.trimmed_at_ends])
def test_a_composite_curve_may_be_trimmed(way: Any) -> None:
    _file, units, drawing = opened()
    path = read_path(way(drawing, pieces_of(HOOKED.points, HOOKED.arcs)), units)
    assert path_length(path) == pytest.approx(length_by_hand(HOOKED))
    assert path.points[-1] == pytest.approx(HOOKED.points[-1])


def test_a_spline_trimmed_at_points_is_trimmed_where_it_is_nearest() -> None:
    file, units, drawing = opened()
    spline = drawn(file, "rational spline", HOOKED.points, HOOKED.arcs)
    trims = [[drawing.point(place)] for place in ((100.0, 0.0, 300.0), (3000.0, 0.0, 60.0))]
    path = read_path(drawing.make("IfcTrimmedCurve", spline, *trims, True, "CARTESIAN"), units)
    assert path_length(path) == pytest.approx(160.0 + 40.0 * math.pi + 2820.0, abs=0.01)
    back = drawing.make("IfcTrimmedCurve", spline, *trims[::-1], False, "CARTESIAN")
    assert read_path(back, units).points[-1] == pytest.approx((100.0, 0.0, 300.0), abs=1e-3)
    wrong = drawing.make("IfcTrimmedCurve", spline, *trims, False, "CARTESIAN")
    with pytest.raises(UnreadableError, match="against its sense"):
        read_path(wrong, units)


def test_a_line_and_a_circle_are_swept_between_parameters_alone() -> None:
    _file, units, drawing = opened()
    line, _ = drawing.basis((np.array([10.0, 0.0, 0.0]), np.array([20.0, 0.0, 0.0])))
    assert read_swept_path(line, 5.0, 1005.0, units).points == ((15.0, 0, 0), (1015.0, 0, 0))
    with pytest.raises(UnreadableError, match="without ends"):
        read_path(line, units)
    with pytest.raises(UnreadableError, match="no ends"):
        read_swept_path(line, 5.0, None, units)
    circle, _ = drawing.basis(Arc(*np.eye(3) * 100.0))
    path = read_swept_path(circle, 0.5, 2.0, units)
    assert path_length(path) == pytest.approx(1.5 * circle[1])


def test_a_part_of_a_trimmed_curve_that_may_be_counted_in_two_ways_is_a_reason() -> None:
    _file, units, drawing = opened()
    line, _ = drawing.basis((np.zeros(3), np.array([1.0, 0.0, 0.0])))
    first, last = ([drawing.make("IfcParameterValue", value)] for value in (1000.0, 5000.0))
    curve = drawing.make("IfcTrimmedCurve", line, first, last, True, "PARAMETER")
    assert read_swept_path(curve, 1000.0, 5000.0, units).points == on(1000.0, 5000.0).points
    assert read_swept_path(curve, 0.0, 4000.0, units).points == on(1000.0, 5000.0).points
    with pytest.raises(UnreadableError, match="a part only"):
        read_swept_path(curve, 1000.0, 3000.0, units)


def test_a_composite_curve_up_to_the_number_of_its_segments_is_a_reason() -> None:
    """By the standard three units of length of it, by some writers all of it."""
    file, units, _ = opened()
    curve = drawn(file, "composite", [(0, 0, 0), (900, 0, 0), (900, 0, 500), (0, 0, 500)])
    with pytest.raises(UnreadableError, match="a part only"):
        read_swept_path(curve, 0.0, 3.0, units)
    assert path_length(read_swept_path(curve, 0.0, 3.5, units)) == pytest.approx(3.5)


@pytest.mark.parametrize(("start", "end"), [(3.0, 1.0), (0.0, 9.0), (-1.0, 1.0), (1.0, 1.0)])
@pytest.mark.parametrize("kind", ["polyline", "rational spline", "linear spline"])
def test_parts_beyond_the_ends_are_reasons(kind: str, start: float, end: float) -> None:
    file, units, _ = opened()
    curve = drawn(file, kind, [(0, 0, 0), (1000, 0, 0), (2000, 0, 0), (3000, 0, 500)])
    with pytest.raises(UnreadableError, match="beyond its ends"):
        read_swept_path(curve, start, end, units)


def test_curves_that_are_not_read_say_so() -> None:
    file, units, drawing = opened()
    line = drawn(file, "polyline", [(0, 0, 0), (1000, 0, 0)])
    offset = drawing.make("IfcOffsetCurve3D", line, 10.0, False, drawing.direction((0, 0, 1)))
    with pytest.raises(UnreadableError, match="IfcOffsetCurve3D is a curve that is not read"):
        read_path(offset, units)
    wide = drawing.trimmed((np.zeros(3), np.array([100.0, 0.0, 0.0])), way="CARTESIAN")
    wide.Trim1[0].Coordinates = (0.0, 5.0, 0.0)
    with pytest.raises(UnreadableError, match="beside its basis"):
        read_path(wide, units)
    gap = drawing.joined([drawn(file, "polyline", [(0, 0, z), (100, 0, z)]) for z in (0, 9)])
    with pytest.raises(UnreadableError, match="do not meet"):
        read_path(gap, units)


def test_a_curve_within_itself_is_a_reason() -> None:
    file, units, drawing = opened()
    curve = drawing.joined([drawn(file, "polyline", [(0, 0, 0), (100, 0, 0)])])
    curve.Segments[0].ParentCurve = curve
    with pytest.raises(UnreadableError, match="within too many"):
        read_path(curve, units)


def test_a_curve_of_countless_curves_is_a_reason() -> None:
    """Eight levels of curves that name the one below ten times over: 10 ** 8 lines."""
    file, units, drawing = opened()
    curve = drawn(file, "polyline", [(0, 0, 0), (100, 0, 0), (0, 0, 0)])
    for _ in range(8):
        curve = drawing.joined([curve] * 10)
    with pytest.raises(UnreadableError, match="too many curves"):
        read_path(curve, units)


def test_segments_of_alignments_are_a_reason() -> None:
    """IfcCurveSegment moves its parent curve, which nothing here follows."""
    file = ifcopenshell.file(schema="IFC4X3")
    drawing = Drawing(file)
    line, _ = drawing.basis((np.zeros(3), np.array([1.0, 0.0, 0.0])))
    place = drawing.make("IfcAxis2Placement3D", drawing.point((0, 0, 0)))
    measures = [drawing.make("IfcLengthMeasure", value) for value in (0.0, 500.0)]
    segment = drawing.make("IfcCurveSegment", "CONTINUOUS", place, *measures, line)
    curve = drawing.make("IfcCompositeCurve", [segment], False)
    with pytest.raises(UnreadableError, match="a segment that is not read"):
        read_path(curve, make_context(file, "IFC4X3").units)


def test_a_bar_that_bends_little_by_little_is_not_taken_as_straight() -> None:
    """A curved bar of fine chords, none of which turns by half a degree."""
    model = ModelWithBars()
    beam = model.beam()
    xs = np.linspace(50.0, 5950.0, 401)
    sag = [(float(x), 0.0, float(60.0 + 440.0 * ((x - 3000.0) / 2950.0) ** 2)) for x in xs]
    model.bars(beam, Curve(tuple(sag)), straight(40, 5960, 80, 60))
    found = model.read(beam)
    assert not any(bars.z > 100.0 and bars.end - bars.start > 3000.0 for bars in found.bars)
    assert not any(abs(bars.z - 500.0) < 1.0 for bars in found.bars)


def test_a_hollow_bar_is_a_reason() -> None:
    model = ModelWithBars()
    beam = model.beam()
    line = model.curve(straight(50, 5950, 0, 60))
    solid = model.file.create_entity("IfcSweptDiskSolid", line, 16.0, 8.0)
    model.aggregate(beam, [model.bar([solid], 32.0, beam)])
    assert "hollow" in model.read(beam).reasons


@pytest.mark.parametrize("kind", EXACT)
def test_hooks_of_stirrups_are_seen_in_every_kind(kind: str) -> None:
    model = ModelWithBars()
    beam = model.beam()
    made = [
        bar(model, beam, kind, hooked_stirrup(100.0 + 150.0 * n, 110.0, 40.0, 560.0, 80.0), 10.0)
        for n in range(39)
    ]
    made += [bar(model, beam, kind, straight(40, 5960, 0, 60), 20.0)]
    model.aggregate(beam, made)
    (ties,) = model.read(beam).stirrups
    assert (ties.legs, ties.closed, ties.spacing) == (2, True, pytest.approx(150.0))


places = st.tuples(*[st.floats(-3000.0, 3000.0)] * 3)


@given(st.lists(places, min_size=2, max_size=6), st.sampled_from(list(KINDS)),
       st.floats(0.0, 1.0), st.floats(0.0, 1.0))  # fmt: skip
def test_parts_of_any_curve_are_no_longer_than_what_is_drawn(
    points: list[tuple[float, float, float]], kind: str, first: float, last: float
) -> None:
    """Whatever is asked, there is a line no longer than the polyline, or a reason."""
    file, units, _ = opened()
    drawn_length = sum(math.dist(a, b) for a, b in itertools.pairwise(points))
    try:
        curve = drawn(file, kind, points)
        whole = read_path(curve, units)
        part = read_swept_path(curve, first, last, units)
    except UnreadableError:
        return
    assert path_length(whole) <= drawn_length * 1.001 + 1e-3
    assert path_length(part) <= drawn_length * 1.001 + 1e-3


VALUES = st.one_of(
    st.none(),
    st.booleans(),
    st.sampled_from([0.0, -1.0, 1e-9, 1e300, math.inf, 0, 1, -5, "PARAMETER", "$"]),
    st.floats(-1e4, 1e4),
    st.lists(st.floats(-1e3, 1e3), max_size=3),
    st.integers(0, 400).map(lambda number: ("entity", number)),
)


@given(
    st.sampled_from(list(KINDS)),
    st.lists(st.tuples(st.integers(0, 400), st.integers(0, 9), VALUES), min_size=1, max_size=4),
)
def test_whatever_a_bar_holds_there_are_bars_or_reasons(
    kind: str, changes: list[tuple[int, int, Any]]
) -> None:
    """Attributes of curves, solids and points changed at random."""
    model = ModelWithBars()
    beam = model.beam()
    first = max(entity.id() for entity in model.file)
    made = [bar(model, beam, kind, curve, 12.0) for curve in (HOOKED, straight(50, 5950, 50, 60))]
    entities = [entity for entity in model.file if entity.id() > first]
    for number, attribute, value in changes:
        entity = entities[number % len(entities)]
        if isinstance(value, tuple):
            value = entities[value[1] % len(entities)]
        with contextlib.suppress(Exception):
            entity[attribute % len(entity)] = value
    model.aggregate(beam, made)
    found = model.read(beam)
    length = sum(bars.count * (bars.end - bars.start) for bars in found.bars)
    assert found.bars or found.reasons
    assert math.isfinite(length)


def test_anchors_follow_the_curve() -> None:
    assert [bars.end_anchor for bars in cage("rational spline").bars] == [
        Anchor.HOOK,
        Anchor.STRAIGHT,
    ]

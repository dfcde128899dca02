"""Curves that bars are swept along, read from the model."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from typing import Any

from ifccheck.ifc.bar_courses import (
    JOINT_GAP,
    PARAMETER_TOLERANCE,
    Course,
    conic_course,
    joined_course,
    line_course,
    polyline_course,
    spline_course,
    trimmed_course,
    undivided_course,
)
from ifccheck.ifc.bar_paths import Path, Point, path_length
from ifccheck.ifc.entity import Entity, UnreadableError, get, label, need
from ifccheck.ifc.placements import Matrix, rigid, unit
from ifccheck.ifc.splines import read_spline
from ifccheck.ifc.units import ModelUnits

DEEPEST_CURVE, MOST_PIECES = 16, 10_000
"""Curves within curves that are followed, and of how many curves one may be put together."""


def read_path(curve: Entity, units: ModelUnits) -> Path:
    """Read a curve as a centre line.

    Raises UnreadableError where the curve is of a kind that is not read.
    """
    return read_course(curve, units).whole()


def read_swept_path(
    curve: Entity, start: float | None, end: float | None, units: ModelUnits
) -> Path:
    """Read the part of a curve between two parameters; None is the curve's own end.

    A trimmed curve that does not begin at 0 of its basis is read as a whole only: whether its own
    parameter begins at 0 or goes on from that of the basis is told in both ways. So is a composite
    curve up to the number of its segments, by which some count.
    """
    course = read_course(curve, units)
    if start is None and end is None:
        return course.whole()
    first = course.first if start is None else start
    last = course.last if end is None else end
    if course.trimmed is not None and all(
        math.isclose(given, own, rel_tol=PARAMETER_TOLERANCE, abs_tol=1e-9)
        for given, own in zip((first, last), course.trimmed, strict=True)
    ):
        return course.whole()
    if first == course.first and (end is None or _is_end(course, last, units)):
        return course.whole()
    if course.trimmed is not None or _counts_segments(curve, last):
        raise UnreadableError(f"{label(curve)} is swept over a part only, which is not read")
    return _part(course, first, last, label(curve))


def _counts_segments(curve: Entity, last: float) -> bool:
    """Whether a parameter may be meant as the number of a composite curve's segments."""
    return bool(curve.is_a("IfcCompositeCurve") and last == len(curve[0]))


def _is_end(course: Course, end: float, units: ModelUnits) -> bool:
    """Whether a parameter is the curve's end, counted as the standard has it or by length."""
    if not math.isfinite(course.last):
        return False
    ends = (course.last, path_length(course.whole()) / units.length)
    return any(abs(end - one) <= PARAMETER_TOLERANCE * abs(one) for one in ends)


def _part(course: Course, first: float, last: float, name: str) -> Path:
    if not math.isfinite(last - first):
        raise UnreadableError(f"{name} has no ends")
    within = course.first <= first < last <= course.last + PARAMETER_TOLERANCE * abs(course.last)
    around = course.period is not None and 0.0 < last - first <= course.period
    if not within and not around:
        raise UnreadableError(f"{name} is swept from {first:g} to {last:g}, beyond its ends")
    return course.between(first, last if around else min(last, course.last))


def read_course(curve: Entity, units: ModelUnits, depth: int = 0) -> Course:
    """Read a curve by its parameter.

    Raises UnreadableError where it is of a kind that is not read.
    """
    reader = _READERS.get(curve.is_a())
    if reader is None:
        raise UnreadableError(f"{label(curve)} is a curve that is not read")
    if depth > DEEPEST_CURVE:
        raise UnreadableError(f"{label(curve)} is a curve within too many others")
    return reader(curve, units, depth)


def _point(coordinates: Sequence[float], scale: float) -> Point:
    """A point in space [mm]; what is no number ifcopenshell leaves out without a word."""
    if len(coordinates) != 3:
        raise UnreadableError(f"has a point of {len(coordinates)} coordinates, three are needed")
    x, y, z = coordinates
    return x * scale, y * scale, z * scale


def _points(coordinates: Iterable[Sequence[float]], scale: float) -> tuple[Point, ...]:
    return tuple(_point(place, scale) for place in coordinates)


def _polyline(curve: Entity, units: ModelUnits, _: int) -> Course:
    return polyline_course(_points((point.get_argument(0) for point in curve[0]), units.length))


def _indexed_poly_curve(curve: Entity, units: ModelUnits, _: int) -> Course:
    points = _points(curve.get_argument(0).get_argument(0), units.length)
    segments = curve.get_argument(1)
    if not segments:
        return polyline_course(points)
    path = _indexed_path(curve, points, segments)
    if not path.arcs and len(segments) == len(path.points) - 1:
        return polyline_course(path.points)
    return undivided_course(path, float(len(segments)), label(curve))


def _indexed_path(curve: Entity, points: Sequence[Point], segments: Sequence[Entity]) -> Path:
    order: list[int] = []
    arcs: list[int] = []
    for segment in segments:
        indices = segment.get_argument(0)
        if not order:
            order.append(indices[0])
        elif order[-1] != indices[0]:
            raise UnreadableError(f"{label(curve)} has segments that do not meet")
        if segment.is_a() == "IfcArcIndex":
            arcs.append(len(order) - 1)
        order.extend(indices[1:])
    if not 1 <= min(order) <= max(order) <= len(points):
        raise UnreadableError(f"{label(curve)} names points that it does not have")
    return Path(tuple(points[index - 1] for index in order), tuple(arcs))


def _composite_curve(curve: Entity, units: ModelUnits, depth: int) -> Course:
    parts: list[tuple[Course, bool]] = []
    pieces = 0
    for segment in curve[0]:
        parent = get(segment, "ParentCurve")
        if parent is None or segment.is_a() != "IfcCompositeCurveSegment":
            raise UnreadableError(f"{label(segment)} is a segment that is not read")
        agrees = get(segment, "SameSense") is not False
        parts.append((read_course(parent, units, depth + 1), agrees))
        pieces += parts[-1][0].pieces
        if pieces > MOST_PIECES:
            raise UnreadableError(f"{label(curve)} is put together of too many curves")
    return joined_course(parts, label(curve))


def _trimmed_curve(curve: Entity, units: ModelUnits, depth: int) -> Course:
    basis = read_course(curve[0], units, depth + 1)
    first, last = (_trim(basis, trim, curve, units) for trim in (curve[1], curve[2]))
    return trimmed_course(basis, first, last, curve[3] is not False, label(curve))


def _trim(basis: Course, trim: Sequence[Any], curve: Entity, units: ModelUnits) -> float:
    """The parameter of the basis at which a curve is trimmed."""
    values = [float(item[0]) for item in trim if item.is_a("IfcParameterValue")]
    if values and curve[4] != "CARTESIAN":
        return values[0]
    for item in trim:
        if item.is_a("IfcCartesianPoint"):
            place, apart = basis.nearest(_point(item[0], units.length))
            if not apart <= JOINT_GAP:
                raise UnreadableError(f"{label(curve)} is trimmed at a point beside its basis")
            return place
    raise UnreadableError(f"{label(curve)} is trimmed without a value of its preferred kind")


def _line(line: Entity, units: ModelUnits, _: int) -> Course:
    vector = line[1]
    along = unit(vector[0][0]) * (vector[1] * units.length)
    return line_course(_point(line[0][0], units.length), along)


def _circle(circle: Entity, units: ModelUnits, _: int) -> Course:
    radius = _radius(circle, "Radius", units)
    return conic_course(_axes(circle, units), radius, radius, units.angle)


def _ellipse(ellipse: Entity, units: ModelUnits, _: int) -> Course:
    first, second = (_radius(ellipse, name, units) for name in ("SemiAxis1", "SemiAxis2"))
    return conic_course(_axes(ellipse, units), first, second, units.angle)


def _radius(conic: Entity, name: str, units: ModelUnits) -> float:
    radius = float(need(conic, name)) * units.length
    if not 0.0 < radius < math.inf:
        raise UnreadableError(f"{label(conic)} has a radius of {radius:g} mm")
    return radius


def _axes(conic: Entity, units: ModelUnits) -> Matrix:
    position = get(conic, "Position")
    axis = get(position, "Axis")
    reference = get(position, "RefDirection")
    frame = rigid(None if axis is None else axis[0], None if reference is None else reference[0])
    frame[:3, 3] = _point(get(position, "Location")[0], units.length)
    return frame


def _spline(curve: Entity, units: ModelUnits, _: int) -> Course:
    return spline_course(read_spline(curve, units.length, 3))


_READERS: dict[str, Callable[[Entity, ModelUnits, int], Course]] = {
    "IfcPolyline": _polyline,
    "IfcIndexedPolyCurve": _indexed_poly_curve,
    "IfcCompositeCurve": _composite_curve,
    "IfcTrimmedCurve": _trimmed_curve,
    "IfcLine": _line,
    "IfcCircle": _circle,
    "IfcEllipse": _ellipse,
    "IfcBSplineCurveWithKnots": _spline,
    "IfcRationalBSplineCurveWithKnots": _spline,
}

"""Curves that bars are swept along, read from the model."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.entity import Entity, UnreadableError, get, label, several
from ifccheck.ifc.many_vectors import crosses, dots
from ifccheck.ifc.placements import Matrix, rigid, unit
from ifccheck.ifc.units import ModelUnits

Floats = npt.NDArray[np.float64]
Ints = npt.NDArray[np.intp]
Bools = npt.NDArray[np.bool_]
Point = tuple[float, float, float]

JOINT_GAP = 1.0
"""Greatest gap [mm] between two segments of one curve."""
LONGEST_ARC = 1.9 * math.pi
"""Greatest angle [rad] that three points describe well."""
STRAIGHT_ON = 1e-4
"""Half of the turn [rad] below which a polyline has no corner."""
PARAMETER_TOLERANCE = 1e-4
"""Relative difference within which a trimming parameter means the end of the curve."""


@dataclass(frozen=True, slots=True)
class Path:
    """A centre line: points [mm]; at each index in ``arcs`` an arc runs through three points."""

    points: tuple[Point, ...]
    arcs: tuple[int, ...] = ()

    def reversed(self) -> Path:
        """Return the same line run the other way."""
        last = len(self.points) - 1
        return Path(self.points[::-1], tuple(last - first - 2 for first in reversed(self.arcs)))


def read_path(curve: Entity, units: ModelUnits) -> Path:
    """Read a curve as a centre line.

    Raises UnreadableError where the curve is of a kind that is not read.
    """
    reader = _READERS.get(curve.is_a())
    if reader is None:
        raise UnreadableError(f"{label(curve)} is a curve that is not read")
    return reader(curve, units)


def read_swept_path(
    curve: Entity, start: float | None, end: float | None, units: ModelUnits
) -> Path:
    """Read the part of a curve between two parameters; None is the curve's own end."""
    path = read_path(curve, units)
    if start is None and end is None:
        return path
    first, last = start or 0.0, end
    if first == 0.0 and (last is None or _is_whole(curve, path, last, units)):
        return path
    if path.arcs or not curve.is_a("IfcPolyline"):
        raise UnreadableError(f"{label(curve)} is swept over a part only, which is not read")
    return _cut(path, first, len(path.points) - 1.0 if last is None else last, label(curve))


def rounded(path: Path, radius: float) -> Path:
    """Round the inner corners of a polyline to a radius of the centre line [mm].

    Raises UnreadableError where its pieces are too short for that.
    """
    corners = [np.array(point) for point in path.points]
    points, arcs = [corners[0]], []
    for before, corner, after in zip(corners, corners[1:], corners[2:], strict=False):
        back, on = before - corner, after - corner
        back, on = back / max(_norm(back), 1e-9), on / max(_norm(on), 1e-9)
        half = math.acos(min(max(float(back @ on), -1.0), 1.0)) / 2.0
        if half > math.pi / 2.0 - STRAIGHT_ON:
            points.append(corner)
            continue
        tangent = radius / max(math.tan(half), 1e-9)
        if tangent > _norm(points[-1] - corner) or tangent > _norm(after - corner):
            raise UnreadableError("has bends too wide for its pieces")
        inward = (back + on) / _norm(back + on)
        arcs.append(len(points))
        middle = corner + inward * radius * (1.0 / math.sin(half) - 1.0)
        points += [corner + back * tangent, middle, corner + on * tangent]
    points.append(corners[-1])
    return Path(tuple((float(x), float(y), float(z)) for x, y, z in points), tuple(arcs))


def _norm(vector: Floats) -> float:
    return math.sqrt(float(vector @ vector))


def _is_whole(curve: Entity, path: Path, end: float, units: ModelUnits) -> bool:
    """Whether a parameter is the curve's end, counted as the standard has it or by length."""
    ends = (_parameter_range(curve), path_length(path) / units.length)
    return any(e is not None and abs(end - e) <= PARAMETER_TOLERANCE * e for e in ends)


def _parameter_range(curve: Entity) -> float | None:
    if curve.is_a("IfcPolyline"):
        return len(curve[0]) - 1.0
    if curve.is_a("IfcTrimmedCurve"):
        first, second = _parameter(curve[1]), _parameter(curve[2])
        return None if first is None or second is None else abs(second - first)
    if curve.is_a("IfcCompositeCurve"):
        ranges = [_parameter_range(get(segment, "ParentCurve")) for segment in curve[0]]
        return None if None in ranges else sum(r for r in ranges if r is not None)
    if curve.is_a("IfcIndexedPolyCurve"):
        return float(len(several(curve, "Segments")) or len(curve[0][0]) - 1)
    return None


def _cut(path: Path, first: float, last: float, name: str) -> Path:
    """Cut a polyline at parameters that count its segments."""
    greatest = len(path.points) - 1.0
    if not 0.0 <= first < last <= greatest * (1.0 + PARAMETER_TOLERANCE):
        raise UnreadableError(f"{name} is swept from {first:g} to {last:g}, beyond its ends")
    points = np.array(path.points)
    inner = range(math.floor(first) + 1, math.ceil(last))
    knots = [first, *inner, min(last, greatest)]
    kept = [[np.interp(k, range(len(points)), points[:, axis]) for axis in range(3)] for k in knots]
    return Path(tuple((float(x), float(y), float(z)) for x, y, z in kept))


def path_length(path: Path) -> float:
    """Length of a centre line along its lines and arcs [mm]."""
    points = np.array(path.points)
    steps = np.sqrt((np.diff(points, axis=0) ** 2).sum(axis=1))
    if path.arcs:
        starts = np.array(path.arcs, dtype=np.intp)
        _, across, _, half = arc_frames(points, starts)
        radius = np.sqrt((across**2).sum(axis=1))
        for step in (0, 1):
            steps[starts + step] = np.maximum(steps[starts + step], radius * half[:, step])
    return float(steps.sum())


def _point(coordinates: Sequence[float], scale: float) -> Point:
    """A point in space [mm]; what is no number ifcopenshell leaves out without a word."""
    if len(coordinates) != 3:
        raise UnreadableError(f"has a point of {len(coordinates)} coordinates, three are needed")
    x, y, z = coordinates
    return x * scale, y * scale, z * scale


def _polyline(curve: Entity, units: ModelUnits) -> Path:
    return Path(_points((point.get_argument(0) for point in curve[0]), units.length))


def _points(coordinates: Iterable[Sequence[float]], scale: float) -> tuple[Point, ...]:
    return tuple(_point(place, scale) for place in coordinates)


def _indexed_poly_curve(curve: Entity, units: ModelUnits) -> Path:
    points = _points(curve.get_argument(0).get_argument(0), units.length)
    segments = curve.get_argument(1)
    if not segments:
        return Path(points)
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


def _composite_curve(curve: Entity, units: ModelUnits) -> Path:
    points: list[Point] = []
    arcs: list[int] = []
    for segment in curve[0]:
        parent = get(segment, "ParentCurve")
        if parent is None:
            raise UnreadableError(f"{label(segment)} is a segment that is not read")
        part = read_path(parent, units)
        part = part if get(segment, "SameSense") is not False else part.reversed()
        if points and math.dist(points[-1], part.points[0]) > JOINT_GAP:
            raise UnreadableError(f"{label(curve)} has segments that do not meet")
        offset = max(len(points) - 1, 0)
        arcs.extend(first + offset for first in part.arcs)
        points.extend(part.points[1:] if points else part.points)
    return Path(tuple(points), tuple(arcs))


def _trimmed_curve(curve: Entity, units: ModelUnits) -> Path:
    basis = curve[0]
    if basis.is_a("IfcLine"):
        return Path(tuple(_line_point(basis, trim, curve, units) for trim in (curve[1], curve[2])))
    if basis.is_a("IfcCircle"):
        return _trimmed_circle(curve, basis, units)
    raise UnreadableError(f"{label(curve)} trims an {basis.is_a()}, which is not read")


def _line_point(line: Entity, trim: Sequence[Any], curve: Entity, units: ModelUnits) -> Point:
    parameter = _parameter(trim)
    if parameter is None or curve[4] == "CARTESIAN":
        return _trim_point(trim, curve, units)
    along = unit(line[1][0][0]) * (line[1][1] * parameter)
    return _point(np.add(_point(line[0][0], 1.0), along).tolist(), units.length)


def _parameter(trim: Sequence[Any]) -> float | None:
    return next((float(item[0]) for item in trim if item.is_a("IfcParameterValue")), None)


def _trim_point(trim: Sequence[Any], curve: Entity, units: ModelUnits) -> Point:
    for item in trim:
        if item.is_a("IfcCartesianPoint"):
            return _point(item[0], units.length)
    raise UnreadableError(f"{label(curve)} is trimmed without a value of its preferred kind")


def _trimmed_circle(curve: Entity, circle: Entity, units: ModelUnits) -> Path:
    frame, radius = _circle(circle, units)
    first, last = (_circle_angle(frame, trim, curve, units) for trim in (curve[1], curve[2]))
    full = 2.0 * math.pi
    turn = (last - first) % full if curve[3] is not False else -((first - last) % full)
    return _arc(frame, radius, first, turn or full)


def _circle_angle(frame: Matrix, trim: Sequence[Any], curve: Entity, units: ModelUnits) -> float:
    parameter = _parameter(trim)
    if parameter is not None and curve[4] != "CARTESIAN":
        return parameter * units.angle
    local = frame[:3, :3].T @ (np.array(_trim_point(trim, curve, units)) - frame[:3, 3])
    return math.atan2(local[1], local[0])


def _circle(circle: Entity, units: ModelUnits) -> tuple[Matrix, float]:
    """The axes [mm] and radius [mm] of a circle."""
    position = get(circle, "Position")
    axis = get(position, "Axis")
    reference = get(position, "RefDirection")
    frame = rigid(None if axis is None else axis[0], None if reference is None else reference[0])
    frame[:3, 3] = _point(get(position, "Location")[0], units.length)
    return frame, circle[1] * units.length


def _arc(frame: Matrix, radius: float, first: float, turn: float) -> Path:
    """An arc from an angle on through a turn, as one or two arcs of three points."""
    pieces = 1 if abs(turn) <= LONGEST_ARC else 2
    points = [
        frame[:3, 3] + radius * (math.cos(angle) * frame[:3, 0] + math.sin(angle) * frame[:3, 1])
        for angle in (first + turn * step / (2 * pieces) for step in range(2 * pieces + 1))
    ]
    return Path(
        tuple((float(x), float(y), float(z)) for x, y, z in points),
        tuple(2 * piece for piece in range(pieces)),
    )


def _whole_circle(curve: Entity, units: ModelUnits) -> Path:
    frame, radius = _circle(curve, units)
    return _arc(frame, radius, 0.0, 2.0 * math.pi)


_READERS: dict[str, Callable[[Entity, ModelUnits], Path]] = {
    "IfcPolyline": _polyline,
    "IfcIndexedPolyCurve": _indexed_poly_curve,
    "IfcCompositeCurve": _composite_curve,
    "IfcTrimmedCurve": _trimmed_curve,
    "IfcCircle": _whole_circle,
}


def arc_frames(points: Floats, starts: Ints) -> tuple[Floats, Floats, Floats, Floats]:
    """Centre, radius vectors at and square to the start, and the angle of each half (arcs, 2).

    Three points on one line are no arc: their halves have the angle 0.
    """
    a, b, c = points[starts], points[starts + 1], points[starts + 2]
    ab, ac = b - a, c - a
    normal = crosses(ab, ac)
    square, first, second = dots(normal, normal), dots(ab, ab), dots(ac, ac)
    reach = first * second
    flat = square <= 1e-12 * reach
    safe = np.where(flat, 1.0, square)
    centre = (
        a
        + (second[:, None] * crosses(normal, ab) - first[:, None] * crosses(normal, ac))
        * (0.5 / safe)[:, None]
    )
    across = a - centre
    turned = crosses(normal / np.sqrt(safe)[:, None], across)
    angles = [
        np.arctan2(dots(p - centre, turned), dots(p - centre, across)) % (2.0 * math.pi)
        for p in (b, c)
    ]
    half = np.stack([angles[0], angles[1] - angles[0]], axis=1)
    return centre, across, turned, np.where(flat[:, None], 0.0, half)

"""Curves by their parameters: which centre line lies between two of them."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import accumulate

import numpy as np

from ifccheck.ifc.bar_paths import Floats, Path, Point, whole_arc
from ifccheck.ifc.bar_traces import as_point, traced
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.splines import Spline

JOINT_GAP = 1.0
"""Greatest gap [mm] between two segments of one curve, and of a trimming point from its curve."""
PARAMETER_TOLERANCE = 1e-4
"""Relative difference within which a trimming parameter means the end of the curve."""
SEARCHED, NARROWED = 32, 60
"""Points of each part of a spline that are searched for the nearest, and steps from there."""
Place = tuple[float, float]
"""A parameter, and how far from the curve's point there another point lies [mm]."""


@dataclass(frozen=True, slots=True)
class Course:
    """A curve by its parameter, which runs from ``first`` to ``last``."""

    first: float
    last: float
    between: Callable[[float, float], Path]
    """The centre line between two parameters, the less one first."""
    nearest: Callable[[Point], Place]
    """Where the curve is nearest to a point."""
    period: float | None = None
    """What the parameter grows by in one round of a curve that closes on itself."""
    trimmed: tuple[float, float] | None = None
    """The parameters of its basis at the ends of a trimmed curve that does not begin at 0."""
    pieces: int = 1
    """How many curves it is put together of."""

    def whole(self) -> Path:
        """The whole centre line; raises UnreadableError where the curve has no ends."""
        if not math.isfinite(self.last - self.first):
            raise UnreadableError("has a centre line without ends")
        return self.between(self.first, self.last)


def polyline_course(points: Sequence[Point]) -> Course:
    """A polyline: the parameter counts its segments."""
    last = len(points) - 1.0
    places = np.array(points, dtype=float).reshape(-1, 3)

    def between(start: float, end: float) -> Path:
        if start == 0.0 and end == last:
            return Path(tuple(points))
        knots = [start, *range(math.floor(start) + 1, math.ceil(end)), end]
        kept = [[np.interp(k, range(len(points)), column) for column in places.T] for k in knots]
        return Path(tuple((float(x), float(y), float(z)) for x, y, z in kept))

    def nearest(point: Point) -> Place:
        step = np.diff(places, axis=0)
        square = np.maximum((step**2).sum(axis=1), 1e-12)
        share = np.clip(((np.array(point) - places[:-1]) * step).sum(axis=1) / square, 0.0, 1.0)
        apart = places[:-1] + share[:, None] * step - point
        distance = np.sqrt((apart**2).sum(axis=1))
        at = int(distance.argmin())
        return at + float(share[at]), float(distance[at])

    return Course(0.0, last, between, nearest)


def line_course(start: Point, vector: Floats) -> Course:
    """A line without ends: the parameter counts lengths of its vector [mm]."""
    origin = np.array(start)
    square = max(float(vector @ vector), 1e-24)

    def at(place: float) -> Floats:
        return np.asarray(origin + place * vector)

    def nearest(point: Point) -> Place:
        place = float((point - origin) @ vector) / square
        return place, math.dist(point, at(place))

    def between(first: float, last: float) -> Path:
        return Path((as_point(at(first)), as_point(at(last))))

    return Course(-math.inf, math.inf, between, nearest)


def conic_course(frame: Matrix, first: float, second: float, angle: float) -> Course:
    """A circle or an ellipse by its axes, its radii [mm] and the unit of its angles [rad]."""
    x, y, centre = frame[:3, 0], frame[:3, 1], frame[:3, 3]
    period = 2.0 * math.pi / angle

    def at(place: float) -> Floats:
        turn = place * angle
        return np.asarray(centre + first * math.cos(turn) * x + second * math.sin(turn) * y)

    def between(start: float, end: float) -> Path:
        if first == second:
            return whole_arc(frame, first, start * angle, (end - start) * angle)
        quarters = max(1, math.ceil((end - start) / period * 4.0))
        return traced(at, np.linspace(start, end, quarters + 1).tolist())

    def nearest(point: Point) -> Place:
        arm = np.array(point) - centre
        place = math.atan2(float(arm @ y) / second, float(arm @ x) / first) / angle
        return place, math.dist(point, at(place))

    return Course(0.0, period, between, nearest, period=period)


def spline_course(spline: Spline) -> Course:
    """A B-spline by the parameter of its knots."""
    breaks = spline.breaks()

    def between(start: float, end: float) -> Path:
        inner = [knot for knot in breaks if start < knot < end]
        if spline.degree > 1:
            return traced(spline.at, [start, *inner, end])
        return Path(tuple(as_point(spline.at(place)) for place in (start, *inner, end)))

    def nearest(point: Point) -> Place:
        def apart(place: float) -> float:
            return math.dist(point, spline.at(place))

        many = np.linspace(breaks[0], breaks[-1], SEARCHED * len(breaks)).tolist()
        best = min(range(len(many)), key=lambda at: apart(many[at]))
        low, high = many[max(best - 1, 0)], many[min(best + 1, len(many) - 1)]
        for _ in range(NARROWED):
            third = (high - low) / 3.0
            if apart(low + third) < apart(high - third):
                high -= third
            else:
                low += third
        place = min((low, (low + high) / 2.0, high), key=apart)
        return place, apart(place)

    return Course(breaks[0], breaks[-1], between, nearest)


def undivided_course(path: Path, last: float, name: str) -> Course:
    """A curve of which only the whole is read, since its parts are counted in several ways."""

    def between(start: float, end: float) -> Path:
        if start == 0.0 and end == last:
            return path
        raise UnreadableError(f"{name} is swept over a part only, which is not read")

    def nearest(_: Point) -> Place:
        raise UnreadableError(f"{name} is trimmed at a point, which is not read")

    return Course(0.0, last, between, nearest)


def trimmed_course(basis: Course, first: float, last: float, agrees: bool, name: str) -> Course:
    """The part of a curve from one parameter on to another; its own parameter begins at 0.

    Raises UnreadableError where the curve does not lead from the one to the other.
    """
    endless = not math.isfinite(basis.last)
    agrees = first < last if endless else agrees
    length = last - first if agrees else first - last
    if basis.period is not None:
        length = length % basis.period or basis.period
    elif not endless:
        first, last = (_held(basis, place, name) for place in (first, last))
        length = last - first if agrees else first - last
    if length <= 0.0:
        raise UnreadableError(f"{name} is trimmed against its sense, or to nothing")

    def between(start: float, end: float) -> Path:
        if agrees:
            return basis.between(first + start, last if end == length else first + end)
        return basis.between(last if end == length else first - end, first - start).reversed()

    if basis.period is not None:
        last = first + length if agrees else first - length

    def nearest(point: Point) -> Place:
        place, apart = basis.nearest(point)
        place = place - first if agrees else first - place
        place = place if basis.period is None else place % basis.period
        return (
            place,
            apart
            if -PARAMETER_TOLERANCE <= place / length <= 1.0 + PARAMETER_TOLERANCE
            else math.inf,
        )

    return Course(0.0, length, between, nearest, trimmed=(first, last) if first else None)


def _held(course: Course, place: float, name: str) -> float:
    """A parameter within the ends of a curve, up to rounding."""
    slack = PARAMETER_TOLERANCE * (course.last - course.first)
    if not course.first - slack <= place <= course.last + slack:
        raise UnreadableError(f"{name} is trimmed at {place:g}, beyond the ends of its basis")
    return min(max(place, course.first), course.last)


def joined_course(parts: Sequence[tuple[Course, bool]], name: str) -> Course:
    """Curves one after another, each in its own sense or against it; their parameters add up."""
    lengths = [course.last - course.first for course, _ in parts]
    starts = list(accumulate(lengths, initial=0.0))

    def piece(number: int, start: float, end: float) -> Path:
        (course, agrees), length = parts[number], lengths[number]
        if start <= 0.0 and end >= length:
            path = course.whole()
        elif agrees:
            path = course.between(course.first + max(start, 0.0), course.first + min(end, length))
        else:
            path = course.between(course.last - min(end, length), course.last - max(start, 0.0))
        return path if agrees else path.reversed()

    def between(start: float, end: float) -> Path:
        pieces = [
            piece(number, start - begin, end - begin)
            for number, begin in enumerate(starts[:-1])
            if begin + lengths[number] > start and begin < end
        ]
        return joined(pieces, name)

    def nearest(point: Point) -> Place:
        found = [course.nearest(point) for course, _ in parts]
        at = min(range(len(found)), key=lambda number: found[number][1])
        (course, agrees), (place, apart) = parts[at], found[at]
        return starts[at] + (place - course.first if agrees else course.last - place), apart

    return Course(0.0, starts[-1], between, nearest, pieces=sum(c.pieces for c, _ in parts))


def joined(pieces: Sequence[Path], name: str) -> Path:
    """Centre lines one after another as one; raises UnreadableError where they do not meet."""
    points: list[Point] = []
    arcs: list[int] = []
    for piece in pieces:
        if points and math.dist(points[-1], piece.points[0]) > JOINT_GAP:
            raise UnreadableError(f"{name} has segments that do not meet")
        offset = max(len(points) - 1, 0)
        arcs.extend(first + offset for first in piece.arcs)
        points.extend(piece.points[1:] if points else piece.points)
    return Path(tuple(points), tuple(arcs))

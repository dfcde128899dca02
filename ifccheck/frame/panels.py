"""The floor cut into panels by the axes of what carries it: each a ring of edges, some of which
carry.

An axis that stops short of another, at the face of a girder, a column or a wall, is led on to it.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from ifccheck.beam import Point

if TYPE_CHECKING:
    from shapely import LineString, Polygon, STRtree
    from shapely.geometry.base import BaseGeometry

REACH = 1000.0
"""How far an axis is led on to meet another, or the edge of the floor [mm]"""
TOUCHING = 10.0
"""How far beyond its width a member still meets what ends at it [mm]"""
OVERSHOOT = 1.0
"""How far an axis is led past another, so that both surely cross [mm]"""
SHORT = 5.0
"""Ends that stand out by no more part nothing [mm]"""
SLIVER = 1e-3
"""What covers less is rounding, not floor [mm2]"""
GRID = 1e-5
"""Places nearer to each other than this are one: lines in one line differ by rounding [mm]"""
SAME_WAY = math.cos(math.radians(5.0))
SQUARE_ENOUGH = math.sin(math.radians(10.0))
ON_LINE = 0.01
"""How far from an axis its own edges may be by rounding [mm]"""


@dataclass(frozen=True)
class Carrier:
    """What carries a floor along a straight axis in plan [mm]."""

    start: Point
    end: Point
    half_width: float

    @cached_property
    def length(self) -> float:
        """Of its axis [mm]."""
        return math.dist(self.start, self.end)

    @cached_property
    def way(self) -> Point:
        """Unit vector from start to end."""
        (x0, y0), (x1, y1), length = self.start, self.end, self.length
        return (x1 - x0) / length, (y1 - y0) / length

    def across(self, point: Point) -> float:
        """How far to the left of its line a place is [mm]."""
        (x0, y0), (x, y) = self.start, self.way
        return x * (point[1] - y0) - y * (point[0] - x0)

    def along(self, point: Point) -> float:
        """How far past its start a place is [mm]."""
        (x0, y0), (x, y) = self.start, self.way
        return x * (point[0] - x0) + y * (point[1] - y0)

    def at(self, along: float) -> Point:
        """A place on its line, so far past its start."""
        (x0, y0), (x, y) = self.start, self.way
        return x0 + along * x, y0 + along * y


class Edge(NamedTuple):
    """A straight part of the edge of a panel, the panel to its left."""

    start: Point
    end: Point
    carrier: int
    """Number of what carries there; -1 for none"""


class Panel(NamedTuple):
    """A part of the floor that no axis crosses."""

    figure: Polygon
    rings: tuple[tuple[Edge, ...], ...]
    inside: tuple[Edge, ...]
    """Axes that end within it; they carry on either side"""


def panels_of(
    outer: Polygon, carriers: Sequence[Carrier], wanted: Callable[[Polygon], bool]
) -> list[Panel]:
    """Cut a floor, and a margin round it that holds the axes beside it, into those panels that are
    wanted."""
    from shapely import Polygon, STRtree, polygonize_full, unary_union

    margin = max((each.half_width for each in carriers), default=0.0) + 2.0 * TOUCHING
    domain = outer.buffer(margin, join_style="mitre")
    tree = STRtree([_line(each.start, each.end) for each in carriers])
    ways = [_led_on(*each, domain) for each in _with_others(carriers, tree)]
    within = [line.intersection(domain) for lines in ways for line in lines]
    noded = unary_union([*within, domain.boundary], grid_size=GRID)
    found, cuts, dangles, _ = polygonize_full([noded])
    names = _Names(carriers, tree)
    loose = [
        edge
        for line in (*dangles.geoms, *cuts.geoms)
        if line.length > SHORT
        for edge in names.edges(list(line.coords))
        if edge.carrier >= 0 and names.is_own(edge)
    ]
    figures = (each for each in found.geoms if isinstance(each, Polygon) and wanted(each))
    return [_panel(figure, names, loose) for figure in figures]


def _line(start: Point, end: Point) -> LineString:
    from shapely import LineString

    return LineString((start, end))


class _Names:
    """Tells which carrier an edge belongs to."""

    def __init__(self, carriers: Sequence[Carrier], tree: STRtree) -> None:
        self._carriers, self._tree = carriers, tree

    def edges(self, points: Sequence[Sequence[float]]) -> list[Edge]:
        """Edges between places in a row."""
        from shapely import box

        x, y = np.asarray(points)[:, :2].T
        middle_x, middle_y = (x[1:] + x[:-1]) / 2.0, (y[1:] + y[:-1]) / 2.0
        near = box(middle_x - REACH, middle_y - REACH, middle_x + REACH, middle_y + REACH)
        rows: list[list[int]] = [[] for _ in near]
        for edge, row in zip(*self._tree.query(near).tolist(), strict=True):
            rows[edge].append(row)
        places = list(zip(x.tolist(), y.tolist(), strict=True))
        return [
            Edge(a, b, self._carrier(a, b, own))
            for (a, b), own in zip(pairwise(places), rows, strict=True)
            if a != b
        ]

    def _carrier(self, start: Point, end: Point, rows: Sequence[int]) -> int:
        (x0, y0), (x1, y1) = start, end
        middle = (x0 + x1) / 2.0, (y0 + y1) / 2.0
        found = [row for row in rows if self._lies_on(row, start, end)]
        return min(found, key=lambda row: (self._beyond(row, middle), row), default=-1)

    def _lies_on(self, row: int, start: Point, end: Point) -> bool:
        """Whether an edge runs along a carrier's axis, or leads it on to the next in line."""
        one = self._carriers[row]
        offsets = [abs(one.across(point)) for point in (start, end)]
        if max(offsets) <= ON_LINE:
            return self._beyond(row, start) <= REACH and self._beyond(row, end) <= REACH
        jogs = min(offsets) <= ON_LINE and max(offsets) <= one.half_width
        led = abs(one.along(start) - one.along(end)) >= max(offsets)
        past = [self._beyond(row, point) for point in (start, end)]
        return jogs and led and 0.0 < max(past) <= REACH

    def _beyond(self, row: int, point: Point) -> float:
        """How far past the ends of a carrier a place is."""
        one = self._carriers[row]
        along = one.along(point)
        return round(max(-along, along - one.length, 0.0), 3)

    def is_own(self, edge: Edge) -> bool:
        """Whether an edge lies within its carrier's own length."""
        (x0, y0), (x1, y1) = edge.start, edge.end
        return self._beyond(edge.carrier, ((x0 + x1) / 2.0, (y0 + y1) / 2.0)) <= 0.0


def _panel(figure: Polygon, names: _Names, loose: Sequence[Edge]) -> Panel:
    from shapely import Point as Place
    from shapely.geometry.polygon import orient

    turned = orient(figure)
    rings = (turned.exterior, *turned.interiors)
    inside = [
        edge
        for edge in loose
        if figure.contains(
            Place((edge.start[0] + edge.end[0]) / 2.0, (edge.start[1] + edge.end[1]) / 2.0)
        )
    ]
    return Panel(
        turned, tuple(tuple(names.edges(list(ring.coords))) for ring in rings), tuple(inside)
    )


def _with_others(
    carriers: Sequence[Carrier], tree: STRtree
) -> Iterator[tuple[Carrier, list[Carrier]]]:
    """Each carrier with those that it may meet."""
    from shapely import box

    ends = np.array([(each.start, each.end) for each in carriers])
    low, high = ends.min(axis=1) - 2.0 * REACH, ends.max(axis=1) + 2.0 * REACH
    near: list[list[int]] = [[] for _ in carriers]
    pairs = tree.query(box(low[:, 0], low[:, 1], high[:, 0], high[:, 1]))
    for row, other in sorted(zip(*pairs.tolist(), strict=True)):
        if other != row:
            near[row].append(other)
    for one, others in zip(carriers, near, strict=True):
        yield one, [carriers[other] for other in others]


def _led_on(one: Carrier, others: Sequence[Carrier], domain: BaseGeometry) -> Iterator[LineString]:
    """A carrier's axis, and what leads it on at either end, each a line of its own."""
    start, before = _end_of(Carrier(one.end, one.start, one.half_width), others, domain)
    end, after = _end_of(one, others, domain)
    if math.dist(start, end) > 0.0:
        yield _line(start, end)
    for led in (before, after):
        if led:
            yield _line(*led)


def _end_of(
    one: Carrier, others: Sequence[Carrier], domain: BaseGeometry
) -> tuple[Point, tuple[Point, Point] | None]:
    """Where a carrier's axis ends, and the line that leads it on, if any."""
    to = _target(one, others, domain)
    if to is None:
        return one.end, None
    if one.along(to) <= one.length:
        return to, None
    return one.end, (one.end, to)


def _target(one: Carrier, others: Sequence[Carrier], domain: BaseGeometry) -> Point | None:
    """Where the end of an axis meets another or the edge of the floor; None for nowhere."""
    crossing = sorted(_crossings(one, others))
    joined = [far for far, least in crossing if abs(far) <= least]
    if joined:
        return _ahead(one, min(joined, key=abs) + OVERSHOOT)
    ahead = [far for far, _ in crossing if far >= 0.0]
    gap, place = min(_in_line(one, others), default=(math.inf, None))
    if ahead and ahead[0] <= max(gap, 0.0):
        return _ahead(one, ahead[0] + OVERSHOOT)
    if place is not None:
        return place
    to_edge = _line(one.end, _ahead(one, REACH)).intersection(domain.boundary)
    far = [one.along(place) - one.length for place in _points(to_edge)]
    return _ahead(one, min(far) + OVERSHOOT) if far else None


def _points(figure: BaseGeometry) -> list[Point]:
    """Corners of what a line has in common with a ring."""
    from shapely import get_coordinates

    return [(x, y) for x, y in get_coordinates(figure).tolist()]


def _ahead(one: Carrier, far: float) -> Point:
    (x, y), (a, b) = one.end, one.way
    return x + far * a, y + far * b


def _crossings(one: Carrier, others: Sequence[Carrier]) -> Iterator[tuple[float, float]]:
    """How far past the end each other axis is crossed, and up to where both still meet [mm]."""
    x, y = one.way
    for other in others:
        a, b = other.way
        sine = a * y - b * x  # of the way of one, to the left of the other
        if abs(sine) < SQUARE_ENOUGH:
            continue
        far = -other.across(one.end) / sine
        along = other.along(_ahead(one, far))
        meets = (other.half_width + TOUCHING) / abs(sine)
        short = one.half_width / abs(sine) + TOUCHING
        if -short <= along <= other.length + short:
            if -one.length / 2.0 < far <= REACH and far >= -meets:
                yield far, meets
        elif -REACH <= along <= other.length + REACH and 0.0 <= far <= REACH:
            yield far, -1.0


def _in_line(one: Carrier, others: Sequence[Carrier]) -> Iterator[tuple[float, Point]]:
    """The gap to each that goes on in line past the end, and its middle."""
    x, y = one.way
    for other in others:
        a, b = other.way
        if abs(a * x + b * y) < SAME_WAY:
            continue
        next_end = min(other.start, other.end, key=one.along)
        gap = one.along(next_end) - one.length
        aside = abs(one.across(next_end))
        if abs(gap) <= REACH and 2.0 * abs(gap) < one.length + other.length and (
            one.along(max(other.start, other.end, key=one.along)) > one.length
        ) and aside <= min(one.half_width, other.half_width):  # fmt: skip
            middle = (one.end[0] + next_end[0]) / 2.0, (one.end[1] + next_end[1]) / 2.0
            yield gap, middle

"""What part of a floor each beam carries: panels shared two ways by 45 degree lines, or one way.

A place on a panel goes to the edge that is nearest among those that carry, measured square to it,
or along the span where the slab spans one way. In a rectangle between four beams this gives the
triangles and trapezoids of 45 degree lines, in any convex panel the parts between the bisectors of
its corners. Slab beyond the outermost beams goes to the nearest. Where the panel turns back on
itself, a beam's part ends at the bisector of that corner, and where nothing carries on beside it,
square to its end.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING, Literal, NamedTuple

from ifccheck.beam import Point, Ring
from ifccheck.frame.floor_figures import floor_figure, shifted, together
from ifccheck.frame.panels import SLIVER, Carrier, Edge, Panel, panels_of

if TYPE_CHECKING:
    from shapely import Polygon
    from shapely.geometry.base import BaseGeometry

Ways = Literal["by shape", "two ways", "one way"]
"""How slabs span: one way where a panel is more than twice as long as wide; or always so"""

LONG = 2.0 * (1.0 + 1e-6)
"""Longer side over shorter beyond which a panel spans the short way alone"""
TURNED = math.radians(2.0)
"""A corner of a panel within this of straight counts as straight"""
ALONG = math.cos(math.radians(45.0))
"""Least cosine between the span and the normal of an edge that carries it"""
FILLED = 0.98
"""Part of its hull that a panel covers which is of one simple shape"""
ROUNDING = 1e-10
"""Part of a floor that may be lost to rounding where panels meet"""
TOUCHED = 1e-7
"""Part of a floor that lies in a panel which it only touches, by rounding"""


LOST = 1e-6
"""Part of a floor by which its parts may fall short of it"""
TWICE = 0.1
"""Part of a floor that may count twice, which loads beams more, where axes all but coincide"""


class UnsharedError(ValueError):
    """A floor that could not be shared out, and why."""


class Share(NamedTuple):
    """The part of a floor that goes to one carrier."""

    carrier: int
    figure: BaseGeometry
    """In plan, from the first point of the floor's outer ring [mm]"""


class Span(NamedTuple):
    """How a floor spans."""

    ways: Ways = "by shape"
    direction: Point | None = None
    """Unit vector in plan of slabs that span one way; None for the short way of each panel"""


class _Side(NamedTuple):
    """An edge of a panel that carries: how far from it a place is, and up to where it counts."""

    carrier: int
    distance: tuple[float, float, float]
    """a, b, c: the place (x, y) is a x + b y + c from it, not negative on its own side"""
    limits: tuple[tuple[float, float, float], ...]
    """It counts only where each of these is not negative"""


def shares(
    rings: Sequence[Ring], openings: Sequence[Sequence[Ring]], carriers: Sequence[Carrier],
    span: Span,
) -> list[Share]:  # fmt: skip
    """Share a floor out between what carries it.

    Parameters
    ----------
    rings
        Of the floor in plan, the outer one and then the voids [mm].
    openings
        Taken out of it, each by its rings.
    carriers
        With axes in plan; without any nothing is shared out.
    span
        How the floor spans.

    Raises
    ------
    UnsharedError
        Where the parts do not make up the floor, as its outline or the axes all but coincide.
    """
    origin = rings[0][0]
    figure = floor_figure(rings, openings, origin)
    if not carriers or figure.area <= SLIVER:
        return []
    from shapely import GEOSException

    try:
        found = _shared(figure, rings[0], [_moved(each, origin) for each in carriers], span)
    except GEOSException as error:
        raise UnsharedError("its panels cannot be told apart") from error
    laid = sum(share.figure.area for share in found)
    if not (1.0 - LOST) * figure.area <= laid <= (1.0 + TWICE) * figure.area:
        raise UnsharedError(f"its parts make {laid / figure.area:.4f} of its area together")
    return found


def _shared(
    figure: BaseGeometry, outline: Ring, local: Sequence[Carrier], span: Span
) -> list[Share]:
    from shapely import Polygon, unary_union

    found: dict[int, list[BaseGeometry]] = {}
    outer = Polygon(shifted(outline, outline[0]))
    for panel in panels_of(outer, local, lambda panel: _has_part(figure, panel)):
        for carrier, cell in _cells(panel, local, span):
            part = cell if figure.covers(cell) else figure.intersection(cell)
            if part.area > 0.0:
                found.setdefault(carrier, []).append(part)
    shared = sum(part.area for parts in found.values() for part in parts)
    if figure.area - shared > ROUNDING * figure.area:
        rest = figure.difference(unary_union([part for parts in found.values() for part in parts]))
        for carrier, part in _to_nearest(rest, local):
            found.setdefault(carrier, []).append(part)
    return [Share(carrier, together(parts)) for carrier, parts in sorted(found.items())]


def _has_part(figure: BaseGeometry, panel: Polygon) -> bool:
    """Whether a panel holds more of a floor than its edge."""
    if figure.covers(panel):
        return True
    return bool(figure.intersection(panel).area > TOUCHED * figure.area)


def _moved(carrier: Carrier, origin: Point) -> Carrier:
    start, end = shifted((carrier.start, carrier.end), origin)
    return replace(carrier, start=start, end=end)


def _cells(
    panel: Panel, carriers: Sequence[Carrier], span: Span
) -> Iterator[tuple[int, BaseGeometry]]:
    """What of a panel goes to each of its edges."""
    carrying = {edge.carrier for ring in panel.rings for edge in ring} | {
        edge.carrier for edge in panel.inside
    }
    carrying.discard(-1)
    if len(carrying) == 1:
        yield carrying.pop(), panel.figure
        return
    sides = _sides(panel, carriers, span)
    convex = len(panel.rings) == 1 and not panel.inside and _is_convex(panel.rings[0])
    if convex and not any(side.limits for side in sides):
        yield from _between_bisectors(panel, sides)
        return
    rest: BaseGeometry = panel.figure
    for some in (sides, [side._replace(limits=()) for side in sides]):
        for number, cell in _lowest(rest, some):
            yield some[number].carrier, cell
        rest = rest.difference(_union([_where(rest, side) for side in some]))
        if rest.area <= SLIVER:
            return
    yield from _to_nearest(rest, carriers)


def _union(figures: Sequence[BaseGeometry]) -> BaseGeometry:
    from shapely import unary_union

    found: BaseGeometry = unary_union(figures)
    return found


def _sides(panel: Panel, carriers: Sequence[Carrier], span: Span) -> list[_Side]:
    way = _span_way(panel, carriers, span)
    edges = list(_merged(panel))
    if way is not None:
        edges = [each for each in edges if abs(_normal_part(each[0], carriers, way)) >= ALONG]
    return [
        _Side(edge.carrier, _distance(edge, carriers, way), _limits(edge, ends, way))
        for edge, ends in edges
    ]


def _normal_part(edge: Edge, carriers: Sequence[Carrier], way: Point) -> float:
    """Cosine between the span and the inward normal of an edge."""
    a, b, _ = _distance(edge, carriers, None)
    return a * way[0] + b * way[1]


def _distance(
    edge: Edge, carriers: Sequence[Carrier], way: Point | None
) -> tuple[float, float, float]:
    """Distance from the carrier's line, square to it or along the span, positive on this side."""
    carrier = carriers[edge.carrier]
    (x, y), (x0, y0) = carrier.way, carrier.start
    same = (edge.end[0] - edge.start[0]) * x + (edge.end[1] - edge.start[1]) * y
    a, b = (-y, x) if same >= 0.0 else (y, -x)
    scale = 1.0 if way is None else 1.0 / abs(a * way[0] + b * way[1] or math.inf)
    return a * scale, b * scale, -(a * x0 + b * y0) * scale


def _span_way(panel: Panel, carriers: Sequence[Carrier], span: Span) -> Point | None:
    """The way that a panel spans; None for two ways."""
    if span.ways == "two ways":
        return None
    simple = panel.figure.area >= FILLED * panel.figure.convex_hull.area
    if not simple and span.direction is None:
        return None
    way = span.direction or _short_way(panel.figure, 0.0 if span.ways == "one way" else LONG)
    if way is None:
        return None
    normals = [_normal_part(edge, carriers, way) for edge, _ in _merged(panel)]
    spans = any(part >= ALONG for part in normals) and any(part <= -ALONG for part in normals)
    return way if spans else None


def _corners(figure: BaseGeometry) -> list[Point]:
    from shapely import get_coordinates

    return [(x, y) for x, y in get_coordinates(figure).tolist()]


def _short_way(figure: Polygon, least: float) -> Point | None:
    """The short way of the rectangle round a panel, where that is so much longer than wide."""
    (x0, y0), (x1, y1), (x2, y2), *_ = _corners(figure.minimum_rotated_rectangle)
    one, other = (x1 - x0, y1 - y0), (x2 - x1, y2 - y1)
    short, long = sorted((one, other), key=lambda side: math.hypot(*side))
    length = math.hypot(*short)
    if length <= 0.0 or math.hypot(*long) <= least * length:
        return None
    return short[0] / length, short[1] / length


_End = tuple[Point, "tuple[float, float] | None"]
"""A place up to which an edge counts, and the line from there into the panel: its direction, or
None for the square to the edge"""


def _merged(panel: Panel) -> Iterator[tuple[Edge, tuple[_End | None, _End | None]]]:
    """The edges that carry, those in one line as one, and where each stops counting at its ends."""
    for ring in panel.rings:
        groups = _grouped(ring)
        for number, group in enumerate(groups):
            if group.carrier >= 0:
                before, after = groups[number - 1], groups[(number + 1) % len(groups)]
                yield group, (_end(before, group, group.start), _end(group, after, group.end))
    for edge in panel.inside:
        back = Edge(edge.end, edge.start, edge.carrier)
        for one in (edge, back):
            yield one, ((one.start, None), (one.end, None))


def _grouped(ring: Sequence[Edge]) -> list[Edge]:
    """The edges of a ring, neighbours of one carrier in one line joined."""
    found: list[Edge] = []
    for edge in ring:
        if found and _goes_on(found[-1], edge):
            found[-1] = found[-1]._replace(end=edge.end)
        else:
            found.append(edge)
    if len(found) > 1 and _goes_on(found[-1], found[0]):
        found[0] = found[0]._replace(start=found.pop().start)
    return found


def _goes_on(one: Edge, other: Edge) -> bool:
    return one.carrier == other.carrier and abs(_turn(one, other)) <= 10.0 * TURNED


def _turn(one: Edge, other: Edge) -> float:
    """How far the edge of a panel turns to the left from one to the next [rad]."""
    (ax, ay), (bx, by) = _way(one), _way(other)
    return math.atan2(ax * by - ay * bx, ax * bx + ay * by)


def _way(edge: Edge) -> Point:
    x, y = edge.end[0] - edge.start[0], edge.end[1] - edge.start[1]
    length = math.hypot(x, y)
    return x / length, y / length


def _end(before: Edge, after: Edge, place: Point) -> _End | None:
    """Where an edge stops counting at a corner; None where the corner itself tells."""
    if _turn(before, after) > TURNED:
        return None
    if min(before.carrier, after.carrier) < 0:
        return place, None
    (ax, ay), (bx, by) = _way(before), _way(after)
    middle = (-ay - by, ax + bx)  # halves the angle within the panel
    return place, middle if math.hypot(*middle) > TURNED else None


def _limits(
    edge: Edge, ends: tuple[_End | None, _End | None], way: Point | None
) -> tuple[tuple[float, float, float], ...]:
    found = []
    x, y = _way(edge)
    for end, sign in zip(ends, (1.0, -1.0), strict=True):
        if end is None:
            continue
        (px, py), line = end
        dx, dy = way or line or (-y, x)
        a, b = (dy, -dx) if (dy * x - dx * y) * sign >= 0.0 else (-dy, dx)
        size = math.hypot(a, b)
        a, b = a / size, b / size
        found.append((a, b, -(a * px + b * py)))
    return tuple(found)


def _is_convex(ring: Sequence[Edge]) -> bool:
    groups = _grouped(ring)
    return all(
        _turn(groups[number - 1], group) > -TURNED for number, group in enumerate(groups)
    ) and math.isclose(
        sum(_turn(ring[number - 1], edge) for number, edge in enumerate(ring)), math.tau
    )


def _between_bisectors(panel: Panel, sides: Sequence[_Side]) -> Iterator[tuple[int, BaseGeometry]]:
    """The parts of a convex panel that are nearest to each side."""
    from shapely import Polygon

    corners = [edge.start for edge in panel.rings[0]]
    for number, side in enumerate(sides):
        part = corners
        for other, each in enumerate(sides):
            if other != number:
                part = _clipped(part, _nearer(side, each))
        if len(part) > 2:
            yield side.carrier, Polygon(part)


def _nearer(side: _Side, other: _Side) -> tuple[float, float, float]:
    """Not negative where a place is as near to one side as to another, or nearer."""
    a, b, c = (q - p for p, q in zip(side.distance, other.distance, strict=True))
    return a, b, c


def _clipped(corners: Sequence[Point], line: tuple[float, float, float]) -> list[Point]:
    """The part of a convex figure where a line's function is not negative."""
    a, b, c = line
    if abs(a) + abs(b) < 1e-12:
        return list(corners) if c >= 0.0 else []
    values = [a * x + b * y + c for x, y in corners]
    found: list[Point] = []
    for number, (x, y) in enumerate(corners):
        (px, py), before, here = corners[number - 1], values[number - 1], values[number]
        if (before < 0.0) != (here < 0.0):
            share = before / (before - here)
            found.append((px + share * (x - px), py + share * (y - py)))
        if here >= 0.0:
            found.append((x, y))
    return found


def _lowest(rest: BaseGeometry, sides: Sequence[_Side]) -> Iterator[tuple[int, BaseGeometry]]:
    """What of a figure is nearest to each side among those that count there."""
    for number, side in enumerate(sides):
        own = _where(rest, side)
        if own.is_empty:
            continue
        nearer = [
            _where(rest, each, (_nearer(each, side),))
            for other, each in enumerate(sides)
            if other != number and not (other > number and _same(each, side))
        ]
        yield number, rest.intersection(own).difference(_union(nearer))


def _same(one: _Side, other: _Side) -> bool:
    """Whether two sides are as far from every place."""
    return all(
        math.isclose(p, q, rel_tol=1e-9, abs_tol=1e-9)
        for p, q in zip(one.distance, other.distance, strict=True)
    )


def _where(
    rest: BaseGeometry, side: _Side, more: Sequence[tuple[float, float, float]] = ()
) -> BaseGeometry:
    """The box round a figure, as far as a side counts in it."""
    from shapely import Polygon

    low_x, low_y, high_x, high_y = rest.bounds
    part: list[Point] = [(low_x - 1.0, low_y - 1.0), (high_x + 1.0, low_y - 1.0),
                         (high_x + 1.0, high_y + 1.0), (low_x - 1.0, high_y + 1.0)]  # fmt: skip
    for line in (side.distance, *side.limits, *more):
        part = _clipped(part, line)
    return Polygon(part) if len(part) > 2 else Polygon()


def _to_nearest(
    rest: BaseGeometry, carriers: Sequence[Carrier]
) -> Iterator[tuple[int, BaseGeometry]]:
    """Pieces that no edge faces, each to the carrier that is nearest to its middle."""
    from shapely import LineString

    lines = [LineString((each.start, each.end)) for each in carriers]
    for piece in getattr(rest, "geoms", [rest]):
        middle = piece.representative_point()
        yield min(range(len(lines)), key=lambda row: lines[row].distance(middle)), piece

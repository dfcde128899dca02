"""The direction in which a solid spans.

Candidates are the way that nearly all long edges run, the line of the Axis representation, the
axes of the element's own placement, and the directions of other edges. The one round which the
box is smallest is the span; of boxes that are much the same, that of the earlier candidate, so
that a beam with one level and one sloping face spans along what it was placed by.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

import numpy as np

from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.solids import Facets, Floats, crossed
from ifccheck.ifc.vectors import Triple, cross

CLEARLY_LONGER = 1.1
"""The span must be this much longer than the next candidate."""
SAME_BOX = 0.02
"""Part of their volume by which boxes differ that are much the same."""
SAME_WAY = 1e-4
"""Sine of the angle between edges that run the same way."""
ASIDE = math.cos(math.radians(40.0))
"""Edges further than this from the longest way through the solid are none along the span."""
MOST_WAYS = 12
"""Directions of edges that are looked at, those of the greatest length together first."""
PRISM = 0.9
"""Part of the length of all edges along it that runs the same way in a prism."""
BESIDE = math.cos(math.radians(0.5))
"""An edge this near to a given direction is what that direction meant."""
NOISE = 1e-5
"""Directions that differ by less than this are one."""
COPLANAR = 1e-6
"""Sine of the angle below which two faces are one."""


def span_direction(parts: Sequence[Facets], placement: Matrix, axis: Cloud | None) -> Triple:
    """Return the direction in which parts of one solid span together.

    Parameters
    ----------
    parts
        In the building [mm].
    placement
        Of the element.
    axis
        Direction of its Axis representation in the building, where it has a straight one.

    Raises
    ------
    UnreadableError
        Where it is not clear which way is the longest.
    """
    cloud = np.concatenate([part.points for part in parts])
    edges = np.concatenate([_edges(part) for part in parts])
    rough = _longest_way(edges)
    best, least = None, math.inf
    for way in _candidates(edges, rough, placement, axis):
        volume = float(np.prod(np.ptp(cloud @ _frame(way).T, axis=0)))
        if volume < least * (1.0 - SAME_BOX):
            best, least = way, volume
    way = _without_noise(rough if best is None else best, placement)
    _require_clear(cloud, way)
    x, y, z = way.tolist()
    return x, y, z


def _without_noise(way: Floats, placement: Matrix) -> Floats:
    """The axis of the placement that a direction differs from by no more than noise."""
    cosines = placement[:3, :3].T @ way
    nearest = int(np.abs(cosines).argmax())
    axis = placement[:3, nearest] * np.sign(cosines[nearest])
    return axis if np.abs(way - axis).max() < NOISE else way


def _require_clear(cloud: Cloud, way: Floats) -> None:
    sides = np.ptp(cloud @ _frame(way).T, axis=0)
    if sides[0] < CLEARLY_LONGER * max(sides[1:]):
        body = " x ".join(f"{side:.0f}" for side in sorted(sides, reverse=True))
        raise UnreadableError(f"span direction unclear: body is {body} mm")


def _candidates(
    edges: Floats, rough: Floats, placement: Matrix, axis: Cloud | None
) -> Iterator[Floats]:
    ways = _ways(edges, rough)
    if ways and ways[0][0] > PRISM * sum(length for length, _ in ways):
        yield ways[0][1]
    for given in ([] if axis is None else [axis], placement[:3, :3].T):
        for way in given:
            unit = way / np.sqrt(way @ way)
            if abs(unit @ rough) > ASIDE:
                near = max((way for _, way in ways), key=lambda way: abs(way @ unit), default=unit)
                yield near if abs(near @ unit) > BESIDE else unit
    yield from (way for _, way in ways)
    yield rough


def _edges(part: Facets) -> Floats:
    """The edges of a solid as vectors, without those between faces of one plane."""
    edge = np.abs(part.sides[:, 1]) - 1
    normals = part.normals / np.maximum(
        np.sqrt((part.normals**2).sum(axis=1, keepdims=True)), 1e-12
    )
    order = np.argsort(edge, kind="stable")
    edge, normal = edge[order], normals[part.sides[order, 0]]
    first = np.flatnonzero(np.diff(edge, prepend=-1))
    count = np.diff(first, append=len(edge))
    pair = count == 2
    ridge = np.ones(len(first), dtype=np.bool_)
    across = crossed(normal[first[pair]], normal[first[pair] + 1])
    ridge[pair] = np.sqrt((across * across).sum(axis=1)) > COPLANAR
    ends = part.points[part.edges[edge[first[ridge]]]]
    return np.asarray(ends[:, 1] - ends[:, 0])


def _longest_way(edges: Floats) -> Floats:
    """The way that the edges run on the whole, the long ones above all."""
    sizes = np.sqrt((edges * edges).sum(axis=1))
    weighed = np.einsum("n,ni,nj->ij", sizes, edges, edges)
    return np.asarray(np.linalg.eigh(weighed)[1][:, -1])


def _ways(edges: Floats, rough: Floats) -> list[tuple[float, Floats]]:
    """Directions of the edges near the longest way with their length together, the greatest
    first."""
    sizes = np.sqrt((edges * edges).sum(axis=1))
    units = edges[sizes > 0.0] / sizes[sizes > 0.0, None]
    sizes = sizes[sizes > 0.0]
    units = units * np.where(units @ rough < 0.0, -1.0, 1.0)[:, None]
    near = units @ rough > ASIDE
    units, sizes = units[near], sizes[near]
    found: list[tuple[float, Floats]] = []
    while len(units) and len(found) < MOST_WAYS:
        across = crossed(units, np.broadcast_to(units[int(sizes.argmax())], units.shape))
        same = np.sqrt((across * across).sum(axis=1)) < SAME_WAY
        way = (units[same] * sizes[same, None]).sum(axis=0)
        found.append((float(sizes[same].sum()), way / np.sqrt(way @ way)))
        units, sizes = units[~same], sizes[~same]
    return sorted(found, key=lambda pair: -pair[0])


def _frame(way: Floats) -> Floats:
    """Rows: along the way, level to its left where it is not upright, and square to both."""
    x, y, z = way.tolist()
    level = math.hypot(x, y)
    left = (-y / level, x / level, 0.0) if level > 1e-6 else (0.0, 1.0, 0.0)
    return np.array(((x, y, z), left, cross((x, y, z), left)))

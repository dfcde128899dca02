"""Solids to be sliced: flat-faced ones, half-spaces, and what is put together of them.

A solid is sliced square to the first axis of the frame that it was moved into. Booleans are
worked out on the slices, where they are plane figures: no solid is ever cut in space.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import TYPE_CHECKING, Literal, Protocol

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.slices import figure_of

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

Ints = npt.NDArray[np.intp]
Floats = npt.NDArray[np.float64]

Operator = Literal["UNION", "DIFFERENCE", "INTERSECTION"]
Loop = Sequence[int]
"""Rows of the points round one edge of a face."""

WELD = 1e-5
"""Points closer than this are written alike [mm]."""
ENDLESS = 1e5
"""What stands for endless beside a section [mm]."""
FLAT = 1e-9
"""Sine of the angle below which a plane is square to the axis."""


class Solid(Protocol):
    """What can be moved and sliced."""

    def moved(self, matrix: Matrix) -> Solid:
        """Return the solid after a transformation of space, which may scale and mirror."""
        ...

    def section(self, x: float) -> BaseGeometry:
        """Return the figure (y, z) that the solid leaves in the plane at x [mm]."""
        ...

    def leaves(self) -> Iterator[Leaf]:
        """Return the solids that it is put together of."""
        ...

    def added(self) -> Iterator[Facets]:
        """Return those of them that it may reach as far as."""
        ...


@dataclass(frozen=True, eq=False)
class Facets:
    """A solid with flat faces, by their edges."""

    points: Cloud
    """(V, 3) [mm]"""
    edges: Ints
    """Rows of the two ends of each edge, each edge once (E, 2)"""
    sides: Ints
    """Face and edge of each side of each face (S, 2)"""
    name: str = ""
    """Of the profile that it is made of"""

    @cached_property
    def normals(self) -> Floats:
        """Twice the area of each face, along its normal (F, 3)."""
        loops = self.points[self.sides_points]
        twice = crossed(loops[:, 0] - self.points[0], loops[:, 1] - self.points[0])
        faces = int(self.sides[:, 0].max()) + 1
        return np.stack(
            [np.bincount(self.sides[:, 0], twice[:, k], minlength=faces) for k in range(3)], axis=1
        )

    @cached_property
    def sides_points(self) -> Ints:
        """Rows of the first and last point of each side as its face is walked round (S, 2)."""
        edge = np.abs(self.sides[:, 1]) - 1
        ends = self.edges[edge]
        return np.asarray(np.where(self.sides[:, 1:] < 0, ends[:, ::-1], ends))

    def moved(self, matrix: Matrix) -> Facets:
        """Return the solid after a transformation of space, which may scale and mirror."""
        return replace(self, points=self.points @ matrix[:3, :3].T + matrix[:3, 3])

    def section(self, x: float) -> BaseGeometry:
        """Return the figure (y, z) that the solid leaves in the plane at x [mm]."""
        return figure_of(self._segments(x), x)

    def _segments(self, x: float) -> Floats:
        """Where the plane at x cuts the faces (N, 2 ends, 2)."""
        ends = self.points[self.edges]
        beyond = ends[:, :, 0] >= x
        cut = beyond[:, 0] != beyond[:, 1]
        edge = np.abs(self.sides[:, 1]) - 1
        rows = np.flatnonzero(cut[edge])
        first, last = ends[cut, 0], ends[cut, 1]
        share = (x - first[:, 0]) / (last[:, 0] - first[:, 0])
        places = np.zeros((len(cut), 2))
        places[cut] = first[:, 1:] + share[:, None] * (last[:, 1:] - first[:, 1:])
        face, place = self.sides[rows, 0], places[edge[rows]]
        along = place[:, 1] * self.normals[face, 1] - place[:, 0] * self.normals[face, 2]
        return np.asarray(place[np.lexsort((along, face))].reshape(-1, 2, 2))

    def leaves(self) -> Iterator[Leaf]:
        """Return the solid itself."""
        yield self

    def added(self) -> Iterator[Facets]:
        """Return the solid itself."""
        yield self


@dataclass(frozen=True, eq=False)
class HalfSpace:
    """All that lies on one side of a plane."""

    point: Floats
    outward: Floats
    """Unit normal to the side that is empty"""

    def moved(self, matrix: Matrix) -> HalfSpace:
        """Return it after a transformation of space, which may scale and mirror."""
        outward = np.linalg.inv(matrix[:3, :3]).T @ self.outward
        outward /= np.sqrt(outward @ outward)
        return HalfSpace(matrix[:3, :3] @ self.point + matrix[:3, 3], outward)

    def section(self, x: float) -> BaseGeometry:
        """Return the half of the plane at x that is filled."""
        from shapely import Polygon, box

        across = self.outward[1:]
        size = float(np.sqrt(across @ across))
        reach = float(self.outward @ self.point - self.outward[0] * x)
        if size < FLAT:
            everything = box(-ENDLESS, -ENDLESS, ENDLESS, ENDLESS)
            return everything if reach >= 0.0 else Polygon()
        out = across / size
        on, along = out * reach / size, np.array((-out[1], out[0])) * ENDLESS
        back = on - out * ENDLESS
        return Polygon([on - along, on + along, back + along, back - along])

    def leaves(self) -> Iterator[Leaf]:
        """Return the half-space itself."""
        yield self

    def added(self) -> Iterator[Facets]:
        """Return nothing: it is never more than a cut."""
        return iter(())


@dataclass(frozen=True, eq=False)
class Combined:
    """Two solids put together."""

    operator: Operator
    first: Solid
    second: Solid

    def moved(self, matrix: Matrix) -> Combined:
        """Return the solid after a transformation of space, which may scale and mirror."""
        return Combined(self.operator, self.first.moved(matrix), self.second.moved(matrix))

    def section(self, x: float) -> BaseGeometry:
        """Return the figure (y, z) that the solid leaves in the plane at x [mm]."""
        one, other = self.first.section(x), self.second.section(x)
        if self.operator == "UNION":
            return one.union(other)
        return one.difference(other) if self.operator == "DIFFERENCE" else one.intersection(other)

    def leaves(self) -> Iterator[Leaf]:
        """Return the solids that it is put together of."""
        yield from self.first.leaves()
        yield from self.second.leaves()

    def added(self) -> Iterator[Facets]:
        """Return those of them that it may reach as far as."""
        first = list(self.first.added())
        yield from first
        if self.operator == "UNION" or (self.operator == "INTERSECTION" and not first):
            yield from self.second.added()


Leaf = Facets | HalfSpace


def crossed(one: Floats, other: Floats) -> Floats:
    """Return vectors square to pairs of others (N, 3); np.cross is slow for few."""
    (a, b, c), (x, y, z) = one.T, other.T
    return np.stack([b * z - c * y, c * x - a * z, a * y - b * x], axis=1)


def together(solids: Sequence[Solid]) -> Solid:
    """Return several solids as one."""
    whole = solids[0]
    for other in solids[1:]:
        whole = Combined("UNION", whole, other)
    return whole


def facets(points: Cloud, faces: Iterable[Sequence[Loop]], name: str = "") -> Facets:
    """Return a solid of its faces, each an outer loop and the loops of its holes.

    Points that are written alike are made one, so that faces that meet share their edges.
    """
    if not np.isfinite(points).all():
        raise UnreadableError("body has corners at places that are no numbers")
    kept: dict[tuple[float, ...], int] = {}
    row = [kept.setdefault(key, len(kept)) for key in map(tuple, np.round(points / WELD).tolist())]
    edges: dict[tuple[int, int], int] = {}
    sides: list[tuple[int, int]] = []
    for face, loops in enumerate(faces):
        for loop in loops:
            around = [row[corner] for corner in loop]
            for one, other in zip(around, (*around[1:], around[0]), strict=True):
                if one < other:
                    sides.append((face, edges.setdefault((one, other), len(edges)) + 1))
                elif one > other:
                    sides.append((face, -edges.setdefault((other, one), len(edges)) - 1))
    if not sides:
        raise UnreadableError("body has no faces")
    first = np.full(len(kept), -1)
    first[row[::-1]] = np.arange(len(row))[::-1]
    return Facets(
        points[first], np.array(list(edges), dtype=np.intp), np.array(sides, dtype=np.intp), name
    )


def loft(stations: Sequence[Sequence[Cloud]], name: str = "") -> Facets:
    """Return the solid between rings in space: for each place the outer ring, then the voids.

    The rings of all places have the same number of corners, each joined to the same corner of
    the next place.
    """
    starts = np.cumsum([0, *(len(ring) for ring in stations[0])])
    count = int(starts[-1])
    loops = [list(range(starts[k], starts[k + 1])) for k in range(len(stations[0]))]
    faces: list[Sequence[Loop]] = [loops]
    for place in range(len(stations) - 1):
        base = place * count
        for loop in loops:
            around = zip(loop, (*loop[1:], loop[0]), strict=True)
            faces += [
                ((base + a, base + b, base + count + b, base + count + a),) for a, b in around
            ]
    last = (len(stations) - 1) * count
    faces.append([[last + corner for corner in loop] for loop in loops])
    return facets(np.concatenate([ring for rings in stations for ring in rings]), faces, name)

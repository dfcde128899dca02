"""Half-spaces that cut a body: mitred ends, and cuts that leave it unreadable."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.entity import Entity, UnreadableError, get, need
from ifccheck.ifc.placements import Matrix, Placements
from ifccheck.ifc.profile_curves import Points, read_pieces, ring

Vector = npt.NDArray[np.float64]
Cloud = npt.NDArray[np.float64]
"""Points in space, one a row [mm]."""

TOUCHING = 0.1
"""A cut that takes off less than this takes nothing off [mm]."""


@dataclass(frozen=True)
class Bound:
    """The polygon that bounds a half-space sideways, and the way into its plane."""

    into_plane: Matrix
    polygon: Points


@dataclass(frozen=True)
class Cut:
    """A plane; what lies on the side that ``outward`` points to is taken off."""

    point: Vector
    outward: Vector
    bound: Bound | None = None

    def height(self, points: Cloud) -> Vector:
        """Return how far points stand out on the side that is taken off [mm]."""
        return np.asarray((points - self.point) @ self.outward)

    def moved(self, matrix: Matrix) -> Cut:
        """Return the cut after a transformation of space, which may scale and mirror."""
        outward = np.linalg.inv(matrix[:3, :3]).T @ self.outward
        outward /= np.sqrt(outward @ outward)
        bound = self.bound
        if bound is not None:
            bound = replace(bound, into_plane=bound.into_plane @ np.linalg.inv(matrix))
        return Cut(matrix[:3, :3] @ self.point + matrix[:3, 3], outward, bound)


def read_cut(operand: Entity, placements: Placements) -> Cut:
    """Return the cut that subtracting a half-space makes; raises UnreadableError for others."""
    if not operand.is_a("IfcHalfSpaceSolid"):
        raise UnreadableError(f"body is cut by an {operand.is_a()}: no plain extrusion")
    surface = need(operand, "BaseSurface")
    if not surface.is_a("IfcPlane"):
        raise UnreadableError(f"body is cut along an {surface.is_a()}: no plain extrusion")
    plane = placements.axes(get(surface, "Position"))
    # the half-space fills the side away from the normal where the flag agrees with it
    outward = -plane[:3, 2] if get(operand, "AgreementFlag") else plane[:3, 2]
    bound = _bound(operand, placements) if operand.is_a("IfcPolygonalBoundedHalfSpace") else None
    return Cut(plane[:3, 3].copy(), outward.copy(), bound)


def _bound(operand: Entity, placements: Placements) -> Bound:
    polygon = ring(read_pieces(need(operand, "PolygonalBoundary"), placements))
    into_plane: Matrix = np.linalg.inv(placements.axes(get(operand, "Position"))).astype(float)
    return Bound(into_plane, polygon)


def taken_off(cloud: Cloud, cut: Cut) -> Cloud:
    """Return the corners of what an unbounded cut takes off a convex body."""
    return _part(cloud, cut.height(cloud))


def left_over(cloud: Cloud, cut: Cut) -> Cloud:
    """Return the corners of what an unbounded cut leaves of a convex body."""
    return _part(cloud, -cut.height(cloud))


def _part(cloud: Cloud, height: Vector) -> Cloud:
    """Corners on the side where height is positive, and where lines cross the plane."""
    inside, outside = height > 0.0, height <= 0.0
    first, second = cloud[inside], cloud[outside]
    if not len(first) or not len(second):
        return first
    above, below = height[inside][:, None], height[outside][None, :]
    share = (above / (above - below))[..., None]
    crossings = first[:, None, :] + share * (second[None, :, :] - first[:, None, :])
    return np.vstack((first, crossings.reshape(-1, 3)))


def acts(cut: Cut, cloud: Cloud) -> bool:
    """Tell whether a cut takes something off a body with these corners.

    Raises UnreadableError where a bounded half-space covers only part of what its plane would
    take off: that leaves a notch.
    """
    height = cut.height(cloud)
    if height.max() <= TOUCHING:
        return False
    if cut.bound is None:
        return True
    share = _covered(cut.bound, taken_off(cloud, cut))
    if 0.0 < share < 1.0:
        raise UnreadableError("body is notched or cut over part of its section: no plain extrusion")
    return share > 0.0


def _covered(bound: Bound, cloud: Cloud) -> float:
    """Share of a body's footprint on the bounding plane that lies in the polygon: 0, 1, or
    between."""
    from shapely import MultiPoint, Polygon

    flat = cloud @ bound.into_plane[:3, :3].T + bound.into_plane[:3, 3]
    footprint = MultiPoint(flat[:, :2]).convex_hull
    polygon = Polygon(bound.polygon)
    if polygon.buffer(TOUCHING).contains(footprint):
        return 1.0
    if not polygon.buffer(-TOUCHING).intersects(footprint):
        return 0.0
    return 0.5

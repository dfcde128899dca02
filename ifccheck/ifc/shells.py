"""Solids given by their flat faces: Breps, surface models and face sets."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from ifccheck.ifc.clips import Cloud
from ifccheck.ifc.entity import Entity, UnreadableError, label, need, numbers, several
from ifccheck.ifc.solids import Facets, Loop, facets

SHELLS = {
    "IfcFacetedBrep": ("Outer", "Voids"),
    "IfcFacetedBrepWithVoids": ("Outer", "Voids"),
    "IfcShellBasedSurfaceModel": ("SbsmBoundary",),
    "IfcFaceBasedSurfaceModel": ("FbsmFaces",),
}
"""Attributes that hold the shells of each kind of body."""

FACED = (
    *SHELLS, "IfcTriangulatedFaceSet", "IfcTriangulatedIrregularNetwork", "IfcPolygonalFaceSet",
)  # fmt: skip


def faced(item: Entity, scale: float) -> Facets:
    """Return a body that is given by its flat faces [mm]; raises UnreadableError if it is none."""
    return facets(*listed_faces(item, scale))


def listed_faces(item: Entity, scale: float) -> tuple[Cloud, list[list[Loop]]]:
    """Return the points of such a body [mm], and the loops of each face by rows of points."""
    if item.is_a() in SHELLS:
        return _shells(item, scale)
    points = _listed(need(item, "Coordinates"), scale)
    if item.is_a("IfcPolygonalFaceSet"):
        faces = [_polygonal(face) for face in several(item, "Faces")]
    else:
        faces = [(corners,) for corners in several(item, "CoordIndex")]
    numbered = several(item, "PnIndex")
    rows = [[_rows(loop, numbered, len(points)) for loop in loops] for loops in faces]
    return points, rows


def _listed(listed: Entity, scale: float) -> Cloud:
    rows: Sequence[Sequence[float]] = need(listed, "CoordList")
    if any(len(row) != 3 for row in rows):
        raise UnreadableError(f"{label(listed)} does not hold 3 numbers for each point")
    return np.array(rows, dtype=float).reshape(-1, 3) * scale


def _polygonal(face: Entity) -> tuple[Sequence[int], ...]:
    return (need(face, "CoordIndex"), *several(face, "InnerCoordIndices"))


def _rows(loop: Sequence[int], numbered: Sequence[int], count: int) -> Loop:
    """Rows of the points round a loop, which counts from 1 and may go through a second list."""
    try:
        places = [numbered[corner - 1] for corner in loop] if numbered else loop
    except IndexError:
        places = (0,)
    if min(places) < 1 or max(places) > count or min(loop) < 1:
        raise UnreadableError("body has a face with corners that are not in its list of points")
    return [place - 1 for place in places]


def _shells(item: Entity, scale: float) -> tuple[Cloud, list[list[Loop]]]:
    points: list[tuple[float, ...]] = []
    row_of: dict[int, int] = {}
    faces: list[list[Loop]] = []
    for face in _faces(item):
        loops: list[Loop] = []
        for bound in several(face, "Bounds"):
            loop = need(bound, "Bound")
            if not loop.is_a("IfcPolyLoop"):
                raise UnreadableError(f"body has a face bounded by an {loop.is_a()}: not read")
            loops.append([_row(point, row_of, points) for point in several(loop, "Polygon")])
        faces.append(loops)
    if not points:
        raise UnreadableError("body has no faces")
    return np.array(points, dtype=float) * scale, faces


def _faces(item: Entity) -> Iterator[Entity]:
    for name in SHELLS[item.is_a()]:
        held = several(item, name)
        for shell in held if isinstance(held, tuple) else (held,):
            yield from several(shell, "CfsFaces")


def _row(point: Entity, row_of: dict[int, int], points: list[tuple[float, ...]]) -> int:
    step_id = point.id()
    if step_id not in row_of:
        row_of[step_id] = len(points)
        points.append(numbers(point, 3))
    return row_of[step_id]

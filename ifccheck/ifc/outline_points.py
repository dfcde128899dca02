"""Whether points lie in the concrete of beams, by the outlines at their places."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import numpy.typing as npt

from ifccheck.beam import Outline
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.beam_frames import BeamFrames

Shapes = npt.NDArray[np.object_]


def inside_outlines(
    frames: BeamFrames, stretch: Ints, points: Floats, reach: Floats | float = 0.0
) -> Bools:
    """Whether points (N, 3) in the axes of beams lie in the outlines of stretches there, at least
    ``reach`` from their surface [mm]."""
    reach = np.broadcast_to(np.asarray(reach, dtype=float), stretch.shape)
    tapers = frames.tapers[stretch]
    inside = np.zeros(len(stretch), dtype=bool)
    for at in _alike(np.where(tapers, stretch, _first_alike(frames, stretch))):
        one = int(stretch[at[0]])
        taper = frames.tapers[one]
        shapes = _sections(frames, one, points[at, 0]) if taper else _polygon(frames.outlines[one])
        inside[at] = _within(shapes, points[at, 1], points[at, 2], reach[at])
    return inside


def _first_alike(frames: BeamFrames, stretch: Ints) -> Ints:
    """For each stretch the first that does not taper and has the same outline."""
    known: dict[Outline, int] = {}
    used, number = np.unique(stretch, return_inverse=True)
    first = [
        one if frames.tapers[one] else known.setdefault(frames.outlines[one], one)
        for one in used.tolist()
    ]
    return np.array(first, dtype=np.intp)[number.reshape(-1)]


def _alike(number: Ints) -> Iterator[Ints]:
    """Places of equal numbers, together."""
    order = np.argsort(number, kind="stable")
    cuts = np.flatnonzero(np.diff(number[order])) + 1
    yield from np.split(order, cuts) if len(order) else ()


def _polygon(outline: Outline) -> Shapes:
    import shapely

    polygon = shapely.Polygon(outline.rings[0], outline.rings[1:])
    shapely.prepare(polygon)
    return np.array([polygon], dtype=object)


def _sections(frames: BeamFrames, stretch: int, x: Floats) -> Shapes:
    """Outlines of a taper at places along the beam: corners move along straight lines."""
    import shapely

    start, end = float(frames.run_start[stretch]), float(frames.run_end[stretch])
    share = np.clip((x - start) / max(end - start, 1e-9), 0.0, 1.0)[:, None, None]
    pairs = zip(frames.outlines[stretch].rings, frames.end_outlines[stretch].rings, strict=True)
    rings = [np.array(one) * (1.0 - share) + np.array(other) * share for one, other in pairs]
    outer, *voids = (np.asarray(shapely.linearrings(ring)) for ring in rings)
    holes = np.stack(voids, axis=1) if voids else None
    return np.asarray(shapely.polygons(outer, holes=holes))


def _within(shapes: Shapes, y: Floats, z: Floats, reach: Floats) -> Bools:
    import shapely

    points = shapely.points(y, z)
    away = shapely.distance(shapely.boundary(shapes), points)
    return np.asarray(shapely.contains(shapes, points) & (away >= reach))

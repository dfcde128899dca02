"""Bars drawn as bodies of flat faces: the axis and the thickness of each tube."""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_chords import with_arcs
from ifccheck.ifc.bar_paths import Floats, Path
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.solids import Facets

SAME_RADIUS = 0.02
"""Part of the radius by which the corners of a regular polygon may leave its circle."""
SAME_SIDE = 0.05
"""Relative difference of the sides of a regular triangle or square."""
FLAT_EDGE = math.cos(math.radians(0.5))
"""Cosine of the angle between two faces below which they are one."""
SQUEEZED = 0.85
"""A ring in a bend seems no narrower than this part of the radius, seen along its chord."""
SAME_AMOUNT = 0.03
"""Relative difference between the body and the sweep that is found for it, surface and volume."""
Ring = frozenset[int]
Edges = Sequence[Sequence[int]]


@dataclass(frozen=True, slots=True)
class Tube:
    """A bar that was found in a body."""

    path: Path
    least: float
    """Diameter of the circle within its cross-section [mm]."""
    most: float
    """Diameter of the circle round it."""


@dataclass(frozen=True, slots=True)
class _Mesh:
    """One connected part of a body."""

    points: Floats
    near: Mapping[int, set[int]]
    """Points at the other ends of the edges of each point."""
    borders: Sequence[tuple[Edges, Ring]]
    """Where a tube may end: the edges round a flat part or an opening, and all its points."""
    surface: float
    """Area of all faces [mm2]."""
    volume: float | None
    """None for a body that is open, or whose faces look to either side [mm3]."""


def find_tubes(body: Facets) -> list[Tube]:
    """Find the bars that a body consists of: tubes of regular polygons between two ends.

    The sweep that is found must have the surface of the body, and its volume.

    Raises UnreadableError where any part of it is something else.
    """
    return [_tube(mesh) for mesh in _parts(body)]


def _parts(body: Facets) -> Iterator[_Mesh]:
    faces_of: dict[int, list[int]] = defaultdict(list)
    for face, edge in zip(body.sides[:, 0].tolist(), np.abs(body.sides[:, 1]) - 1, strict=True):
        faces_of[int(edge)].append(face)
    if max(len(faces) for faces in faces_of.values()) > 2:
        raise UnreadableError("more than two of its faces meet in one edge")
    count = len(body.normals)
    part = _joined(count, [f for f in faces_of.values() if len(f) == 2])
    size = np.sqrt((body.normals**2).sum(axis=1))
    unit = body.normals / np.maximum(size, 1e-12)[:, None]
    meeting = np.array([f for f in faces_of.values() if len(f) == 2], dtype=np.intp).reshape(-1, 2)
    cosine = np.abs((unit[meeting[:, 0]] * unit[meeting[:, 1]]).sum(axis=1))
    flat = _joined(count, meeting[cosine >= FLAT_EDGE].tolist())
    for number in dict.fromkeys(part):
        yield _part(body, faces_of, flat, {f for f in range(count) if part[f] == number})


def _joined(count: int, pairs: Sequence[Sequence[int]]) -> list[int]:
    """Number things so that those of a pair have one number."""
    near: dict[int, list[int]] = defaultdict(list)
    for one, other in pairs:
        near[one].append(other)
        near[other].append(one)
    number = [-1] * count
    for first in range(count):
        left = [first] if number[first] < 0 else []
        while left:
            at = left.pop()
            if number[at] < 0:
                number[at] = first
                left += near[at]
    return number


def _part(
    body: Facets, faces_of: Mapping[int, Sequence[int]], flat: Sequence[int], held: set[int]
) -> _Mesh:
    edges = body.edges.tolist()
    near: dict[int, set[int]] = defaultdict(set)
    bounds: dict[int, list[Sequence[int]]] = defaultdict(list)
    points: dict[int, set[int]] = defaultdict(set)
    open_edges: list[Sequence[int]] = []
    for edge, faces in faces_of.items():
        if faces[0] not in held:
            continue
        one, other = edges[edge]
        near[one].add(other)
        near[other].add(one)
        if len(faces) == 1:
            open_edges.append((one, other))
        for region in {flat[face] for face in faces}:
            points[region].update((one, other))
            if [flat[face] for face in faces].count(region) == 1:
                bounds[region].append((one, other))
    borders: list[tuple[Edges, Ring]] = [(b, frozenset(points[r])) for r, b in bounds.items()]
    borders += [(edges, frozenset(p for e in edges for p in e)) for edges in _rounds(open_edges)]
    normals = body.normals[sorted(held)]
    volume = None if open_edges else _volume(body, held)
    surface = float(np.sqrt((normals**2).sum(axis=1)).sum()) / 2.0
    return _Mesh(body.points, near, borders, surface, volume)


def _volume(body: Facets, held: set[int]) -> float | None:
    """The volume within faces that all look outwards, or all inwards."""
    sides = body.sides[np.isin(body.sides[:, 0], list(held))]
    signs = np.bincount(np.abs(sides[:, 1]), np.sign(sides[:, 1]))
    if signs.any():
        return None
    corner = np.zeros((len(body.normals), 3))
    corner[body.sides[:, 0]] = body.points[body.sides_points[:, 0]]
    faces = sorted(held)
    about = body.points[body.sides_points[0, 0]]
    return abs(float((body.normals[faces] * (corner[faces] - about)).sum())) / 6.0


def _rounds(edges: Edges) -> list[Edges]:
    """Edges that go round in rings, ring by ring; none where they do not."""
    near: dict[int, list[int]] = defaultdict(list)
    for number, edge in enumerate(edges):
        for point in edge:
            near[point].append(number)
    if any(len(beside) != 2 for beside in near.values()):
        return []
    ring = _joined(len(edges), list(near.values()))
    return [[e for e, r in zip(edges, ring, strict=True) if r == one] for one in sorted(set(ring))]


def _tube(mesh: _Mesh) -> Tube:
    rings = _rings(mesh)
    corners = len(rings[0])
    centres = np.array([mesh.points[sorted(ring)].mean(axis=0) for ring in rings])
    steps = np.diff(centres, axis=0)
    lengths = np.sqrt((steps**2).sum(axis=1))
    if lengths.min() <= 0.0:
        raise UnreadableError("its rings do not follow one another")
    along = steps / lengths[:, None]
    seen = [_radii(mesh, rings[k + j], centres[k + j], along[k])
            for k in range(len(steps)) for j in (0, 1)]  # fmt: skip
    ends = np.concatenate((seen[0], seen[-1]))
    least, most = float(ends.min()), float(ends.max())
    if most > least * (1.0 + 2.0 * SAME_RADIUS) or np.min(seen) < SQUEEZED * least:
        raise UnreadableError("it is not of one thickness")
    if np.max(seen) > most * (1.0 + SAME_RADIUS):
        raise UnreadableError("it is not of one thickness")
    radius = (least + most) / 2.0
    _require_same(mesh, corners, radius, float(lengths.sum()))
    path = with_arcs(centres, 2.0 * radius)
    return Tube(path, 2.0 * least * math.cos(math.pi / corners), 2.0 * most)


def _require_same(mesh: _Mesh, corners: int, radius: float, length: float) -> None:
    """That a sweep of a regular polygon has the surface and the volume of the body."""
    turn = 2.0 * math.pi / corners
    side, area = 2.0 * radius * math.sin(turn / 2.0), corners / 2.0 * radius**2 * math.sin(turn)
    mantle = corners * side * length
    surfaces = (mantle, mantle + 2.0 * area)
    if min(abs(mesh.surface / one - 1.0) for one in surfaces) > SAME_AMOUNT:
        raise UnreadableError("its surface is not that of the sweep found for it")
    if mesh.volume is not None and abs(mesh.volume / (area * length) - 1.0) > SAME_AMOUNT:
        raise UnreadableError("its volume is not that of the sweep found for it")


def _rings(mesh: _Mesh) -> list[Ring]:
    """The rings of a tube from one end to the other."""
    first, last = _ends(mesh)
    rings = [first[0]]
    seen = set(first[1])
    while rings[-1] != last[0]:
        beside = {point for corner in rings[-1] for point in mesh.near[corner]} - seen
        if len(beside) != len(first[0]):
            raise UnreadableError("its rings do not have the same number of corners")
        seen |= beside
        rings.append(frozenset(beside))
    if mesh.near.keys() - seen - last[1]:
        raise UnreadableError("parts of it do not belong to one tube")
    return rings


def _ends(mesh: _Mesh) -> tuple[tuple[Ring, Ring], tuple[Ring, Ring]]:
    """The two ends of a tube: of regular polygons those with the most corners."""
    of_size: dict[int, list[tuple[Edges, Ring]]] = defaultdict(list)
    for edges, points in mesh.borders:
        of_size[len(edges)].append((edges, points))
    for size in sorted(of_size, reverse=True):
        both = [(ring, points) for edges, points in of_size[size] for ring in _regular(mesh, edges)]
        if len(both) == 2 and not both[0][0] & both[1][0]:
            return both[0], both[1]
        if both:
            break
    raise UnreadableError("it has no two ends that are regular polygons")


def _regular(mesh: _Mesh, edges: Edges) -> list[Ring]:
    """The corners of edges that make one regular polygon; else nothing."""
    ring = frozenset(point for edge in edges for point in edge)
    return [ring] if len(_rounds(edges)) == 1 and _is_regular(mesh, ring) else []


def _is_regular(mesh: _Mesh, ring: Ring) -> bool:
    points = mesh.points[sorted(ring)]
    arms = points - points.mean(axis=0)
    radii = np.sqrt((arms**2).sum(axis=1))
    if len(ring) < 3 or radii.max() - radii.min() > SAME_RADIUS * radii.max():
        return False
    if len(ring) > 4:
        return True
    apart = np.sqrt(((points[:, None] - points[None]) ** 2).sum(axis=2))
    sides = np.sort(apart, axis=1)[:, 1:3]
    return bool(sides.max() - sides.min() <= SAME_SIDE * sides.max())


def _radii(mesh: _Mesh, ring: Ring, centre: Floats, along: Floats) -> tuple[float, float]:
    """Least and greatest distance of a ring's corners from the axis."""
    arms = mesh.points[sorted(ring)] - centre
    beside = arms - (arms @ along)[:, None] * along
    radii = np.sqrt((beside**2).sum(axis=1))
    return float(radii.min()), float(radii.max())

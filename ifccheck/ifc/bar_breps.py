"""Bars drawn as bodies of curved faces: cylinders along their legs and tori round their bends."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_courses import joined
from ifccheck.ifc.bar_paths import Floats, Path
from ifccheck.ifc.bar_traces import as_point
from ifccheck.ifc.entity import Entity, UnreadableError, get, need, several
from ifccheck.ifc.placements import Matrix, Placements

SAME_PLACE = 0.01
"""Centres of circles that lie within this [mm] are one."""
SAME_RADIUS = 1e-3
"""Relative difference of radii that are the same."""
HALF_TURN = 0.02
"""Part of its radius from the centre of a bend within which the middle between its ends leaves
open on which side it bends."""
ENDS = 2
Key = tuple[int, ...]


@dataclass(frozen=True, slots=True)
class _Stretch:
    """A leg or a bend between two circles."""

    first: Floats
    last: Floats
    bend: tuple[Floats, Floats] | None = None
    """Centre [mm] and axis of a bend; None for a straight leg."""


def read_curved_bar(brep: Entity, placements: Placements) -> tuple[Path, float]:
    """Read an IfcAdvancedBrep as a centre line and a diameter [mm].

    Raises UnreadableError where it has other faces than cylinders, tori and flat ends, or they
    make no bar.
    """
    if several(brep, "Voids"):
        raise UnreadableError("it has voids")
    stretches: dict[frozenset[Key], _Stretch] = {}
    radii: list[float] = []
    for face in several(need(brep, "Outer"), "CfsFaces"):
        surface = get(face, "FaceSurface")
        kind = "a flat facet" if surface is None else surface.is_a()
        if kind == "IfcPlane":
            continue
        if kind not in ("IfcCylindricalSurface", "IfcToroidalSurface"):
            raise UnreadableError(f"it has a face on {kind}")
        radius = surface[2 if kind == "IfcToroidalSurface" else 1] * placements.scale
        radii.append(radius)
        stretch = _stretch(face, surface, radius, placements)
        stretches[frozenset((_key(stretch.first), _key(stretch.last)))] = stretch
    if not radii or max(radii) - min(radii) > SAME_RADIUS * max(radii):
        raise UnreadableError("it is not of one thickness")
    return joined(list(_in_order(stretches)), "its axis"), 2.0 * min(radii)


def _key(place: Floats) -> Key:
    return tuple(np.rint(place / SAME_PLACE).astype(int).tolist())


def _stretch(face: Entity, surface: Entity, radius: float, placements: Placements) -> _Stretch:
    centres: dict[Key, Floats] = {}
    for circle in _circles(face):
        centre = placements.axes(get(circle, "Position"))[:3, 3]
        if abs(circle[1] * placements.scale - radius) <= SAME_RADIUS * radius:
            centres.setdefault(_key(centre), centre)
    if len(centres) != ENDS:
        raise UnreadableError("it has a round face without two round ends")
    first, last = centres.values()
    frame = placements.axes(get(surface, "Position"))
    if not surface.is_a("IfcToroidalSurface"):
        return _straight(first, last, frame)
    bend = surface[1] * placements.scale
    if any(abs(math.dist(end, frame[:3, 3]) - bend) > SAME_PLACE * 10.0 for end in (first, last)):
        raise UnreadableError("it has a bend whose ends do not lie on it")
    return _Stretch(first, last, (frame[:3, 3], frame[:3, 2]))


def _straight(first: Floats, last: Floats, frame: Matrix) -> _Stretch:
    for end in (first, last):
        arm = end - frame[:3, 3]
        if np.abs(arm - (arm @ frame[:3, 2]) * frame[:3, 2]).max() > SAME_PLACE * 10.0:
            raise UnreadableError("it has a leg whose ends do not lie on its axis")
    return _Stretch(first, last)


def _circles(face: Entity) -> Iterator[Entity]:
    """Circles along which the edges of a face run."""
    for bound in several(face, "Bounds"):
        loop = need(bound, "Bound")
        if not loop.is_a("IfcEdgeLoop"):
            raise UnreadableError(f"it has a face bounded by an {loop.is_a()}")
        for oriented in several(loop, "EdgeList"):
            curve = get(need(oriented, "EdgeElement"), "EdgeGeometry")
            while curve is not None and curve.is_a("IfcTrimmedCurve"):
                curve = curve[0]
            if curve is not None and curve.is_a("IfcCircle"):
                yield curve


def _in_order(stretches: Mapping[frozenset[Key], _Stretch]) -> Iterator[Path]:
    """The legs and bends one after another, each from where the one before ends."""
    at: dict[Key, list[frozenset[Key]]] = {}
    for pair in stretches:
        for key in pair:
            at.setdefault(key, []).append(pair)
    ends = [key for key, pairs in at.items() if len(pairs) == 1]
    if len(ends) != ENDS or max(map(len, at.values())) > ENDS:
        raise UnreadableError("it does not run from one end to another")
    key, order = ends[0], list[tuple[_Stretch, bool]]()
    left = dict.fromkeys(stretches)
    while found := [pair for pair in at[key] if pair in left]:
        pair = found[0]
        del left[pair]
        stretch = stretches[pair]
        order.append((stretch, _key(stretch.first) == key))
        (key,) = pair - {key}
    if left:
        raise UnreadableError("it is in several parts")
    for number, (stretch, forward) in enumerate(order):
        path = _path(stretch, [order[n][0] for n in (number - 1, number + 1)
                               if 0 <= n < len(order)])  # fmt: skip
        yield path if forward else path.reversed()


def _path(stretch: _Stretch, beside: Sequence[_Stretch]) -> Path:
    first, last = stretch.first, stretch.last
    if stretch.bend is None:
        return Path((as_point(first), as_point(last)))
    centre, _ = stretch.bend
    arms = first - centre, last - centre
    radius = math.sqrt(float(arms[0] @ arms[0]))
    inward = (arms[0] + arms[1]) / 2.0
    leg = next((one for one in beside if one.bend is None), None)
    if leg is not None:
        inward = _towards(stretch, *stretch.bend, leg)
    elif math.sqrt(float(inward @ inward)) < HALF_TURN * radius:
        raise UnreadableError("it has a bend of half a turn beside no leg")
    middle = centre + inward * (radius / math.sqrt(float(inward @ inward)))
    return Path((as_point(first), as_point(middle), as_point(last)), (0,))


def _towards(bend: _Stretch, centre: Floats, axis: Floats, leg: _Stretch) -> Floats:
    """The way from the centre of a bend to its middle, as it goes on from a leg."""
    at_first = min(math.dist(bend.first, end) for end in (leg.first, leg.last)) <= SAME_PLACE * 2.0
    start, other = (bend.first, bend.last) if at_first else (bend.last, bend.first)
    far = max((leg.first, leg.last), key=lambda end: math.dist(end, start))
    x = start - centre
    y = np.cross(axis, x)
    y = y if y @ (start - far) > 0.0 else -y
    arm = other - centre
    turn = math.atan2(float(arm @ y), float(arm @ x)) % (2.0 * math.pi)
    return np.asarray(math.cos(turn / 2.0) * x + math.sin(turn / 2.0) * y)

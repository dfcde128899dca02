"""A body as a straight member: span direction, outline square to it, and oblique ends.

Rules. The span runs along the extrusion, or, where the profile is a convex elevation with two
parallel long sides (a rectangle, a parallelogram, a beam with mitred ends), along those sides
if they are longer. Length is measured on the line through the outline's centroid, between the
planes that end the body. A body whose oblique ends take up more than half of its length, or
that is cut along its length, has no constant section and is not read. A section that is turned
about the span by a slip of modelling is measured as if it were level.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.beam import Axis, Box, Opening, Outline, Reason, Run
from ifccheck.ifc.bodies import Prism
from ifccheck.ifc.clips import acts
from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.placements import Matrix
from ifccheck.ifc.profile_curves import Corner, Place, Points, after, ring
from ifccheck.ifc.profile_shapes import Elevation, Profile, Turned
from ifccheck.ifc.vectors import Triple, added, combined, cross, dot, rounded, scaled, size
from ifccheck.mechanics.inclination import inclination_of

VERTICAL = math.cos(math.radians(10.0))
"""A member within ten degrees of the vertical stands."""
CLEARLY_LONGER = 1.1
"""The span must be this much longer than the next candidate."""
OBLIQUE_SHARE = 0.5
"""Greatest share of the length that oblique ends may take up."""
STEEP_CUT = 0.5
"""Slant of an end in elevation, along the axis per height, beyond which the depth near the
end is in doubt."""
TIE = 1e-6
SQUARE = 1e-12
"""Slant of an end below which it is square."""
ALONG = 1e-6
"""Sine of the angle below which a plane runs along the span."""
LEAST_TOLD = 0.01
"""A slip of less than this is rounding [deg]."""
VARIES = "section varies along the beam"

Axes = tuple[Triple, Triple, Triple]
"""x along the span from the start, y to the left, z up."""
Plane = tuple[Triple, float]
"""A plane that ends a member: outward normal in the member's axes, and its distance from the
member's base point along that normal."""


@dataclass(frozen=True)
class Straight:
    """A straight member: axis, outline, the box round it, and how its ends slant."""

    axis: Axis
    outline: Outline
    box: Box
    oblique: tuple[float, float]
    """Stretch along the axis over which the start and the end are cut obliquely [mm]."""
    steep: tuple[bool, bool]
    """Whether the depth near the start and the end is reduced by the slant."""
    runs: tuple[Run, ...] = ()
    """Its sections where they are not the outline from end to end"""
    reasons: tuple[Reason, ...] = ()
    """What keeps it from being adequate"""
    openings: tuple[Opening, ...] = ()
    """Holes and recesses that its body shows"""
    remarks: tuple[str, ...] = ()
    """What is doubtful of how it is drawn"""


@dataclass(frozen=True, slots=True)
class _Member:
    """A section in the axes of a member, about a base point in the building."""

    axes: Axes
    base: Triple
    section: Turned
    planes: tuple[Plane, ...]
    slip: float = 0.0
    """By how little its section was turned before it was levelled [rad]"""

    def inner(self, vector: Sequence[float]) -> Triple:
        """Return a vector of the building in the member's axes."""
        return _inner(self.axes, vector)


@dataclass(frozen=True, slots=True)
class StraightShape:
    """All of a straight member but where its base point stands: many members share one."""

    axes: Axes
    """Without noise."""
    origin: Triple
    """Start of the axis, from the base point along the building's axes [mm]."""
    middle: Triple
    """Centre of the box, likewise."""
    half: Triple
    length: float
    outline: Outline
    oblique: tuple[float, float]
    steep: tuple[bool, bool]
    remarks: tuple[str, ...] = ()

    def at(self, base: Sequence[float]) -> Straight:
        """Return the member whose base point stands at a place in the building."""
        x, y, z = self.axes
        return Straight(
            axis=Axis(rounded(added(base, self.origin)), x, y, z, self.length),
            outline=self.outline,
            box=Box(rounded(added(base, self.middle)), self.axes, self.half),
            oblique=self.oblique,
            steep=self.steep,
            remarks=self.remarks,
        )


def straighten(prism: Prism, placement: Matrix) -> Straight:
    """Return a prism as a straight member; raises UnreadableError where it is none."""
    elevation = _spanning_elevation(prism)
    if elevation is None:
        member = _along_extrusion(prism, placement)
    else:
        member = _along_elevation(prism, elevation, placement)
    return _shape(member, _cut_planes(prism, member)).at(member.base)


def shape_along_extrusion(prism: Prism, placement: Matrix) -> StraightShape | None:
    """Return the shape of an uncut prism that spans along its extrusion, from the origin of its
    matrix; None for one that spans along its profile. Raises UnreadableError as ``straighten``.
    """
    if _spanning_elevation(prism) is not None:
        return None
    return _shape(_along_extrusion(prism, placement), ())


def _spanning_elevation(prism: Prism) -> Elevation | None:
    """The profile's elevation where the span runs along it, None where along the extrusion."""
    length = size(prism.along)
    elevation = prism.profile.elevation
    if elevation is None:
        if length < prism.profile.diameter:
            raise UnreadableError(VARIES)
        return None
    _require_clear(length, elevation.length, elevation.depth)
    return elevation if elevation.length > length else None


def _require_clear(length: float, side: float, depth: float) -> None:
    """Raise UnreadableError where nobody can tell along which side the beam spans."""
    ranked = sorted((length, side, depth), reverse=True)
    if ranked[0] < CLEARLY_LONGER * ranked[1]:
        body = " x ".join(f"{value:.0f}" for value in ranked)
        raise UnreadableError(f"span direction unclear: body is {body} mm")


def _along_extrusion(prism: Prism, placement: Matrix) -> _Member:
    def about(axes: Axes) -> _Member:
        return _extruded(prism, axes)

    return _levelled(about, member_axes(prism.along, placement))


def _levelled(about: Callable[[Axes], _Member], axes: Axes) -> _Member:
    """A member about its axes, or, by a slip, about those that its section is level in."""
    member = about(axes)
    slip = inclination_of(member.section.outline.rings).slip
    return replace(about(rolled(axes, slip)), slip=slip) if slip else member


def rolled(axes: Axes, angle: float) -> Axes:
    """Return axes turned about x, y towards z [rad]."""
    x, y, z = axes
    c, s = math.cos(angle), math.sin(angle)
    return x, added(scaled(y, c), scaled(z, s)), added(scaled(z, c), scaled(y, -s))


def told_of_slip(slip: float) -> tuple[str, ...]:
    """Return what a reader must know of a section that was levelled."""
    degrees = abs(math.degrees(slip))
    if degrees < LEAST_TOLD:
        return ()
    return (f"drawn rolled by {degrees:.2f} degrees about its axis: taken as level",)


def _extruded(prism: Prism, axes: Axes) -> _Member:
    _, left, up = axes
    x, y, normal = prism.axes
    section = prism.profile.turned(dot(left, x), dot(left, y), dot(up, x), dot(up, y))
    normal = _inner(axes, normal)
    reach = dot(normal, _inner(axes, prism.along))
    if reach < 0.0:
        normal, reach = scaled(normal, -1.0), -reach
    planes = ((scaled(normal, -1.0), 0.0), (normal, reach))
    a, b, c = prism.matrix[:3, 3].tolist()
    return _Member(axes, (a, b, c), section, planes)


def _along_elevation(prism: Prism, elevation: Elevation, placement: Matrix) -> _Member:
    """The body swept along the two parallel sides of its profile, ended by the other sides."""
    corners = prism.placed(elevation.corners)
    sides = after(corners) - corners

    def about(axes: Axes) -> _Member:
        return _swept_across(prism, elevation, corners, axes)

    return _levelled(about, member_axes(sides[elevation.first].tolist(), placement))


def _swept_across(prism: Prism, elevation: Elevation, corners: Points, axes: Axes) -> _Member:
    sides = after(corners) - corners
    frame = np.array(axes)
    base = corners[elevation.first]
    local = (corners - base) @ frame.T
    width = frame @ prism.along
    far = local[elevation.second]
    around = ((0.0, 0.0), width[1:], width[1:] + far[1:], far[1:])
    section = ring([Corner((float(y), float(z))) for y, z in around])
    middle = local.mean(axis=0)
    planes: list[Plane] = []
    for row, side in enumerate(sides @ frame.T):
        if row not in (elevation.first, elevation.second):
            normal = cross(side.tolist(), width.tolist())
            if dot(normal, (local[row] - middle).tolist()) < 0.0:
                normal = scaled(normal, -1.0)
            planes.append((normal, dot(normal, local[row].tolist())))
    turned = Profile((section,), prism.profile.name).turned(1.0, 0.0, 0.0, 1.0)
    a, b, c = base.tolist()
    return _Member(axes, (a, b, c), turned, tuple(planes))


def member_axes(span: Sequence[float], placement: Matrix) -> Axes:
    """Return the axes of a member that runs along ``span``, from its start.

    Raises UnreadableError where it stands upright.
    """
    x = scaled(span, 1.0 / size(span))
    if abs(x[2]) > VERTICAL:
        raise UnreadableError("vertical member")
    cosines = [dot(x, column) for column in placement[:3, :3].T.tolist()]
    most = max(abs(value) for value in cosines)
    if next(value for value in cosines if abs(value) >= most - TIE) < 0.0:
        x = scaled(x, -1.0)
    level = math.hypot(x[0], x[1])
    y = (-x[1] / level, x[0] / level, 0.0)
    return x, y, cross(x, y)


def _inner(axes: Axes, vector: Sequence[float]) -> Triple:
    x, y, z = axes
    return dot(x, vector), dot(y, vector), dot(z, vector)


def _cut_planes(prism: Prism, member: _Member) -> tuple[Plane, ...]:
    if not prism.cuts:
        return ()
    corners = prism.corners()
    return tuple(
        (member.inner(cut.outward.tolist()), float(cut.outward @ (cut.point - member.base)))
        for cut in prism.cuts
        if acts(cut, corners)
    )


def _shape(member: _Member, cuts: tuple[Plane, ...]) -> StraightShape:
    section, planes = member.section, member.planes + cuts
    starts, ends = _reach(planes, section.corners)
    length = ends[-1] - starts[-1]
    if not length > 0.0:
        raise UnreadableError("nothing is left of the body after its cuts")
    first, last = min(starts), max(ends)
    oblique = max(starts) - first, last - min(ends)
    if sum(oblique) > OBLIQUE_SHARE * length or max(starts) >= min(ends):
        raise UnreadableError(VARIES)
    low, high = (first, *section.low), (last, *section.high)
    _require_finite((*low, *high, length))
    origin = (starts[-1], (low[1] + high[1]) / 2.0, low[2])
    middle = scaled(added(low, high), 0.5)
    half = scaled(added(high, scaled(low, -1.0)), 0.5)
    x, y, z = (rounded(axis) for axis in member.axes)
    return StraightShape(
        axes=(x, y, z),
        origin=combined(member.axes, origin),
        middle=combined(member.axes, middle),
        half=rounded(half),
        length=round(length, 6),
        outline=section.outline,
        oblique=oblique,
        steep=_steep(planes, section.corners, starts, ends),
        remarks=told_of_slip(member.slip),
    )


def _require_finite(places: Sequence[float]) -> None:
    if not math.isfinite(sum(places)):
        raise UnreadableError("body lies at places that are no numbers")


def _reach(planes: Sequence[Plane], places: Sequence[Place]) -> tuple[list[float], list[float]]:
    """Where lines along the span through places of the outline start and end [mm]."""
    starts, ends = [-math.inf] * len(places), [math.inf] * len(places)
    for plane in planes:
        reach = _reach_of(plane, places)
        if plane[0][0] > 0.0:
            ends = list(map(min, ends, reach))
        else:
            starts = list(map(max, starts, reach))
    return starts, ends


def _reach_of(plane: Plane, places: Sequence[Place]) -> list[float]:
    (along, left, up), offset = plane
    if abs(along) < ALONG * math.hypot(along, left, up):
        raise UnreadableError("body is cut along its length: no plain extrusion")
    base, left, up = offset / along, left / along, up / along
    if abs(left) < SQUARE and abs(up) < SQUARE:
        return [base] * len(places)
    return [base - left * y - up * z for y, z in places]


def _steep(
    planes: Sequence[Plane], places: Sequence[Place], starts: list[float], ends: list[float]
) -> tuple[bool, bool]:
    """Whether a plane that slants much in elevation ends the member, at the start and the end."""
    steep = [False, False]
    for plane in planes:
        along, _, up = plane[0]
        if abs(up) > STEEP_CUT * abs(along):
            limits = ends if along > 0.0 else starts
            reach = _reach_of(plane, places)
            if any(abs(a - b) < TIE for a, b in zip(reach, limits, strict=True)):
                steep[int(along > 0.0)] = True
    return steep[0], steep[1]

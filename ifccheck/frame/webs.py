"""Members in plan that carry a slab beside a beam, or frame into the beam."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import product
from typing import NamedTuple

from ifccheck.beam import Axis, Beam, Box, Member, Ring
from ifccheck.frame.along import varies
from ifccheck.frame.contacts import kind_of
from ifccheck.frame.figures import figure_of, narrowest

WEBS = ("IfcBeam", "IfcWall", "IfcMember")
"""Members that may carry a slab as the beam does"""
LEVEL = 0.5
"""Greatest z of the unit vector of what lies rather than stands"""
SAME_WAY = 0.5
"""Least cosine between a beam and another that is the next web"""
UPRIGHT = 1e-6
"""How far from the vertical an axis may be whose box is a rectangle in plan"""


class Web(NamedTuple):
    """A member in plan."""

    ring: Ring
    """Convex"""
    core: Ring
    """What its web covers alone, where that is known, else the same"""
    low: float
    high: float
    way: tuple[float, float]
    name: str
    step: int

    def runs_with(self, axis: Axis) -> bool:
        """Whether it runs the way of a beam rather than across it."""
        return abs(self.way[0] * axis.x[0] + self.way[1] * axis.x[1]) >= SAME_WAY


def webs_of(members: Sequence[Member], beams: Mapping[int, Beam]) -> list[Web]:
    """The members that may carry a slab: by their class, or as beams in scope by step id."""
    found = [web_of(one) for one in members if one.step_id in beams or _may_carry(one)]
    return [one._replace(core=_core(beams.get(one.step)) or one.ring) for one in found]


def _core(beam: Beam | None) -> Ring:
    """What the web of a level beam of one section covers in plan; empty for any other."""
    if beam is None or beam.axis is None or abs(beam.axis.x[2]) > UPRIGHT or varies(beam.runs):
        return ()
    (x0, y0, _), (x, y, _), (left_x, left_y, _) = beam.axis.origin, beam.axis.x, beam.axis.y
    _, (right, left) = narrowest(figure_of(beam.runs[0].outline))
    ends = ((0.0, right), (beam.length, right), (beam.length, left), (0.0, left))
    return tuple((x0 + a * x + b * left_x, y0 + a * y + b * left_y) for a, b in ends)


def _may_carry(member: Member) -> bool:
    kind, box = kind_of(member.ifc_class), member.box
    if kind not in WEBS:
        return False
    longest = box.axes[max(range(3), key=lambda row: box.half[row])]
    return kind == "IfcWall" or abs(longest[2]) < LEVEL


def web_of(member: Member) -> Web:
    """A member in plan by its box."""
    box = member.box
    lying = [row for row in range(3) if abs(box.axes[row][2]) < LEVEL]
    x, y, _ = box.axes[max(lying, key=lambda row: box.half[row])]
    ring = ring_of(box)
    low, high = levels_of(box)
    return Web(
        ring=ring,
        core=ring,
        low=low,
        high=high,
        way=(x, y),
        name=f"{member.name or member.guid} ({member.ifc_class})",
        step=member.step_id,
    )


def levels_of(box: Box) -> tuple[float, float]:
    """Least and greatest height of a box in the building [mm]."""
    (_, _, a), (_, _, b), (_, _, c) = box.axes
    half_a, half_b, half_c = box.half
    middle, reach = box.centre[2], abs(a) * half_a + abs(b) * half_b + abs(c) * half_c
    return middle - reach, middle + reach


def ring_of(box: Box) -> Ring:
    """What a box covers in plan."""
    flat = [row for row in range(3) if abs(box.axes[row][2]) < UPRIGHT]
    x, y, _ = box.centre
    if len(flat) != 2:
        return _hull(box)
    (ax, ay, _), (bx, by, _) = (box.axes[row] for row in flat)
    a, b = (box.half[row] for row in flat)
    signs = ((-a, -b), (a, -b), (a, b), (-a, b))
    return tuple((x + s * ax + t * bx, y + s * ay + t * by) for s, t in signs)


def _hull(box: Box) -> Ring:
    from shapely import MultiPoint, Polygon

    places = []
    for signs in product((-1.0, 1.0), repeat=3):
        steps = [sign * half for sign, half in zip(signs, box.half, strict=True)]
        x, y = (
            box.centre[k] + sum(s * axis[k] for s, axis in zip(steps, box.axes, strict=True))
            for k in range(2)
        )
        places.append((x, y))
    hull = MultiPoint(places).convex_hull
    return tuple((x, y) for x, y in hull.exterior.coords[:-1]) if isinstance(hull, Polygon) else ()

"""Members in plan that carry a slab beside a beam, or frame into the beam."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from itertools import product
from typing import TYPE_CHECKING, NamedTuple

from ifccheck.beam import Axis, Box, Member
from ifccheck.frame.contacts import kind_of

if TYPE_CHECKING:
    from shapely import Polygon

WEBS = ("IfcBeam", "IfcWall", "IfcMember")
"""Members that may carry a slab as the beam does"""
LEVEL = 0.5
"""Greatest z of the unit vector of what lies rather than stands"""
SAME_WAY = 0.5
"""Least cosine between a beam and another that is the next web"""


class Web(NamedTuple):
    """A member in plan."""

    plan: Polygon
    low: float
    high: float
    way: tuple[float, float]
    name: str
    step: int

    def runs_with(self, axis: Axis) -> bool:
        """Whether it runs the way of a beam rather than across it."""
        return abs(self.way[0] * axis.x[0] + self.way[1] * axis.x[1]) >= SAME_WAY


def webs_of(members: Sequence[Member], beams: Collection[int]) -> list[Web]:
    """The members that may carry a slab: by their class, or as beams in scope by step id."""
    return [_web(one) for one in members if one.step_id in beams or _may_carry(one)]


def _may_carry(member: Member) -> bool:
    kind, box = kind_of(member.ifc_class), member.box
    longest = box.axes[max(range(3), key=lambda row: box.half[row])]
    return kind == "IfcWall" or (kind in WEBS and abs(longest[2]) < LEVEL)


def _web(member: Member) -> Web:
    from shapely import MultiPoint, Polygon

    corners = _corners(member.box)
    heights = [z for _, _, z in corners]
    plan = MultiPoint([(x, y) for x, y, _ in corners]).convex_hull
    return Web(
        plan=plan if isinstance(plan, Polygon) else Polygon(),
        low=min(heights),
        high=max(heights),
        way=_way(member.box),
        name=f"{member.name or member.guid} ({member.ifc_class})",
        step=member.step_id,
    )


def _corners(box: Box) -> list[tuple[float, float, float]]:
    found = []
    for signs in product((-1.0, 1.0), repeat=3):
        steps = [sign * half for sign, half in zip(signs, box.half, strict=True)]
        x, y, z = (
            box.centre[k] + sum(s * a[k] for s, a in zip(steps, box.axes, strict=True))
            for k in range(3)
        )
        found.append((x, y, z))
    return found


def _way(box: Box) -> tuple[float, float]:
    """The longest of the axes that lie."""
    lying = [row for row in range(3) if abs(box.axes[row][2]) < LEVEL]
    x, y, _ = box.axes[max(lying, key=lambda row: box.half[row])]
    return x, y

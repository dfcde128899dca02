"""What may carry a slab: the level beams and the walls that meet it from below."""

from __future__ import annotations

from collections.abc import Set
from functools import cached_property
from typing import TYPE_CHECKING, NamedTuple

from ifccheck.beam import Beam, FloorSlab, Member, Model, Point, Ring
from ifccheck.frame.boxes import section_extent
from ifccheck.frame.contacts import kind_of
from ifccheck.frame.flanges import HORIZONTAL, TOUCHING, footprint
from ifccheck.frame.panels import Carrier
from ifccheck.frame.webs import LEVEL, UPRIGHT, levels_of, ring_of
from ifccheck.units import show

if TYPE_CHECKING:
    from shapely import Polygon, STRtree
GAP = 100.0
"""A slab up to so much above a beam may lie on it by something that is not seen [mm]"""
CARRYING = ("steel", "timber", "footing", "wall")
"""Why beams are out of scope that carry slabs all the same"""
NOT_LEVEL = "the beam is not level, and slabs are laid on level beams alone"


class Bearer(NamedTuple):
    """What may carry a slab."""

    carrier: Carrier
    beam: str
    """Key of a beam in scope; empty for what else carries"""
    told: str
    """Name and class, for people"""
    ring: Ring
    """In plan"""
    low: float
    high: float
    wall: int = 0
    """STEP id of a wall, else 0"""
    level: bool = True
    sure: bool = True
    """It is not a beam out of scope that may be no more than a trim"""

    def carries(self, bottom: float, top: float) -> bool:
        """Whether it meets a slab between two levels from below, or within its depth."""
        if self.high < bottom - TOUCHING:
            return False
        return self.low < (bottom if self.wall else top) - TOUCHING


class Under(NamedTuple):
    """What meets a slab from below."""

    bearers: tuple[Bearer, ...]
    passed_over: tuple[str, ...]
    """Walls that may be partitions, and beams out of scope that may be trims"""
    doubtful: tuple[tuple[str, str], ...]
    """Keys of beams that may carry it and are not counted on, each with why"""


class FloorCarriers:
    """All that may carry slabs in a model: beams in scope first, then others, then walls."""

    def __init__(self, model: Model) -> None:
        self._model = model

    @cached_property
    def _all(self) -> list[Bearer]:
        model = self._model
        others = {one.step_id: one.reason for one in model.out_of_scope}
        beams = [_of_beam(beam) for beam in model.beams if _lies(beam)]
        steel = [
            _of_member(one, sure=others[one.step_id] in CARRYING)
            for one in model.members
            if one.step_id in others
        ]
        walls = [_of_member(one) for one in model.members if kind_of(one.ifc_class) == "IfcWall"]
        return [*beams, *filter(None, steel), *filter(None, walls)]

    @cached_property
    def _tree(self) -> STRtree:
        from shapely import STRtree

        return STRtree([_polygon(one.ring) for one in self._all])

    def under(self, slab: FloorSlab, walls: bool | None) -> Under:
        """Return what carries a slab; ``walls`` None where the model tells which of them do."""
        bottom = min(plate.bottom for plate in slab.plates)
        top = max(plate.top for plate in slab.plates)
        rows: set[int] = set()
        for plate in slab.plates:
            plan = _polygon(plate.rings[0]).buffer(TOUCHING)
            rows |= set(self._tree.query(plan, predicate="intersects").tolist())
        meeting = [self._all[row] for row in sorted(rows)]
        near = [one for one in meeting if one.level and one.carries(bottom, top)]
        bearing = self._model.floors.load_bearing
        sure = [one for one in near if _bears(one, walls, bearing)]
        over = [one.told for one in near if one not in sure and (walls is None or not one.wall)]
        doubts = [(one.beam, why) for one in meeting if (why := _doubt(one, bottom, top))]
        return Under(tuple(sure), tuple(over), tuple(doubts))

    def beams_near(self, step_id: int) -> list[str]:
        """Keys of the beams that the box of a member meets, whatever it is."""
        found: dict[str, None] = {}
        for member in self._members.get(step_id, ()):
            plan = _polygon(ring_of(member.box)).buffer(TOUCHING)
            low, high = levels_of(member.box)
            for row in sorted(self._tree.query(plan, predicate="intersects").tolist()):
                one = self._all[row]
                if one.beam and one.high >= low - TOUCHING and one.low <= high + TOUCHING:
                    found[one.beam] = None
        return list(found)

    @cached_property
    def _members(self) -> dict[int, list[Member]]:
        found: dict[int, list[Member]] = {}
        for member in self._model.members:
            if kind_of(member.ifc_class) == "IfcSlab":
                found.setdefault(member.step_id, []).append(member)
        return found


def _doubt(one: Bearer, bottom: float, top: float) -> str:
    """Why a beam may carry a slab that is not laid on it; empty where none of it is in doubt."""
    if not one.beam:
        return ""
    if not one.level:
        return NOT_LEVEL if one.carries(bottom, top) else ""
    gap = bottom - one.high
    return f"it lies {show(gap, 'dimension')} above the beam" if TOUCHING < gap <= GAP else ""


def _bears(one: Bearer, walls: bool | None, bearing: Set[int]) -> bool:
    """Whether it is known to carry what lies on it."""
    if one.wall:
        return one.wall in bearing if walls is None else walls
    return one.sure


def _polygon(ring: Ring) -> Polygon:
    from shapely import Polygon

    return Polygon(ring)


def _lies(beam: Beam) -> bool:
    return bool(beam.runs) and beam.axis is not None and abs(beam.axis.x[2]) <= LEVEL


def _of_beam(beam: Beam) -> Bearer:
    assert beam.axis is not None
    right, left, *_ = section_extent(beam)
    corners, (low, high) = footprint(beam)
    (x, y, _), (a, b, _) = beam.axis.origin, beam.axis.x
    end = x + beam.axis.length * a, y + beam.axis.length * b
    carrier = Carrier((x, y), end, max(-right, left))
    told = f"{beam.mark} ({beam.ifc_class})"
    level = abs(beam.axis.x[2]) <= HORIZONTAL
    rise = beam.axis.length * beam.axis.x[2]
    low, high = low + min(rise, 0.0), high + max(rise, 0.0)
    return Bearer(carrier, beam.key, told, tuple(corners), low, high, level=level)


def _of_member(member: Member, *, sure: bool = True) -> Bearer | None:
    """A beam that is not in scope, or a wall; None for what stands upright or is in doubt."""
    box = member.box
    lying = [row for row in range(3) if abs(box.axes[row][2]) < LEVEL]
    longest = max(lying, key=lambda row: box.half[row])
    if member.doubt or abs(box.axes[longest][2]) > UPRIGHT:
        return None
    is_wall = kind_of(member.ifc_class) == "IfcWall"
    if not is_wall and longest != max(range(3), key=lambda row: box.half[row]):
        return None
    reach, width = box.half[longest], min(box.half[row] for row in lying)
    ends: list[Point] = [
        (box.centre[0] + s * reach * box.axes[longest][0],
         box.centre[1] + s * reach * box.axes[longest][1])
        for s in (-1.0, 1.0)
    ]  # fmt: skip
    told = f"{member.name or member.guid} ({member.ifc_class})"
    low, high = levels_of(box)
    carrier = Carrier(ends[0], ends[1], width)
    wall = member.step_id if is_wall else 0
    return Bearer(carrier, "", told, ring_of(box), low, high, wall, sure=sure)

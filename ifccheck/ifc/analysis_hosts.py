"""Which beams the members of an analysis model stand for, and where actions on them lie."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, field
from itertools import product
from typing import Any

import numpy as np

from ifccheck.beam import Beam
from ifccheck.ifc.analysis_lines import Places, Stretch, Vector
from ifccheck.ifc.entity import Entity, UnreadableError, get, label, several
from ifccheck.ifc.laying import (
    NEAR,
    TOLERANCE,
    BeamBox,
    Held,
    beside,
    box_of,
    coincides,
    off,
    runs_along,
)
from ifccheck.ifc.placements import Matrix


@dataclass(frozen=True, slots=True)
class Hosts:
    """Where an action lies: along a line or at a point, and on which beams."""

    line: Stretch | None
    point: Vector | None
    helds: tuple[Held, ...] = ()
    """How the line runs along each beam"""
    boxes: tuple[BeamBox, ...] = ()
    """Beams that a load at a place of it may stand on"""
    doubts: dict[str, str] = field(default_factory=dict)
    """Why it does not surely act on a beam, by the beam's key"""
    near: dict[str, str] = field(default_factory=dict)
    """Beams that it runs near to, where no beam has it, and how"""


class Finder:
    """Finds the beams of the items of analysis models."""

    def __init__(self, file: Any, places: Places, beams: Sequence[Beam]) -> None:
        self._places = places
        self._by_id = {beam.step_id: beam for beam in beams}
        self._boxes = {beam.step_id: box for beam in beams if (box := box_of(beam))}
        self._tied = self._ties(file)
        self._all = tuple(self._boxes.values())
        bounds = [_bounds(box) for box in self._all]
        self._low = np.array([low for low, _ in bounds]).reshape(-1, 3)
        self._high = np.array([high for _, high in bounds]).reshape(-1, 3)
        self._items = _items(file)
        self._members = _members_at_nodes(file)
        self._known: dict[int, Hosts] = {}

    def items(self, action: Entity) -> list[Entity | None]:
        """The items that an action acts on; None where it is connected to none."""
        return [*self._items.get(action.id(), ())] or [None]

    def _ties(self, file: Any) -> dict[int, list[int]]:
        """Step ids of the products that each item is assigned to, or that are assigned to it."""
        tied: defaultdict[int, list[int]] = defaultdict(list)
        for relation in file.by_type("IfcRelAssignsToProduct"):
            one = get(relation, "RelatingProduct")
            for other in several(relation, "RelatedObjects") if one is not None else ():
                for item, element in ((one, other), (other, one)):
                    if item.is_a("IfcStructuralItem") and element.is_a("IfcElement"):
                        tied[item.id()].append(element.id())
        if file.schema == "IFC2X3":
            for relation in file.by_type("IfcRelConnectsStructuralElement"):
                ends = (get(relation, "RelatedStructuralMember"), get(relation, "RelatingElement"))
                if None not in ends:
                    tied[ends[0].id()].append(ends[1].id())
        return dict(tied)

    def _ties_of(self, item: Entity | None) -> list[int]:
        """Step ids of the products that an item stands for; of a node, those of its members."""
        if item is None:
            return []
        members = self._members.get(item.id(), ())
        return [product for key in (item.id(), *members) for product in self._tied.get(key, ())]

    def tied(self, item: Entity | None) -> tuple[Beam, ...]:
        """The beams that relations tie an item to, or that it is itself."""
        own = dict.fromkeys([*self._ties_of(item), *([] if item is None else [item.id()])])
        return tuple(self._by_id[step_id] for step_id in own if step_id in self._by_id)

    def hosts(self, action: Entity, item: Entity | None) -> Hosts:
        """Where an action lies; raises UnreadableError where that cannot be told."""
        if item is None or get(action, "Representation") is not None:
            return self._found(action, item)
        key = item.id() if action.is_a("IfcStructuralPointAction") else -item.id()
        if key not in self._known:
            self._known[key] = self._found(action, item)
        return self._known[key]

    def _found(self, action: Entity, item: Entity | None) -> Hosts:
        if action.is_a("IfcStructuralPointAction"):
            return self._at_point(action, item)
        line = self._line(action, item)
        if line is None:
            raise UnreadableError(f"{label(action)} gives no line that it acts along")
        return self._along(line, item)

    def frame(self, action: Entity, item: Entity | None) -> Matrix:
        """Directions (columns) of the components of an action's loads."""
        whole: Entity = item if item is not None else action
        if get(action, "GlobalOrLocal") != "LOCAL_COORDS":
            if whole.id() in self._by_id:
                return np.eye(3)
            return self._places.axes(whole)
        if whole.is_a("IfcStructuralCurveMember"):
            line = self._places.line(whole, self._places.matrix(whole))
            if line is not None:
                return self._places.local_axes(whole, line)
        raise UnreadableError(f"{label(action)} acts in axes of {label(whole)} that are not read")

    def points_of(
        self, action: Entity, item: Entity | None, points: Iterable[Entity]
    ) -> list[Vector]:
        """Points in the coordinates of an action, in the building."""
        matrix = self._own_matrix(action, item)
        return [self._places.placed(point, matrix) for point in points]

    def _own_matrix(self, action: Entity, item: Entity | None) -> Matrix:
        if get(action, "ObjectPlacement") is None and item is not None:
            return self._places.matrix(item)
        return self._places.matrix(action)

    def _line(self, action: Entity, item: Entity | None) -> Stretch | None:
        own = self._places.line(action, self._own_matrix(action, item))
        if own is not None or item is None:
            return own
        if (box := self._boxes.get(item.id())) is not None:
            start, length = box.origin, float(box.high[0])
            return Stretch(start, start + box.axes[0] * length)
        return self._places.line(item, self._places.matrix(item))

    def _along(self, line: Stretch, item: Entity | None) -> Hosts:
        helds: dict[str, Held] = {}
        doubts: dict[str, str] = {}
        for beam in self.tied(item):
            box = self._boxes.get(beam.step_id)
            held = runs_along(box, line) if box else None
            if held is None:
                doubts[beam.key] = "it does not run along the beam that it is tied to"
                continue
            helds[beam.key] = held
            if beside(held, line):
                doubts[beam.key] = "it lies beside the beam: torsion is not checked"
        loose: list[Held] = []
        for box in self._candidates(line.start, line.end):
            if box.beam.key in helds:
                continue
            if held := coincides(box, line):
                helds[box.beam.key] = held
            elif held := runs_along(box, line):
                loose.append(held)
        found = tuple(helds.values())
        near = {} if self._ties_of(item) else dict(_near(loose, found, line))
        return Hosts(line, None, found, tuple(held.box for held in found), doubts, near)

    def _candidates(self, *points: Vector) -> list[BeamBox]:
        """Beams whose body comes within reach of the box round points."""
        low, high = np.min(points, axis=0) - NEAR, np.max(points, axis=0) + NEAR
        meets = ((self._high >= low) & (self._low <= high)).all(axis=1)
        return [self._all[n] for n in np.flatnonzero(meets)]

    def _at_point(self, action: Entity, item: Entity | None) -> Hosts:
        point = self._places.point(action, self._own_matrix(action, item))
        if point is None and item is not None:
            point = self._places.point(item, self._places.matrix(item))
        if point is None:
            raise UnreadableError(f"{label(action)} gives no point that it acts at")
        tied = {beam.step_id for beam in self.tied(item)}
        boxes, near = [self._boxes[step_id] for step_id in tied if step_id in self._boxes], {}
        for box in self._candidates(point):
            inner = box.inside(point[None, :])
            if box.beam.step_id not in tied and box.holds(inner):
                boxes.append(box)
            elif TOLERANCE < inner[0, 0] < box.high[0] - TOLERANCE and box.off(inner[:, 1:]) < NEAR:
                near[box.beam.key] = f"{box.off(inner[:, 1:]):.0f} mm off its body"
        elsewhere = bool(boxes or self._ties_of(item))
        return Hosts(None, point, (), tuple(boxes), {}, {} if elsewhere else near)


def _near(loose: Sequence[Held], found: Sequence[Held], line: Stretch) -> Iterator[tuple[str, str]]:
    """Beams that a line runs near to, over a stretch where it lies on no beam."""
    taken = [held.covered(line) for held in found]
    for held in loose:
        start, end = held.covered(line)
        distance = off(held, line)
        if distance < NEAR and not any(start < other[1] and other[0] < end for other in taken):
            yield held.box.beam.key, f"{distance:.0f} mm off its body"


def _bounds(box: BeamBox) -> tuple[Vector, Vector]:
    """The least and the greatest coordinates of a beam's body in the building."""
    corners = np.array(list(product(*zip(box.low, box.high, strict=True))))
    placed = box.origin + corners @ box.axes
    return placed.min(axis=0), placed.max(axis=0)


def _members_at_nodes(file: Any) -> dict[int, list[int]]:
    """Step ids of the members that each connection joins."""
    members: defaultdict[int, list[int]] = defaultdict(list)
    for relation in file.by_type("IfcRelConnectsStructuralMember"):
        member = get(relation, "RelatingStructuralMember")
        node = get(relation, "RelatedStructuralConnection")
        if member is not None and node is not None:
            members[node.id()].append(member.id())
    return dict(members)


def _items(file: Any) -> dict[int, list[Entity]]:
    """The items that each activity is connected to."""
    items: defaultdict[int, list[Entity]] = defaultdict(list)
    for relation in file.by_type("IfcRelConnectsStructuralActivity"):
        activity = get(relation, "RelatedStructuralActivity")
        item = get(relation, "RelatingElement")
        if activity is not None and item is not None and item not in items[activity.id()]:
            items[activity.id()].append(item)
    return dict(items)

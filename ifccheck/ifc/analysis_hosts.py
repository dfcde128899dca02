"""Which beams the members of an analysis model stand for, and where actions on them lie."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ifccheck.beam import Beam
from ifccheck.ifc.analysis_lines import Places, Stretch, Vector
from ifccheck.ifc.entity import Entity, UnreadableError, get, label, several
from ifccheck.ifc.laying import BeamBox, Held, beside, box_of, coincides, runs_along
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


class Finder:
    """Finds the beams of the items of analysis models."""

    def __init__(self, file: Any, places: Places, beams: Sequence[Beam]) -> None:
        self._places = places
        self._by_id = {beam.step_id: beam for beam in beams}
        self._boxes = {beam.step_id: box for beam in beams if (box := box_of(beam))}
        self._tied = self._ties(file)
        self.items: dict[int, Entity] = {
            activity.id(): get(relation, "RelatingElement")
            for relation in file.by_type("IfcRelConnectsStructuralActivity")
            if (activity := get(relation, "RelatedStructuralActivity")) is not None
            and get(relation, "RelatingElement") is not None
        }

    def _ties(self, file: Any) -> dict[int, list[int]]:
        """Step ids of the beams that each item is assigned to, or that are assigned to it."""
        tied: defaultdict[int, list[int]] = defaultdict(list)
        for relation in file.by_type("IfcRelAssignsToProduct"):
            product = get(relation, "RelatingProduct")
            for other in several(relation, "RelatedObjects") if product is not None else ():
                for item, beam in ((product, other), (other, product)):
                    if beam.id() in self._by_id and item.is_a("IfcStructuralItem"):
                        tied[item.id()].append(beam.id())
        return dict(tied)

    def tied(self, item: Entity | None) -> tuple[Beam, ...]:
        """The beams that relations tie an item to, or that it is itself."""
        if item is None:
            return ()
        own = [item.id()] if item.id() in self._by_id else self._tied.get(item.id(), [])
        return tuple(self._by_id[step_id] for step_id in own)

    def hosts(self, action: Entity) -> Hosts:
        """Where an action lies; raises UnreadableError where that cannot be told."""
        item = self.items.get(action.id())
        if action.is_a("IfcStructuralPointAction"):
            return self._at_point(action, item)
        line = self._line(action, item)
        if line is None:
            raise UnreadableError(f"{label(action)} gives no line that it acts along")
        return self._along(line, item)

    def frame(self, action: Entity) -> Matrix:
        """Directions (columns) of the components of an action's loads."""
        item = self.items.get(action.id())
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

    def points_of(self, action: Entity, points: Iterable[Entity]) -> list[Vector]:
        """Points in the coordinates of an action, in the building."""
        matrix = self._own_matrix(action, self.items.get(action.id()))
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
        for box in self._boxes.values():
            if box.beam.key not in helds and (held := coincides(box, line)):
                helds[box.beam.key] = held
        found = tuple(helds.values())
        return Hosts(line, None, found, tuple(held.box for held in found), doubts)

    def _at_point(self, action: Entity, item: Entity | None) -> Hosts:
        point = self._places.point(action, self._own_matrix(action, item))
        if point is None and item is not None:
            point = self._places.point(item, self._places.matrix(item))
        if point is None:
            raise UnreadableError(f"{label(action)} gives no point that it acts at")
        tied = {beam.step_id for beam in self.tied(item)}
        boxes = tuple(
            box
            for step_id, box in self._boxes.items()
            if step_id in tied or box.holds(box.inside(point[None, :]))
        )
        return Hosts(None, point, (), boxes, {})

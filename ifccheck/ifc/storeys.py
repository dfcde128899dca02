"""Storeys of a model, and which storey an element stands in."""

from __future__ import annotations

from typing import TYPE_CHECKING

from ifccheck.beam import Storey
from ifccheck.ifc.entity import Entity, UnreadableError, get, text

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context


class Storeys:
    """The storeys of a model, the lowest first."""

    def __init__(self, context: Context) -> None:
        self._relations = context.relations
        found = [(_elevation(context, entity), entity) for entity in _entities(context)]
        found.sort(key=lambda pair: (pair[0], pair[1].id()))
        self._names = {entity.id(): _name(entity) for _, entity in found}
        self._by_structure: dict[int, str] = {}
        self.all = tuple(Storey(_name(entity), elevation) for elevation, entity in found)

    def name_of(self, step_id: int) -> str:
        """Return the name of the storey that an element stands in, "" where it stands in none."""
        structure = self._relations.container(step_id)
        if structure is None:
            return ""
        if structure not in self._by_structure:
            around = (structure, *self._relations.ancestors(structure))
            found = (self._names[spatial] for spatial in around if spatial in self._names)
            self._by_structure[structure] = next(found, "")
        return self._by_structure[structure]


def _entities(context: Context) -> list[Entity]:
    return list(context.file.by_type("IfcBuildingStorey"))


def _name(entity: Entity) -> str:
    return text(entity, "Name") or text(entity, "LongName") or f"storey #{entity.id()}"


def _elevation(context: Context, entity: Entity) -> float:
    """The elevation that the storey states [mm], else that of its placement."""
    stated = get(entity, "Elevation")
    if stated is not None:
        return float(stated) * context.units.length
    try:
        return float(context.placements.matrix(entity)[2, 3])
    except UnreadableError:
        return 0.0

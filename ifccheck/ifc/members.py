"""The members of a building that may touch a beam, and the boxes round them."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from ifccheck.beam import Box, Member, Remark
from ifccheck.ifc.boxes import Boxes
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import (
    GLOBAL_ID,
    ILL_TYPED,
    NAME,
    TAG,
    Entity,
    UnreadableError,
    text_at,
)
from ifccheck.ifc.storeys import Storeys

CLASSES = (
    "IfcBeam", "IfcColumn", "IfcWall", "IfcSlab", "IfcFooting", "IfcPile", "IfcMember", "IfcPlate",
    "IfcRoof", "IfcStair", "IfcStairFlight", "IfcRamp", "IfcRampFlight", "IfcBearing",
    "IfcDeepFoundation", "IfcCaissonFoundation", "IfcChimney", "IfcBuildingElementPart",
    "IfcBuildingElementProxy",
)  # fmt: skip
"""What may carry a beam or rest on it; a class that a schema lacks is passed over."""


@dataclass(frozen=True, slots=True)
class Members:
    """The members with a readable box, and what is doubtful of the rest."""

    members: tuple[Member, ...]
    remarks: tuple[Remark, ...]


def read_members(
    context: Context, boxes: Boxes, storeys: Storeys, known: Mapping[int, Box]
) -> Members:
    """Return every member with its box; ``known`` are boxes that were already found."""
    members: list[Member] = []
    unread: Counter[str] = Counter()
    for entity in _entities(context):
        step_id = entity.id()
        try:
            box = known.get(step_id) or boxes.of(entity)
        except (UnreadableError, *ILL_TYPED):
            unread[entity.is_a()] += 1
            continue
        if box is not None:
            members.append(
                Member(
                    step_id=step_id,
                    guid=text_at(entity, GLOBAL_ID),
                    ifc_class=entity.is_a(),
                    name=text_at(entity, NAME) or text_at(entity, TAG),
                    storey=storeys.name_of(step_id),
                    box=box,
                )
            )
    return Members(tuple(members), _unread(unread))


def _entities(context: Context) -> Iterator[Entity]:
    seen: set[int] = set()
    for name in CLASSES:
        for entity in by_class(context.file, name):
            if entity.id() not in seen:
                seen.add(entity.id())
                yield entity


def by_class(file: object, name: str) -> tuple[Entity, ...]:
    """Return the entities of a class; none where the schema has no such class."""
    try:
        found: tuple[Entity, ...] = file.by_type(name)  # type: ignore[attr-defined]
    except RuntimeError:
        return ()
    return found


def _unread(unread: Counter[str]) -> tuple[Remark, ...]:
    if not unread:
        return ()
    kinds = ", ".join(f"{count} {name}" for name, count in sorted(unread.items()))
    text = (
        f"the extent of {sum(unread.values())} members cannot be read ({kinds}): "
        "contacts with them are not seen"
    )
    return (Remark(None, "geometry", text, "doubt"),)

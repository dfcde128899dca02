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
    OBJECT_TYPE,
    TAG,
    Entity,
    UnreadableError,
    text_at,
)
from ifccheck.ifc.storeys import Storeys
from ifccheck.ifc.vocabulary import CONCRETE, families_named

CLASSES = (
    "IfcBeam", "IfcColumn", "IfcWall", "IfcSlab", "IfcFooting", "IfcPile", "IfcMember", "IfcPlate",
    "IfcRoof", "IfcStair", "IfcStairFlight", "IfcRamp", "IfcRampFlight", "IfcBearing",
    "IfcDeepFoundation", "IfcCaissonFoundation", "IfcChimney", "IfcBuildingElementPart",
    "IfcBuildingElementProxy", "IfcElementAssembly",
)  # fmt: skip
"""What may carry a beam or rest on it; a class that a schema lacks is passed over."""


WEAK = ("insulation", "plastic")
"""What no member that carries a beam is made of."""

NOT_SOLID = (
    "IfcReinforcingElement", "IfcFastener", "IfcMechanicalFastener", "IfcDiscreteAccessory",
    "IfcFeatureElement",
)  # fmt: skip
"""Parts that are no body of a member by themselves: its bars, fasteners, openings."""


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
            found = _boxes(context, boxes, entity, known.get(step_id))
        except (UnreadableError, *ILL_TYPED):
            unread[entity.is_a()] += 1
            continue
        members += [
            Member(
                step_id=step_id,
                guid=text_at(entity, GLOBAL_ID),
                ifc_class=entity.is_a(),
                name=text_at(entity, NAME) or text_at(entity, TAG),
                storey=storeys.name_of(step_id),
                box=box,
                doubt=_use_doubt(entity),
            )
            for box in found
        ]
    return Members(tuple(members), _unread(unread))


def _use_doubt(entity: Entity) -> str:
    """Say that a member is named as what carries nothing."""
    names = (text_at(entity, NAME), text_at(entity, OBJECT_TYPE))
    families = {family for name in names for family in families_named(name)}
    weak = families & set(WEAK)
    return f"it is named as {min(weak)}" if weak and CONCRETE not in families else ""


def _boxes(context: Context, boxes: Boxes, entity: Entity, known: Box | None) -> list[Box]:
    """The box of a member, or the boxes of its parts where only those have bodies."""
    own = known or boxes.of(entity)
    if own is not None:
        return [own]
    if entity.is_a("IfcElementAssembly"):
        return []  # its parts are members by themselves
    parts = map(context.file.by_id, context.relations.descendants(entity.id()))
    found = [boxes.of(part) for part in parts if _is_solid_part(part)]
    return [box for box in found if box is not None]


def _is_solid_part(part: Entity) -> bool:
    return part.is_a("IfcElement") and not any(part.is_a(kind) for kind in NOT_SOLID)


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

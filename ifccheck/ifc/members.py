"""The members of a building that may touch a beam, and the boxes round them."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, NamedTuple

from ifccheck.beam import Box, Member, Remark, Ring, Unmeasured
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
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.rough_boxes import GROWN, ROUGH, rough_box
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


FRAMING = ("IfcBeam", "IfcColumn", "IfcMember")
"""Members that may rest on a beam wherever they are."""

ROUGHLY = (
    *FRAMING, "IfcWall", "IfcFooting", "IfcPile", "IfcStairFlight", "IfcRampFlight",
    "IfcBuildingElementProxy",
)  # fmt: skip
"""Members that a rough box is better for than none."""

THICK = 600.0
"""A wall with a box thicker than this is bent, or lies across the axes of its box, unless it is
known to fill it [mm]."""

UNFILLED = "its body fills too little of the box round it to tell where it carries"


@dataclass(frozen=True, slots=True)
class Members:
    """The members with a readable box, and what is doubtful of the rest."""

    members: tuple[Member, ...]
    unmeasured: tuple[Unmeasured, ...]
    remarks: tuple[Remark, ...]


class _Extent(NamedTuple):
    box: Box
    plan: Ring = ()
    doubt: str = ""


def read_members(
    context: Context, profiles: Profiles, storeys: Storeys, known: Mapping[int, Box]
) -> Members:
    """Return every member with its box; ``known`` are boxes that were already found."""
    boxes = Boxes(context, profiles)
    members: list[Member] = []
    unmeasured: list[Unmeasured] = []
    unread: Counter[str] = Counter()
    rough: Counter[str] = Counter()
    for entity in _entities(context):
        step_id = entity.id()
        name = text_at(entity, NAME) or text_at(entity, TAG)
        found = _extents(context, boxes, entity, known.get(step_id))
        if not found and _is_any(entity, ROUGHLY):
            found = _rough(context, profiles, entity)
            rough[entity.is_a()] += bool(found)
        if found is None:
            unread[entity.is_a()] += 1
        if not found and _is_any(entity, FRAMING):
            storey = storeys.name_of(step_id)
            unmeasured.append(Unmeasured(step_id, entity.is_a(), name, storey))
        members += [
            Member(
                step_id=step_id,
                guid=text_at(entity, GLOBAL_ID),
                ifc_class=entity.is_a(),
                name=name,
                storey=storeys.name_of(step_id),
                box=extent.box,
                plan=extent.plan,
                doubt=_use_doubt(entity) or extent.doubt,
            )
            for extent in found or ()
        ]
    return Members(tuple(members), tuple(unmeasured), (*_unread(unread), *_roughly(rough)))


def _is_any(entity: Entity, classes: Sequence[str]) -> bool:
    return any(entity.is_a(name) for name in classes)


def _extents(
    context: Context, boxes: Boxes, entity: Entity, known: Box | None
) -> list[_Extent] | None:
    """Where a member is; nothing where it has no body, None where it cannot be read."""
    try:
        found = _boxes(context, boxes, entity, known)
        if known is not None or not _is_any(entity, ("IfcWall", "IfcFooting", "IfcColumn")):
            return [_Extent(box) for box in found]
        plan = boxes.plan(entity)
    except (UnreadableError, *ILL_TYPED):
        return None
    unsure = plan is None and entity.is_a("IfcWall")
    return [
        _Extent(box, plan or (), UNFILLED if unsure and _thickness(box) > THICK else "")
        for box in found
    ]


def _thickness(box: Box) -> float:
    """The lesser of the two extents of a box that are nearest to level [mm]."""
    steep = max(range(3), key=lambda row: abs(box.axes[row][2]))
    return 2.0 * min(half for row, half in enumerate(box.half) if row != steep)


def _rough(context: Context, profiles: Profiles, entity: Entity) -> list[_Extent] | None:
    try:
        return [_Extent(rough_box(context, profiles, entity), doubt=ROUGH)]
    except (UnreadableError, *ILL_TYPED):
        return None


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


def by_class(file: Any, name: str) -> tuple[Entity, ...]:
    """Return the entities of a class; none where the schema has no such class."""
    try:
        found: tuple[Entity, ...] = file.by_type(name)
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


def _roughly(rough: Counter[str]) -> tuple[Remark, ...]:
    if not rough.total():
        return ()
    kinds = ", ".join(f"{count} {name}" for name, count in sorted(rough.items()) if count)
    text = (
        f"the extent of {rough.total()} members is known only roughly ({kinds}): boxes round "
        f"their points and {GROWN:g} mm more may load beams, and hold none"
    )
    return (Remark(None, "geometry", text, "doubt"),)

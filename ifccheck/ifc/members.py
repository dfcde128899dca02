"""The members of a building that may touch a beam, and the boxes round them."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, NamedTuple

from ifccheck.beam import Box, Member, Remark, Ring, Unmeasured
from ifccheck.ifc.bearing import load_bearing
from ifccheck.ifc.boxes import Boxes
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError
from ifccheck.ifc.plain_bodies import PlainBodies
from ifccheck.ifc.products import Product
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


WEAK = frozenset(("insulation", "plastic"))
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

PLANNED = ("IfcWall", "IfcFooting", "IfcColumn")
"""Members whose outline in plan is looked at."""

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


class MemberReader:
    """Reads where the members of one model are."""

    def __init__(
        self, context: Context, profiles: Profiles, storeys: Storeys, bodies: PlainBodies
    ) -> None:
        self._context = context
        self._profiles = profiles
        self._storeys = storeys
        self._bodies = bodies
        self._boxes = Boxes(context, profiles)

    def read(self, products: Sequence[Product], known: Mapping[int, Box]) -> Members:
        """Return every member with its box; ``known`` are boxes that were already found."""
        members: list[Member] = []
        unmeasured: list[Unmeasured] = []
        unread: Counter[str] = Counter()
        rough: Counter[str] = Counter()
        bearing = load_bearing(self._context, products)
        for product in products:
            found = self._extents(product, known.get(product.step_id))
            if not found and self._is_any(product, ROUGHLY):
                found = self._rough(product)
                rough[product.ifc_class] += bool(found)
            if found is None:
                unread[product.ifc_class] += 1
            if not found and self._is_any(product, FRAMING):
                unmeasured.append(self._unmeasured(product))
            bears = bearing.get(product.step_id)
            members += [self._member(product, extent, bears) for extent in found or ()]
        return Members(tuple(members), tuple(unmeasured), (*_unread(unread), *_roughly(rough)))

    def _member(self, product: Product, extent: _Extent, bears: bool | None) -> Member:
        return Member(
            step_id=product.step_id,
            guid=product.guid,
            ifc_class=product.ifc_class,
            name=product.name or product.tag,
            storey=self._storeys.name_of(product.step_id),
            box=extent.box,
            plan=extent.plan,
            doubt=_use_doubt(product) or extent.doubt,
            bears=bears,
        )

    def _unmeasured(self, product: Product) -> Unmeasured:
        storey = self._storeys.name_of(product.step_id)
        return Unmeasured(product.step_id, product.ifc_class, product.name or product.tag, storey)

    def _is_any(self, product: Product, classes: Sequence[str]) -> bool:
        return self._context.classes.is_any(product.ifc_class, classes)

    def _extents(self, product: Product, known: Box | None) -> list[_Extent] | None:
        """Where a member is; nothing where it has no body, None where it cannot be read."""
        if known is not None:
            return [_Extent(known)]
        try:
            found = self._found_boxes(product)
            if not self._is_any(product, PLANNED):
                return [_Extent(box) for box in found]
            plan = self._plan(product)
        except (UnreadableError, *ILL_TYPED):
            return None
        unsure = plan is None and self._is_any(product, ("IfcWall",))
        return [
            _Extent(box, plan or (), UNFILLED if unsure and _thickness(box) > THICK else "")
            for box in found
        ]

    def _found_boxes(self, product: Product) -> list[Box]:
        """The box of a member, or the boxes of its parts where only those have bodies."""
        if product.step_id in self._bodies:
            return [self._bodies.box(product.step_id)]
        own = self._boxes.of(self._entity(product))
        if own is not None:
            return [own]
        if self._is_any(product, ("IfcElementAssembly",)):
            return []  # its parts are members by themselves
        parts = self._context.relations.descendants(product.step_id)
        entities = [part for part in map(self._context.file.by_id, parts) if is_solid_part(part)]
        found = [self._boxes.of(part) for part in entities]
        return [box for box in found if box is not None]

    def _plan(self, product: Product) -> Ring | None:
        if product.step_id in self._bodies:
            return self._bodies.plan(product.step_id)
        return self._boxes.plan(self._entity(product))

    def _rough(self, product: Product) -> list[_Extent] | None:
        try:
            box = rough_box(self._context, self._profiles, self._entity(product))
        except (UnreadableError, *ILL_TYPED):
            return None
        return [_Extent(box, doubt=ROUGH)]

    def _entity(self, product: Product) -> Entity:
        return self._context.file.by_id(product.step_id)


def _thickness(box: Box) -> float:
    """The lesser of the two extents of a box that are nearest to level [mm]."""
    steep = max(range(3), key=lambda row: abs(box.axes[row][2]))
    return 2.0 * min(half for row, half in enumerate(box.half) if row != steep)


def _use_doubt(product: Product) -> str:
    """Say that a member is named as what carries nothing."""
    families = families_named(product.name) | families_named(product.object_type)
    weak = families & WEAK
    return f"it is named as {min(weak)}" if weak and CONCRETE not in families else ""


def is_solid_part(part: Entity) -> bool:
    """Tell whether a part is a body of its whole, and no bar, fastener or opening."""
    return part.is_a("IfcElement") and not any(part.is_a(kind) for kind in NOT_SOLID)


def members_of(file: Any) -> list[Entity]:
    """Return all members of a model, class by class."""
    found: dict[int, Entity] = {}
    for name in CLASSES:
        for entity in by_class(file, name):
            found.setdefault(entity.id(), entity)
    return list(found.values())


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

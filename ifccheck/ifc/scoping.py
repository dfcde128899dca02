"""Members that the brief takes in as beams, or leaves out."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from ifccheck.beam import OutOfScope, Remark
from ifccheck.ifc.bodies import body_representation
from ifccheck.ifc.entity import NAME, REPRESENTATION, Entity, label, text_at
from ifccheck.ifc.members import NOT_SOLID, is_solid_part
from ifccheck.ifc.opening import OpenedModel
from ifccheck.ifc.products import Product, read_products
from ifccheck.ifc.selection import elements_of
from ifccheck.ifc.storeys import Storeys

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

SAID = "the brief says so"
NEVER_BEAMS = ("IfcColumn", "IfcWall", "IfcSlab", "IfcFooting", "IfcPile")
"""Members that no query takes in as beams, nor any part of them"""
NAMED = 5
"""Of those how many a remark names"""


@dataclass(frozen=True, slots=True)
class Choice:
    """What the brief chooses to have read of one model; members by STEP id."""

    also: frozenset[int] = frozenset()
    left_out: Mapping[int, str] = field(default_factory=dict)
    """With the query that leaves each out"""
    reached: Mapping[str, int] = field(default_factory=dict)
    """How many members each query reaches, by its place in the brief"""
    slabs: bool = False
    """Slabs are wanted, which may count as flanges"""
    floors: bool = False
    """And what they bring to beams is wanted"""
    remarks: tuple[Remark, ...] = ()
    """What queries reach that is no beam"""


NO_CHOICE = Choice()


def choose(
    opened: OpenedModel,
    also: Mapping[str, str],
    leave_out: Mapping[str, str],
    *,
    slabs: bool = False,
    floors: bool = False,
) -> Choice:
    """Answer the queries of the brief, each given by its place.

    Raises BriefError where one cannot be understood or answered.
    """
    reached = {place: _members(opened, query, place) for place, query in also.items()}
    taken = {
        place: [one.id() for one in found if not never_beam(one)]
        for place, found in reached.items()
    }
    left = {
        place: [one.id() for one in _members(opened, query, place)]
        for place, query in leave_out.items()
    }
    return Choice(
        also=frozenset(step_id for found in taken.values() for step_id in found),
        left_out={step_id: leave_out[place] for place, found in left.items() for step_id in found},
        reached={place: len(found) for place, found in (taken | left).items()},
        slabs=slabs,
        floors=floors,
        remarks=tuple(
            Remark(None, "scope", _passed_over(place, also[place], others), "doubt")
            for place, found in reached.items()
            if (others := [one for one in found if never_beam(one)])
        ),
    )


def never_beam(entity: Entity) -> bool:
    """Whether an element is a column, wall, slab or footing, or a part of one."""
    if any(entity.is_a(kind) for kind in NEVER_BEAMS):
        return True
    wholes = [relation.RelatingObject for relation in getattr(entity, "Decomposes", ())]
    return any(never_beam(whole) for whole in wholes)


def _passed_over(place: str, query: str, others: Sequence[Entity]) -> str:
    """Tell what a query reaches that is never a beam."""
    names = [f"{text_at(one, NAME) or label(one)} ({one.is_a()})" for one in others[:NAMED]]
    more = f" and {len(others) - NAMED} more" if len(others) > NAMED else ""
    return (
        f'{place} = "{query}" reaches {", ".join(names)}{more}: columns, walls, slabs, footings and'
        " their parts are not taken in as beams"
    )


def _members(opened: OpenedModel, query: str, place: str) -> list[Entity]:
    return [
        entity
        for entity in elements_of(opened, query, f'{place} = "{query}"')
        if entity.is_a("IfcElement") and not any(entity.is_a(kind) for kind in NOT_SOLID)
    ]


def candidates(
    context: Context, products: Sequence[Product], beams: Sequence[Product], choice: Choice
) -> list[Product]:
    """Return what may be a beam: the beams by class, then what the brief takes in.

    A whole without a body of its own stands for its solid parts, which then bear its name and
    its tag; a part that is a beam by class is there already.
    """
    known = {product.step_id: product for product in products}
    found = {beam.step_id: beam for beam in beams}
    for step_id in sorted(choice.also - found.keys()):
        whole = known.get(step_id) or _product(context, step_id)
        for body in _bodies(context, context.file.by_id(step_id)):
            if body not in found:
                product = known.get(body) or _product(context, body)
                found[body] = product._replace(name=whole.name, tag=whole.tag)
    return list(found.values())


def _product(context: Context, step_id: int) -> Product:
    return read_products(context, [context.file.by_id(step_id)])[0]


def _bodies(context: Context, entity: Entity) -> Iterator[int]:
    """Step ids of what has the body of a member: itself, or its solid parts."""
    parts = [
        part
        for part in map(context.file.by_id, context.relations.descendants(entity.id()))
        if is_solid_part(part) and _has_body(part)
    ]
    if _has_body(entity) or not parts:
        yield entity.id()
    else:
        yield from sorted(part.id() for part in parts if not never_beam(part))


def _has_body(entity: Entity) -> bool:
    shape = entity.get_argument(REPRESENTATION)
    return shape is not None and body_representation(shape) is not None


def parted(
    context: Context, storeys: Storeys, products: Sequence[Product], choice: Choice
) -> tuple[list[Product], list[OutOfScope]]:
    """Part what may be a beam into what is looked at and what the brief leaves out."""
    kept: list[Product] = []
    left: list[OutOfScope] = []
    for product in products:
        around = (product.step_id, *context.relations.ancestors(product.step_id))
        query = next((choice.left_out[i] for i in around if i in choice.left_out), None)
        if query is None:
            kept.append(product)
        else:
            left.append(
                OutOfScope(
                    guid=product.guid,
                    step_id=product.step_id,
                    name=product.name or product.tag,
                    storey=storeys.name_of(product.step_id),
                    reason=SAID,
                    evidence=f"scope.leave_out: {query}",
                )
            )
    return kept, left

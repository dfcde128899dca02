"""What the members of a model say of themselves: class, identity, names, where their body is."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import GLOBAL_ID, NAME, OBJECT_TYPE, TAG, Entity, get, text_at
from ifccheck.ifc.statement_patterns import (
    BLANKS,
    CLASS,
    REFERENCE_OR_NOTHING,
    TEXT_OR_NOTHING,
    statement,
)

_ITSELF = rb"([ -&(-\[\]-~]*+)"
"""A text that says itself: without escapes."""
_NAME = rb"(?:'" + _ITSELF + rb"'|\$)"
_WHERE = rb"(?:#(\d++)|\$)"
_OWN = rb"(?:" + BLANKS + b"," + BLANKS + rb"([^'#]*?))?"
"""The arguments of a class itself, behind those that all members have."""
MEMBER = statement(
    CLASS, b"'" + _ITSELF + b"'", REFERENCE_OR_NOTHING, _NAME, TEXT_OR_NOTHING, _NAME, _WHERE,
    _WHERE, _NAME + _OWN,
)  # fmt: skip


class Product(NamedTuple):
    """A member of the building, as far as one statement tells."""

    step_id: int
    ifc_class: str
    guid: str
    name: str
    object_type: str
    tag: str
    own: str
    """What its class adds to what all members have, as it is written; empty where that is not
    told."""
    placement: int = 0
    """STEP id of its placement where that is told, and of its shape; else 0."""
    shape: int = 0


def read_products(context: Context, entities: Sequence[Entity]) -> list[Product]:
    """Read members: those that are written plainly from their text."""
    step_ids = [entity.id() for entity in entities]
    if context.statements is None:
        return [_read(entity) for entity in entities]
    matches = context.statements.matches(step_ids, MEMBER)
    products: list[Product] = []
    for entity, step_id, match in zip(entities, step_ids, matches, strict=True):
        if match is None:
            products.append(_read(entity))
            continue
        guid, name, object_type, placement, shape, tag, own = match.groups()
        products.append(
            Product(
                step_id, entity.is_a(), _text(guid), _text(name), _text(object_type), _text(tag),
                _text(own), int(placement or 0), int(shape or 0),
            )
        )  # fmt: skip
    return products


def _text(written: bytes | None) -> str:
    return "" if written is None else written.decode("ascii").strip()


def _read(entity: Entity) -> Product:
    own = get(entity, "PredefinedType")
    return Product(
        entity.id(), entity.is_a(), text_at(entity, GLOBAL_ID), text_at(entity, NAME),
        text_at(entity, OBJECT_TYPE), text_at(entity, TAG), f".{own}." if own else "",
    )  # fmt: skip

"""Reading attributes of IFC entities quickly.

``entity.Name`` costs about ten times ``entity.get_argument(2)``; in a model of fifty thousand
bars that difference is longer than opening the file. The position of an attribute is looked up
once per class and kept.
"""

from __future__ import annotations

import math
from typing import Any

Entity = Any
"""An ifcopenshell entity instance, or a defined value such as IfcLabel."""

NO_SUCH_ATTRIBUTE = 0xFFFFFFFF

# Positions that are the same in every schema, for the loops over every member.
GLOBAL_ID, NAME, OBJECT_TYPE = 0, 2, 4  # of IfcRoot and IfcObject
OBJECT_PLACEMENT, REPRESENTATION, TAG = 5, 6, 7  # of IfcProduct and IfcElement

_positions: dict[tuple[str, str], int | None] = {}


class UnreadableError(Exception):
    """Something in the model cannot be read surely; the text tells people what."""


ILL_TYPED = (
    AttributeError, TypeError, ValueError, IndexError, KeyError, ArithmeticError, RuntimeError,
)  # fmt: skip
"""What reading raises where an attribute holds what its class does not allow: ifcopenshell opens
such files without a word."""


def get(entity: Entity, name: str) -> Any:
    """Return the attribute of that name, None where it is empty or the schema has none."""
    key = (entity.is_a(True), name)
    try:
        position = _positions[key]
    except KeyError:
        found = entity.get_argument_index(name)
        position = _positions[key] = None if found == NO_SUCH_ATTRIBUTE else found
    return None if position is None else entity.get_argument(position)


def need(entity: Entity, name: str) -> Any:
    """Return an attribute that must be there; raises UnreadableError where it is empty."""
    value = get(entity, name)
    if value is None:
        raise UnreadableError(f"{label(entity)} has no {name}")
    return value


def numbers(entity: Entity, count: int) -> tuple[float, ...]:
    """Return the coordinates of a point or the ratios of a direction, ``count`` of them; in a
    plane (2) there may be a third.

    Raises UnreadableError where there are others: what is no number, ``nan`` for one,
    ifcopenshell leaves out without a word, so that the rest would stand in the wrong place.
    """
    values: tuple[float, ...] | None = entity.get_argument(0)
    if values is None or len(values) not in (count, 3) or not math.isfinite(sum(values)):
        raise UnreadableError(f"{label(entity)} does not hold {count} numbers")
    return values


def text(entity: Entity, name: str) -> str:
    """Return a text attribute, empty where it is not given."""
    value = get(entity, name)
    return value.strip() if isinstance(value, str) else ""


def text_at(entity: Entity, position: int) -> str:
    """Return the text attribute at a position, empty where it is not given."""
    value = entity.get_argument(position)
    return value.strip() if isinstance(value, str) else ""


def several(entity: Entity, name: str) -> tuple[Entity, ...]:
    """Return a list attribute, empty where it is not given."""
    return get(entity, name) or ()


def label(entity: Entity) -> str:
    """Name an entity for people: ``#12 IfcBeam``."""
    return f"#{entity.id()} {entity.is_a()}"

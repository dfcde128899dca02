"""What a model calls load bearing: columns, walls and members that may carry beams."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from ifccheck.ifc.products import Product

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

SETS = {
    "IfcColumn": "Pset_ColumnCommon",
    "IfcMember": "Pset_MemberCommon",
    "IfcWall": "Pset_WallCommon",
}
"""The property set that may say so, by the class that holds it"""


def load_bearing(context: Context, products: Sequence[Product]) -> dict[int, bool]:
    """Whether members bear load, by step id, of those of which the model says it."""
    known: dict[str, str | None] = {}
    asked: dict[int, str] = {}
    for product in products:
        name = product.ifc_class
        if name not in known:
            known[name] = _set_of(context, name)
        if (held := known[name]) is not None:
            asked[product.step_id] = held
    context.properties.find(asked, set(SETS.values()))
    stated = {step: context.properties.of(step).get(name) for step, name in asked.items()}
    values = {step: found.get("LoadBearing") for step, found in stated.items() if found}
    return {
        step: found.value
        for step, found in values.items()
        if found is not None and isinstance(found.value, bool)
    }


def _set_of(context: Context, ifc_class: str) -> str | None:
    for kind, name in SETS.items():
        if context.classes.is_any(ifc_class, (kind,)):
            return name
    return None

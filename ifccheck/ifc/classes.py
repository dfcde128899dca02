"""The classes of a schema, and which lie above them."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import ifcopenshell


class Classes:
    """The classes of a schema, and which lie above them."""

    def __init__(self, file: Any) -> None:
        self._schema = ifcopenshell.schema_by_name(file.schema_identifier)
        self._above: dict[str, frozenset[str]] = {}

    def is_any(self, name: str, classes: Sequence[str]) -> bool:
        """Whether a class is one of some, or lies under one of them."""
        if name not in self._above:
            self._above[name] = frozenset(self._with_all_above(name))
        return not self._above[name].isdisjoint(classes)

    def _with_all_above(self, name: str) -> list[str]:
        declared = self._schema.declaration_by_name(name).as_entity()
        names: list[str] = []
        while declared is not None:
            names.append(declared.name())
            declared = declared.supertype()
        return names

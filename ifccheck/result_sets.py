"""Property sets of results, as plain data: what is written on a beam, not how."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, NamedTuple

Measure = Literal[
    "label", "text", "identifier", "real", "logical", "length", "force", "line_force",
    "moment", "pressure", "area",
]  # fmt: skip


class ResultProperty(NamedTuple):
    """One property of a result set, in N, mm, MPa; ``logical`` takes True, False or None.

    A named tuple, as there are tens of thousands that are looked up by all their fields.
    """

    name: str
    measure: Measure
    value: str | float | bool | None


@dataclass(frozen=True, slots=True)
class ResultSet:
    """One property set to be written on one beam."""

    step_id: int
    guid: str
    ordinal: int
    name: str
    properties: tuple[ResultProperty, ...]

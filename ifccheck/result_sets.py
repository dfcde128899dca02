"""Property sets of results, as plain data: what is written on a beam, not how."""

from __future__ import annotations

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


class ResultSet(NamedTuple):
    """One property set to be written on one beam."""

    step_id: int
    guid: str
    ordinal: int
    name: str
    properties: tuple[ResultProperty, ...]

    @property
    def identity(self) -> tuple[str, int, str]:
        """What its GlobalId is made of: unlike that of any other set."""
        return self.guid, self.ordinal, self.name

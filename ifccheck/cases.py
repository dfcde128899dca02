"""Load cases and how they act together. Frozen dataclasses only; read as part of ``beam``."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass, field
from typing import Literal

Nature = Literal["permanent", "imposed", "crane", "snow", "wind"]
CombinationKind = Literal["strength", "service"]

SELF = "self"
"""Name of the case that self weight makes; reserved."""


@dataclass(frozen=True, slots=True)
class Case:
    """A load case of the brief."""

    name: str
    nature: Nature
    category: str | None = None
    rated: bool = False
    excludes: tuple[str, ...] = ()
    removable: bool = False
    whole: bool = False
    """Acts on all spans of a line or on none: a fixed thing, not what may stand on some of them"""

    @property
    def by_spans(self) -> bool:
        """Whether it may act on each span of a line and not on the next."""
        return self.nature != "permanent" and not self.whole


@dataclass(frozen=True, slots=True)
class Combination:
    """Factors on the cases of a run: unfavourable and favourable, by case name."""

    name: str
    kind: CombinationKind
    factors: dict[str, tuple[float, float]] = field(hash=False)
    terms: tuple[tuple[Nature, str], ...] = ()
    """The name's terms by nature, where it is made of such: ("imposed", "1.5L")"""

    def label(self, natures: Collection[Nature]) -> str:
        """The name without the terms of natures that do not act."""
        whole = " + ".join(text for _, text in self.terms)
        if not self.terms or not self.name.startswith(whole):
            return self.name
        acting = " + ".join(text for nature, text in self.terms if nature in natures)
        return acting + self.name.removeprefix(whole)

    def covers(self, other: Combination) -> bool:
        """Whether this one is at least as onerous at every case of the other."""
        return all(
            self.factors[name][0] >= unfavourable and self.factors[name][1] <= favourable
            for name, (unfavourable, favourable) in other.factors.items()
        )

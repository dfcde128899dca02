"""How the beams of a model were stood in it, as it is shown: supports, lines, equilibrium.

Named tuples of plain facts only; no beam or member of the model hangs on them.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import NamedTuple

from ifccheck.beam import EndKind

BALANCED = 1e-6
"""Part of the greatest figure of a row up to which a difference is what rounding leaves"""
NOTHING = 1.0
"""Force up to which a difference is nothing, whatever the figures [N]"""


class FramedEnd(NamedTuple):
    """One end of a span; ``x`` along the beam's own axis [mm]."""

    kind: EndKind
    x: float
    carrier: str = ""
    """Name and class of what carries the beam there, for people; empty at a tip"""
    direct: bool = False
    """It presses into the beam from below or over its depth; else the beam frames into a side"""
    stated: bool = False
    """The brief alone says that something is there"""

    @property
    def carrier_name(self) -> str:
        """What people call what carries the beam there."""
        return self.carrier if self.stated else self.carrier.rpartition(" (")[0]


class FramedSpan(NamedTuple):
    """A span, an overhang or a cantilever; ``start`` lies before ``end`` in the beam's own x."""

    beam: str
    """Key"""
    mark: str
    start: FramedEnd
    end: FramedEnd
    reversed: bool = False
    """The beam's x runs against the line"""

    @property
    def length(self) -> float:
        """[mm]."""
        return self.end.x - self.start.x

    @property
    def ends(self) -> tuple[FramedEnd, FramedEnd]:
        """Its two ends in the order of the line."""
        return (self.end, self.start) if self.reversed else (self.start, self.end)

    @property
    def hangs_over(self) -> bool:
        """Whether one of its ends is free."""
        return "free" in (self.start.kind, self.end.kind)


class FramedLine(NamedTuple):
    """Beams that act as one member, span by span along it."""

    spans: tuple[FramedSpan, ...]

    def of(self, key: str) -> tuple[FramedSpan, ...]:
        """The spans of one of its beams, in the order of the beam's own x."""
        return tuple(sorted((s for s in self.spans if s.beam == key), key=_from))

    @property
    def marks(self) -> dict[str, str]:
        """Marks of its beams by key, in order along it."""
        return {span.beam: span.mark for span in self.spans}


def _from(span: FramedSpan) -> float:
    return span.start.x


class Balance(NamedTuple):
    """What becomes of the loads of one case on the beams of one storey, unfactored [N]."""

    storey: str
    case: str
    applied: float
    """Self weight and the loads of the brief"""
    received: float
    """From beams that rest on them"""
    passed_on: float
    """To beams that carry them"""
    ground: float
    """To columns, walls and all else that stands"""

    @property
    def difference(self) -> float:
        """What is lost or gained."""
        return self.applied + self.received - self.passed_on - self.ground

    @property
    def figures(self) -> tuple[float, ...]:
        """All of them."""
        return self.applied, self.received, self.passed_on, self.ground


@dataclass(frozen=True, slots=True)
class Framed:
    """How all beams of a model were stood in it."""

    lines: Mapping[str, FramedLine]
    """The line that each beam which stands belongs to, by key; a line of its own for most"""
    unknown: Mapping[str, str]
    """Why the others do not stand"""
    balance: tuple[Balance, ...] = ()
    """One for each storey and case"""
    left_out: tuple[str, ...] = ()
    """Keys of the beams of which loads and reactions are not in the balance"""
    moving: tuple[str, ...] = ()
    """Cases that are not in the balance because they move"""
    carriers: Mapping[str, Mapping[str, str]] = field(default_factory=dict)
    """Marks of the beams that carry each, and that carry those, down to the ground, by key"""

    @property
    def all_lines(self) -> Iterator[FramedLine]:
        """Every line once."""
        return iter(dict.fromkeys(self.lines.values()))

    @property
    def joined(self) -> Iterator[dict[str, str]]:
        """Marks, by key, of the beams of every line of several."""
        for key, line in self.lines.items():
            if line.spans[0].beam == key != line.spans[-1].beam:
                yield line.marks


class Total(NamedTuple):
    """What becomes of the loads of one case on all beams, unfactored [N]."""

    case: str
    applied: float
    received: float
    passed_on: float
    ground: float

    @property
    def difference(self) -> float:
        """What does not reach the ground, also where it was passed on and received nowhere."""
        return self.applied - self.ground

    @property
    def figures(self) -> tuple[float, ...]:
        """All of them."""
        return self.applied, self.received, self.passed_on, self.ground


def totals(balance: tuple[Balance, ...]) -> tuple[Total, ...]:
    """Return the sum over all storeys, case by case."""
    sums: dict[str, tuple[float, ...]] = {}
    for row in balance:
        known = sums.get(row.case, (0.0,) * len(row.figures))
        sums[row.case] = tuple(a + b for a, b in zip(known, row.figures, strict=True))
    return tuple(Total(case, *figures) for case, figures in sums.items())


def balances(row: Balance | Total) -> bool:
    """Whether what goes in comes out, but for what rounding leaves; a nan never does."""
    return abs(row.difference) <= max(NOTHING, BALANCED * max(map(abs, row.figures)))

"""How beams stand: supports, spans, lines, contacts. Named tuples only; read as part of
``beam``."""

from __future__ import annotations

from typing import Literal, NamedTuple

SupportKind = Literal["pinned", "fixed", "free"]


class Support(NamedTuple):
    """How one end of a beam stands."""

    kind: SupportKind
    bearing: float
    """Width of the bearing along the axis [mm]; 0 where it is not given."""
    source: str


class Span(NamedTuple):
    """A span of a line between two supports; places along x of the line [mm]."""

    start: float
    end: float
    start_support: Support
    end_support: Support


class Line(NamedTuple):
    """Beams that act as one member, and its spans."""

    beams: tuple[str, ...]
    spans: tuple[Span, ...]


class Contact(NamedTuple):
    """Where another member touches a beam: the stretch of x that it covers."""

    beam: str
    other: str
    """Name and class of the other member, for people."""
    other_class: str
    start: float
    end: float
    place: Literal["start", "end", "between"]
    side: Literal["below", "above", "side", "end"]
    """``end``: the end of the beam meets the other's face, or is built into it"""
    other_step: int = 0
    """Step id of the other member"""
    beyond: float = 0.0
    """How far the other reaches past the beam's end, along its axis [mm]; 0 between"""
    bears: bool = True
    """Whether it is near enough, and of a kind, to hold a beam; else it may only load it"""
    doubt: str = ""
    """Why it cannot be counted on to hold an end; empty where it can"""

    @property
    def other_name(self) -> str:
        """What people call the other member."""
        return self.other.rpartition(" (")[0]

    def goes_by(self, name: str) -> bool:
        """Whether the other member has this name, with its class or without."""
        return name in (self.other, self.other_name)

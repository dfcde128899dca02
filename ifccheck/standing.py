"""How beams stand: supports, spans, lines, contacts. Named tuples only; read as part of
``beam``."""

from __future__ import annotations

from typing import Literal, NamedTuple

SupportKind = Literal["pinned", "fixed", "free"]
EndKind = Literal["pinned", "fixed", "free", "continuous"]
"""``continuous``: the beam goes on there with all moment, in itself or in the next one"""


class Support(NamedTuple):
    """How one end of a beam stands."""

    kind: EndKind
    bearing: float
    """Width of the bearing along the axis [mm]; 0 where it is not given."""
    source: str


class Span(NamedTuple):
    """A span between two supports, or from one to a free end; places along x of the beam [mm]."""

    start: float
    end: float
    start_support: Support
    end_support: Support


class RatedSpan(NamedTuple):
    """A span with what its rating asks of the supports."""

    span: Span
    faces: tuple[float, float]
    """x of the faces of its two supports, within the beam [mm]; a free end is its own face"""
    direct: tuple[bool, bool]
    """Whether the reaction compresses its start and its end: a bearing from below or a column,
    not the side of another beam"""

    @property
    def length(self) -> float:
        """From support to support, or to the tip [mm]."""
        return self.span.end - self.span.start


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
    across: float = 1.0
    """Part of its own width, or of the beam's where that is less, that the two have in common"""
    upward: float = 1.0
    """Part of the beam's depth that the other covers; all where the beam sits on it"""

    @property
    def other_name(self) -> str:
        """What people call the other member."""
        return self.other.rpartition(" (")[0]

    def goes_by(self, name: str) -> bool:
        """Whether the other member has this name, with its class or without."""
        return name in (self.other, self.other_name)

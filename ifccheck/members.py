"""The members of a building that stand round its beams, and what is left out of the beams.

Frozen dataclasses only; read as part of ``beam``.
"""

from __future__ import annotations

from dataclasses import dataclass

_Vector = tuple[float, float, float]


@dataclass(frozen=True, slots=True)
class Box:
    """An oriented box round a member's body: centre, three unit axes, half extents [mm]."""

    centre: _Vector
    axes: tuple[_Vector, _Vector, _Vector]
    half: _Vector


@dataclass(frozen=True, slots=True)
class Member:
    """Any physical member of the building, for contacts and for the plan."""

    step_id: int
    guid: str
    ifc_class: str
    name: str
    storey: str
    box: Box
    plan: tuple[tuple[float, float], ...] = ()
    """Outer ring in plan [mm] of a body that stands upright and does not fill its box"""
    doubt: str = ""
    """Why it cannot be counted on to carry a beam; empty where it can"""
    bears: bool | None = None
    """Whether the model calls it load bearing; None where it says nothing of that"""


@dataclass(frozen=True, slots=True)
class Unmeasured:
    """A beam, column or member of which the model does not tell where it is."""

    step_id: int
    ifc_class: str
    name: str
    storey: str


@dataclass(frozen=True, slots=True)
class OutOfScope:
    """A beam that is left out on positive evidence."""

    guid: str
    step_id: int
    name: str
    storey: str
    reason: str
    """A short class of reason, counted in the summary: "steel", "timber", "footing" ..."""
    evidence: str


@dataclass(frozen=True, slots=True)
class Storey:
    """A storey and its elevation [mm]."""

    name: str
    elevation: float

"""Slabs that beams may be cast with, and what of them counts as a flange.

Frozen dataclasses only; read as part of ``beam``.
"""

from __future__ import annotations

from dataclasses import dataclass

_Ring = tuple[tuple[float, float], ...]


@dataclass(frozen=True, slots=True)
class Plate:
    """A level plate of one thickness as it is drawn: its outer ring in plan, then voids [mm]."""

    rings: tuple[_Ring, ...]
    bottom: float
    """Level of its underside in the building [mm]"""
    top: float


@dataclass(frozen=True, slots=True)
class FloorSlab:
    """A slab that brings load to the beams under it."""

    step_id: int
    key: str
    """The GlobalId; where that is repeated, GlobalId~n with n counting from 2."""
    guid: str
    ifc_class: str
    name: str
    tag: str
    plates: tuple[Plate, ...] = ()
    openings: tuple[tuple[_Ring, ...], ...] = ()
    """What goes through it from top to bottom, each by its rings"""
    unread: str = ""
    """Why it is not known where it lies; empty where it is"""
    notes: tuple[str, ...] = ()
    """What makes it more than it is, as openings that cannot be read"""
    unlike: str = ""
    """Why it does not weigh what concrete does; empty where it may"""
    density: float | None = None
    """The greatest that the model states for its concrete [kg/m3]"""

    @property
    def told(self) -> str:
        """What people call it."""
        return f"{self.name or self.tag or self.key} ({self.ifc_class})"


@dataclass(frozen=True, slots=True)
class Floors:
    """The slabs of a model that may bring load to beams."""

    slabs: tuple[FloorSlab, ...] = ()
    load_bearing: frozenset[int] = frozenset()
    """STEP ids of walls that the model calls load bearing"""


NO_FLOORS = Floors()


@dataclass(frozen=True, slots=True)
class Slab:
    """A level slab of one thickness: its rings in plan, the outer one and then the voids [mm]."""

    step_id: int
    name: str
    """Name and class, for people"""
    rings: tuple[tuple[tuple[float, float], ...], ...]
    bottom: float
    """Level of its underside in the building [mm]"""
    top: float
    strength: float | None
    """Of its concrete, where the model states it [MPa]"""
    doubt: str = ""
    """Why nothing of it may count as a flange; empty where it may"""


@dataclass(frozen=True, slots=True)
class FlangeWidth:
    """How far beyond its web a flange counts by the standard, on a stretch of a beam [mm]."""

    start: float
    end: float
    left: float
    right: float
    steel_left: float
    """Within which bars count where the flange is in tension"""
    steel_right: float


@dataclass(frozen=True, slots=True)
class Flange:
    """Slab beside a beam, or on it, that may count as its flange: a box in the beam's axes [mm]."""

    start: float
    end: float
    right: float
    left: float
    bottom: float
    top: float
    origin: str
    """The slab, and what limits its width"""
    strength: float | None
    """Of the slab's concrete, where the model states it [MPa]"""
    on_top: bool = False
    """It lies on the beam's top, and counts only where the engineer says that both are one"""
    step: int = 0
    """STEP id of the slab"""
    outward: float = 0.0
    """1 where it reaches out to the left from the face of the web, -1 to the right; 0 where that
    is not its inner edge"""

"""The sheet of one beam: its line-by-line calculation and diagrams, as plain data.

Made from the run, drawn by ``publish`` and printed by ``cli``.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from ifccheck.beam import Bars, Beam, Load, Outline, Span, Stirrups
from ifccheck.rating import Rating

Floats = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class SheetLine:
    """One printed line of a calculation."""

    symbol: str
    text: str
    formula: str
    numbers: str
    """The formula with the numbers put in; "" for a given quantity"""
    result: str
    """Value with its unit: "187.4 kN" """
    clause: str


@dataclass(frozen=True, slots=True)
class SheetCheck:
    """The calculation of one limit state at its governing place."""

    title: str
    clause: str
    place: str
    """ "at x = 2.10 m, combination 1.25D + 1.5L" """
    lines: tuple[SheetLine, ...]
    utilisation: float
    outcome: str
    """ "0.84: demand 157.2 kN, resistance 187.4 kN", or why it cannot be said"""


@dataclass(frozen=True, slots=True)
class Diagram:
    """Demand against resistance along the beam; all in one unit for people."""

    title: str
    unit: str
    """ "kN*m" or "kN" """
    x: Floats
    """[mm] (n)"""
    demand_high: Floats
    demand_low: Floats
    resistance_high: Floats
    """nan where there is none to show"""
    resistance_low: Floats
    governing_x: float
    """nan where nothing governs"""


@dataclass(frozen=True, slots=True)
class Sheet:
    """All that one beam's sheet shows."""

    beam: Beam
    rating: Rating
    span: Span | None
    loads: tuple[Load, ...]
    bars: tuple[Bars, ...]
    """The reinforcement that was rated"""
    stirrups: tuple[Stirrups, ...]
    section: Outline | None
    """The outline at the governing place"""
    section_x: float
    checks: tuple[SheetCheck, ...]
    diagrams: tuple[Diagram, ...]

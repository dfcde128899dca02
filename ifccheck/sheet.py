"""The sheet of one beam: its line-by-line calculation and diagrams, as plain data.

Made from the run, drawn by ``publish`` and printed by ``cli``.
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass, fields
from typing import Any

import numpy as np
import numpy.typing as npt

from ifccheck.beam import Bars, Beam, Load, Outline, Span, Stirrups
from ifccheck.rating.results import Rating
from ifccheck.standards import CalculationLine
from ifccheck.units import show

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


@dataclass(frozen=True, slots=True)
class LineValues:
    """The values of a check's calculation lines at one place, by symbol; in N, mm, MPa."""

    values: dict[str, float]
    shown: tuple[CalculationLine, ...]
    """The lines that hold at this place"""


def values_at(lines: Sequence[CalculationLine], details: Any, row: int) -> LineValues:
    """Read the lines' fields from the details of a check at one of its rows."""
    shown = tuple(line for line in lines if not line.when or _field(details, line.when, row))
    return LineValues({line.symbol: _field(details, line.field, row) for line in shown}, shown)


def _field(details: Any, name: str, row: int) -> float:
    return float(np.broadcast_to(getattr(details, name), details_shape(details))[row])


def details_shape(details: Any) -> tuple[int, ...]:
    """Common shape of a details dataclass."""
    return np.broadcast_shapes(*(np.shape(getattr(details, f.name)) for f in fields(details)))


def sheet_lines(found: LineValues) -> tuple[SheetLine, ...]:
    """Print the lines: formula, numbers put in, result."""
    return tuple(
        SheetLine(
            symbol=line.symbol,
            text=line.text,
            formula=line.formula,
            numbers=_numbers_put_in(line.formula, found.values),
            result=_result(found.values[line.symbol], line.unit),
            clause=line.clause,
        )
        for line in found.shown
    )


_SYMBOL = re.compile(r"[A-Za-z_][A-Za-z_0-9]*")


def _numbers_put_in(formula: str, values: dict[str, float]) -> str:
    return _SYMBOL.sub(
        lambda found: _number(values[found[0]]) if found[0] in values else found[0], formula
    )


def _number(value: float) -> str:
    """A number inside a formula, in N, mm, MPa: four significant digits, no loss of whole ones."""
    if not math.isfinite(value) or value == 0.0:
        return str(value).removesuffix(".0")
    if abs(value) >= 1e7:
        text = f"{value / 1e6:.5g}e6"
    elif abs(value) >= 1e4:
        text = f"{value:.0f}"
    elif abs(value) < 1e-2:
        text = f"{value * 1e3:.4g}e-3"
    else:
        text = f"{value:.4g}"
    return f"({text})" if value < 0.0 else text


def _result(value: float, unit: str) -> str:
    if not math.isfinite(value):
        return "not known" if math.isnan(value) else "infinite"
    match unit:
        case "N":
            return show(value, "force")
        case "N*mm":
            return show(value, "moment")
        case "mm":
            return show(value, "dimension", digits=4)
        case "mm2":
            return show(value, "area", digits=4)
        case "MPa":
            return show(value, "stress")
        case "deg":
            return f"{value:.2f} deg"
        case _:
            return f"{_number(value)} {unit}".strip()

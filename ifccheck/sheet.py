"""The sheet of one beam: its line-by-line calculation and diagrams, as plain data.

Made from the run, drawn by ``publish`` and printed by ``cli``.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from ifccheck.beam import (
    SELF,
    Bars,
    Beam,
    Case,
    Given,
    Load,
    Nature,
    Outline,
    RatedSpan,
    Stirrups,
)
from ifccheck.framed import FramedLine
from ifccheck.rating.batch import Batch
from ifccheck.rating.results import LimitStateRating, Rating
from ifccheck.rating.runs import outline_of
from ifccheck.rating.shares import Arising, Shares, arising
from ifccheck.rating.subject import Subject
from ifccheck.rating.support_reactions import CaseReaction as CaseReaction
from ifccheck.rating.support_reactions import reactions_of
from ifccheck.standards import CalculationLine
from ifccheck.units import show, show_ratio

Floats = npt.NDArray[np.float64]
Bools = npt.NDArray[np.bool_]

NOTHING_DEMANDED = "nothing demanded"
"""Outcome of a check that no combination asks anything of"""


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
class CaseShare:
    """The part that one case has in the demand at a place."""

    case: str
    nature: Nature
    factor: float
    """That the case takes in the combination; nan where it has no effect at the place"""
    moment: float
    """Unfactored [N*mm]"""
    shear: float
    """Unfactored [N]"""
    of_spans: int = 0
    """Spans of the line where the case acts span by span; 0 where it acts as a whole"""
    spans: tuple[int, ...] = ()
    """Those of them that it loads here, from 0"""
    lifting: tuple[int, ...] = ()
    """Those of them where reactions of beams that rest on it lift"""
    wheels: tuple[float, ...] = ()
    """Where its wheels stand, where it moves [mm]"""


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
    shares: tuple[CaseShare, ...] = ()
    """How moment and shear at the place arise, case by case"""


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
    spans: tuple[RatedSpan, ...]
    """Empty where nobody can say how it stands"""
    loads: tuple[Load, ...]
    """With self weight"""
    bars: tuple[Bars, ...]
    """The reinforcement that was rated"""
    stirrups: tuple[Stirrups, ...]
    section: Outline | None
    """The outline at the governing place"""
    section_x: float
    checks: tuple[SheetCheck, ...]
    diagrams: tuple[Diagram, ...]
    reactions: tuple[CaseReaction, ...] = ()
    bar_yield: tuple[Given, ...] = ()
    """The yield strength that each entry of ``bars`` was rated with, where it was rated"""
    stirrup_yield: tuple[Given, ...] = ()
    line: FramedLine | None = None
    """That the beam belongs to; None where the brief states how it stands"""


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
    """A value that does not differ from row to row may stand there once."""
    values = np.asarray(getattr(details, name)).reshape(-1)
    return float(values[row if values.size > 1 else 0])


def sheet_lines(found: LineValues) -> tuple[SheetLine, ...]:
    """Print the lines: formula, numbers put in, result."""
    return tuple(
        SheetLine(
            symbol=line.symbol,
            text=line.text,
            formula=_worded(line.formula),
            numbers=_worded(_numbers_put_in(line.formula, found.values)),
            result=_line_result(found.values[line.symbol], line.unit),
            clause=line.clause,
        )
        for line in found.shown
    )


_CHOICE = re.compile(r"where\(([^,]*), ([^,]*), ([^,()]*)\)")


def _worded(formula: str) -> str:
    """A choice as people read it: ``where(a > b, 0.5, 1)`` as ``(0.5 if a > b else 1)``."""
    return _CHOICE.sub(r"(\2 if \1 else \3)", formula)


_SYMBOL = re.compile(r"[A-Za-z_][A-Za-z_0-9]*")


def _numbers_put_in(formula: str, values: dict[str, float]) -> str:
    return _SYMBOL.sub(
        lambda found: _number(values[found[0]]) if found[0] in values else found[0], formula
    )


def _number(value: float) -> str:
    """A number inside a formula, in N, mm, MPa: four significant digits, no loss of whole ones."""
    if math.isinf(value):
        return "∞" if value > 0.0 else "(-∞)"
    if math.isnan(value) or value == 0.0:
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


def _line_result(value: float, unit: str) -> str:
    """A bound in some unit that is infinite binds nothing; a ratio that is, says so."""
    return "not applied" if unit and math.isinf(value) else _result(value, unit)


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


# From a rated batch to sheets ----------------------------------------------------------------


def sheet_maker(
    batch: Batch, ratings: Sequence[Rating], cases: Sequence[Case]
) -> Callable[[int], Sheet]:
    """Return a function that makes the sheet of a row of the batch.

    The details of every beam's governing places were worked out with the batch; what each case
    does there is worked out here.
    """
    details = [found.shown.details for found in batch.states]
    arisen = arising(batch, cases)

    def sheet(row: int) -> Sheet:
        subject, rating = batch.subjects[row], ratings[row]
        checks = tuple(
            _check(
                found.state.lines, details[index], row, rating.limit_states[index],
                _case_shares(arisen, arisen.shares[index], subject, row),
            )
            for index, found in enumerate(batch.states)
        )  # fmt: skip
        section_x = _section_x(batch, row, rating)
        return Sheet(
            beam=subject.beam,
            rating=rating,
            spans=subject.spans,
            loads=(*_self_weight(arisen, subject, row), *subject.loads),
            bars=subject.bars,
            stirrups=subject.stirrups,
            section=outline_of(subject.runs, section_x),
            section_x=section_x,
            checks=checks,
            diagrams=_diagrams(batch, row, rating),
            reactions=tuple(reactions_of(arisen, _acting(arisen, subject), subject, row)),
            bar_yield=subject.bar_yield,
            stirrup_yield=subject.stirrup_yield,
        )

    return sheet


def bare_sheet(beam: Beam, rating: Rating) -> Sheet:
    """Make the sheet of a beam of which nothing could be worked out."""
    section = beam.runs[0].outline if beam.runs else None
    return Sheet(beam, rating, (), (), (), (), section, 0.0, (), ())


def _acting(arisen: Arising, subject: Subject) -> Iterator[tuple[int, Case]]:
    """The cases that act on a beam, with their rows."""
    loaded = {SELF, *subject.acting}
    return ((k, case) for k, case in enumerate(arisen.cases) if case.name in loaded)


def _case_shares(
    arisen: Arising, shares: Shares, subject: Subject, row: int
) -> tuple[CaseShare, ...]:
    return tuple(
        CaseShare(
            case.name, case.nature, float(shares.factor[k, row]), float(shares.moment[k, row]),
            float(shares.shear[k, row]), *_acts(arisen, shares, subject, k, row),
        )
        for k, case in _acting(arisen, subject)
    )  # fmt: skip


def _acts(
    arisen: Arising, shares: Shares, subject: Subject, case: int, row: int
) -> tuple[int, tuple[int, ...], tuple[int, ...], tuple[float, ...]]:
    """On which spans a case acts, or where its wheels stand."""
    wheels = shares.wheels[case][row] if case in shares.wheels else ()
    if wheels:
        return 0, (), (), wheels
    return *_by_spans(shares.acting[case][:, row], arisen.places, subject), ()


def _by_spans(
    acting: Bools, places: int, subject: Subject
) -> tuple[int, tuple[int, ...], tuple[int, ...]]:
    """How many spans the line of a beam has, and which of them a case loads and lifts, of the
    parts of the case that act."""
    if acting.size == 1 or not (subject.continuity or any(load.apart for load in subject.loads)):
        return 0, (), ()
    pressing, lifting = (np.flatnonzero(part) for part in (acting[:places], acting[places:]))
    spans = subject.continuity.spans if subject.continuity else 1
    return spans, tuple(pressing.tolist()), tuple(lifting.tolist())


def _self_weight(arisen: Arising, subject: Subject, row: int) -> Iterator[Load]:
    """The weight of each stretch of one section, as the analysis took it."""
    table = arisen.self_weight
    weight = show(subject.unit_weight.value, "unit_weight").replace(".0 ", " ")
    for i in np.flatnonzero(arisen.beam_of[table.beam] == row).tolist():
        values = float(table.value_start[i]), float(table.value_end[i])
        both = dict.fromkeys(show(value, "line_load") for value in values)
        text = f"{' to '.join(both)} (self weight, {weight})"
        yield Load(
            subject.beam.key, SELF, "line", float(table.start[i]), float(table.end[i]), values,
            origin=f"outline; {subject.unit_weight.source}", text=text,
        )  # fmt: skip


def _check(
    lines: Sequence[CalculationLine],
    details: Any,
    row: int,
    found: LimitStateRating,
    shares: tuple[CaseShare, ...],
) -> SheetCheck:
    title, clause, utilisation = found.title, found.clause, found.utilisation
    if not found.combination:
        return SheetCheck(title, clause, "", (), utilisation, NOTHING_DEMANDED)
    place = f"at x = {show(found.position, 'length')}, {found.combination}"
    printed = sheet_lines(values_at(lines, details, row))
    return SheetCheck(title, clause, place, printed, utilisation, _outcome(found), shares)


def _outcome(found: LimitStateRating) -> str:
    if math.isnan(found.utilisation):
        return f"cannot be said: {found.why_not}"
    demand, resistance = (
        _result(value, found.demand_unit) for value in (found.demand, found.resistance)
    )
    return f"{show_ratio(found.utilisation)}: demand {demand}, resistance {resistance}"


def _section_x(batch: Batch, row: int, rating: Rating) -> float:
    place = rating.governing.position if rating.governing else math.nan
    span = batch.subjects[row].spans[0].span
    return place if math.isfinite(place) else (span.start + span.end) / 2.0


def _diagrams(batch: Batch, row: int, rating: Rating) -> tuple[Diagram, ...]:
    stations = slice(int(batch.first[row]), int(batch.first[row + 1]))
    envelope, x = batch.envelope, batch.stations.x[stations]
    resistance = {name: values[stations] for name, values in envelope.resistance.items()}
    inside = batch.prepared.inside[stations]
    nothing = np.full(x.size, np.nan)
    sagging = resistance.get("FlexureSagging", nothing)
    hogging = -resistance.get("FlexureHogging", nothing)
    shear = np.where(inside, resistance.get("Shear", nothing), np.nan)
    return (
        Diagram(
            "bending moment", "kN*m", x,
            envelope.moment_high[stations] / 1e6, envelope.moment_low[stations] / 1e6,
            sagging / 1e6, hogging / 1e6, _governing_x(rating, "Flexure"),
        ),
        Diagram(
            "shear force", "kN", x,
            envelope.shear_high[stations] / 1e3, envelope.shear_low[stations] / 1e3,
            shear / 1e3, -shear / 1e3, _governing_x(rating, "Shear"),
        ),
    )  # fmt: skip


def _governing_x(rating: Rating, name: str) -> float:
    """Place of the greatest utilisation among the limit states whose name starts so."""
    found = [s for s in rating.limit_states if s.name.startswith(name) and s.combination]
    return max(found, key=lambda s: s.utilisation).position if found else math.nan

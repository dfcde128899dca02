"""The sheet of one beam as static HTML, and the packing of many of them."""

from __future__ import annotations

import base64
import math
import zlib
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass
from functools import cache
from itertools import islice, zip_longest

from markupsafe import Markup

from ifccheck.beam import SELF, Bars, Beam, Given, Load, Stirrups
from ifccheck.publish.arising import (
    ShareRow,
    reaction_rows,
    share_rows,
    span_words,
    support_names,
    support_words,
)
from ifccheck.publish.drawings import diagram, section
from ifccheck.publish.elevation import bar_words, elevation, stirrup_words
from ifccheck.publish.framed_words import own_line_words
from ifccheck.publish.line_drawing import line_drawing
from ifccheck.publish.load_words import load_words
from ifccheck.publish.quantities import (
    measure_words,
    metres,
    number_and_unit,
    quantity_words,
    typographic,
)
from ifccheck.publish.report import Report
from ifccheck.publish.templates import template
from ifccheck.publish.tint import band
from ifccheck.publish.typeset import formula_html, numbers_html
from ifccheck.publish.words import (
    factor_words,
    falls_short,
    joined,
    section_words,
    utilisation_words,
    verdict_phrase,
)
from ifccheck.rating import BasisItem, LimitStateRating, SafeLoad
from ifccheck.sheet import NOTHING_DEMANDED, Sheet, SheetCheck, SheetLine

SHEETS_PER_BLOCK = 8
"""Neighbouring sheets share most of their markup: together they deflate to half."""
SEPARATOR = "\x1e"
"""Between the sheets of a block; no text that is shown can hold it."""


@dataclass(frozen=True, slots=True)
class Block:
    """Sheets deflated together, as base64."""

    number: int
    data: str


def sheet_html(sheet: Sheet, foot: str) -> str:
    """Return the sheet of a beam; ``foot`` is printed at the end of each sheet."""
    rating = sheet.rating
    length = sheet.beam.length or max((run.end for run in sheet.beam.runs), default=0.0)
    return template("sheet.html.j2").render(
        sheet=sheet,
        beam=sheet.beam,
        rating=rating,
        band=band(rating),
        phrase=verdict_phrase(rating),
        used="" if math.isnan(rating.utilisation) else utilisation_words(rating.utilisation),
        facts=_facts(sheet),
        elevation=Markup(elevation(sheet)),
        line=own_line_words(sheet.line, sheet.beam.key),
        line_drawing=Markup(line_drawing(sheet)),
        self_weight=any(load.case == SELF for load in sheet.loads) or not sheet.diagrams,
        diagrams=[Markup(diagram(drawn, length)) for drawn in sheet.diagrams],
        section=Markup(section(sheet)),
        doubts=[remark for remark in rating.remarks if remark.kind == "doubt"],
        remarks=[remark for remark in rating.remarks if remark.kind != "doubt"],
        states=[_state(state) for state in rating.limit_states],
        safe_loads=[_safe_load(safe) for safe in rating.safe_loads],
        checks=[_check(check) for check in sheet.checks if check.outcome != NOTHING_DEMANDED],
        idle=joined(check.title for check in sheet.checks if check.outcome == NOTHING_DEMANDED),
        loads=[_load(load) for load in sheet.loads],
        reactions=(reactions := reaction_rows(sheet.reactions)),
        supports=support_names(sheet),
        held=any(row.start_moment or row.end_moment for row in reactions),
        steel=_steel(sheet),
        basis=[_basis(item) for item in rating.basis],
        checked=joined(rating.checked),
        not_checked=joined(rating.not_checked),
        foot=foot,
    )


def packed(sheets: Iterable[str]) -> Iterator[Block]:
    """Yield the sheets in blocks, each deflated without a header."""
    waiting = iter(sheets)
    number = 0
    while group := list(islice(waiting, SHEETS_PER_BLOCK)):
        deflating = zlib.compressobj(9, zlib.DEFLATED, -zlib.MAX_WBITS)
        text = SEPARATOR.join(group).encode()
        data = base64.b64encode(deflating.compress(text) + deflating.flush())
        yield Block(number, data.decode("ascii"))
        number += 1


def foot_line(report: Report) -> str:
    """Return what identifies the run at the foot of every sheet."""
    return (
        f"{report.model.file_name} · {report.standard_name} · brief {report.brief_name} "
        f"{report.brief_sha256[:12]} · model {report.model.sha256[:12]} · ifccheck {report.version}"
    )


def _facts(sheet: Sheet) -> list[tuple[str, str]]:
    standing = [("span", span_words(sheet)), ("supports", support_words(sheet.spans))]
    return beam_facts(sheet.beam, standing)


def beam_facts(beam: Beam, more: Iterable[tuple[str, str]]) -> list[tuple[str, str]]:
    """Return what identifies a beam, with more before its GlobalId; nothing that is empty."""
    facts = [
        ("name", beam.name if beam.name != beam.mark else ""),
        ("tag", beam.tag if beam.tag != beam.mark else ""),
        ("type", beam.type_name),
        ("storey", beam.storey),
        ("section", section_words(beam)),
        ("material", beam.material),
        ("length", quantity_words(beam.length, "length") if beam.length else ""),
        *more,
        ("GlobalId", beam.key),
    ]
    return [(name, value) for name, value in facts if value]


@dataclass(frozen=True, slots=True)
class _State:
    title: str
    counted: bool
    over: bool
    used: str
    x: str
    demand: str
    resistance: str
    unit: str
    why: str


def _state(state: LimitStateRating) -> _State:
    why = state.why_not or "not known" if math.isnan(state.utilisation) else ""
    demand, unit = number_and_unit(state.demand, state.demand_unit)
    return _State(
        title=state.title,
        counted=state.counted,
        over=state.counted and falls_short(state.utilisation),
        used=utilisation_words(state.utilisation),
        x=metres(state.position),
        demand=demand,
        resistance=number_and_unit(state.resistance, state.demand_unit)[0],
        unit=unit,
        why=why,
    )


@dataclass(frozen=True, slots=True)
class _Safe:
    case: str
    factor: str
    text: str
    by: str


def _safe_load(safe: SafeLoad) -> _Safe:
    by = f"{safe.governing} at x = {metres(safe.position)} m" if safe.governing else ""
    return _Safe(safe.case, factor_words(safe.factor), safe.text, by)


@dataclass(frozen=True, slots=True)
class _Line:
    text: str
    symbol: Markup
    formula: Markup
    numbers: Markup
    value: Markup
    unit: str
    clause: str


@dataclass(frozen=True, slots=True)
class _Check:
    title: str
    place: str
    clause: str
    shares: list[ShareRow]
    lines: list[_Line]
    over: bool
    used: str
    outcome: str


def _check(check: SheetCheck) -> _Check:
    figure, _, rest = check.outcome.partition(": ")
    used = utilisation_words(check.utilisation)
    outcome = rest if figure == used else check.outcome
    return _Check(
        title=check.title,
        place=check.place,
        clause=check.clause,
        shares=share_rows(check.shares),
        lines=[_line(line) for line in check.lines],
        over=falls_short(check.utilisation),
        used=used,
        outcome=typographic(outcome),
    )


def _line(line: SheetLine) -> _Line:
    value, _, unit = line.result.partition(" ")
    return _Line(
        text=line.text,
        symbol=_set(line.symbol, formula_html),
        formula=_set(line.formula, formula_html),
        numbers=_set(line.numbers, numbers_html),
        value=_set(value, numbers_html),
        unit=typographic(unit),
        clause=line.clause,
    )


def _set(text: str, typeset: Callable[[str], str]) -> Markup:
    return Markup(typeset(text))


@dataclass(frozen=True, slots=True)
class _Load:
    case: str
    text: str
    start: str
    end: str
    face: str
    origin: str


def _load(load: Load) -> _Load:
    end = metres(load.end) if load.kind in ("line", "train") else ""
    face = "hung from the soffit" if load.face == "bottom" else "top"
    return _Load(load.case, load_words(load), metres(load.start), end, face, load.origin)


@dataclass(frozen=True, slots=True)
class SteelRow:
    """One line of a table of reinforcement."""

    name: str
    area: str
    height: str
    start: str
    end: str
    ends: str
    strength: str
    assumed: bool
    origin: str


def _steel(sheet: Sheet) -> list[SteelRow]:
    """The steel with the yield that it was rated with, else with the one that was read."""
    bars = zip_longest(sheet.bars, sheet.bar_yield[: len(sheet.bars)])
    stirrups = zip_longest(sheet.stirrups, sheet.stirrup_yield[: len(sheet.stirrups)])
    return [
        *(bar_row(each, rated or each.yield_strength) for each, rated in bars),
        *(stirrup_row(each, rated or each.yield_strength) for each, rated in stirrups),
    ]


def bar_row(bars: Bars, steel: Given | None) -> SteelRow:
    """Return bars with a yield strength as a line of a table."""
    return SteelRow(
        name=bar_words(bars),
        area=f"{bars.count * bars.area:.0f}",
        height=f"{bars.z:.0f}",
        start=metres(bars.start),
        end=metres(bars.end),
        ends=_ends(
            "goes on" if bars.start_beyond > 0.0 else str(bars.start_anchor),
            "goes on" if bars.end_beyond > 0.0 else str(bars.end_anchor),
        ),
        strength=_strength(steel),
        assumed=bool(steel and steel.assumed),
        origin=bars.origin if bars.place == "own" else f"slab, {bars.place}: {bars.origin}",
    )


def _strength(steel: Given | None) -> str:
    known = steel is not None and not math.isnan(steel.value)
    return f"{steel.value:.0f}" if steel and known else "not known"


@cache
def _ends(start: str, end: str) -> str:
    if start == end:
        return start
    return f"{start} – {end}"


def stirrup_row(stirrups: Stirrups, steel: Given | None) -> SteelRow:
    """Return stirrups with a yield strength as a line of a table."""
    legs = stirrups.legs
    return SteelRow(
        name=stirrup_words(stirrups),
        area="not known" if legs is None else f"{legs * stirrups.leg_area:.0f}",
        height="",
        start=metres(stirrups.start),
        end=metres(stirrups.end),
        ends="closed" if stirrups.closed else "open",
        strength=_strength(steel),
        assumed=bool(steel and steel.assumed),
        origin=stirrups.origin,
    )


@dataclass(frozen=True, slots=True)
class _Basis:
    label: str
    value: str
    unit: str | None
    source: str
    assumed: bool


def _basis(item: BasisItem) -> _Basis:
    value, unit = measure_words(item.value, item.measure)
    return _Basis(item.label, value, unit, item.source, item.assumed)

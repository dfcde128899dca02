"""The sheet of one beam on the terminal: the whole calculation, folded and never cut."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Sequence

from rich.console import Console, Group, RenderableType
from rich.table import Table
from rich.text import Text

from ifccheck.beam import Load
from ifccheck.publish.arising import (
    ShareRow,
    reaction_rows,
    share_rows,
    span_words,
    support_names,
    support_words,
)
from ifccheck.publish.framed_words import own_line_words
from ifccheck.publish.load_words import load_words
from ifccheck.publish.quantities import measure_words, metres
from ifccheck.publish.terminal_parts import CAUTION, SHORT, Cell, Terminal
from ifccheck.publish.words import (
    factor_words,
    falls_short,
    joined,
    section_words,
    utilisation_words,
    verdict_phrase,
)
from ifccheck.rating import Rating
from ifccheck.sheet import NOTHING_DEMANDED, Sheet, SheetCheck, SheetLine

WIDE = 120
"""From this width on a calculation stands in columns; below it, each line under its words."""


def sheet_text(sheet: Sheet, console: Console) -> RenderableType:
    """Return the calculation of one beam, line by line, for a terminal."""
    return Group(*_parts(sheet, Terminal(console)))


def _parts(sheet: Sheet, to: Terminal) -> Iterator[RenderableType]:
    rating = sheet.rating
    yield _head(sheet, to)
    yield from map(to.text, _facts(sheet))
    yield from (to.text(f"not rated: {reason.text}") for reason in rating.reasons)
    yield from _remarks(rating, to, doubts=True)
    yield from _tables(sheet, to)
    idle = [check.title for check in sheet.checks if check.outcome == NOTHING_DEMANDED]
    if idle:
        yield to.text(f"Nothing demanded in {joined(idle)}.")
    for check in sheet.checks:
        if check.outcome != NOTHING_DEMANDED:
            yield from _check(check, to)
    yield from _answers(rating, to)
    yield from _remarks(rating, to, doubts=False)
    yield to.text(f"Checked: {', '.join(rating.checked) or 'nothing'}.")
    yield to.text(f"Not checked: {', '.join(rating.not_checked) or 'nothing is named'}.")
    yield to.text(CAUTION)


def _head(sheet: Sheet, to: Terminal) -> Text:
    rating = sheet.rating
    head = to.text(sheet.beam.mark, style="bold")
    head.append_text(to.text(f"  {verdict_phrase(rating)}"))
    if not math.isnan(rating.utilisation):
        head.append(f"  utilisation {utilisation_words(rating.utilisation)}")
    return head


def _facts(sheet: Sheet) -> Iterator[str]:
    beam = sheet.beam
    yield " – ".join(filter(None, [beam.key, beam.storey, section_words(beam), beam.material]))
    if sheet.spans:
        yield f"span: {span_words(sheet)}"
        yield f"supports: {support_words(sheet.spans)}"
    if line := own_line_words(sheet.line, beam.key):
        yield line


def _remarks(rating: Rating, to: Terminal, *, doubts: bool) -> Iterator[Text]:
    for remark in rating.remarks:
        if (remark.kind == "doubt") is doubts:
            yield to.text(f"{remark.kind}: {remark.text}", style=SHORT if doubts else "")


def _tables(sheet: Sheet, to: Terminal) -> Iterator[Table]:
    """The loads and what the supports carry of each case."""
    if sheet.loads:
        yield to.table(
            ("case", "load, unfactored", ">from x [m]", ">to x [m]", "on", "given in"),
            map(_load, sheet.loads),
        )
    rows = reaction_rows(sheet.reactions)
    held = any(row.start_moment or row.end_moment for row in rows)
    names = ["reactions, unfactored", *(f">{each} [kN]" for each in support_names(sheet))]
    names += [">at the start [kN*m]", ">at the end [kN*m]"] if held else []
    if rows:
        words = [(r.case, *r.forces, r.start_moment, r.end_moment) for r in rows]
        yield to.table(names, [row[: len(names)] for row in words])


def _load(load: Load) -> Sequence[str]:
    end = metres(load.end) if load.kind in ("line", "train") else ""
    face = "soffit" if load.face == "bottom" else "top"
    return load.case, load_words(load), metres(load.start), end, face, load.origin


def _check(check: SheetCheck, to: Terminal) -> Iterator[RenderableType]:
    yield Text()
    yield to.text(f"{check.title} ({check.clause}) {check.place}", style="bold")
    if check.shares:
        yield to.table(
            ("arises from", "nature", ">M [kN*m]", ">V [kN]", ">factor", ">M factored",
             ">V factored"),
            [
                (_arising(row), row.nature, row.moment, row.shear, row.factor, row.factored_moment,
                 row.factored_shear)
                for row in share_rows(check.shares)
            ],
        )  # fmt: skip
    yield from _columns(check.lines, to) if to.width >= WIDE else _stacked(check.lines, to)
    short = falls_short(check.utilisation)
    yield to.text(f"utilisation {check.outcome}", style=SHORT if short else "")


def _arising(row: ShareRow) -> str:
    return f"{row.case}\n{row.acting}" if row.acting else row.case


def _columns(lines: Sequence[SheetLine], to: Terminal) -> Iterator[RenderableType]:
    yield to.table(
        ("", "symbol", "formula", "numbers", ">result", "clause"),
        [(li.text, li.symbol, li.formula, li.numbers, li.result, li.clause) for li in lines],
    )


def _stacked(lines: Sequence[SheetLine], to: Terminal) -> Iterator[RenderableType]:
    """Words and clause; under them the symbol with formula, numbers and result."""
    widest = max((len(line.symbol) for line in lines), default=0)
    for line in lines:
        words = to.text(line.text)
        words.append_text(to.text(f"  [{line.clause}]" if line.clause else "", style="dim"))
        yield words
        grid = Table.grid(padding=(0, 1))
        grid.add_column(justify="right", width=widest + 2)
        grid.add_column(width=1)
        grid.add_column(overflow="fold")
        for i, part in enumerate(filter(None, (line.formula, line.numbers, line.result))):
            grid.add_row(to.text("" if i else line.symbol), "=", to.text(part))
        yield grid


def _answers(rating: Rating, to: Terminal) -> Iterator[RenderableType]:
    """What the rated cases may grow to, and what the rating rests on."""
    if rating.safe_loads:
        yield to.table(
            ("rated case", ">factor", "largest safe load", "limited by", ">x [m]"),
            [
                (safe.case, factor_words(safe.factor), safe.text, safe.governing,
                 metres(safe.position))
                for safe in rating.safe_loads
            ],
        )  # fmt: skip
    if rating.basis:
        yield to.table(("rests on", ">value", "source"), _basis(rating))


def _basis(rating: Rating) -> Iterable[Sequence[Cell]]:
    for item in rating.basis:
        value, unit = measure_words(item.value, item.measure)
        source = f"assumed: {item.source}" if item.assumed else item.source
        yield item.label, f"{value} {unit or ''}".strip(), source

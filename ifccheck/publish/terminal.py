"""What is said on the terminal: the closing table, a sheet, a survey, the standards."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from rich.box import SIMPLE_HEAD
from rich.console import Console, Group, RenderableType
from rich.table import Table
from rich.text import Text

from ifccheck.beam import Beam, Model, Verdict
from ifccheck.publish.elevation import load_words
from ifccheck.publish.quantities import measure_words, quantity_words
from ifccheck.publish.report import Report, ratings_in_order
from ifccheck.publish.words import (
    covered_phrases,
    factor_words,
    falls_short,
    printable,
    section_words,
    utilisation_words,
    verdict_phrase,
)
from ifccheck.rating import Rating
from ifccheck.sheet import Sheet, SheetCheck

if TYPE_CHECKING:
    from ifccheck.standards import Standard

CAUTION = (
    "An aid for a licensed engineer: local codes and professional judgement govern; the results"
    " rest on the assumptions listed in the summary."
)
MOST_LISTED = 25
SHORT = "bold red"


def _text(words: str, style: str = "") -> Text:
    """Words of strangers: no control characters, and nothing in them is markup."""
    return Text(printable(words), style=style)


def _table(*columns: str, title: str = "") -> Table:
    """A plain table; a column whose name starts with ``>`` is set to the right."""
    table = Table(
        box=SIMPLE_HEAD, title=_text(title) if title else None, title_justify="left",
        title_style="bold", pad_edge=False,
    )  # fmt: skip
    for name in columns:
        right = name.startswith(">")
        table.add_column(Text(name.lstrip(">")), justify="right" if right else "left")
    return table


def closing_table(report: Report, console: Console, written: Iterable[Path] = ()) -> None:
    """Print how many beams have each verdict, which fall short, and where the files are."""
    console.print(_counts_line(report))
    for phrase, count in covered_phrases(report.ratings.values()):
        console.print(_text(f"{count} {phrase}; nothing else was checked"))
    for part in (_cases(report), _short_beams(report), _unrated(report)):
        if part is not None:
            console.print(part)
    console.print(_text(CAUTION))
    for path in written:
        console.print(_text(f"  {path}"), soft_wrap=True)


def _counts_line(report: Report) -> Text:
    counts = report.counts
    line = _text(f"{report.model.file_name}: ")
    short = f"{counts.falls_short} {'falls' if counts.falls_short == 1 else 'fall'} short"
    line.append(short, style=SHORT if counts.falls_short else "")
    return line.append(
        f", {counts.not_rated} not rated, {counts.adequate} adequate"
        f" of {counts.in_scope} in scope; {counts.out_of_scope} out of scope"
    )


def _cases(report: Report) -> Table | None:
    if not report.cases:
        return None
    table = _table("rated case", ">factor over the model", "governing beam", "limited by")
    for case in report.cases:
        governing = report.beam(case.governing_beam).mark if case.governing_beam else ""
        style = SHORT if case.factor < 1.0 else ""
        factor = Text(factor_words(case.factor), style=style)
        table.add_row(_text(case.case), factor, _text(governing), _text(case.text))
    return table


def _short_beams(report: Report) -> RenderableType | None:
    ordered = ratings_in_order(report.ratings.values())
    short = [rating for rating in ordered if rating.verdict is Verdict.FALLS_SHORT]
    if not short:
        return None
    table = _table("falls short", "storey", ">utilisation", "governs", ">x [m]", "clause")
    for rating in short[:MOST_LISTED]:
        table.add_row(*_short_row(rating, report.beam(rating.beam)))
    more = len(short) - MOST_LISTED
    return Group(table, Text(f"and {more} more in the summary")) if more > 0 else table


def _short_row(rating: Rating, beam: Beam) -> list[Text]:
    used = Text(utilisation_words(rating.utilisation), style=SHORT)
    worst = rating.governing
    if worst is None:
        return [_text(beam.mark), _text(beam.storey), used]
    place = _metres(worst.position)
    return [
        _text(beam.mark), _text(beam.storey), used, _text(worst.title), Text(place),
        _text(worst.clause),
    ]  # fmt: skip


def _unrated(report: Report) -> Table | None:
    reasons = Counter(
        reason.text for rating in report.ratings.values() for reason in rating.reasons
    )
    if not reasons:
        return None
    table = _table("not rated, because", ">beams")
    ordered = sorted(reasons.items(), key=lambda item: (-item[1], item[0]))
    for reason, count in ordered[:MOST_LISTED]:
        table.add_row(_text(reason), Text(str(count)))
    return table


def sheet_text(sheet: Sheet) -> RenderableType:
    """Return the calculation of one beam, line by line, for a terminal."""
    rating = sheet.rating
    head = _text(sheet.beam.mark, style="bold")
    head.append_text(_text(f"  {verdict_phrase(rating)}"))
    if not math.isnan(rating.utilisation):
        head.append(f"  utilisation {utilisation_words(rating.utilisation)}")
    parts: list[RenderableType] = [head, _text(_facts(sheet))]
    parts += [_text(f"  not rated: {reason.text}") for reason in rating.reasons]
    parts += [_text(f"  {load.case}: {load_words(load)}  {load.origin}") for load in sheet.loads]
    parts += map(_check, sheet.checks)
    parts += [part for part in (_safe_loads(rating), _basis(rating)) if part]
    parts += [_text(f"{remark.kind}: {remark.text}") for remark in rating.remarks]
    parts.append(_text(f"Checked: {', '.join(rating.checked) or 'nothing'}."))
    parts.append(_text(f"Not checked: {', '.join(rating.not_checked) or 'nothing is named'}."))
    parts.append(_text(CAUTION))
    return Group(*parts)


def _facts(sheet: Sheet) -> str:
    beam, span = sheet.beam, sheet.span
    facts = [beam.key, beam.storey, beam.material]
    if span:
        facts.append(f"span {quantity_words(span.end - span.start, 'length')}")
        facts.append(f"{span.start_support.kind} – {span.end_support.kind}")
    return " · ".join(filter(None, facts))


def _check(check: SheetCheck) -> Table:
    table = _table("", "symbol", "formula", "numbers", ">result", "clause", title=check.title)
    table.caption = _text(f"utilisation {check.outcome}")
    table.caption_justify = "left"
    table.caption_style = SHORT if falls_short(check.utilisation) else ""
    table.title = _text(f"{check.title} ({check.clause}) {check.place}")
    for line in check.lines:
        words = (line.text, line.symbol, line.formula, line.numbers, line.result, line.clause)
        table.add_row(*map(_text, words))
    return table


def _safe_loads(rating: Rating) -> Table | None:
    if not rating.safe_loads:
        return None
    table = _table("rated case", ">factor", "largest safe load", "limited by", ">x [m]")
    for safe in rating.safe_loads:
        words = (safe.case, factor_words(safe.factor), safe.text, safe.governing)
        table.add_row(*map(_text, words), Text(_metres(safe.position)))
    return table


def _basis(rating: Rating) -> Table | None:
    if not rating.basis:
        return None
    table = _table("rests on", ">value", "source")
    for item in rating.basis:
        value, unit = measure_words(item.value, item.measure)
        source = f"assumed: {item.source}" if item.assumed else item.source
        table.add_row(_text(item.label), _text(f"{value} {unit or ''}".strip()), _text(source))
    return table


def survey_table(model: Model, missing: Mapping[str, Sequence[str]]) -> RenderableType:
    """Return what a model holds and, by key of the beam, what a rating would lack."""
    table = _table(
        "storey", "section", "material", "concrete", "reinforcement", ">beams", "missing",
        title=f"{model.file_name} ({model.schema}): {len(model.beams)} beams in scope",
    )  # fmt: skip
    groups: dict[tuple[str, ...], list[Beam]] = {}
    for beam in model.beams:
        groups.setdefault(_survey_group(beam), []).append(beam)
    order = {storey.name: storey.elevation for storey in model.storeys}
    for group, beams in sorted(groups.items(), key=lambda g: (order.get(g[0][0], math.inf), g[0])):
        lacking = Counter(text for beam in beams for text in missing.get(beam.key, ()))
        told = "; ".join(_lacking(text, count, len(beams)) for text, count in lacking.items())
        table.add_row(*map(_text, group), Text(str(len(beams))), _text(told))
    return Group(table, *_survey_tail(model, missing))


def _survey_group(beam: Beam) -> tuple[str, ...]:
    strength = beam.concrete_strength
    return (
        beam.storey or "no storey",
        section_words(beam) or "not read",
        beam.material or "unknown",
        quantity_words(strength.value, "stress") if strength else "not stated",
        ", ".join(source.source for source in beam.reinforcement) or "none found",
    )


def _lacking(text: str, count: int, of: int) -> str:
    return text if count == of else f"{text} ({count} of {of})"


def _survey_tail(model: Model, missing: Mapping[str, Sequence[str]]) -> list[RenderableType]:
    ready = sum(1 for beam in model.beams if not missing.get(beam.key))
    tail: list[RenderableType] = [
        _text(f"{ready} of {len(model.beams)} beams lack nothing that the model or brief can give.")
    ]
    left_out = Counter(member.reason for member in model.out_of_scope)
    if left_out:
        told = ", ".join(f"{count} {reason}" for reason, count in sorted(left_out.items()))
        tail.append(_text(f"Out of scope: {told}."))
    tail += [_text(f"{remark.kind}: {remark.text}") for remark in model.remarks]
    return tail


def standards_table(standards: Iterable[tuple[str, Standard | str]]) -> RenderableType:
    """Return the standards that a brief can name, and what is wrong with one that fails."""
    table = _table("standard", "title", "edition", "actions", "shear methods", "checks")
    for name, standard in standards:
        if isinstance(standard, str):
            table.add_row(_text(name), _text(f"cannot be used: {standard}", style=SHORT))
            continue
        checks = ", ".join(state.title for state in standard.limit_states)
        methods = ", ".join(standard.shear_methods)
        words = (standard.id, standard.title, standard.edition, standard.actions, methods, checks)
        table.add_row(*map(_text, words))
    return table


def _metres(place: float) -> str:
    return f"{place / 1000.0:.2f}" if math.isfinite(place) else "–"

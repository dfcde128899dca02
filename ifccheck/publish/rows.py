"""The table of beams: one row of words for each, the worst first."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

from ifccheck.beam import Beam, Model
from ifccheck.publish.quantities import metres
from ifccheck.publish.report import Report, ratings_in_order
from ifccheck.publish.tint import band
from ifccheck.publish.words import (
    factor_words,
    section_words,
    utilisation_words,
    verdict_phrase,
)
from ifccheck.rating import Rating

GAUGE, GAUGE_END = 60, 1.25
"""Length of the bar of a utilisation [px], and the utilisation at its end."""


def storey_names(model: Model) -> list[str]:
    """Return the names of the storeys with beams, from the lowest up."""
    heights = {storey.name: storey.elevation for storey in model.storeys}
    names = {beam.storey for beam in model.beams}
    return sorted(names, key=lambda name: (heights.get(name, math.inf), name))


def governing_titles(report: Report) -> list[str]:
    """Return the titles of the limit states that govern some beam."""
    return sorted({r.governing.title for r in report.ratings.values() if r.governing})


@dataclass(frozen=True, slots=True)
class SafeCells:
    """What a rated case may grow to on one beam."""

    value: str
    factor: str
    text: str


@dataclass(frozen=True, slots=True)
class Row:
    """One line of the table of beams."""

    number: int
    key: str
    mark: str
    storey: str
    storey_index: int
    section: str
    span: str
    verdict: str
    phrase: str
    why: str
    doubt: str
    """The first remark that may undermine the verdict, and how many more there are"""
    band: str
    utilisation: str
    used: str
    gauge: str
    governs: str
    governs_index: str
    x: str
    safe: tuple[SafeCells, ...]


def table_rows(report: Report) -> list[Row]:
    """Return the rows of the table of beams, the worst first."""
    storeys = {name: i for i, name in enumerate(storey_names(report.model))}
    governing = {title: i for i, title in enumerate(governing_titles(report))}
    ordered = ratings_in_order(report.ratings[beam.key] for beam in report.model.beams)
    return [_row(i, rating, report, storeys, governing) for i, rating in enumerate(ordered)]


def _row(
    i: int,
    rating: Rating,
    report: Report,
    storeys: Mapping[str, int],
    governing: Mapping[str, int],
) -> Row:
    beam = report.beam(rating.beam)
    worst = rating.governing
    known = not math.isnan(rating.utilisation)
    return Row(
        number=i,
        key=beam.key,
        mark=beam.mark,
        storey=beam.storey,
        storey_index=storeys[beam.storey],
        section=section_words(beam),
        span=_span(beam, report),
        verdict=str(rating.verdict),
        phrase=verdict_phrase(rating),
        why=_first(reason.text for reason in rating.reasons),
        doubt=_first(remark.text for remark in rating.remarks if remark.kind == "doubt"),
        band=band(rating),
        utilisation=_sortable(rating.utilisation),
        used=utilisation_words(rating.utilisation),
        gauge=_gauge(rating.utilisation) if known else "",
        governs=worst.title if worst else "",
        governs_index=str(governing[worst.title]) if worst else "",
        x=metres(worst.position, "") if worst else "",
        safe=tuple(_safe(rating, case.case) for case in report.cases),
    )


def _span(beam: Beam, report: Report) -> str:
    return " + ".join(metres(each.length, "") for each in report.spans.get(beam.key, ()))


def _first(texts: Iterable[str]) -> str:
    first, *others = [*texts] or [""]
    return first + (f" (and {len(others)} more)" if others else "")


def _sortable(value: float) -> str:
    """A number for the script to sort by; empty for one that is not known."""
    if math.isnan(value):
        return ""
    return "Infinity" if math.isinf(value) else repr(value)


def _safe(rating: Rating, case: str) -> SafeCells:
    found = next((safe for safe in rating.safe_loads if safe.case == case), None)
    if found is None:
        return SafeCells("", "–", "")
    return SafeCells(_sortable(found.factor), factor_words(found.factor), found.text)


def _gauge(utilisation: float) -> str:
    """Class of a bar as long as the utilisation, which ends where the scale ends."""
    return f"w{math.ceil(min(utilisation, GAUGE_END) / GAUGE_END * GAUGE)}"

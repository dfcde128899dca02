"""What the rating of each beam rests on, with the source of every item."""

from __future__ import annotations

import math
from collections.abc import Sequence
from functools import cache, lru_cache

import numpy as np

from ifccheck.beam import Bars, Given, Stirrups, Support
from ifccheck.mechanics.arrays import Ints
from ifccheck.rating.batch import Batch
from ifccheck.rating.results import BasisItem, LimitStateRating
from ifccheck.rating.subject import Subject
from ifccheck.result_sets import Measure
from ifccheck.units import show


def bases_of(
    batch: Batch, governing: Sequence[LimitStateRating | None]
) -> list[tuple[BasisItem, ...]]:
    """Strengths, depths, areas, stirrups, span and supports of every beam of a batch."""
    sections = _sections(batch, governing)
    return [
        (*_strengths(subject), *_standing(subject), *_steel(subject), *at_section)
        for subject, at_section in zip(batch.subjects, sections, strict=True)
    ]


def _strengths(subject: Subject) -> list[BasisItem]:
    items = [
        _given("ConcreteStrength", "concrete strength", subject.concrete_strength, "pressure"),
        _given("AggregateSize", "largest aggregate", subject.aggregate_size, "length"),
        BasisItem(
            "ConcreteUnitWeight",
            "unit weight of the concrete",
            show(subject.unit_weight.value, "unit_weight"),
            "text",
            subject.unit_weight.source,
        ),
    ]
    if subject.density_factor.value != 1.0:
        items.append(
            _given(
                "DensityFactor", "factor for low-density concrete", subject.density_factor, "real"
            )
        )
    items += _yields("BarYield", "yield strength of the bars", subject.bar_yield)
    items += _yields("StirrupYield", "yield strength of the stirrups", subject.stirrup_yield)
    return items


@lru_cache(maxsize=1024)
def _given(name: str, label: str, given: Given, measure: Measure) -> BasisItem:
    return BasisItem(name, label, given.value, measure, given.source, given.assumed)


def _yields(name: str, label: str, given: Sequence[Given]) -> list[BasisItem]:
    distinct = sorted(dict.fromkeys(given), key=lambda g: g.value)
    if len(distinct) == 1:
        return [_given(name, label, distinct[0], "pressure")]
    return [
        _given(f"{name}{number}", label, each, "pressure")
        for number, each in enumerate(distinct, start=1)
    ]


def _standing(subject: Subject) -> list[BasisItem]:
    span = subject.span
    return [
        BasisItem("Span", "span", span.end - span.start, "length", subject.span_source),
        *([_statements(subject)] if subject.statements else []),
        _support("StartSupport", "support at the start", span.start_support),
        _support("EndSupport", "support at the end", span.end_support),
    ]


def _statements(subject: Subject) -> BasisItem:
    text = "; ".join(subject.statements)
    return BasisItem("Statements", "stated by the engineer", text, "text", "brief, [[beams]]")


@lru_cache(maxsize=1024)
def _support(name: str, label: str, support: Support) -> BasisItem:
    bearing = show(support.bearing, "dimension") if support.bearing else "no width given"
    text = support.kind if support.kind == "free" else f"{support.kind}, bearing: {bearing}"
    return BasisItem(name, label, text, "label", support.source)


def _steel(subject: Subject) -> list[BasisItem]:
    middle = _depth(subject) / 2.0
    lower = [bar for bar in subject.bars if bar.z < middle]
    upper = [bar for bar in subject.bars if bar.z >= middle]
    source = subject.reinforcement_source
    return [
        BasisItem("BottomBars", "bars in the lower half", _bars_text(lower), "text", source),
        BasisItem("TopBars", "bars in the upper half", _bars_text(upper), "text", source),
        BasisItem("Stirrups", "stirrups", _stirrups_text(subject), "text", source),
    ]


def _depth(subject: Subject) -> float:
    return max(z for _, z in subject.beam.runs[0].outline.rings[0])


def _bars_text(bars: Sequence[Bars]) -> str:
    texts = [
        f"{bar.count}-{bar.designation or show(bar.diameter, 'dimension')} at z = "
        f"{show(bar.z, 'dimension')}, x = {show(bar.start, 'length')} to {show(bar.end, 'length')}"
        for bar in sorted(bars, key=lambda bar: bar.z)
    ]
    return "; ".join(texts) or "none"


def _stirrups_text(subject: Subject) -> str:
    if not subject.stirrups_known:
        return "not stated"
    return "; ".join(_zone_text(zone) for zone in subject.stirrups) or "none"


def _zone_text(zone: Stirrups) -> str:
    legs = "legs not stated" if zone.legs is None else f"{zone.legs} legs"
    name = zone.designation or show(zone.diameter, "dimension")
    stretch = f"x = {show(zone.start, 'length')} to {show(zone.end, 'length')}"
    return f"{legs} {name} @ {show(zone.spacing, 'dimension')}, {stretch}"


def _sections(batch: Batch, governing: Sequence[LimitStateRating | None]) -> list[list[BasisItem]]:
    """The standard's own values at each beam's governing place, else at midspan."""
    stations = _basis_stations(batch, governing)
    places = [f"at x = {show(x, 'length')}" for x in batch.stations.x[stations].tolist()]
    items: list[list[BasisItem]] = [[] for _ in places]
    for name, values in batch.basis.items():
        label, measure = _words(name), _measure(name)
        for own, place, value in zip(items, places, values[stations].tolist(), strict=True):
            if math.isfinite(value):
                own.append(BasisItem(name, label, value, measure, place))
    return items


def _basis_stations(batch: Batch, governing: Sequence[LimitStateRating | None]) -> Ints:
    """Station of each beam that is nearest to the place of its basis (B)."""
    x, found = batch.stations.x, []
    for row, state in enumerate(governing):
        first, last = batch.first[row], batch.first[row + 1]
        place = state.position if state else math.nan
        target = place if math.isfinite(place) else (x[first] + x[last - 1]) / 2.0
        found.append(first + np.abs(x[first:last] - target).argmin())
    return np.array(found, np.intp)


@cache
def _words(name: str) -> str:
    """ "EffectiveDepthSagging" as "effective depth, sagging"."""
    words = "".join(f" {c.lower()}" if c.isupper() else c for c in name).split()
    if words[-1] in ("sagging", "hogging"):
        return f"{' '.join(words[:-1])}, {words[-1]}"
    return " ".join(words)


def _measure(name: str) -> str:
    if "Area" in name:
        return "area"
    if "Moment" in name:
        return "moment"
    return "force" if "Force" in name else "length"

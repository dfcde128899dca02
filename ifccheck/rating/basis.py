"""What the rating of each beam rests on, with the source of every item."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import replace
from functools import cache, lru_cache

import numpy as np

from ifccheck.beam import (
    Bars,
    Flange,
    FlangeWidth,
    Given,
    Opening,
    Outline,
    Run,
    Stirrups,
    Support,
)
from ifccheck.mechanics.arrays import Ints
from ifccheck.mechanics.outlines import bounds
from ifccheck.notation import bars_in_a_row
from ifccheck.rating.batch import Batch
from ifccheck.rating.elements import first_greatest
from ifccheck.rating.results import BasisItem, LimitStateRating
from ifccheck.rating.runs import outline_of
from ifccheck.rating.subject import Subject
from ifccheck.result_sets import Measure
from ifccheck.units import show


def bases_of(
    batch: Batch, governing: Sequence[LimitStateRating | None]
) -> list[tuple[BasisItem, ...]]:
    """Strengths, depths, areas, stirrups, span and supports of every beam of a batch."""
    sections = _sections(batch, governing)
    return [
        (*_materials(subject), *_standing(subject), *_steel(subject), *_body(subject), *at_section)
        for subject, at_section in zip(batch.subjects, sections, strict=True)
    ]


def _materials(subject: Subject) -> tuple[BasisItem, ...]:
    return _strengths(
        subject.concrete_strength,
        subject.aggregate_size,
        subject.unit_weight,
        subject.density_factor,
        subject.bar_yield,
        subject.stirrup_yield,
    )


@lru_cache(maxsize=4096)
def _strengths(
    strength: Given,
    aggregate: Given,
    unit_weight: Given,
    density_factor: Given,
    bar_yield: tuple[Given, ...],
    stirrup_yield: tuple[Given, ...],
) -> tuple[BasisItem, ...]:
    weight = show(unit_weight.value, "unit_weight")
    items = [
        _given("ConcreteStrength", "concrete strength", strength, "pressure"),
        _given("AggregateSize", "largest aggregate", aggregate, "length"),
        BasisItem(
            "ConcreteUnitWeight", "unit weight of the concrete", weight, "text", unit_weight.source
        ),
    ]
    if density_factor.value != 1.0:
        label = "factor for low-density concrete"
        items.append(_given("DensityFactor", label, density_factor, "real"))
    items += _yields("BarYield", "yield strength of the bars", bar_yield)
    items += _yields("StirrupYield", "yield strength of the stirrups", stirrup_yield)
    return tuple(items)


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
    spans, source = subject.spans, subject.span_source
    inner = [each.span.end_support for each in spans[:-1]]
    lengths = [BasisItem("Span", "span", spans[0].length, "length", source)]
    if inner:
        lengths = [
            BasisItem(f"Span{number}", f"span {number}", each.length, "length", source)
            for number, each in enumerate(spans, start=1)
        ]
    return [
        *lengths,
        *([_statements(subject)] if subject.statements else []),
        _support("StartSupport", "support at the start", spans[0].span.start_support),
        *(
            _support(f"InnerSupport{number}", f"inner support {number}", support)
            for number, support in enumerate(inner, start=1)
        ),
        _support("EndSupport", "support at the end", spans[-1].span.end_support),
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
    lower: list[Bars] = []
    upper: list[Bars] = []
    even = _even_middle(subject.beam.runs)
    for bar in subject.bars:
        if bar.place == "own":
            middle = _middle(subject, bar) if even is None else even
            (lower if bar.z < middle else upper).append(bar)
    source = subject.reinforcement_source
    return [
        BasisItem("BottomBars", "bars in the lower half", _bars_text(lower), "text", source),
        BasisItem("TopBars", "bars in the upper half", _bars_text(upper), "text", source),
        BasisItem("Stirrups", "stirrups", _stirrups_text(subject), "text", source),
    ]


def _body(subject: Subject) -> Iterator[BasisItem]:
    """What is rated beside the beam's own body, and what was taken off it."""
    if subject.body and subject.body.flanges:
        text = "; ".join(map(_flange_text, subject.body.flanges))
        source = f"model; {subject.body.flange_source}"
        yield BasisItem("Flange", "slab counted as a flange", text, "text", source)
        text = "; ".join(map(_width_text, subject.body.widths)) or "none"
        label = "overhangs of it that count in compression"
        yield BasisItem("FlangeOverhangs", label, text, "text", subject.body.width_source)
    if subject.slab_bars:
        yield _slab_bars(subject)
    if subject.beam.openings:
        text = "; ".join(map(_opening_text, subject.beam.openings))
        yield BasisItem("Openings", "openings taken off", text, "text", "model")


def _slab_bars(subject: Subject) -> BasisItem:
    """Bars of slabs within the flange, alike ones of both sides together."""
    alike: dict[tuple[object, ...], list[Bars]] = {}
    for bar in subject.slab_bars:
        ends = (round(bar.z), bar.start, bar.end, bar.place)
        alike.setdefault((bar.designation, bar.diameter, bar.area, *ends), []).append(bar)
    text = "; ".join(map(_slab_row, alike.values()))
    counts = subject.slab_bars_from
    text += ": counted where the top is in tension" if counts else ": not counted"
    within = subject.body.steel_source if subject.body else ""
    source = "; ".join(filter(None, ("model", counts, within)))
    return BasisItem("SlabBars", "slab bars within the flange", text, "text", source)


def _slab_row(bars: Sequence[Bars]) -> str:
    first, count = bars[0], sum(bar.count for bar in bars)
    layer = _layer_text(
        count, first.designation, first.diameter, first.z, first.z, first.start, first.end
    )
    name, _, where = layer.partition(" at ")
    near = "near the web" if first.place == "near web" else "farther out"
    return f"{name}, {show(count * first.area, 'area')} at {where}, {near}"


def _flange_text(flange: Flange) -> str:
    return f"{_box_text(flange)}: {flange.origin}"


def _width_text(width: FlangeWidth) -> str:
    return (
        f"x = {show(width.start, 'length')} to {show(width.end, 'length')}:"
        f" {show(width.left, 'dimension')} to the left of the web,"
        f" {show(width.right, 'dimension')} to the right"
    )


def _opening_text(opening: Opening) -> str:
    return f"{_box_text(opening)}: {opening.origin}"


def _box_text(box: Flange | Opening) -> str:
    return (
        f"x = {show(box.start, 'length')} to {show(box.end, 'length')},"
        f" y = {show(box.right, 'dimension')} to {show(box.left, 'dimension')},"
        f" z = {show(box.bottom, 'dimension')} to {show(box.top, 'dimension')}"
    )


def _middle(subject: Subject, bar: Bars) -> float:
    """Middle of the section's depth halfway along a bar [mm]."""
    return _middle_of(outline_of(subject.beam.runs, (bar.start + bar.end) / 2.0))


def _even_middle(runs: Sequence[Run]) -> float | None:
    """Middle of the depth of a beam of one section from end to end [mm]; of others None."""
    even = len(runs) == 1 and runs[0].outline_end is None
    return _middle_of(runs[0].outline) if even else None


@lru_cache(maxsize=4096)
def _middle_of(outline: Outline) -> float:
    _, _, soffit, top = bounds(outline.rings)
    return (soffit + top) / 2.0


def _bars_text(bars: Sequence[Bars]) -> str:
    if len(bars) == 1:
        return _row_text(bars)
    rows = sorted(bars_in_a_row(bars), key=lambda row: row[0].z)
    return "; ".join(map(_row_text, rows)) or "none"


def _row_text(row: Sequence[Bars]) -> str:
    first, last = row[0], row[-1]
    heights = [bar.z for bar in row]
    return _layer_text(
        first.count, first.designation, first.diameter, min(heights), max(heights), first.start,
        last.end,
    )  # fmt: skip


@lru_cache(maxsize=8192)
def _layer_text(
    count: int,
    designation: str,
    diameter: float,
    low: float,
    high: float,
    start: float,
    end: float,
) -> str:
    name = designation or show(diameter, "dimension")
    heights = " to ".join(dict.fromkeys(show(z, "dimension") for z in (low, high)))
    stretch = f"x = {show(start, 'length')} to {show(end, 'length')}"
    return f"{count}-{name} at z = {heights}, {stretch}"


def _stirrups_text(subject: Subject) -> str:
    if not subject.stirrups_known:
        return "not stated"
    texts = [
        _zone_text(z.legs, z.designation, z.diameter, z.spacing, z.start, z.end)
        for z in _in_a_row(subject.stirrups)
    ]
    return "; ".join(texts) or "none"


def _in_a_row(zones: Sequence[Stirrups]) -> list[Stirrups]:
    """Zones that go on alike made one, whatever the heights of their stirrups."""
    found: list[Stirrups] = []
    for zone in zones:
        before = found[-1] if found else None
        if before is not None and before.end == zone.start and _alike(before) == _alike(zone):
            found[-1] = replace(before, end=zone.end)
        else:
            found.append(zone)
    return found


def _alike(zone: Stirrups) -> tuple[object, ...]:
    return zone.legs, zone.designation, zone.diameter, zone.spacing


@lru_cache(maxsize=8192)
def _zone_text(
    legs: int | None, designation: str, diameter: float, spacing: float, start: float, end: float
) -> str:
    known = "legs not stated" if legs is None else f"{legs} legs"
    name = designation or show(diameter, "dimension")
    stretch = f"x = {show(start, 'length')} to {show(end, 'length')}"
    return f"{known} {name} @ {show(spacing, 'dimension')}, {stretch}"


def _sections(batch: Batch, governing: Sequence[LimitStateRating | None]) -> list[list[BasisItem]]:
    """The standard's own values at each beam's governing place, else at midspan."""
    stations = _basis_stations(batch, governing)
    places = [f"at x = {show(x, 'length')}" for x in batch.stations.x[stations].tolist()]
    items: list[list[BasisItem]] = [[] for _ in places]
    for name, values in batch.basis.items():
        label, measure = _words(name), _measure(name)
        known: dict[tuple[float, str], BasisItem] = {}
        for own, value, place in zip(items, values[stations].tolist(), places, strict=True):
            if math.isfinite(value):
                item = known.get((value, place))
                if item is None:
                    item = BasisItem(name, label, value, measure, place)
                    known[value, place] = item
                own.append(item)
    return items


def _basis_stations(batch: Batch, governing: Sequence[LimitStateRating | None]) -> Ints:
    """Station of each beam that is nearest to the place of its basis (B)."""
    x, first = batch.stations.x, batch.first[:-1]
    middle = (x[first] + x[batch.first[1:] - 1]) / 2.0
    place = np.array([math.nan if state is None else state.position for state in governing])
    target = np.where(np.isfinite(place), place, middle)
    distance = np.abs(x - np.repeat(target, np.diff(batch.first)))
    return first_greatest(-distance, first)[1]


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

"""From a rated batch to the answer for each beam."""

from __future__ import annotations

import math
from collections.abc import Sequence
from functools import cache

import numpy as np

from ifccheck.beam import Bars, Case, Face, Given, Reason, Remark, Stirrups, Support, Verdict
from ifccheck.mechanics.arrays import Bools
from ifccheck.rating import verdict
from ifccheck.rating.batch import Batch
from ifccheck.rating.results import BasisItem, LimitStateRating, Rating, SafeLoad
from ifccheck.rating.subject import Subject, Unrated
from ifccheck.result_sets import Measure
from ifccheck.standards import LimitState, Standard
from ifccheck.units import show


def ratings_of(batch: Batch, standard: Standard, cases: Sequence[Case]) -> list[Rating]:
    """The answer for every beam of a batch, in its order."""
    return [_rating(batch, row, standard, cases) for row in range(len(batch.subjects))]


def unrated(beam: Unrated, standard: Standard) -> Rating:
    """The answer for a beam of which no number can be worked out."""
    return Rating(
        beam=beam.beam.key,
        verdict=Verdict.NOT_RATED,
        utilisation=math.nan,
        governing=None,
        limit_states=(),
        safe_loads=(),
        reasons=beam.reasons,
        remarks=beam.remarks,
        basis=(),
        checked=(),
        not_checked=(*covered_by(standard.limit_states), *standard.not_checked),
    )


def covered_by(states: Sequence[LimitState]) -> tuple[str, ...]:
    """What a set of limit states covers, each word once: "flexure", "shear" ..."""
    return tuple(dict.fromkeys(state.covers for state in states))


def _rating(batch: Batch, row: int, standard: Standard, cases: Sequence[Case]) -> Rating:
    subject = batch.subjects[row]
    missing = _missing(subject)
    states = tuple(
        verdict.limit_state_rating(state, row, batch.places, missing) for state in batch.states
    )
    states = verdict.with_unknown_steel(states, _silent_faces(batch, row))
    reasons = (*subject.reasons, *verdict.incomplete_reasons(states))
    word = verdict.verdict_of(states, reasons)
    governing = verdict.governing_of(states)
    known = word is not Verdict.NOT_RATED and governing is not None
    return Rating(
        beam=subject.beam.key,
        verdict=word,
        utilisation=_utilisation(word, governing),
        governing=governing if known else None,
        limit_states=states,
        safe_loads=_safe_loads(batch, row, standard, cases, complete=not reasons),
        reasons=reasons if word is Verdict.NOT_RATED else (),
        remarks=(*subject.remarks, *_unsettled(subject, word, reasons), *_notes(batch, row)),
        basis=basis_of(batch, row, governing),
        checked=covered_by([s.state for s in batch.states]),
        not_checked=standard.not_checked,
    )


def _missing(subject: Subject) -> str:
    """The inputs that no one gives, for a limit state that needs one of them."""
    unstated = sorted({z.designation or "no size" for z in subject.stirrups if not z.legs})
    found = []
    if not subject.stirrups_known:
        found.append("no source says whether there are stirrups")
    if unstated:
        found.append(f"the legs of the stirrups are not stated ({', '.join(unstated)})")
    if math.isnan(subject.aggregate_size.value):
        found.append("the aggregate size is not given (defaults.aggregate_size)")
    return "; ".join(found) or "an input is not a number"


def _silent_faces(batch: Batch, row: int) -> tuple[Face, ...]:
    """Faces in tension of whose bars no source speaks."""
    stations = slice(batch.first[row], batch.first[row + 1])
    tensioned = {
        "bottom": bool(np.any(batch.envelope.moment_high[stations] > 0.0)),
        "top": bool(np.any(batch.envelope.moment_low[stations] < 0.0)),
    }
    return tuple(face for face in batch.subjects[row].silent if tensioned[face])


def _utilisation(word: Verdict, governing: LimitStateRating | None) -> float:
    if word is Verdict.NOT_RATED:
        return math.nan
    return governing.utilisation if governing else 0.0


def _unsettled(subject: Subject, word: Verdict, reasons: Sequence[Reason]) -> list[Remark]:
    """A beam that falls short anyway still tells what else could not be settled."""
    if word is Verdict.NOT_RATED:
        return []
    key = subject.beam.key
    return [Remark(key, "rating", f"also unsettled: {r.text}", "doubt") for r in reasons]


def _safe_loads(
    batch: Batch, row: int, standard: Standard, cases: Sequence[Case], *, complete: bool
) -> tuple[SafeLoad, ...]:
    found = []
    for case in cases:
        loads = [load for load in batch.subjects[row].loads if load.case == case.name]
        if case.rated and loads:
            found.append(
                verdict.safe_load(
                    case.name,
                    loads,
                    batch.factors[case.name],
                    row,
                    standard.limit_states,
                    batch.places,
                    complete,
                )
            )
    return tuple(found)


def _notes(batch: Batch, row: int) -> list[Remark]:
    """The standard's remarks on this beam, with the stretch that each holds for."""
    stations = slice(batch.first[row], batch.first[row + 1])
    remarks = []
    for note in batch.notes:
        mask = note.mask[stations] & _in_tension(batch, note.face, stations)
        places = batch.stations.x[stations][mask]
        if places.size:
            low, high = show(places.min(), "length"), show(places.max(), "length")
            stretch = f"at x = {low}" if low == high else f"between x = {low} and {high}"
            text = f"{note.text} ({note.clause}), {stretch}"
            remarks.append(Remark(batch.subjects[row].beam.key, "rating", text))
    return remarks


def _in_tension(batch: Batch, face: Face | None, stations: slice) -> Bools:
    if face is None:
        return np.ones(stations.stop - stations.start, dtype=np.bool_)
    envelope = batch.envelope
    if face == "bottom":
        return np.asarray(envelope.moment_high[stations] > 0.0)
    return np.asarray(envelope.moment_low[stations] < 0.0)


# What a rating rests on --------------------------------------------------------------------


def basis_of(batch: Batch, row: int, governing: LimitStateRating | None) -> tuple[BasisItem, ...]:
    """Strengths, depths, areas, stirrups, span and supports, each with its source."""
    subject = batch.subjects[row]
    return (
        *_strengths(subject),
        *_standing(subject),
        *_steel(subject),
        *_sections(batch, row, governing),
    )


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
        BasisItem("Span", "span", span.end - span.start, "length", "supports"),
        _support("StartSupport", "support at the start", span.start_support),
        _support("EndSupport", "support at the end", span.end_support),
    ]


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


def _sections(batch: Batch, row: int, governing: LimitStateRating | None) -> list[BasisItem]:
    """The standard's own values at the governing place, else at midspan."""
    station = _basis_station(batch, row, governing)
    place = f"at x = {show(batch.stations.x[station], 'length')}"
    items = []
    for name, values in batch.basis.items():
        value = float(values[station])
        if math.isfinite(value):
            label = _words(name)
            items.append(BasisItem(name, label, value, _measure(name), place))
    return items


def _basis_station(batch: Batch, row: int, governing: LimitStateRating | None) -> int:
    first, last = int(batch.first[row]), int(batch.first[row + 1])
    x = batch.stations.x[first:last]
    place = governing.position if governing else float("nan")
    target = place if math.isfinite(place) else (x[0] + x[-1]) / 2.0
    return first + int(np.abs(x - target).argmin())


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

"""From a rated batch to the answer for each beam."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from typing import NamedTuple

import numpy as np

from ifccheck.beam import Case, Face, Reason, Remark, Verdict
from ifccheck.mechanics.arrays import Bools
from ifccheck.rating import verdict
from ifccheck.rating.basis import bases_of
from ifccheck.rating.batch import Batch, Envelope
from ifccheck.rating.results import BasisItem, LimitStateRating, Rating, SafeLoad
from ifccheck.rating.short_bars import short_bar_remarks
from ifccheck.rating.subject import Subject, Unrated
from ifccheck.rating.uplift import growing_uplift_remarks, uplift_remarks
from ifccheck.standards import LimitState, Standard
from ifccheck.units import show


class _Findings(NamedTuple):
    """What was found of one beam before its verdict."""

    states: tuple[LimitStateRating, ...]
    governing: LimitStateRating | None
    notes: list[Remark]
    basis: tuple[BasisItem, ...]
    reasons: tuple[Reason, ...]
    """Why it may not be called adequate"""
    safe_loads: tuple[SafeLoad, ...]


def ratings_of(batch: Batch, standard: Standard, cases: Sequence[Case]) -> list[Rating]:
    """The answer for every beam of a batch, in its order."""
    states = _limit_states(batch)
    governing = [verdict.governing_of(each) for each in states]
    reasons = [
        (*subject.reasons, *verdict.incomplete_reasons(each))
        for subject, each in zip(batch.subjects, states, strict=True)
    ]
    found = map(
        _Findings,
        states,
        governing,
        _notes(batch, states),
        bases_of(batch, governing),
        reasons,
        _safe_loads(batch, standard, cases, [not each for each in reasons]),
    )
    covered = covered_by([s.state for s in batch.states]), standard.not_checked
    return [
        _rating(subject, each, covered) for subject, each in zip(batch.subjects, found, strict=True)
    ]


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


def _rating(
    subject: Subject, found: _Findings, covered: tuple[tuple[str, ...], tuple[str, ...]]
) -> Rating:
    word = verdict.verdict_of(found.states, found.reasons)
    return Rating(
        beam=subject.beam.key,
        verdict=word,
        utilisation=_utilisation(word, found.governing),
        governing=None if word is Verdict.NOT_RATED else found.governing,
        limit_states=found.states,
        safe_loads=found.safe_loads,
        reasons=found.reasons if word is Verdict.NOT_RATED else (),
        remarks=(*subject.remarks, *_unsettled(subject, word, found.reasons), *found.notes),
        basis=found.basis,
        checked=covered[0],
        not_checked=covered[1],
    )


def _limit_states(batch: Batch) -> list[tuple[LimitStateRating, ...]]:
    """What every limit state says of each beam."""

    def missing(row: int) -> str:
        return _missing(batch.subjects[row])

    columns = [verdict.limit_state_ratings(each, batch.places, missing) for each in batch.states]
    states = list(zip(*columns, strict=True))
    for row, subject in enumerate(batch.subjects):
        if subject.silent:
            states[row] = verdict.with_unknown_steel(states[row], _silent_faces(batch, row))
    return states


def unstated_stirrups(subject: Subject) -> list[str]:
    """Return what no one says of a beam's stirrups."""
    unstated = sorted({z.designation or "no size" for z in subject.stirrups if not z.legs})
    found = []
    if not subject.stirrups_known:
        found.append(_no_word_of_stirrups(subject))
    if unstated:
        found.append(f"the legs of the stirrups are not stated ({', '.join(unstated)})")
    return found


def _no_word_of_stirrups(subject: Subject) -> str:
    used = subject.reinforcement_source
    others = [
        each.source
        for each in subject.beam.reinforcement
        if each.source != used and each.speaks_of_stirrups
    ]
    if not others:
        return (
            "no source says whether there are stirrups: write them where the bars are written"
            ' (stirrups = "none" where there are none)'
        )
    telling = dict.fromkeys(_TELLING[each] for each in others)
    return (
        f"{_SILENT[used]} whether there are stirrups, as {' and '.join(telling)}: write them there"
        ' (stirrups = "none" where there are none), or put the source that tells of them first in'
        " reinforcement.sources of the brief"
    )


_SILENT: Mapping[str, str] = {
    "schedule": "the schedule is used, which does not say",
    "bars": "the modelled bars are used, which do not say",
    "sections": "the section definitions are used, which do not say",
    "properties": "the property sets are used, which do not say",
}
_TELLING: Mapping[str, str] = {
    "schedule": "the schedule does",
    "bars": "the modelled bars do",
    "sections": "the section definitions do",
    "properties": "the property sets do",
}
"""What is used and does not speak of stirrups, and what does"""


def _missing(subject: Subject) -> str:
    """The inputs that no one gives, for a limit state that needs one of them."""
    found = unstated_stirrups(subject)
    if math.isnan(subject.aggregate_size.value):
        found.append("the aggregate size is not given (defaults.aggregate_size)")
    return "; ".join(found) or "an input is not a number"


def _silent_faces(batch: Batch, row: int) -> tuple[Face, ...]:
    """Faces in tension of whose bars no source speaks."""
    stations = slice(batch.first[row], batch.first[row + 1])
    return tuple(
        face
        for face in batch.subjects[row].silent
        if np.any(_in_tension(batch.envelope, face)[stations])
    )


def _in_tension(envelope: Envelope, face: Face) -> Bools:
    """Where a face may be in tension (N)."""
    bottom = face == "bottom"
    return envelope.moment_high > 0.0 if bottom else envelope.moment_low < 0.0


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
    batch: Batch, standard: Standard, cases: Sequence[Case], complete: Sequence[bool]
) -> list[tuple[SafeLoad, ...]]:
    """What each rated case may grow to on every beam that it loads."""
    columns = []
    for case in (each.name for each in cases if each.rated):
        loads = [
            [load for load in s.loads if load.case == case] if case in s.acting else None
            for s in batch.subjects
        ]
        factors, states = batch.factors[case], standard.limit_states
        columns.append(verdict.safe_loads(case, loads, factors, states, batch.places, complete))
    found = zip(*columns, strict=True) if columns else ((),) * len(batch.subjects)
    return [tuple(safe for safe in own if safe is not None) for own in found]


def _notes(batch: Batch, states: Sequence[Sequence[LimitStateRating]]) -> list[list[Remark]]:
    """On each beam: bars that end short, supports that are lifted, and what the standard remarks
    of a stretch."""
    keys = [subject.beam.key for subject in batch.subjects]
    remarks = [
        list(short_bar_remarks(subject, of_beam))
        for subject, of_beam in zip(batch.subjects, states, strict=True)
    ]
    factors = {case: each.factor for case, each in batch.factors.items()}
    lifted = uplift_remarks(batch.uplift, keys, batch.places)
    for row, remark in (*lifted, *growing_uplift_remarks(batch.uplift, factors, keys)):
        remarks[row].append(remark)
    for note in batch.notes:
        mask = note.mask & _in_tension(batch.envelope, note.face) if note.face else note.mask
        for row, stretch in _stretches(batch, mask):
            text = f"{note.text} ({note.clause}), {stretch}"
            remarks[row].append(Remark(keys[row], "rating", text))
    return remarks


def _stretches(batch: Batch, mask: Bools) -> Iterator[tuple[int, str]]:
    """From where to where stations of the mask stand, of each beam that has some."""
    x, first = batch.stations.x, batch.first[:-1]
    low = np.minimum.reduceat(np.where(mask, x, math.inf), first)
    high = np.maximum.reduceat(np.where(mask, x, -math.inf), first)
    for row in np.flatnonzero(low <= high).tolist():
        yield row, _stretch(float(low[row]), float(high[row]))


def _stretch(start: float, end: float) -> str:
    low, high = show(start, "length"), show(end, "length")
    return f"at x = {low}" if low == high else f"between x = {low} and {high}"

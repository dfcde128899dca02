"""Rates a batch of beams at once: stations, demand, checks, rating factors, on arrays."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from ifccheck.analysis.arrangements import (
    GREATEST_MOMENT,
    GREATEST_SHEAR,
    LEAST_MOMENT,
    LEAST_SHEAR,
)
from ifccheck.analysis.stations import NOWHERE, Places, StationTable, join_places
from ifccheck.beam import Case, Combination
from ifccheck.mechanics.arrays import Bools, Demand, Floats, Ints
from ifccheck.rating import verdict
from ifccheck.rating.assembly import Frame, frame_of
from ifccheck.rating.between import exceeded_between, limited_between
from ifccheck.rating.factors import Factors, least_of, rating_factors
from ifccheck.rating.loaded import Loaded, loaded
from ifccheck.rating.subject import Subject
from ifccheck.rating.turning import Growth, with_turns
from ifccheck.rating.uplift import Uplift, uplift_of
from ifccheck.rating.utilisation import Found, Peaks, by_state, evaluate, worst_of
from ifccheck.rating.verdict import Evaluated
from ifccheck.standards import Note, Options, Standard

MOST_ROUNDS = 6
"""How often stations are added between others"""

BATCH = 700
"""Most beams that are rated together"""

LARGEST_BLOCK = 2**25 - 2**13
"""Bytes; beyond 32 MB glibc does not learn from a block"""


@dataclass(frozen=True, slots=True)
class Envelope:
    """Demand and resistance at every station (N), for the diagrams."""

    moment_high: Floats
    moment_low: Floats
    shear_high: Floats
    shear_low: Floats
    resistance: dict[str, Floats]
    """By limit state: the resistance that goes with its greatest utilisation"""


@dataclass(frozen=True, slots=True)
class Batch:
    """A batch of rated beams; beams are rows (B), stations are rows (N)."""

    subjects: tuple[Subject, ...]
    stations: StationTable
    span: Ints
    """Of each station, counted through all beams (N)"""
    first: Ints
    """First station of each beam, and the number of stations (B + 1)"""
    prepared: Any
    demand: Demand
    states: tuple[Evaluated, ...]
    factors: dict[str, Factors]
    """By rated case"""
    places: verdict.Places
    envelope: Envelope
    uplift: Uplift
    notes: tuple[Note, ...]
    basis: dict[str, Floats]
    between: Places
    """Places between stations at which beams may be used more, or limit a case further"""


def batches(
    subjects: Sequence[Subject],
    standard: Standard,
    options: Options,
    cases: Sequence[Case],
    combinations: Sequence[Combination],
) -> Iterator[Batch]:
    """Rate the subjects, a batch at a time. Beams that need more stations than others are rated
    again: they appear in a later batch once more, which holds."""
    keep_memory()
    for some in batches_of(subjects):
        batch = rate_frame(frame_of(some, cases), some, standard, options, cases, combinations)
        yield batch
        beams, more = _doubtful(batch)
        if beams.size:
            again = [some[beam] for beam in beams.tolist()]
            yield rate_batch(again, standard, options, cases, combinations, more)


def batches_of(subjects: Sequence[Subject]) -> Iterator[Sequence[Subject]]:
    """The subjects, in like parts: so many at a time that the cost of a call counts little, and
    so few that what comes of them stays near the processor."""
    parts = -(-len(subjects) // BATCH)
    for part in range(parts):
        yield subjects[len(subjects) * part // parts : len(subjects) * (part + 1) // parts]


def keep_memory() -> None:
    """Let the allocator keep the memory of one array for the next.

    Common allocators give large blocks back to the system at once, which then clears every
    page anew: a sixth of the time of a run. They stop doing so for blocks up to the size of
    the largest that they have seen freed; this one is never written to, and costs nothing.
    """
    np.empty(LARGEST_BLOCK, dtype=np.uint8)


def rate_batch(
    subjects: Sequence[Subject],
    standard: Standard,
    options: Options,
    cases: Sequence[Case],
    combinations: Sequence[Combination],
    more: Places = NOWHERE,
) -> Batch:
    """Rate beams together, with as many stations as it takes.

    Parameters
    ----------
    subjects
        At least one beam (B).
    cases
        All load cases, ``self`` among them.
    combinations
        Strength combinations, exclusions already worked out.
    more
        Places at which stations are wanted from the first.
    """
    frame = frame_of(subjects, cases)
    for _ in range(MOST_ROUNDS):
        batch = rate_frame(frame, subjects, standard, options, cases, combinations, more)
        if not batch.between.beam.size:
            break
        more = join_places(more, batch.between)
    return batch


def _doubtful(batch: Batch) -> tuple[Ints, Places]:
    """Beams that need more stations, and where, by their rows among themselves."""
    beams, row = np.unique(batch.between.beam, return_inverse=True)
    return beams, replace(batch.between, beam=row)


def rate_frame(
    frame: Frame,
    subjects: Sequence[Subject],
    standard: Standard,
    options: Options,
    cases: Sequence[Case],
    combinations: Sequence[Combination],
    more: Places = NOWHERE,
) -> Batch:
    """Rate beams of which the tables are made already: numbers alone."""
    (batch,) = rate_options(frame, subjects, standard, (options,), cases, combinations, more)
    return batch


def rate_options(
    frame: Frame,
    subjects: Sequence[Subject],
    standard: Standard,
    options: Sequence[Options],
    cases: Sequence[Case],
    combinations: Sequence[Combination],
    more: Places = NOWHERE,
) -> Iterator[Batch]:
    """Rate the same beams by several options of a standard, one after the other; what those do
    not touch is worked out once."""
    under = loaded(frame, standard, cases, combinations, more)
    prepared = standard.prepare(under.members, under.arrays, options[0])
    steady = _found(standard, prepared, under, steady=True)
    states = _states(standard, prepared, steady, under)
    factors = {
        row: with_turns(found, Growth(under, row, tuple(steady)), standard, options[0])
        for row, found in _factors(standard, steady, under).items()
    }
    where = verdict.Places(
        combinations=tuple(combinations),
        arrangements=under.effects.moment.shape[1],
        x=under.stations.x,
        natures=frame.natures,
    )
    for each in options:
        prepared = standard.with_options(prepared, each)
        found = _found(standard, prepared, under, steady=False)
        known = states | _states(standard, prepared, found, under)
        reached: dict[int, list[Floats]] = {row: [] for row in factors}
        lowered = _factors(standard, found, under, factors, reached)
        yield Batch(
            subjects=tuple(subjects),
            stations=under.stations,
            span=under.effects.cases.beam,
            first=under.stations.first_rows(len(subjects)),
            prepared=prepared,
            demand=under.acting.total,
            states=tuple(known[state.name] for state in standard.limit_states),
            factors={cases[row].name: least for row, least in lowered.items()},
            places=where,
            envelope=_envelope(under, by_state([*steady, *found])),
            uplift=uplift_of(under.effects, frame, {cases[row].name: row for row in lowered}),
            notes=standard.notes(prepared),
            basis=standard.basis(prepared),
            between=join_places(
                exceeded_between([*steady, *found], [each.worst for each in known.values()], under),
                limited_between(lowered, reached, [*steady, *found], under),
            ),
        )


def _found(standard: Standard, prepared: Any, under: Loaded, *, steady: bool) -> list[Found]:
    """The limit states that are steady, or not, at all elements."""
    found = [
        evaluate(quick, quick.basis(prepared), under.elements)
        for quick in standard.quick
        if quick.steady == steady
    ]
    if not under.disturbed.any():
        return found
    return [replace(one, peaks=_outside(one.peaks, under.disturbed)) for one in found]


def _outside(found: Sequence[Peaks], disturbed: Bools) -> tuple[Peaks, ...]:
    """The same, with nothing asked of sections at some stations (N)."""
    return tuple(
        replace(
            peaks,
            utilisation=np.where(disturbed, 0.0, peaks.utilisation),
            missing=peaks.missing & ~disturbed,
        )
        for peaks in found
    )


def _states(
    standard: Standard, prepared: Any, found: Sequence[Found], under: Loaded
) -> dict[str, Evaluated]:
    """Limit states, by name, where each beam's utilisation is the greatest."""
    peaks, demand, states = by_state(found), under.acting.total, {}
    for state in standard.limit_states:
        if state.name in peaks:
            worst = worst_of(peaks[state.name], under.elements)
            places = np.unravel_index(worst.shown, demand.moment.shape)
            check = state.check(prepared.take(places[-1]), demand.at(places))
            states[state.name] = Evaluated(state, worst, check)
    return states


def _factors(
    standard: Standard,
    found: Sequence[Found],
    under: Loaded,
    known: dict[int, Factors] | None = None,
    reached: dict[int, list[Floats]] | None = None,
) -> dict[int, Factors]:
    """Rating factors of each rated case by its row, none above those that are known; what is
    reached under them is noted in place."""
    factors = {}
    for row, share in zip(under.acting.scaled, under.elements.shares, strict=True):
        above = known[row] if known else None
        ceiling = above.factor if above else None
        seen = reached[row] if reached else None
        least = rating_factors(
            standard.limit_states, found, under.elements, share, under.stations.x, ceiling, seen
        )
        factors[row] = least_of(above, least) if above else least
    return factors


def _envelope(under: Loaded, peaks: dict[str, Peaks]) -> Envelope:
    """Extremes of demand, which are each an arrangement's own, and resistances, nan where
    nothing is asked of a section."""
    demand = under.acting.total
    return Envelope(
        demand.moment[:, GREATEST_MOMENT].max(axis=0),
        demand.moment[:, LEAST_MOMENT].min(axis=0),
        demand.shear[:, GREATEST_SHEAR].max(axis=0),
        demand.shear[:, LEAST_SHEAR].min(axis=0),
        {name: np.where(under.disturbed, np.nan, each.resistance) for name, each in peaks.items()},
    )

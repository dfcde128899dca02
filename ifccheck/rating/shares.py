"""How the demand at a governing place arises: each case's part, reactions and self weight."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.arrangements import ARRANGEMENTS, put_in
from ifccheck.analysis.combinations import factor_array
from ifccheck.analysis.effects import Effects, case_share, combine
from ifccheck.analysis.loads import LINE, LoadTable
from ifccheck.analysis.statics import CaseEffects
from ifccheck.beam import Case
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.assembly import Frame, frame_of
from ifccheck.rating.batch import Batch
from ifccheck.rating.loaded import effects_on, solved_frame


@dataclass(frozen=True, slots=True)
class Shares:
    """What each case (K) does at one place of each beam (B) in one combination."""

    factor: Floats
    """That the case takes in the combination; nan where it has no effect at the place (K, B)"""
    moment: Floats
    """Unfactored [N*mm] (K, B)"""
    shear: Floats
    """Unfactored [N] (K, B)"""
    acting: tuple[Bools, ...]
    """Of each case, which of its parts (P) act there (P, B)"""
    wheels: Mapping[int, tuple[tuple[float, ...], ...]]
    """Of each case that moves, by its row: where the wheels stand on each beam, in its own x [mm]
    (B); empty where the case does not act there"""


@dataclass(frozen=True, slots=True)
class Arising:
    """How the demands of a batch arise."""

    cases: tuple[Case, ...]
    shares: tuple[Shares, ...]
    """At the governing place of each limit state"""
    beam_of: Ints
    """Beam of each span (S)"""
    reactions: Floats
    """Unfactored, upward, at the start and the end of each span, of what stands still [N]
    (K, S, 2)"""
    end_moments: Floats
    """Unfactored, just inside the ends of each span, of what stands still [N*mm] (K, S, 2)"""
    moved: tuple[tuple[Floats, Floats], tuple[Floats, Floats]] | None
    """Greatest and least reaction, and greatest and least end moment, of what moves (K, S, 2); None
    where nothing does"""
    self_weight: LoadTable
    places: int
    """Spans of the longest line, and so parts of a case that acts span by span"""


def arising(batch: Batch, cases: Sequence[Case]) -> Arising:
    """Work out again what each case does where the limit states of a batch govern.

    Parameters
    ----------
    batch
        Rated beams (B).
    cases
        The cases (K) that they were rated for, in the same order.
    """
    frame = frame_of(batch.subjects, cases)
    stations = replace(batch.stations, beam=batch.span)
    effects = effects_on(frame, solved_frame(frame), stations)
    factors = factor_array(batch.places.combinations, cases)[:, frame.parts.case]
    return Arising(
        cases=tuple(cases),
        shares=tuple(
            _shares(effects, factors, batch.places.arrangements, found.worst.shown, frame)
            for found in batch.states
        ),
        beam_of=frame.beam_of,
        reactions=frame.parts.whole(effects.reactions),
        end_moments=frame.parts.whole(effects.end_moments),
        moved=_moved(frame),
        self_weight=frame.loads.take(np.flatnonzero(_weighs(frame))),
        places=frame.parts.places,
    )


def _weighs(frame: Frame) -> Bools:
    """Loads that are weight of the beam itself: reactions of the same case are point loads (L)."""
    weighs: Bools = (frame.loads.case == frame.self_case) & (frame.loads.kind == LINE)
    return weighs


def _moved(frame: Frame) -> tuple[tuple[Floats, Floats], tuple[Floats, Floats]] | None:
    if frame.runways is None:
        return None
    forces, moments = frame.runways.reactions(), frame.runways.end_moments(frame.spans)
    whole = frame.parts.whole
    return (whole(forces[0]), whole(forces[1])), (whole(moments[0]), whole(moments[1]))


def _shares(
    effects: CaseEffects, factors: Floats, arrangements: int, shown: Ints, frame: Frame
) -> Shares:
    parts = frame.parts
    shape = (len(factors), arrangements, effects.x.size)
    combination, arrangement, station = np.unravel_index(shown, shape)
    there = replace(
        effects,
        beam=effects.beam[station],
        x=effects.x[station],
        moment=effects.moment[:, station],
        shear=effects.shear[:, station],
        moving=None if effects.moving is None else effects.moving.take(station),
    )
    combined = combine(there, factors)
    at = (combination, arrangement, np.arange(shown.size))
    found = [_share(combined, parts.rows(case), at) for case in range(parts.first.size - 1)]
    factor, moment, shear, acting = zip(*found, strict=True)
    wheels = _wheels(there, arrangement, frame)
    return Shares(np.array(factor), np.array(moment), np.array(shear), acting, wheels)


def _wheels(
    there: CaseEffects, arrangement: Ints, frame: Frame
) -> dict[int, tuple[tuple[float, ...], ...]]:
    """Where the wheels of each moving case stand at one place of each beam."""
    moving, found = there.moving, {}
    if moving is None or frame.runways is None:
        return {}
    each = np.arange(arrangement.size)
    for row, part in enumerate(moving.case.tolist()):
        first = moving.places[:, arrangement, row, each]
        turned = moving.turned[arrangement, row, each]
        columns = there.beam.tolist(), first.T.tolist(), turned.tolist()
        found[int(frame.parts.case[part])] = tuple(
            frame.runways.wheels(part, *of_beam) for of_beam in zip(*columns, strict=True)
        )
    return found


def _share(
    combined: Effects, rows: Ints, at: tuple[Ints, ...]
) -> tuple[Floats, Floats, Floats, Bools]:
    """The factor of a case at each place, and its moment and shear unfactored: of those of its
    parts that act there, where any does; and which do.

    The factor is factored over unfactored effect, nan without any.
    """
    shares = np.array([[each[at] for each in case_share(combined, row)] for row in rows.tolist()])
    alone = _alone(combined.cases, rows, at[1])
    acts = np.any(shares != 0.0, axis=1, keepdims=True)
    if len(rows) > 1:
        alone = np.where(acts | ~acts.any(axis=0), alone, 0.0)
    moment, shear = alone.sum(axis=0)
    factored = shares.sum(axis=0)
    factor = np.where(moment != 0.0, _ratio(factored[0], moment), _ratio(factored[1], shear))
    return factor, moment, shear, acts[:, 0]


def _alone(cases: CaseEffects, rows: Ints, arrangement: Ints) -> Floats:
    """Moment and shear of some parts, unfactored, in the arrangement of each place (R, 2, B)."""
    if cases.moving is None:
        return np.stack([cases.moment[rows], cases.shear[rows]], axis=1)
    every = [
        np.stack(put_in(cases.moving, number, cases.moment, cases.shear), axis=1)[rows]
        for number in range(ARRANGEMENTS)
    ]
    return np.stack(every)[arrangement, :, :, np.arange(arrangement.size)].transpose(1, 2, 0)


def _ratio(factored: Floats, alone: Floats) -> Floats:
    there = alone != 0.0
    return np.where(there, factored / np.where(there, alone, 1.0), np.nan)

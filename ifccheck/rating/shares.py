"""How the demand at a governing place arises: each case's part, reactions and self weight."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.combinations import factor_array
from ifccheck.analysis.effects import Effects, case_share, combine
from ifccheck.analysis.loads import LINE, LoadTable
from ifccheck.analysis.parts import Parts
from ifccheck.analysis.statics import CaseEffects, effects_at
from ifccheck.beam import Case
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.assembly import Frame, frame_of
from ifccheck.rating.batch import Batch
from ifccheck.rating.loaded import solved_frame


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


@dataclass(frozen=True, slots=True)
class Arising:
    """How the demands of a batch arise."""

    cases: tuple[Case, ...]
    shares: tuple[Shares, ...]
    """At the governing place of each limit state"""
    beam_of: Ints
    """Beam of each span (S)"""
    reactions: Floats
    """Unfactored, upward, at the start and the end of each span [N] (K, S, 2)"""
    end_moments: Floats
    """Unfactored, just inside the ends of each span [N*mm] (K, S, 2)"""
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
    effects = effects_at(solved_frame(frame), stations, deflections=False)
    factors = factor_array(batch.places.combinations, cases)[:, frame.parts.case]
    return Arising(
        cases=tuple(cases),
        shares=tuple(
            _shares(effects, factors, batch.places.arrangements, found.worst.shown, frame.parts)
            for found in batch.states
        ),
        beam_of=frame.beam_of,
        reactions=frame.parts.whole(effects.reactions),
        end_moments=frame.parts.whole(effects.end_moments),
        self_weight=frame.loads.take(np.flatnonzero(_weighs(frame))),
        places=frame.parts.places,
    )


def _weighs(frame: Frame) -> Bools:
    """Loads that are weight of the beam itself: reactions of the same case are point loads (L)."""
    weighs: Bools = (frame.loads.case == frame.self_case) & (frame.loads.kind == LINE)
    return weighs


def _shares(
    effects: CaseEffects, factors: Floats, arrangements: int, shown: Ints, parts: Parts
) -> Shares:
    shape = (len(factors), arrangements, effects.x.size)
    combination, arrangement, station = np.unravel_index(shown, shape)
    there = replace(
        effects,
        beam=effects.beam[station],
        x=effects.x[station],
        moment=effects.moment[:, station],
        shear=effects.shear[:, station],
    )
    combined = combine(there, factors)
    at = (combination, arrangement, np.arange(shown.size))
    found = [_share(combined, parts.rows(case), at) for case in range(parts.first.size - 1)]
    factor, moment, shear, acting = zip(*found, strict=True)
    return Shares(np.array(factor), np.array(moment), np.array(shear), acting)


def _share(
    combined: Effects, rows: Ints, at: tuple[Ints, ...]
) -> tuple[Floats, Floats, Floats, Bools]:
    """The factor of a case at each place, and its moment and shear unfactored: of those of its
    parts that act there, where any does; and which do.

    The factor is factored over unfactored effect, nan without any.
    """
    shares = np.array([[each[at] for each in case_share(combined, row)] for row in rows.tolist()])
    alone = np.stack([combined.cases.moment[rows], combined.cases.shear[rows]], axis=1)
    acts = np.any(shares != 0.0, axis=1, keepdims=True)
    if len(rows) > 1:
        alone = np.where(acts | ~acts.any(axis=0), alone, 0.0)
    moment, shear = alone.sum(axis=0)
    factored = shares.sum(axis=0)
    factor = np.where(moment != 0.0, _ratio(factored[0], moment), _ratio(factored[1], shear))
    return factor, moment, shear, acts[:, 0]


def _ratio(factored: Floats, alone: Floats) -> Floats:
    there = alone != 0.0
    return np.where(there, factored / np.where(there, alone, 1.0), np.nan)

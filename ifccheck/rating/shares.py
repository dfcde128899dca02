"""How the demand at a governing place arises: each case's part, reactions and self weight."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.combinations import factor_array
from ifccheck.analysis.effects import Effects, case_share, combine
from ifccheck.analysis.loads import LoadTable
from ifccheck.analysis.statics import CaseEffects, effects_at
from ifccheck.beam import SELF, Case
from ifccheck.mechanics.arrays import Floats, Ints
from ifccheck.rating.assembly import frame_of
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


@dataclass(frozen=True, slots=True)
class Arising:
    """How the demands of a batch arise."""

    cases: tuple[Case, ...]
    shares: tuple[Shares, ...]
    """At the governing place of each limit state"""
    reactions: Floats
    """Unfactored, upward, at the start and the end of each span [N] (K, B, 2)"""
    end_moments: Floats
    """Unfactored, just inside the ends of each span [N*mm] (K, B, 2)"""
    self_weight: LoadTable


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
    effects = effects_at(solved_frame(frame, len(cases)), batch.stations, deflections=False)
    factors = factor_array(batch.places.combinations, cases)
    weight = [row for row, case in enumerate(cases) if case.name == SELF]
    return Arising(
        cases=tuple(cases),
        shares=tuple(
            _shares(effects, factors, batch.places.arrangements, found.worst.shown)
            for found in batch.states
        ),
        reactions=effects.reactions,
        end_moments=effects.end_moments,
        self_weight=frame.loads.take(np.flatnonzero(np.isin(frame.loads.case, weight))),
    )


def _shares(effects: CaseEffects, factors: Floats, arrangements: int, shown: Ints) -> Shares:
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
    factor = [_factor(combined, case, at) for case in range(len(there.moment))]
    return Shares(np.array(factor), there.moment, there.shear)


def _factor(combined: Effects, case: int, at: tuple[Ints, ...]) -> Floats:
    """The factor of a case at each place: factored over unfactored effect, nan without any."""
    moment, shear = (share[at] for share in case_share(combined, case))
    alone = combined.cases.moment[case], combined.cases.shear[case]
    return np.where(alone[0] != 0.0, _ratio(moment, alone[0]), _ratio(shear, alone[1]))


def _ratio(factored: Floats, alone: Floats) -> Floats:
    there = alone != 0.0
    return np.where(there, factored / np.where(there, alone, 1.0), np.nan)

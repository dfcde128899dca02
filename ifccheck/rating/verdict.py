"""The verdict of each beam from its limit states, and the words that go with it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import lru_cache

from ifccheck.beam import Combination, Face, Load, Nature, Reason, Verdict
from ifccheck.mechanics.arrays import Floats
from ifccheck.rating.factors import Factors
from ifccheck.rating.results import LimitStateRating, SafeLoad
from ifccheck.rating.utilisation import Worst
from ifccheck.standards import Check, LimitState
from ifccheck.units import show, show_ratio

_UNKNOWN_CASE = "cannot be said: the beam is not rated"


@dataclass(frozen=True, slots=True)
class Evaluated:
    """One limit state on all beams of a batch."""

    state: LimitState
    worst: Worst
    shown: Check
    """The whole check where a rating tells of it (B)"""


@dataclass(frozen=True, slots=True)
class Places:
    """What an element (arrangement, station) of a batch stands for."""

    combinations: tuple[Combination, ...]
    arrangements: int
    """Arrangements of each combination"""
    x: Floats
    """Stations (N)"""
    natures: tuple[frozenset[Nature], ...]
    """Natures of the loads on each beam (B)"""

    def combination(self, element: int, beam: int) -> str:
        """Name of the combination of an element, without what does not act on its beam."""
        return self.combination_of(element // self.x.size // self.arrangements, beam)

    def combination_of(self, row: int, beam: int) -> str:
        """Name of a combination by its row, without what does not act on a beam."""
        return _label(self.combinations[row], self.natures[beam])

    def position(self, element: int) -> float:
        """x of an element [mm]."""
        return float(self.x[element % self.x.size])


@lru_cache(maxsize=4096)
def _label(combination: Combination, natures: frozenset[Nature]) -> str:
    return combination.label(natures)


def limit_state_ratings(
    found: Evaluated, places: Places, missing: Sequence[str]
) -> list[LimitStateRating]:
    """What one limit state says of every beam of the batch, in its order.

    A nan at any station makes the whole limit state nan, unless another station exceeds 1;
    outside no clause's range it comes from what is ``missing`` of that beam.
    """
    worst, state, check = found.worst, found.state, found.shown
    rows = zip(
        worst.utilisation.tolist(),
        (worst.incomplete & (worst.utilisation <= 1.0)).tolist(),
        worst.shown.tolist(),
        check.demand.tolist(),
        check.resistance.tolist(),
        strict=True,
    )
    return [
        LimitStateRating(
            name=state.name,
            title=state.title,
            covers=state.covers,
            utilisation=math.nan if incomplete else utilisation,
            position=places.position(element) if demanded else math.nan,
            combination=places.combination(element, beam) if demanded else "",
            demand=demand if demanded else 0.0,
            resistance=resistance if demanded else math.nan,
            demand_unit=state.demand_unit,
            clause=state.clause,
            counted=True,
            why_not=(_outside(check, beam) or missing[beam]) if incomplete else "",
        )
        for beam, (utilisation, incomplete, element, demand, resistance) in enumerate(rows)
        for demanded in [incomplete or utilisation > 0.0]
    ]


def _outside(check: Check, beam: int) -> str | None:
    for outside in check.outside:
        if outside.mask[beam]:
            return f"outside {outside.clause}: {outside.text}"
    return None


def with_unknown_steel(
    states: Sequence[LimitStateRating], silent: Sequence[Face]
) -> tuple[LimitStateRating, ...]:
    """What is demanded of no steel at all is not known where a tensioned face's bars are not."""
    if not silent:
        return tuple(states)
    why = f"the bars of the {' and of the '.join(silent)} are not stated"
    return tuple(
        replace(state, utilisation=math.nan, why_not=why)
        if math.isinf(state.utilisation)
        else state
        for state in states
    )


def governing_of(states: Sequence[LimitStateRating]) -> LimitStateRating | None:
    """The counted limit state of greatest utilisation, of those that have one."""
    known = [s for s in states if s.counted and s.utilisation > 0.0]
    return max(known, key=lambda s: s.utilisation, default=None)


def verdict_of(states: Sequence[LimitStateRating], reasons: Sequence[Reason]) -> Verdict:
    """Falls short before not rated before adequate; a nan is never dropped."""
    counted = [s for s in states if s.counted]
    if any(s.utilisation > 1.0 for s in counted):
        return Verdict.FALLS_SHORT
    if reasons or not counted or any(math.isnan(s.utilisation) for s in counted):
        return Verdict.NOT_RATED
    return Verdict.ADEQUATE


def incomplete_reasons(states: Sequence[LimitStateRating]) -> tuple[Reason, ...]:
    """Reasons from the limit states that could not be worked out, each text once."""
    texts = dict.fromkeys(
        s.why_not if s.why_not.startswith("outside") else f"{s.title}: {s.why_not}"
        for s in states
        if s.counted and math.isnan(s.utilisation)
    )
    return tuple(Reason(text, blocking=False) for text in texts)


def safe_load(
    case: str,
    loads: Sequence[Load],
    factors: Factors,
    beam: int,
    states: Sequence[LimitState],
    places: Places,
    complete: bool,
) -> SafeLoad:
    """What a rated case may grow to on one beam; ``complete`` is False where it is not rated."""
    assigned = "; ".join(load.text for load in loads)
    if not complete:
        return SafeLoad(case, math.nan, assigned, math.nan, "", _UNKNOWN_CASE, "", math.nan, "")
    factor, row = float(factors.factor[beam]), int(factors.state[beam])
    element = int(factors.element[beam])
    kind, value = _single(loads)
    return SafeLoad(
        case=case,
        factor=factor,
        assigned=assigned,
        single_value=factor * value if math.isfinite(factor) else math.nan,
        single_kind=kind,
        text=_safe_load_text(factor, kind, value, loads),
        governing=states[row].title if row >= 0 else "",
        position=float(factors.x[beam]),
        combination=places.combination(element, beam) if row >= 0 else "",
    )


def _single(loads: Sequence[Load]) -> tuple[str, float]:
    """Kind and value of a case that is one point or one even line on this beam."""
    if len(loads) != 1 or loads[0].kind == "moment" or loads[0].values[0] == 0.0:
        return "", math.nan
    load = loads[0]
    if load.kind == "line" and load.values[0] != load.values[1]:
        return "", math.nan
    return load.kind, load.values[0]


def _safe_load_text(factor: float, kind: str, value: float, loads: Sequence[Load]) -> str:
    if math.isinf(factor):
        return "not limited"
    if factor == 0.0:
        return "none: the other loads alone exceed the resistance"
    if kind == "point":
        place = show(loads[0].start, "length")
        return f"{show(factor * value, 'force', rounding='down')} at {place}"
    if kind == "line":
        return show(factor * value, "line_load", rounding="down")
    text = f"{show_ratio(factor)} x assigned"
    if len(loads) != 1 or loads[0].kind != "line":
        return text
    return f"{text}: {' to '.join(_toward_zero(factor * end) for end in loads[0].values)}"


def _toward_zero(intensity: float) -> str:
    return show(intensity, "line_load", rounding="down" if intensity >= 0.0 else "up")

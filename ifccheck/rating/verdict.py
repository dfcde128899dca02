"""The verdict of each beam from its limit states, and the words that go with it."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import repeat
from operator import attrgetter

import numpy as np

from ifccheck.beam import Combination, Face, Load, Nature, Reason, Verdict
from ifccheck.mechanics.arrays import Floats, Ints
from ifccheck.rating.factors import Factors
from ifccheck.rating.results import LimitStateRating, SafeLoad
from ifccheck.rating.utilisation import Worst
from ifccheck.standards import Check, LimitState
from ifccheck.units import show, show_ratio

_used = attrgetter("utilisation")
_UNKNOWN_CASE = "cannot be said: an input or a check of the beam is not settled"


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

    def combinations_at(self, elements: Ints) -> list[str]:
        """Name of the combination of an element of each beam, without what does not act (B)."""
        rows = (elements // self.x.size // self.arrangements).tolist()
        places = list(zip(rows, self.natures, strict=True))
        names = {place: self.combinations[place[0]].label(place[1]) for place in set(places)}
        return [names[place] for place in places]

    def combination_of(self, row: int, beam: int) -> str:
        """Name of a combination by its row, without what does not act on a beam."""
        return self.combinations[row].label(self.natures[beam])

    def positions(self, elements: Ints) -> Floats:
        """x of elements [mm]."""
        return np.asarray(self.x[elements % self.x.size])


def limit_state_ratings(
    found: Evaluated, places: Places, missing: Callable[[int], str]
) -> list[LimitStateRating]:
    """What one limit state says of every beam of the batch, in its order.

    A nan at any station makes the whole limit state nan, unless another station exceeds 1;
    outside no clause's range it comes from what is ``missing`` of that beam.
    """
    worst, state, check = found.worst, found.state, found.shown
    incomplete = worst.incomplete & (worst.utilisation <= 1.0)
    demanded = incomplete | (worst.utilisation > 0.0)
    why_not = [""] * incomplete.size
    for beam in np.flatnonzero(incomplete).tolist():
        why_not[beam] = _outside(check, beam) or missing(beam)
    named = zip(places.combinations_at(worst.shown), demanded.tolist(), strict=True)
    return list(
        map(
            LimitStateRating,
            repeat(state.name),
            repeat(state.title),
            repeat(state.covers),
            np.where(incomplete, math.nan, worst.utilisation).tolist(),
            np.where(demanded, places.positions(worst.shown), math.nan).tolist(),
            [name if is_demanded else "" for name, is_demanded in named],
            np.where(demanded, check.demand, 0.0).tolist(),
            np.where(demanded, check.resistance, math.nan).tolist(),
            repeat(state.demand_unit),
            repeat(state.clause),
            repeat(True),  # counted
            why_not,
        )
    )


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
        state._replace(utilisation=math.nan, why_not=why)
        if math.isinf(state.utilisation)
        else state
        for state in states
    )


def governing_of(states: Sequence[LimitStateRating]) -> LimitStateRating | None:
    """The counted limit state of greatest utilisation, of those that have one."""
    known = [s for s in states if s.counted and s.utilisation > 0.0]
    return max(known, key=_used, default=None)


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
        [
            s.why_not if s.why_not.startswith("outside") else f"{s.title}: {s.why_not}"
            for s in states
            if s.counted and math.isnan(s.utilisation)
        ]
    )
    return tuple(Reason(text, blocking=False) for text in texts)


def safe_loads(
    case: str,
    loads: Sequence[Sequence[Load] | None],
    factors: Factors,
    states: Sequence[LimitState],
    places: Places,
    complete: Sequence[bool],
) -> list[SafeLoad | None]:
    """What a rated case may grow to on each beam (B); None where it does not act.

    ``loads`` are its own on each beam, empty where it acts through the line alone, and None where
    it does not act.
    ``complete`` is False where something of the beam is not settled, whatever its verdict.
    """
    columns = (factors.factor, factors.state, factors.x)
    rows = zip(
        loads,
        complete,
        *(column.tolist() for column in columns),
        places.combinations_at(factors.element),
        strict=True,
    )
    titles = [*(state.title for state in states), ""]  # the last where none limits it
    return [
        _safe_load(case, own, factor, titles[state], position, combination if state >= 0 else "")
        if own is not None and whole
        else _unknown(case, _assigned(own))
        if own is not None
        else None
        for own, whole, factor, state, position, combination in rows
    ]


def _assigned(loads: Sequence[Load]) -> str:
    return "; ".join([load.text for load in loads]) or "on beams that it goes on into"


def not_known(safe: SafeLoad) -> SafeLoad:
    """The same, of a beam of which something turned out not to be settled."""
    return _unknown(safe.case, safe.assigned)


def _unknown(case: str, assigned: str) -> SafeLoad:
    """Of a beam of which something is not settled."""
    return SafeLoad(case, math.nan, assigned, math.nan, "", _UNKNOWN_CASE, "", math.nan, "")


def _safe_load(
    case: str, loads: Sequence[Load], factor: float, title: str, position: float, combination: str
) -> SafeLoad:
    kind, value = _single(loads)
    return SafeLoad(
        case=case,
        factor=factor,
        assigned=_assigned(loads),
        single_value=factor * value if math.isfinite(factor) else math.nan,
        single_kind=kind,
        text=_safe_load_text(factor, kind, value, loads),
        governing=title,
        position=position,
        combination=combination,
    )


def _single(loads: Sequence[Load]) -> tuple[str, float]:
    """Kind and value of a case that is one point or one even line on this beam."""
    if len(loads) != 1 or loads[0].kind in ("moment", "train") or loads[0].values[0] == 0.0:
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
    if len(loads) == 1 and loads[0].kind == "train":
        return f"{math.floor(factor * 100.0) / 100.0:.2f} x {loads[0].text}"
    if len(loads) != 1 or loads[0].kind != "line":
        return text
    return f"{text}: {' to '.join(_toward_zero(factor * end) for end in loads[0].values)}"


def _toward_zero(intensity: float) -> str:
    return show(intensity, "line_load", rounding="down" if intensity >= 0.0 else "up")

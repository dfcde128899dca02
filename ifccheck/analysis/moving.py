"""Loads that move along lines: greatest and least effects from influence lines.

Every place of a train where an effect can be greatest or least is looked at, so that the extremes
are exact, each with what acts at the same time.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.arrangements import ARRANGEMENTS, MovingEffects
from ifccheck.analysis.influence import Influence, line_influence, of_reactions, of_stations
from ifccheck.analysis.line_table import LineTable
from ifccheck.analysis.spans import SpanTable
from ifccheck.analysis.statics import NEGLIGIBLE
from ifccheck.analysis.stations import SAME_PLACE, StationTable, starts
from ifccheck.analysis.stiffness import Curvature
from ifccheck.analysis.trains import Standing, Train, Way, stand
from ifccheck.mechanics.arrays import Bools, Floats, Ints

STATIONS_AT_ONCE = 256
"""Stations that are worked out together, which bounds memory"""

_TIE = 1e-9
"""Part of the greatest effect by which two places of a train may differ and be alike"""


@dataclass(frozen=True, slots=True)
class MovingCase:
    """A case of one train, or of two, on one line."""

    case: int
    """Row of the case among the effects"""
    line: int
    """Row of the line, which may have a single span"""
    trains: tuple[Train, ...]
    """One, or two in their order along the line: they cannot pass each other. Each may also be
    there alone"""
    start: float
    """Where the way of the trains begins, from the left end of the line [mm]"""
    end: float
    stays: bool = True
    """Stops keep all wheels between start and end; else wheels beyond them are elsewhere"""
    turns: bool = True
    """Trains run turned round, too, with their order"""
    approach: float = 0.0
    """Least distance between the last wheel of the first train and the first of the second [mm]"""
    dynamic: float = 1.0
    """Factor on all forces"""


@dataclass(frozen=True, slots=True)
class MovingReactions:
    """Greatest and least upward reaction of each support under moving cases [N] (G, J); 0 on all
    lines but their own."""

    case: Ints
    greatest: Floats
    least: Floats


def moving_effects(
    spans: SpanTable,
    lines: LineTable,
    moving: Sequence[MovingCase],
    stations: StationTable,
    curvature: Curvature | None = None,
) -> MovingEffects | None:
    """Greatest and least moment and shear at every station, with what goes with each.

    Parameters
    ----------
    spans, lines, curvature
        As for ``lines.continuous``.
    moving
        Cases that move; a case may be on several lines, on each once.
    stations
        Stations of all spans (N); those of other lines stay at 0.

    Returns
    -------
    MovingEffects
        For ``CaseEffects.moving``; None where nothing moves. Effects below 1e-6 of the greatest
        on the same span are 0.

    Raises
    ------
    ValueError
        Where a way does not lie on its line or has no room for a train, where forces are not
        downward, or where a case is twice on a line.

    References
    ----------
    First principles: superposition of influence lines.
    """
    if not moving:
        return None
    _require_ways(spans, lines, moving)
    case = np.unique([each.case for each in moving]).astype(np.intp, copy=False)
    shape = ARRANGEMENTS, len(case), len(stations.x)
    effects, places = np.zeros((2, *shape)), np.full((2, *shape), np.nan)
    turned = np.zeros(shape, np.bool_)
    for each in moving:
        rows = np.flatnonzero(np.isin(stations.beam, lines.span[lines.line == each.line]))
        if not rows.size:
            continue
        line = line_influence(spans, lines, each.line, curvature)
        here = StationTable(stations.beam[rows], stations.x[rows], stations.side[rows])
        found = _envelope(of_stations(line, here), each)
        row = int(np.searchsorted(case, each.case))
        effects[:, :, row, rows] = _without_noise(found.effects, here.beam)
        places[:, :, row, rows], turned[:, row, rows] = found.places, found.turned
    return MovingEffects(case, effects[0], effects[1], places, turned)


def moving_reactions(
    spans: SpanTable,
    lines: LineTable,
    moving: Sequence[MovingCase],
    curvature: Curvature | None = None,
) -> MovingReactions:
    """Greatest and least reaction of every support; parameters as for ``moving_effects``."""
    _require_ways(spans, lines, moving)
    case = np.unique([each.case for each in moving]).astype(np.intp, copy=False)
    greatest, least = np.zeros((2, len(case), lines.nodes))
    for each in moving:
        influence = of_reactions(line_influence(spans, lines, each.line, curvature))
        effects = _envelope(influence, each).effects
        first = lines.first_nodes[each.line]
        row = int(np.searchsorted(case, each.case))
        nodes = slice(first, first + effects.shape[-1])
        greatest[row, nodes], least[row, nodes] = effects[0, 0], effects[0, 1]
    return MovingReactions(case, greatest, least)


def _require_ways(spans: SpanTable, lines: LineTable, moving: Sequence[MovingCase]) -> None:
    seen = set()
    for each in moving:
        if (each.case, each.line) in seen:
            raise ValueError(f"moving case {each.case} is twice on line {each.line}")
        seen.add((each.case, each.line))
        length = float(spans.length[lines.span[lines.line == each.line]].sum())
        if not -SAME_PLACE <= each.start < each.end <= length + SAME_PLACE:
            raise ValueError(f"the way of moving case {each.case} does not lie on its line")
        if len(each.trains) not in (1, 2) or each.approach < 0.0:
            raise ValueError(f"moving case {each.case} needs one train, or two that keep apart")
        for train in each.trains:
            apart = np.diff(train.places, prepend=0.0)
            if not (len(apart) and (train.forces > 0.0).all() and (apart >= 0.0).all()):
                raise ValueError(
                    f"moving case {each.case} has a train whose wheels do not press downwards "
                    "one behind the other"
                )
            if each.stays and train.length > each.end - each.start:
                raise ValueError(f"a train of moving case {each.case} is longer than its way")


@dataclass(frozen=True, slots=True)
class _Found:
    """Trains at several places (..., C), or where they make the extremes (..., 4, T)."""

    effects: Floats
    """(E, ...); nan where the trains may not stand so"""
    places: Floats
    """Of the first wheel of the train on the left and of that on the right [mm] (2, ...); nan
    where it is not there"""
    turned: Bools
    """(...)"""


def _envelope(influence: Influence, moving: MovingCase) -> _Found:
    """Extremes of the first effect and of the last, with the other one (2, 4, T).

    Along the second axis: the arrangements; of a single effect the first two alone have meaning.
    """
    parts = []
    for first in range(0, len(influence.edges), STATIONS_AT_ONCE):
        some = influence.take(slice(first, first + STATIONS_AT_ONCE))
        found = [one for order in _orders(moving) for one in _standings(some, moving, *order)]
        parts.append(_extremes(_joined(found)))
    return _joined(parts)


def _joined(parts: Sequence[_Found]) -> _Found:
    return _Found(
        *(
            np.concatenate([getattr(part, name) for part in parts], axis=-1)
            for name in _Found.__slots__
        )
    )


def _orders(moving: MovingCase) -> list[tuple[tuple[Train, ...], bool]]:
    """The trains in their order along the line, and turned round."""
    given = tuple(train.times(moving.dynamic) for train in moving.trains)
    if not moving.turns:
        return [(given, False)]
    return [(given, False), (tuple(train.turned() for train in reversed(given)), True)]


def _standings(
    influence: Influence, moving: MovingCase, trains: tuple[Train, ...], turned: bool
) -> Iterator[_Found]:
    """Candidates for the extremes: each train alone, then both."""
    way = Way(moving.start, moving.end, moving.stays)
    each = [stand(influence, train, way) for train in trains]
    for number, one in enumerate(each):
        nowhere = np.full_like(one.place, np.nan)
        places = (one.place, nowhere) if number == 0 else (nowhere, one.place)
        yield _found(one.effects, one.counts, *places, turned)
    if len(trains) == 2:
        nearest = trains[0].before(trains[1], moving.approach)
        apart = trains[0].length + moving.approach
        if not moving.stays or nearest.length <= moving.end - moving.start:
            close = stand(influence, nearest, way)
            yield _found(close.effects, close.counts, close.place, close.place + apart, turned)
            yield from _apart(each[0], each[1], apart, turned)


def _found(effects: Floats, counts: Bools, left: Floats, right: Floats, turned: bool) -> _Found:
    return _Found(
        np.where(counts, effects, np.nan), np.stack([left, right]), np.full(left.shape, turned)
    )


def _apart(first: Standing, second: Standing, apart: float, turned: bool) -> Iterator[_Found]:
    """The best pairs of places of two trains, the second at least so far ahead.

    For each extreme and each place of the first train the second stands where it adds most.
    """
    order = np.argsort(second.place, axis=1)
    place = np.take_along_axis(second.place, order, axis=1)
    counts = np.take_along_axis(second.counts, order, axis=1)
    adds = np.take_along_axis(second.effects, order[None], axis=2)
    nearest = _first_beyond(place, first.place + apart)
    room = (nearest < place.shape[1]) & first.counts
    for effect in adds:
        for sign in (1.0, -1.0):
            best = _best_from(np.where(counts, effect * sign, -np.inf))
            at = np.take_along_axis(best, np.minimum(nearest, place.shape[1] - 1), axis=1)
            together = first.effects + np.take_along_axis(adds, at[None], axis=2)
            held = room & np.take_along_axis(counts, at, axis=1)
            right = np.take_along_axis(place, at, axis=1)
            yield _found(together, held, first.place, right, turned)


def _first_beyond(places: Floats, aims: Floats) -> Ints:
    """Index of the first of the sorted places (T, C) at or beyond each aim (T, D)."""
    joined = np.concatenate([aims, places], axis=1)
    order = np.argsort(joined, axis=1, kind="stable")
    is_place = order >= aims.shape[1]
    before = np.cumsum(is_place, axis=1) - is_place
    found = np.empty(joined.shape, np.intp)
    np.put_along_axis(found, order, before, axis=1)
    return found[:, : aims.shape[1]]


def _best_from(values: Floats) -> Ints:
    """Index of the greatest of the values (T, C) at or after each."""
    back = values[:, ::-1]
    most = np.maximum.accumulate(back, axis=1)
    new = np.ones(back.shape, np.bool_)
    new[:, 1:] = back[:, 1:] > most[:, :-1]
    index = np.maximum.accumulate(np.where(new, np.arange(back.shape[1]), 0), axis=1)
    return np.asarray(back.shape[1] - 1 - index[:, ::-1])


def _extremes(every: _Found) -> _Found:
    """Greatest and least of the first and of the last effect, with what goes with each.

    Of places that are alike the one with the greatest other effect counts.
    """
    first, last = every.effects[0], every.effects[-1]
    effects = np.empty((2, ARRANGEMENTS, len(first)))
    places, turned = np.empty_like(effects), np.empty(effects.shape[1:], np.bool_)
    for arrangement in range(ARRANGEMENTS):
        own, other = (first, last) if arrangement < 2 else (last, first)
        sign = -1.0 if arrangement % 2 else 1.0
        best = np.nanmax(own * sign, axis=1)
        slack = _TIE * np.nanmax(np.abs(own), axis=1)
        alike = own * sign >= (best - slack)[:, None]
        at = np.where(alike, np.abs(other), -1.0).argmax(axis=1)
        here = np.arange(len(at)), at
        pair = [best * sign, other[here]]
        effects[:, arrangement] = pair if arrangement < 2 else pair[::-1]
        places[:, arrangement] = every.places[:, *here]
        turned[arrangement] = every.turned[here]
    return _Found(effects, places, turned)


def _without_noise(extremes: Floats, beam: Ints) -> Floats:
    """The extremes (2, 4, T) with zero where they are negligible beside the greatest on their
    span."""
    first = starts(beam)
    size = np.abs(extremes)
    peak = np.maximum.reduceat(size, first, axis=-1).max(axis=1, keepdims=True)
    each = np.repeat(np.arange(len(first)), np.diff(first, append=len(beam)))
    return np.where(size <= NEGLIGIBLE * peak[..., each], 0.0, extremes)

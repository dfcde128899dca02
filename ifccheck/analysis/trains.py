"""Trains of wheels, and every place of one where what it does may be greatest or least."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.influence import CUBIC, Influence
from ifccheck.analysis.stations import SAME_PLACE
from ifccheck.mechanics.arrays import Bools, Floats

BOTH_SIDES = 10.0 * SAME_PLACE
"""How far a train is taken beyond the ends of its way, so that a wheel which stands there is seen
on both sides of it [mm]"""


@dataclass(frozen=True, slots=True)
class Train:
    """Wheels at fixed distances."""

    places: Floats
    """Of the wheels, from the first, not decreasing [mm] (W)"""
    forces: Floats
    """Downward [N] (W)"""

    @property
    def length(self) -> float:
        """From the first wheel to the last [mm]."""
        return float(self.places[-1])

    def turned(self) -> Train:
        """The same, with its last wheel first."""
        return Train(self.length - self.places[::-1], self.forces[::-1])

    def times(self, factor: float) -> Train:
        """The same with all forces multiplied."""
        return Train(self.places, self.forces * factor)

    def before(self, other: Train, gap: float) -> Train:
        """Both as one, the other's first wheel ahead of the last by a gap [mm]."""
        ahead = other.places + self.length + gap
        return Train(
            np.concatenate([self.places, ahead]), np.concatenate([self.forces, other.forces])
        )


@dataclass(frozen=True, slots=True)
class Way:
    """Where a train runs along a line."""

    start: float
    """[mm] from the left end of the line"""
    end: float
    stays: bool
    """Stops keep all its wheels between start and end; else wheels beyond them are elsewhere"""

    def first_wheel(self, train: Train) -> tuple[float, float]:
        """Between which places its first wheel runs [mm]."""
        if self.stays:
            return self.start, self.end - train.length
        return self.start - train.length, self.end


@dataclass(frozen=True, slots=True)
class Standing:
    """A train at each of several places (C) of its first wheel, for every target (T)."""

    place: Floats
    """[mm] along the line (T, C)"""
    effects: Floats
    """(E, T, C)"""
    counts: Bools
    """Whether the train may stand so (T, C)"""


def stand(influence: Influence, train: Train, way: Way) -> Standing:
    """A train wherever an effect of it may be greatest or least.

    Its effect is a sum of cubics wherever no wheel passes the target, a support, or an end of its
    way. Each such stretch has its two ends, seen from inside, and the places where the slope of
    an effect is nothing.

    Parameters
    ----------
    influence
        Of several targets (T).
    train, way
        The train, which must have room on its way.
    """
    first, last = way.first_wheel(train)
    breaks = _breaks(influence, train, way, first - BOTH_SIDES, last + BOTH_SIDES)
    low, width = breaks[:, :-1], np.diff(breaks, axis=1)
    values = _values(influence, train, way, low, width)
    cubic = values @ CUBIC.T
    turns = np.concatenate([_turning(one) for one in cubic], axis=-1)
    powers = turns[..., None] ** np.arange(4)
    inner = np.einsum("etik,tijk->etij", cubic, powers)
    place = np.concatenate(
        [low[..., None], (low + width)[..., None], low[..., None] + turns * width[..., None]],
        axis=-1,
    )
    effects = np.concatenate([values[..., [0, 3]], inner], axis=-1)
    counts = np.broadcast_to((width > SAME_PLACE)[..., None], place.shape)
    targets = len(place)
    return Standing(
        place.reshape(targets, -1),
        effects.reshape(len(effects), targets, -1),
        counts.reshape(targets, -1),
    )


def _breaks(influence: Influence, train: Train, way: Way, first: float, last: float) -> Floats:
    """Places of the first wheel at which some wheel passes an edge, in order (T, I + 1)."""
    ends = np.broadcast_to([way.start, way.end], (len(influence.edges), 2))
    edges = np.concatenate([influence.edges, ends], axis=1)
    passing = (edges[:, :, None] - train.places).reshape(len(edges), -1)
    limits = np.broadcast_to([first, last], (len(edges), 2))
    return np.sort(np.clip(np.concatenate([passing, limits], axis=1), first, last), axis=1)


def _values(influence: Influence, train: Train, way: Way, low: Floats, width: Floats) -> Floats:
    """Effects of the train at the ends and thirds of each stretch of its way (E, T, I, 4)."""
    edges = influence.edges
    values = np.zeros((len(influence.cubic), *low.shape, 4))
    thirds = low[..., None] + width[..., None] * (np.arange(4) / 3.0)
    rows = np.arange(len(edges))[:, None]
    for place, force in zip(train.places, train.forces, strict=True):
        middle = low + width / 2.0 + place
        piece = np.sum(middle[..., None] >= edges[:, None, :], axis=-1) - 1
        there = (piece >= 0) & (piece < edges.shape[1] - 1)
        if not way.stays:
            there &= (middle > way.start) & (middle < way.end)
        piece = np.where(there, piece, 0)
        t = (thirds + place - influence.origin[rows, piece][..., None]) / influence.width[
            rows, piece
        ][..., None]
        a, b, c, d = np.moveaxis(influence.cubic[:, rows, piece], -1, 0)[..., None]
        values += (((d * t + c) * t + b) * t + a) * (there * force)[..., None]
    return values


def _turning(cubic: Floats) -> Floats:
    """Where between 0 and 1 cubics (T, I, 4) turn, at most twice (T, I, 2); else some place."""
    _, b, c, d = np.moveaxis(cubic, -1, 0)
    root = np.sqrt(np.maximum(c * c - 3.0 * b * d, 0.0))
    q = -(c + np.where(c < 0.0, -root, root))
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        found = np.stack([q / (3.0 * d), b / q], axis=-1)
    return np.asarray(np.clip(np.nan_to_num(found, nan=0.0), 0.0, 1.0))

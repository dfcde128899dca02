"""The four arrangements of cases looked at, and cases whose effect differs between them: loads
that move."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats, Ints

GREATEST_MOMENT, LEAST_MOMENT, GREATEST_SHEAR, LEAST_SHEAR = range(4)
ARRANGEMENTS = 4


@dataclass(frozen=True, slots=True)
class MovingEffects:
    """What moving cases (G), unfactored, do at each station (N) in each of the four
    arrangements: greatest and least moment, greatest and least shear, each with what acts at the
    same time."""

    case: Ints
    """Row of each case among all cases (G)"""
    moment: Floats
    """[N*mm] (4, G, N)"""
    shear: Floats
    """[N] (4, G, N)"""
    places: Floats
    """Where the first wheel from the left stands, of the train on the left and of that on the
    right, along the line [mm] (2, 4, G, N); nan where that train is not there"""
    turned: Bools
    """Whether the trains and their order are turned round (4, G, N)"""

    def take(self, rows: Ints) -> MovingEffects:
        """The same at some of the stations."""
        return MovingEffects(self.case, *(getattr(self, name)[..., rows] for name in BY_STATION))

    def times(self, rows: Ints, multiple: Floats) -> MovingEffects:
        """The same with the forces of some cases multiplied at each station (N)."""
        by = np.where(np.isin(self.case, rows)[:, None], multiple, 1.0)
        return replace(self, moment=self.moment * by, shear=self.shear * by)


BY_STATION = ("moment", "shear", "places", "turned")


def put_in(
    moving: MovingEffects | None, arrangement: int, moment: Floats, shear: Floats
) -> tuple[Floats, Floats]:
    """Moments and shears of all cases (K, N), with what moves as it stands in an arrangement."""
    if moving is None:
        return moment, shear
    moment, shear = moment.copy(), shear.copy()
    moment[moving.case] += moving.moment[arrangement]
    shear[moving.case] += moving.shear[arrangement]
    return moment, shear


def join_moving(
    first: MovingEffects | None, second: MovingEffects | None, rows: Ints
) -> MovingEffects | None:
    """Effects of the same cases at two sets of stations, in the order of ``rows``.

    Raises
    ------
    ValueError
        Where one set was worked out without the moving cases of the other.
    """
    if first is None and second is None:
        return None
    if first is None or second is None or not np.array_equal(first.case, second.case):
        raise ValueError("moving cases must be known at all stations or at none")
    return MovingEffects(
        first.case,
        *(
            np.concatenate([getattr(first, name), getattr(second, name)], axis=-1)[..., rows]
            for name in BY_STATION
        ),
    )


def weighted(factors: Floats, effects: Floats) -> Floats:
    """Sum of the cases' effects (K, N), each times its factor (C, K), for every combination.

    Not a matrix product, which would wake a pool of threads for a sum over few cases.
    """
    return np.asarray(np.einsum("ck,kn->cn", factors, effects))

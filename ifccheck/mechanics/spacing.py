"""How near bars lie to the concrete's surface and to one another."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats

Ring = Sequence[tuple[float, float]]


def distance_to_surface(y: Floats, z: Floats, rings: Sequence[Ring]) -> Floats:
    """Distance of points from the nearest edge of an outline.

    Parameters
    ----------
    y, z
        Points in the section [mm] (P).
    rings
        The outline and its voids; points (y, z) [mm].

    Returns
    -------
    Floats
        [mm] (P), whether a point lies inside or outside.

    Examples
    --------
    >>> square = [(0.0, 0.0), (400.0, 0.0), (400.0, 400.0), (0.0, 400.0)]
    >>> distance_to_surface(np.array([50.0]), np.array([200.0]), [square])
    array([50.])
    """
    return distance_to_edges(y, z, edges_of(rings))


def edges_of(rings: Sequence[Ring]) -> Floats:
    """The edges of an outline: where each starts and ends (E, 2, 2)."""
    corners = [np.asarray(ring, dtype=np.float64) for ring in rings]
    ends = [np.roll(ring, -1, axis=0) for ring in corners]
    return np.stack([np.concatenate(corners), np.concatenate(ends)], axis=1)


def distance_to_edges(y: Floats, z: Floats, edges: Floats) -> Floats:
    """Distance of points from the nearest of some edges.

    Parameters
    ----------
    y, z
        Points [mm] (P).
    edges
        Where each edge starts and ends: those for all points (E, 2, 2), or for each its own
        (P, E, 2, 2) [mm].

    Returns
    -------
    Floats
        [mm] (P)
    """
    start_y, start_z = edges[..., 0, 0], edges[..., 0, 1]
    along_y, along_z = edges[..., 1, 0] - start_y, edges[..., 1, 1] - start_z
    length_squared = np.maximum(along_y * along_y + along_z * along_z, 1e-12)
    from_y, from_z = y[:, None] - start_y, z[:, None] - start_z
    share = np.clip((from_y * along_y + from_z * along_z) / length_squared, 0.0, 1.0)
    off_y = y[:, None] - (start_y + share * along_y)
    off_z = z[:, None] - (start_z + share * along_z)
    return np.asarray(np.sqrt((off_y * off_y + off_z * off_z).min(axis=1)))


IN_CONTACT = 1.1
"""Bars whose centres are no further apart than this part of their mean diameter touch: room for
ribs and for the rounding of models"""

BESIDE_LAP = 150.0
"""Bars that lap are no further apart than this [mm] (CSA A23.3-14, 12.14.2.3, from memory)"""

GOING_ON = 300.0
"""Two bars lap where either goes on by more than this [mm] beyond the other's end: the least
length over which a bar develops (CSA A23.3-14, 12.2.1)"""


@dataclass(frozen=True, slots=True)
class BarPlace:
    """Where the bars of beams are that have as many bars (..., P)."""

    y: Floats
    """Centre [mm]"""
    z: Floats
    diameter: Floats
    start: Floats
    """Along the axis [mm]"""
    end: Floats
    whole_start: Floats
    """Of the whole bar, where it goes on at another height [mm]"""
    whole_end: Floats

    def distance(self) -> Floats:
        """Between the centres of any two bars [mm] (..., P, P)."""
        dy, dz = (each[..., :, None] - each[..., None, :] for each in (self.y, self.z))
        return np.hypot(dy, dz)

    def beside(self) -> Bools:
        """Whether one bar runs beside another on some part of its way (..., P, P)."""
        before = self.start[..., :, None] < self.end[..., None, :]
        other = ~np.eye(self.y.shape[-1], dtype=np.bool_)
        return np.asarray(before & np.swapaxes(before, -1, -2) & other)


def nearest_neighbour(bars: BarPlace, together: Bools | None = None) -> Floats:
    """Centre distance of each bar to the nearest bar that it runs beside.

    Parameters
    ----------
    bars
        The bars of beams that have as many.
    together
        Pairs that are left out, as they are of one bundle (..., P, P).

    Returns
    -------
    Floats
        [mm] (..., P); inf for a bar on its own.

    Examples
    --------
    >>> y, z, d = np.array([0.0, 80.0, 200.0]), np.full(3, 50.0), np.full(3, 20.0)
    >>> ends = np.zeros(3), np.full(3, 5000.0)
    >>> nearest_neighbour(BarPlace(y, z, d, *ends, *ends))
    array([ 80.,  80., 120.])
    """
    counting = bars.beside() if together is None else bars.beside() & ~together
    return np.asarray(np.where(counting, bars.distance(), np.inf).min(axis=-1, initial=np.inf))


def bundled(bars: BarPlace) -> Bools:
    """Pairs of bars of one bundle: in contact, or held together by bars between them.

    Parameters
    ----------
    bars
        The bars of beams that have as many.

    Returns
    -------
    Bools
        (..., P, P)

    Examples
    --------
    >>> y, z, d = np.array([0.0, 20.0, 40.0, 120.0]), np.full(4, 50.0), np.full(4, 20.0)
    >>> ends = np.zeros(4), np.full(4, 5000.0)
    >>> bundled(BarPlace(y, z, d, *ends, *ends)).sum(axis=-1).tolist()
    [2, 2, 2, 0]
    """
    reach = IN_CONTACT * (bars.diameter[..., :, None] + bars.diameter[..., None, :]) / 2.0
    touching = bars.beside() & (bars.distance() <= reach)
    if not touching.any():
        return np.asarray(touching)
    own = np.eye(bars.y.shape[-1], dtype=np.bool_)
    linked, known = touching | own, 0
    while int(linked.sum()) != known:
        known = int(linked.sum())
        linked = (linked.astype(np.float64) @ linked.astype(np.float64)) > 0.0
    return np.asarray(linked & ~own)


def lapped(bars: BarPlace) -> Bools:
    """Whether each bar laps another: each goes on beyond an end of the other.

    Parameters
    ----------
    bars
        The bars of beams that have as many.

    Returns
    -------
    Bools
        (..., P)

    Examples
    --------
    >>> y, z, d = np.array([0.0, 20.0, 90.0]), np.full(3, 50.0), np.full(3, 20.0)
    >>> ends = np.array([0.0, 3000.0, 0.0]), np.array([4000.0, 7000.0, 7000.0])
    >>> lapped(BarPlace(y, z, d, *ends, *ends)).tolist()
    [True, True, False]
    """
    before = bars.whole_start[..., None, :] - bars.whole_start[..., :, None] > GOING_ON
    beyond = bars.whole_end[..., None, :] - bars.whole_end[..., :, None] > GOING_ON
    first = before & beyond & bars.beside() & (bars.distance() <= BESIDE_LAP)
    return np.asarray(first.any(axis=-1) | first.any(axis=-2))

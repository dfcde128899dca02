"""How near bars lie to the concrete's surface and to one another."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ifccheck.mechanics.arrays import Floats

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
    start = np.concatenate([np.asarray(ring, dtype=np.float64) for ring in rings])
    end = np.concatenate(
        [np.roll(np.asarray(ring, dtype=np.float64), -1, axis=0) for ring in rings]
    )
    point = np.stack([y, z], axis=-1)[:, None, :]
    edge = end - start
    length_squared = np.maximum(np.sum(edge * edge, axis=-1), 1e-12)
    along = np.clip(np.sum((point - start) * edge, axis=-1) / length_squared, 0.0, 1.0)
    nearest = start + along[..., None] * edge
    return np.asarray(np.sqrt(np.sum((point - nearest) ** 2, axis=-1)).min(axis=1))


def nearest_neighbour(y: Floats, z: Floats, start: Floats, end: Floats) -> Floats:
    """Centre distance of each bar to the nearest bar that it runs beside.

    Parameters
    ----------
    y, z
        Bar centres of beams that have as many bars [mm] (..., P).
    start, end
        Where each bar starts and ends along the axis [mm] (..., P).

    Returns
    -------
    Floats
        [mm] (..., P); inf for a bar on its own.

    Examples
    --------
    >>> y, z = np.array([0.0, 80.0, 200.0]), np.full(3, 50.0)
    >>> nearest_neighbour(y, z, np.zeros(3), np.full(3, 5000.0))
    array([ 80.,  80., 120.])
    """
    distance = np.hypot(y[..., :, None] - y[..., None, :], z[..., :, None] - z[..., None, :])
    beside = (start[..., :, None] < end[..., None, :]) & (start[..., None, :] < end[..., :, None])
    beside &= ~np.eye(y.shape[-1], dtype=np.bool_)
    return np.asarray(np.where(beside, distance, np.inf).min(axis=-1, initial=np.inf))

"""Whether an outline stands level: what bending about a level axis alone rests on.

A section bends about the level axis under a vertical load where its product of inertia is zero,
or where something keeps it from turning. A plain shape that is turned about the beam's axis does
neither: most of its sides are inclined by one and the same angle to the level and the vertical.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from functools import lru_cache
from typing import NamedTuple

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats
from ifccheck.mechanics.width_profile import SLIVER

Rings = tuple[tuple[tuple[float, float], ...], ...]

SLIP = math.radians(1.0 + 1e-6)
"""An outline turned by no more than one degree is meant to be level."""
SAME_WAY = math.radians(0.05)
"""Sides whose directions differ by less than this run the same way."""
MOST = 0.5
"""Part of the length of all sides that tells how a plain shape is turned."""
LEVEL_PART = 0.3
"""Part of an outline's width that sides must have to tell what is level."""
MIRRORED = 1.0
"""Corners that are this near to the mirror image of another make a symmetric outline [mm]."""


class Moments(NamedTuple):
    """Second moments of area about the centroid [mm4]."""

    yy: float
    """Of the squares of z: for bending about the level axis"""
    zz: float
    yz: float

    @property
    def principal(self) -> float:
        """Inclination of the principal axis that is nearest to the level [rad]."""
        angle = math.atan2(2.0 * self.yz, self.zz - self.yy) / 2.0
        return math.remainder(angle, math.pi / 2.0)

    @property
    def neutral(self) -> float:
        """Inclination of the neutral axis under a moment about the level axis [rad]."""
        return math.atan2(self.yz, self.zz)


class Inclination(NamedTuple):
    """How an outline stands, angles anticlockwise with y to the right and z up [rad]."""

    rolled: float = 0.0
    """A plain shape turned by so much; 0 where it is not"""
    slip: float = 0.0
    """Turned by so little that it is meant to be level; 0 where it is level as drawn"""
    principal: float = 0.0
    """Inclination of the principal axes where the neutral axis is inclined too; else 0"""
    upright: bool = True
    """Most of its sides are level or vertical"""


@lru_cache(maxsize=4096)
def inclination_of(rings: Rings) -> Inclination:
    """Return how an outline stands.

    Parameters
    ----------
    rings
        Outer ring, then voids; points (y, z) [mm].

    Examples
    --------
    >>> inclination_of((((0.0, 0.0), (300.0, 0.0), (300.0, 600.0), (0.0, 600.0)),))
    Inclination(rolled=0.0, slip=0.0, principal=0.0, upright=True)
    """
    sides = np.concatenate([_sides(ring) for ring in rings])
    way = _most_common_way(sides)
    moments = second_moments(rings)
    inclined = min(abs(moments.principal), abs(moments.neutral)) > SLIP
    turned = way is not None and abs(way) > SLIP and not _symmetric(rings[0])
    return Inclination(
        rolled=way if turned and way is not None else 0.0,
        slip=_slip(sides, rings[0]),
        principal=moments.principal if inclined else 0.0,
        upright=way is not None and abs(way) <= SLIP,
    )


def _sides(ring: Sequence[tuple[float, float]]) -> Floats:
    points = np.array(ring, dtype=np.float64)
    return np.asarray(np.roll(points, -1, axis=0) - points)


def _most_common_way(sides: Floats) -> float | None:
    """The angle to the level or the vertical, whichever is nearer, of more than half of all
    sides by their length [rad]; None where no angle is that common."""
    lengths = np.hypot(sides[:, 0], sides[:, 1])
    angles = np.arctan2(sides[:, 1], sides[:, 0])
    apart = _within(angles[:, None] - angles, math.pi / 2.0)
    shares = (np.abs(apart) < SAME_WAY) @ lengths
    if shares.max() <= MOST * lengths.sum():
        return None
    longest = int(np.where(shares > MOST * lengths.sum(), lengths, 0.0).argmax())
    return float(_within(angles[longest], math.pi / 2.0))


def _within(angles: Floats, period: float) -> Floats:
    """Angles less whole periods, the nearest to 0."""
    return np.asarray(angles - period * np.round(angles / period))


def _slip(sides: Floats, outer: Sequence[tuple[float, float]]) -> float:
    """By how little the sides that are meant to be level are inclined; 0 where some are level."""
    width = max(y for y, _ in outer) - min(y for y, _ in outer)
    lengths = np.hypot(sides[:, 0], sides[:, 1])
    angles = _within(np.arctan2(sides[:, 1], sides[:, 0]), math.pi)
    near = np.abs(angles) <= SLIP
    level: Bools = near & (np.abs(sides[:, 1]) <= SLIVER / 2.0)
    if not near.any() or lengths[level].sum() >= LEVEL_PART * width:
        return 0.0
    longest = int(np.where(near, lengths, 0.0).argmax())
    alike = near & (np.abs(angles - angles[longest]) < SAME_WAY)
    return float(angles[longest]) if lengths[alike].sum() >= LEVEL_PART * width else 0.0


def _symmetric(ring: Sequence[tuple[float, float]]) -> bool:
    """Whether each corner has its mirror image, left for right."""
    points = np.array(ring, dtype=np.float64)
    mirrored = points * (-1.0, 1.0) + (points[:, 0].min() + points[:, 0].max(), 0.0)
    apart = np.hypot(*np.moveaxis(points[:, None] - mirrored, -1, 0))
    return bool((apart.min(axis=1) < MIRRORED).all())


def second_moments(rings: Sequence[Sequence[tuple[float, float]]]) -> Moments:
    """Second moments of area of an outline about its centroid.

    With a = y0 z1 - y1 z0 of each side, going round the outer ring one way and round voids the
    other: A = sum a / 2; S_y = sum a (y0 + y1) / 6; I_zz = sum a (y0^2 + y0 y1 + y1^2) / 12;
    I_yz = sum a (y0 z1 + 2 y0 z0 + 2 y1 z1 + y1 z0) / 24, then about the centroid.

    Parameters
    ----------
    rings
        Outer ring, then voids; points (y, z) [mm]. What lies in an odd number of rings counts.

    Returns
    -------
    Moments
        [mm4]

    Notes
    -----
    Two outer rings beside each other count both; a ring within one is a void.

    Examples
    --------
    >>> second_moments([[(0.0, 0.0), (300.0, 0.0), (300.0, 600.0), (0.0, 600.0)]])
    Moments(yy=5400000000.0, zz=1350000000.0, yz=0.0)

    References
    ----------
    First principles: Green's theorem on a polygon.
    """
    base = np.array(rings[0][0], dtype=np.float64)
    total = np.zeros(6)
    for index, ring in enumerate(rings):
        sums = _sums(np.array(ring, dtype=np.float64) - base)
        outer = index == 0 or not _holds(rings[0], ring)
        total += sums * math.copysign(1.0, sums[0]) * (1.0 if outer else -1.0)
    area, first_y, first_z, yy, zz, yz = total.tolist()
    y, z = first_y / area, first_z / area
    return Moments(yy - area * z * z, zz - area * y * y, yz - area * y * z)


def _sums(points: Floats) -> Floats:
    """Area, its first moments, and its second moments about the origin, signed by the sense."""
    (y0, z0), (y1, z1) = points.T, np.roll(points, -1, axis=0).T
    a = y0 * z1 - y1 * z0
    return np.array(
        [
            a.sum() / 2.0,
            (a * (y0 + y1)).sum() / 6.0,
            (a * (z0 + z1)).sum() / 6.0,
            (a * (z0 * z0 + z0 * z1 + z1 * z1)).sum() / 12.0,
            (a * (y0 * y0 + y0 * y1 + y1 * y1)).sum() / 12.0,
            (a * (y0 * z1 + 2.0 * y0 * z0 + 2.0 * y1 * z1 + y1 * z0)).sum() / 24.0,
        ]
    )


def _holds(outer: Sequence[tuple[float, float]], ring: Sequence[tuple[float, float]]) -> bool:
    """Whether the extent of one ring lies within that of another."""
    one, other = np.array(outer), np.array(ring)
    return bool((other.min(axis=0) >= one.min(axis=0)).all()) and bool(
        (other.max(axis=0) <= one.max(axis=0)).all()
    )

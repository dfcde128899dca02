"""The width of an outline as a piecewise-linear function of height.

Any outline, with voids, reduces to strips (z0, z1, w0, w1): between the heights z0 and z1 the
width runs linearly from w0 to w1. Areas, moments of area and compression blocks are then exact
polynomials, whatever the shape.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ifccheck.mechanics.arrays import Bools, Floats

Ring = Sequence[tuple[float, float]]
"""Corners (y, z) of a closed line [mm]"""

SLIVER = 1e-3
"""Lengths below this [mm] are rounding, not shape: models hold outlines that are out of level by
as much."""


def strips_of(rings: Sequence[Ring]) -> Floats:
    """Width profile of an outline with voids.

    At each height the width is the length inside an odd number of rings.

    Parameters
    ----------
    rings : sequence of rings of points (y, z) [mm]
        The outer ring, then any voids, in either direction, closed or not.

    Returns
    -------
    array (S, 4) [mm]
        Strips (z0, z1, w0, w1) from the soffit up, heights as in the rings.

    Raises
    ------
    ValueError
        Where a ring has fewer than three points, a coordinate is not finite, two sides cross
        or the outline has no height.
    """
    strips = [(z0, z1, width_of(ys0), width_of(ys1)) for z0, z1, ys0, ys1 in sides_of(rings)]
    if not strips:
        raise ValueError("the outline has no height")
    return np.array(strips, dtype=np.float64)


def sides_of(rings: Sequence[Ring]) -> list[tuple[float, float, Floats, Floats]]:
    """The sides of an outline, stretch by stretch from the soffit up.

    Returns
    -------
    list of (z0, z1, ys0, ys1) [mm]
        The heights between which no side begins or ends, and where the sides are at either,
        from right to left; none where an opening divides the outline.
    """
    lower, upper = _sides(rings)
    return [_crossings(z0, z1, lower, upper) for z0, z1 in _levels(lower, upper)]


def _sides(rings: Sequence[Ring]) -> tuple[Floats, Floats]:
    """Lower and upper ends (y, z) of every side that is not level."""
    sides = [_ring_sides(ring) for ring in rings]
    pairs = np.concatenate(sides) if sides else np.empty((0, 2, 2))
    upward = pairs[:, 0, 1] <= pairs[:, 1, 1]
    lower = np.where(upward[:, None], pairs[:, 0], pairs[:, 1])
    upper = np.where(upward[:, None], pairs[:, 1], pairs[:, 0])
    sloping = upper[:, 1] - lower[:, 1] > SLIVER
    return lower[sloping], upper[sloping]


def _ring_sides(ring: Ring) -> Floats:
    """Sides of one ring: (n, 2 ends, 2)."""
    points = np.array(ring, dtype=np.float64).reshape(-1, 2)
    if len(points) < 3:
        raise ValueError("a ring of the outline has fewer than three points")
    if not np.isfinite(points).all():
        raise ValueError("a point of the outline is not finite")
    return np.stack([points, np.roll(points, -1, axis=0)], axis=1)


def _levels(lower: Floats, upper: Floats) -> list[tuple[float, float]]:
    """Stretches of height between which no side begins or ends."""
    heights = np.unique(np.concatenate([lower[:, 1], upper[:, 1]]))
    if not len(heights):
        return []
    kept = heights[np.concatenate([[True], np.diff(heights) > SLIVER])]
    return list(zip(kept[:-1].tolist(), kept[1:].tolist(), strict=True))


def _crossings(
    z0: float, z1: float, lower: Floats, upper: Floats
) -> tuple[float, float, Floats, Floats]:
    """The y of the sides at z0 and at z1, from right to left."""
    middle = (z0 + z1) / 2
    spanning = (lower[:, 1] < middle) & (upper[:, 1] > middle)
    start, end = lower[spanning], upper[spanning]
    slope = (end[:, 0] - start[:, 0]) / (end[:, 1] - start[:, 1])
    order = np.argsort(start[:, 0] + slope * (middle - start[:, 1]))
    ys0, ys1 = (
        np.clip(
            start[:, 0] + slope * (z - start[:, 1]),
            np.minimum(start[:, 0], end[:, 0]),
            np.maximum(start[:, 0], end[:, 0]),
        )[order]
        for z in (z0, z1)
    )
    if (np.diff(ys0) < -SLIVER).any() or (np.diff(ys1) < -SLIVER).any():
        raise ValueError("sides of the outline cross each other")
    return z0, z1, ys0, ys1


def width_of(ys: Floats) -> float:
    """Length inside an odd number of rings, from the sorted crossings."""
    return max(float(np.sum(ys[1::2]) - np.sum(ys[0::2])), 0.0)


def pack_strips(profiles: Sequence[Floats]) -> Floats:
    """Profiles of several sections in one array.

    Parameters
    ----------
    profiles : sequence of arrays (S_k, 4) [mm]

    Returns
    -------
    array (K, S, 4) [mm]
        Padded with strips without height or width at the top of their section.
    """
    longest = max((len(profile) for profile in profiles), default=0)
    packed = np.zeros((len(profiles), longest, 4))
    for row, profile in zip(packed, profiles, strict=True):
        row[: len(profile)] = profile
        row[len(profile) :, :2] = profile[-1, 1]
    return packed


def top_of(strips: Floats) -> Floats:
    """Height of the top of each section [mm] (n), from strips (n, S, 4)."""
    top: Floats = strips[..., 1].max(axis=-1)
    return top


def bottom_of(strips: Floats) -> Floats:
    """Height of the soffit of each section [mm] (n), from strips (n, S, 4)."""
    bottom: Floats = strips[..., 0].min(axis=-1)
    return bottom


def gaps_of(strips: Floats) -> Floats:
    """Height over which openings divide each section, from side to side [mm] (n)."""
    z0, z1, w0, w1 = np.moveaxis(strips, -1, 0)
    gaps: Floats = np.where((w0 <= 0.0) & (w1 <= 0.0), z1 - z0, 0.0).sum(axis=-1)
    return gaps


def flipped(strips: Floats) -> Floats:
    """The sections turned upside down about the middle of their depth.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]

    Returns
    -------
    array (n, S, 4) [mm]
        Strips in reverse order, so that heights still rise.
    """
    turn = (top_of(strips) + bottom_of(strips))[..., None]
    backward = strips[..., ::-1, :]
    z0, z1, w0, w1 = np.moveaxis(backward, -1, 0)
    return np.stack([turn - z1, turn - z0, w1, w0], axis=-1)


def from_soffit(strips: Floats) -> Floats:
    """The same sections (n, S, 4) with heights measured from their own soffit."""
    foot = bottom_of(strips)[:, None]
    z0, z1, w0, w1 = np.moveaxis(strips, -1, 0)
    return np.stack([z0 - foot, z1 - foot, w0, w1], axis=-1)


def _below(strips: Floats, z: Floats) -> tuple[Floats, Floats, Floats, Floats]:
    """Foot, height below z, width at the foot and slope of width of each strip (n, S)."""
    z0, z1, w0, w1 = np.moveaxis(strips, -1, 0)
    height = z1 - z0
    slope = np.divide(w1 - w0, height, out=np.zeros_like(height), where=height > 0)
    return z0, np.minimum(np.maximum(np.asarray(z)[..., None] - z0, 0.0), height), w0, slope


def area_below(strips: Floats, z: Floats) -> Floats:
    """Area of the part of each section below a height; the integral of w dz.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
    z : array (n) [mm]

    Returns
    -------
    array (n) [mm2]

    Notes
    -----
    Exact: a polynomial of second degree in each strip. nan gives nan.

    Examples
    --------
    >>> rectangle = np.array([[[0.0, 600.0, 400.0, 400.0]]])
    >>> float(area_below(rectangle, np.array([100.0]))[0])
    40000.0
    """
    _, t, w0, slope = _below(strips, z)
    area: Floats = (t * (w0 + slope * t / 2)).sum(axis=-1)
    return area


def first_moment_below(strips: Floats, z: Floats) -> Floats:
    """First moment about height 0 of the part below a height; the integral of w z dz.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
    z : array (n) [mm]

    Returns
    -------
    array (n) [mm3]
    """
    z0, t, w0, slope = _below(strips, z)
    moment: Floats = (t * (z0 * (w0 + slope * t / 2) + t * (w0 / 2 + slope * t / 3))).sum(axis=-1)
    return moment


def second_moment_below(strips: Floats, z: Floats) -> Floats:
    """Second moment about height 0 of the part below a height; the integral of w z2 dz.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
    z : array (n) [mm]

    Returns
    -------
    array (n) [mm4]
    """
    z0, t, w0, slope = _below(strips, z)
    about_foot = t**3 * (w0 / 3 + slope * t / 4)
    first = t**2 * (w0 / 2 + slope * t / 3)
    moment: Floats = (about_foot + 2 * z0 * first + z0**2 * t * (w0 + slope * t / 2)).sum(axis=-1)
    return moment


def compression_block(strips: Floats, a: Floats) -> tuple[Floats, Floats]:
    """Area under a compression block and its first moment about the compression face.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
        Measured from the compression face.
    a : array (n) [mm]
        Depth of the block; what reaches beyond the section adds nothing.

    Returns
    -------
    area, first moment : arrays (n) [mm2], [mm3]
    """
    z0, t, w0, slope = _below(strips, a)
    area = t * (w0 + slope * t / 2)
    first = z0 * area + t * t * (w0 / 2 + slope * t / 3)
    return area.sum(axis=-1), first.sum(axis=-1)


def width_at(strips: Floats, z: Floats) -> Floats:
    """Width just below a height.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
    z : array (n) [mm]

    Returns
    -------
    array (n) [mm]
        0 outside the section.
    """
    z0, z1, w0, _ = np.moveaxis(strips, -1, 0)
    _, t, _, slope = _below(strips, z)
    place = np.asarray(z)[..., None]
    width: Floats = np.where((place > z0) & (place <= z1), w0 + slope * t, 0.0).sum(axis=-1)
    return width


def greatest_width(strips: Floats, z_low: Floats, z_high: Floats) -> Floats:
    """Greatest width between two heights.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
    z_low, z_high : arrays (n) [mm]

    Returns
    -------
    array (n) [mm]
        0 where no strip lies between the heights.
    """
    ends, reached = _end_widths(strips, z_low, z_high)
    greatest: Floats = np.where(reached, ends.max(axis=0), 0.0).max(axis=-1)
    return greatest


def least_width(strips: Floats, z_low: Floats, z_high: Floats) -> Floats:
    """Least width between two heights.

    Parameters
    ----------
    strips : array (n, S, 4) [mm]
    z_low, z_high : arrays (n) [mm]

    Returns
    -------
    array (n) [mm]
        0 where no strip lies between the heights; nan where a height is nan.

    Notes
    -----
    Where an opening divides the section there is no width to speak of: such strips are passed
    over.
    """
    ends, reached = _end_widths(strips, z_low, z_high)
    reached &= (strips[..., 2] > 0.0) | (strips[..., 3] > 0.0)
    least = np.where(reached, ends.min(axis=0), np.inf).min(axis=-1)
    least = np.where(np.isinf(least), 0.0, least)
    return np.where(np.isnan(z_low) | np.isnan(z_high), np.nan, least)


def _end_widths(strips: Floats, z_low: Floats, z_high: Floats) -> tuple[Floats, Bools]:
    """Widths at both ends (2, n, S) of each strip's part between two heights, and whether
    there is such a part (n, S)."""
    z0, z1, w0, w1 = np.moveaxis(strips, -1, 0)
    height = z1 - z0
    slope = np.divide(w1 - w0, height, out=np.zeros_like(height), where=height > 0)
    low = np.maximum(z0, np.asarray(z_low)[..., None])
    high = np.minimum(z1, np.asarray(z_high)[..., None])
    return np.stack([w0 + slope * (low - z0), w0 + slope * (high - z0)]), high - low > SLIVER

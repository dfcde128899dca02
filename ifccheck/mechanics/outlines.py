"""Outlines between two others whose corners correspond, as a beam has them along a taper."""

from __future__ import annotations

from collections.abc import Sequence

Ring = Sequence[tuple[float, float]]
Rings = tuple[tuple[tuple[float, float], ...], ...]


def rings_between(first: Sequence[Ring], last: Sequence[Ring], share: float) -> Rings:
    """Rings part of the way from one outline to another.

    Parameters
    ----------
    first, last
        Rings of points (y, z) [mm], each corner of the one at the place of its like.
    share
        0 gives the first, 1 the last.

    Returns
    -------
    Rings

    Examples
    --------
    >>> rings_between([[(0, 0), (200, 0), (0, 300)]], [[(0, 0), (300, 0), (0, 500)]], 0.5)
    (((0.0, 0.0), (250.0, 0.0), (0.0, 400.0)),)
    """
    return tuple(
        tuple(
            (y0 + (y1 - y0) * share, z0 + (z1 - z0) * share)
            for (y0, z0), (y1, z1) in zip(one, other, strict=True)
        )
        for one, other in zip(first, last, strict=True)
    )


def bounds(rings: Sequence[Ring]) -> tuple[float, float, float, float]:
    """Least y, greatest y, least z and greatest z of an outline [mm].

    Examples
    --------
    >>> bounds([[(-100.0, 0.0), (100.0, 0.0), (0.0, 300.0)]])
    (-100.0, 100.0, 0.0, 300.0)
    """
    ys, zs = zip(*(point for ring in rings for point in ring), strict=True)
    return min(ys), max(ys), min(zs), max(zs)

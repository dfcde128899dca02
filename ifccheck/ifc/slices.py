"""Plane figures from the lines that a plane cuts into the faces of a solid."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.entity import UnreadableError

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

Floats = npt.NDArray[np.float64]

ALIKE = 1e-6
"""Ends of cut lines nearer than this are one [mm]."""
GAP = 0.05
"""Ends of cut lines further apart than this leave the figure open [mm]."""


def figure_of(segments: Floats, x: float) -> BaseGeometry:
    """Return the figure that closed lines enclose: what lies within an odd number of them.

    Parameters
    ----------
    segments
        Ends (y, z) of the lines, in any order (N, 2, 2) [mm].
    x
        Place of the plane, for people.

    Raises
    ------
    UnreadableError
        Where the lines do not close.
    """
    from shapely import Polygon, build_area, linestrings, multilinestrings

    if not len(segments):
        return Polygon()
    ends, row = _joined(segments)
    pairs = np.sort(row.reshape(-1, 2), axis=1)
    pairs = pairs[pairs[:, 0] != pairs[:, 1]]
    key, count = np.unique(pairs[:, 0] * len(ends) + pairs[:, 1], return_counts=True)
    key = key[count % 2 == 1]  # a line drawn twice separates nothing
    lines = np.stack([key // len(ends), key % len(ends)], axis=1)
    if (np.bincount(lines.ravel(), minlength=1) % 2).any():
        raise UnreadableError(f"body is not closed at x = {x / 1000.0:.2f} m of its axis")
    area: BaseGeometry = build_area(multilinestrings(linestrings(ends[lines])))
    return area


def _joined(segments: Floats) -> tuple[Floats, npt.NDArray[np.intp]]:
    """The distinct ends of lines, and the row of each end; ends across a small gap made one."""
    ends = np.round(segments.reshape(-1, 2) / ALIKE)
    # complex numbers, for sorting rows of a table is several times slower
    found, row, count = np.unique(
        ends[:, 0] + 1j * ends[:, 1], return_inverse=True, return_counts=True
    )
    places = np.stack([found.real, found.imag], axis=1) * ALIKE
    return places, _across_gaps(places)[row] if (count % 2).any() else row


def _across_gaps(places: Floats) -> npt.NDArray[np.intp]:
    """For each place the row of the one that stands for all within a gap of it."""
    from shapely import Point, STRtree

    dots = [Point(place) for place in places]
    one, other = STRtree(dots).query(dots, predicate="dwithin", distance=GAP)
    stands = np.arange(len(places))
    while True:
        least = stands.copy()
        np.minimum.at(least, one, stands[other])
        if (least == stands).all():
            return stands
        stands = least

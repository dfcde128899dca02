"""How far a top flange stands out beyond the web of an outline."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np

from ifccheck.mechanics.width_profile import SLIVER, Ring, sides_of, width_of

STEEPEST_LEDGE = 1.0
"""A side that moves out by more than this per unit of height is a flange's underside."""


def overhangs(
    rings: Sequence[Ring], whole: Sequence[Ring] | None = None
) -> tuple[float, float, float]:
    """Overhang of a top flange beyond the web on either side, and the flange's thickness.

    Going up from the narrowest place, the flange begins where a side of the outline steps out
    or moves out flatter than 45 degrees; a battered side is no flange. The thickness is the
    least height above the highest such underside at which half of the overhang is kept, so that
    a tapered flange counts as thin as at its tip.

    Parameters
    ----------
    rings : sequence of rings of points (y, z) [mm]
        Positive y is to the left.
    whole
        The outline before openings were taken off it: web and flange are told by that one, and
        the overhangs are what the rings leave of it.

    Returns
    -------
    left, right, thickness : float [mm]
        All 0 where there is no flange.
    """
    left, right = _ledges(whole or rings)
    if left.overhang == 0.0 and right.overhang == 0.0:
        return 0.0, 0.0, 0.0
    low, high = max(left.underside, right.underside), min(left.top, right.top)
    thickness = max(high - low, 0.0)
    if whole is None:
        return left.overhang, right.overhang, thickness
    to_left, to_right = _reach_between(rings, low, high)
    return left.kept(to_left), right.kept(to_right), thickness


class _Ledge(NamedTuple):
    """What stands out on one side of the web [mm]."""

    overhang: float = 0.0
    web: float = 0.0
    """How far the web reaches"""
    underside: float = -np.inf
    top: float = np.inf

    def kept(self, reach: float) -> float:
        """What is left of the overhang where the outline reaches so far."""
        return min(max(reach - self.web, 0.0), self.overhang)


def _ledges(rings: Sequence[Ring]) -> tuple[_Ledge, _Ledge]:
    """What stands out to the left and to the right above the narrowest place.

    A stretch that an opening takes wholly is as wide as what lies under it.
    """
    rows = sides_of(rings)
    widths = [width_of(ys0) + width_of(ys1) if len(ys0) else np.inf for _, _, ys0, ys1 in rows]
    heights: list[float] = []
    left: list[float] = []
    right: list[float] = []
    for z0, z1, ys0, ys1 in rows[int(np.argmin(widths)) :]:
        heights += [z0, z1]
        left += [float(ys0[-1]), float(ys1[-1])] if len(ys0) else [left[-1]] * 2
        right += [-float(ys0[0]), -float(ys1[0])] if len(ys0) else [right[-1]] * 2
    return _ledge(heights, left), _ledge(heights, right)


def _ledge(heights: Sequence[float], reach: Sequence[float]) -> _Ledge:
    """How far a side reaches beyond its lowest ledge, above its highest."""
    ledges = [
        i
        for i in range(len(heights) - 1)
        if reach[i + 1] - reach[i]
        > max(SLIVER, STEEPEST_LEDGE * (heights[i + 1] - heights[i]) + SLIVER)
    ]
    if not ledges:
        return _Ledge()
    web = reach[ledges[0]]
    overhang = max(reach[ledges[0] :]) - web
    top = max(z for z, r in zip(heights, reach, strict=True) if r >= web + overhang / 2.0)
    return _Ledge(overhang, web, heights[ledges[-1] + 1], top)


def _reach_between(rings: Sequence[Ring], low: float, high: float) -> tuple[float, float]:
    """How far an outline reaches to the left and to the right between two heights."""
    sides = [
        ys
        for z0, z1, *both in sides_of(rings)
        for ys in both
        if len(ys) and z1 > low + SLIVER and z0 < high - SLIVER
    ]
    left = max((float(ys[-1]) for ys in sides), default=-np.inf)
    right = max((-float(ys[0]) for ys in sides), default=-np.inf)
    return left, right

"""The width of floor that a beam carries, along its axis: chords of its part square to the axis."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from ifccheck.frame.boxes import Floats
from ifccheck.frame.panels import Carrier

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

SAME = 1e-3
"""Places along a beam that differ by no more are one [mm]"""
STRAIGHT = 1e-3
"""Widths that differ by no more are one [mm]"""


class Width(NamedTuple):
    """A stretch of a beam over which the width that it carries runs straight [mm]."""

    start: float
    end: float
    first: float
    last: float

    @property
    def area(self) -> float:
        """[mm2]."""
        return (self.end - self.start) * (self.first + self.last) / 2.0

    @property
    def middle(self) -> float:
        """Where its resultant acts [mm]."""
        total = self.first + self.last
        share = (self.first + 2.0 * self.last) / (3.0 * total) if total else 0.5
        return self.start + share * (self.end - self.start)

    def at(self, x: float) -> float:
        """Width at a place within [mm]."""
        return self.first + (self.last - self.first) * (x - self.start) / (self.end - self.start)


def widths_along(figure: BaseGeometry, carrier: Carrier) -> tuple[Width, ...]:
    """Return the width of a figure along a carrier's axis.

    Between two of its corners the sum of the chords of a figure is linear: each edge that crosses
    adds its distance from the axis, one way or the other. Corners that lie within rounding of each
    other are taken as one place, and the widths keep the area of the figure.
    """
    start, end = _edges(figure, carrier)
    moving = np.abs(end[:, 0] - start[:, 0]) > SAME
    start, end = start[moving], end[moving]
    places = _apart(np.sort(np.concatenate([start[:, 0], end[:, 0]])))
    if len(places) < 2:
        return ()
    low, high = places[:-1], places[1:]
    near, far = np.minimum(start[:, 0], end[:, 0]), np.maximum(start[:, 0], end[:, 0])
    middle = (low + high)[:, None] / 2.0
    crosses = (near <= middle) & (far >= middle)
    slope = (end[:, 1] - start[:, 1]) / (end[:, 0] - start[:, 0])
    upper = np.where(end[:, 0] > start[:, 0], -1.0, 1.0)  # an outer ring runs to the left
    first, last = (
        (crosses * upper * (start[:, 1] + slope * (x[:, None] - start[:, 0]))).sum(axis=1)
        for x in (low, high)
    )
    rows = zip(low.tolist(), high.tolist(), first.clip(0.0).tolist(), last.clip(0.0).tolist(),
               strict=True)  # fmt: skip
    found = _joined([Width(*row) for row in rows if max(row[2:]) > STRAIGHT])
    kept = sum(each.area for each in found)
    return tuple(_scaled(each, figure.area / kept) for each in found)


def _edges(figure: BaseGeometry, carrier: Carrier) -> tuple[Floats, Floats]:
    """Starts and ends of the edges of a figure, along the axis and to the left of it (E, 2)."""
    from shapely.geometry.polygon import orient

    starts, ends = [], []
    for part in getattr(figure, "geoms", [figure]):
        if part.geom_type == "Polygon" and part.area > 0.0:
            turned = orient(part)
            for ring in (turned.exterior, *turned.interiors):
                points = np.asarray(ring.coords)[:, :2]
                starts.append(points[:-1])
                ends.append(points[1:])
    (x0, y0), (x, y) = carrier.start, carrier.way
    turn = np.array([[x, -y], [y, x]])
    one, other = (
        (np.concatenate(each) - (x0, y0)) @ turn if each else np.empty((0, 2))
        for each in (starts, ends)
    )
    return one, other


def _apart(places: Floats) -> Floats:
    """Sorted places without those that lie within rounding of the one before."""
    return places[np.append(True, np.diff(places) > SAME)] if places.size else places


def _joined(widths: Sequence[Width]) -> list[Width]:
    """Stretches that go on in one straight line as one."""
    found: list[Width] = []
    for each in widths:
        if found and _goes_on(found[-1], each):
            found[-1] = found[-1]._replace(end=each.end, last=each.last)
        else:
            found.append(each)
    return found


def _goes_on(one: Width, other: Width) -> bool:
    if other.start - one.end > SAME or abs(other.first - one.last) > STRAIGHT:
        return False
    bend = one.first + (other.last - one.first) * (one.end - one.start) / (other.end - one.start)
    return abs(bend - one.last) <= STRAIGHT


def _scaled(width: Width, factor: float) -> Width:
    return width._replace(first=width.first * factor, last=width.last * factor)


def within(widths: Sequence[Width], low: float, high: float) -> tuple[Width, ...]:
    """Return the parts of stretches that lie between two places."""
    found = []
    for each in widths:
        start, end = max(each.start, low), min(each.end, high)
        if end - start > SAME:
            found.append(Width(start, end, each.at(start), each.at(end)))
    return tuple(found)

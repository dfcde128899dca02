"""Rows of bars whose height is given, spread over the width there."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from ifccheck.beam import BarRow
from ifccheck.detailing.layers import ROUNDING, Placed, Space, fitting
from ifccheck.detailing.room import (
    NoRoomError,
    Stretch,
    common,
    narrowed,
    soffit_and_top,
    spread,
    stretch_between,
    web,
)
from ifccheck.detailing.segments import Kind, Segment


def rows_of(segment: Segment) -> list[BarRow]:
    """Rows of a segment, the lowest first."""
    return sorted((row for zone in segment.zones for row in zone.rows), key=lambda row: row.z)


def placed_rows(space: Space, rows: Sequence[BarRow]) -> Iterator[tuple[Kind, Placed]]:
    """Place the bars of rows, the lowest row first, each at its height.

    Rows that would overlap were they above one another are one: their bars lie side by side.

    Raises
    ------
    NoRoomError
        Where bars stand out of the concrete or do not fit side by side.
    """
    for level in _levels(rows):
        bars = [row for row in level for _ in range(row.group.count)]
        bars.sort(key=lambda row: -row.group.diameter)
        ys = _spread(space, bars)
        for number, (row, y) in enumerate(zip(bars, ys, strict=True)):
            yield _kind(row), Placed(number, y, row.z)


def _levels(rows: Sequence[BarRow]) -> Iterator[list[BarRow]]:
    level: list[BarRow] = []
    for row in rows:
        if level and _bounds([row])[0] >= _bounds(level)[1] - ROUNDING:
            yield level
            level = []
        level.append(row)
    if level:
        yield level


def _bounds(rows: Sequence[BarRow]) -> tuple[float, float]:
    """Lowest and highest place of bars [mm]."""
    return (
        min(row.z - 0.5 * row.group.diameter for row in rows),
        max(row.z + 0.5 * row.group.diameter for row in rows),
    )


def _spread(space: Space, bars: Sequence[BarRow]) -> list[float]:
    """Places of the bars of a level across, within the web where a row at the top fits there."""
    low, high = _bounds(bars)
    soffit, top = soffit_and_top(space.outline)
    at = f"at a height of {bars[0].z:.0f} mm"
    if low < soffit - ROUNDING or high > top + ROUNDING:
        raise NoRoomError(f"bars {at} stand out of the concrete")
    widest = narrowed(stretch_between(space.outline, low, high), space.inset)
    diameters = [row.group.diameter for row in bars]
    for stretch in _stretches(space, widest, bars[0]):
        if fitting(diameters, stretch, space.clear_spacing) == len(bars):
            return spread(diameters, stretch)
    raise NoRoomError(
        f"{len(bars)} bars do not fit side by side {at}, in a width of"
        f" {max(widest[1] - widest[0], 0.0):.0f} mm inside cover and stirrup"
    )


def _stretches(space: Space, widest: Stretch, row: BarRow) -> Iterator[Stretch]:
    if row.face == "top":
        yield common(widest, narrowed(web(space.outline), space.inset))
    yield widest


def _kind(row: BarRow) -> Kind:
    group = row.group
    return Kind(
        row.face, group.diameter, group.area, group.designation, row.bar_yield, row.origin, row.z
    )

"""Bars of one face put into layers, and side bars along the height."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from ifccheck.beam import Outline
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

ClearSpacing = Callable[[float], float]
"""Least clear distance between bars of a diameter [mm]"""

WEB_LAYERS = 2
"""Layers of top bars in the web beyond which they are spread over the flange"""

ROUNDING = 1e-6


@dataclass(frozen=True, slots=True)
class Placed:
    """A bar in the section: its centre [mm]."""

    bar: int
    """Which of the bars given"""
    y: float
    z: float


@dataclass(frozen=True, slots=True)
class Space:
    """A section and what stands between its surface and the bars."""

    outline: Outline
    inset: float
    """Cover and stirrup [mm]"""
    clear_spacing: ClearSpacing


def bottom_layers(space: Space, diameters: Sequence[float]) -> list[Placed]:
    """Place bottom bars, layer on layer, each as wide as the outline is there.

    ``diameters`` are in the order in which the bars are placed: the first ones go into the
    corners of the lowest layer.
    """
    soffit, _ = soffit_and_top(space.outline)

    def room(level: float, height: float) -> Stretch:
        low = soffit + space.inset + level
        return narrowed(stretch_between(space.outline, low, low + height), space.inset)

    placed, _ = _layers(space, diameters, room)
    return [Placed(p.bar, p.y, soffit + space.inset + p.z) for p in placed]


def top_layers(space: Space, diameters: Sequence[float]) -> list[Placed]:
    """Place top bars within the web's width, or where they need too many layers, the flange's."""
    _, top = soffit_and_top(space.outline)

    def flange(level: float, height: float) -> Stretch:
        high = top - space.inset - level
        return narrowed(stretch_between(space.outline, high - height, high), space.inset)

    def within_web(level: float, height: float) -> Stretch:
        return common(flange(level, height), narrowed(web(space.outline), space.inset))

    try:
        placed, count = _layers(space, diameters, within_web)
    except NoRoomError:
        placed, count = _layers(space, diameters, flange)
    else:
        if count > WEB_LAYERS:
            placed, _ = _layers(space, diameters, flange)
    return [Placed(p.bar, p.y, top - space.inset - p.z) for p in placed]


def _layers(
    space: Space, diameters: Sequence[float], room: Callable[[float, float], Stretch]
) -> tuple[list[Placed], int]:
    """Fill layer after layer; z counts from the stirrup inwards. Also the number of layers."""
    bottom, top = soffit_and_top(space.outline)
    placed: list[Placed] = []
    level, layers = 0.0, 0
    rest = list(range(len(diameters)))
    while rest:
        greatest = max(diameters[bar] for bar in rest)
        if level + greatest > top - bottom - 2.0 * space.inset:
            raise NoRoomError(f"{len(diameters)} bars do not fit: {len(rest)} are left over")
        stretch = room(level, greatest)
        count = fitting([diameters[bar] for bar in rest], stretch, space.clear_spacing)
        if count == 0:
            raise NoRoomError(
                f"not one bar of {greatest:.0f} mm fits a width of"
                f" {max(stretch[1] - stretch[0], 0.0):.0f} mm inside cover and stirrup"
            )
        layer, rest = rest[:count], rest[count:]
        sizes = [diameters[bar] for bar in layer]
        for bar, size, y in zip(layer, sizes, spread(sizes, stretch), strict=True):
            placed.append(Placed(bar, y, level + 0.5 * size))
        level += max(sizes) + space.clear_spacing(greatest)
        layers += 1
    return placed, layers


def fitting(diameters: Sequence[float], stretch: Stretch, clear_spacing: ClearSpacing) -> int:
    """How many of the bars, taken in order, one layer holds."""
    width = stretch[1] - stretch[0] + ROUNDING
    needed, count, greatest = 0.0, 0, 0.0
    for diameter in diameters:
        greatest = max(greatest, diameter)
        needed += diameter
        if needed + count * clear_spacing(greatest) > width:
            break
        count += 1
    return count


def side_rows(space: Space, diameters: Sequence[float], low: float, high: float) -> list[Placed]:
    """Place side bars in pairs, evenly between the outermost bottom and top bars.

    ``low`` and ``high`` are the heights of those bars [mm]; an odd bar stands alone.
    """
    rows = (len(diameters) + 1) // 2
    placed = []
    for bar, diameter in enumerate(diameters):
        z = low + (high - low) * (bar // 2 + 1) / (rows + 1)
        stretch = narrowed(
            stretch_between(space.outline, z - 0.5 * diameter, z + 0.5 * diameter),
            space.inset + 0.5 * diameter,
        )
        if stretch[1] - stretch[0] < diameter:
            raise NoRoomError(f"side bars do not fit at a height of {z:.0f} mm")
        placed.append(Placed(bar, stretch[1] if bar % 2 == 0 else stretch[0], z))
    return placed

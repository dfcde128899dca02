"""The section of a beam with its bars, and demand against resistance along it."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

import numpy as np

from ifccheck.beam import Bars, Outline, Stirrups
from ifccheck.publish.elevation import LEFT, RIGHT, WIDTH, Drawable, bar_words
from ifccheck.publish.quantities import typographic
from ifccheck.publish.svg import (
    Place,
    circle,
    closed_path,
    drawing,
    label,
    line_path,
    number,
    path,
    segment,
    thinned,
)
from ifccheck.sheet import Diagram, Floats
from ifccheck.units import show

SECTION_WIDTH, SECTION_BOX = 300.0, (190.0, 190.0)
SECTION_LEFT, SECTION_TOP = 46.0, 12.0
PLOT = 128.0
HEAD, FOOT = 20.0, 18.0
SHOWN_BEYOND = 4.0
"""A resistance is drawn up to this many times the greatest demand."""


def section(sheet: Drawable) -> str:
    """Return the section at the place of interest with the bars and stirrups found there."""
    if sheet.section is None:
        return ""
    frame = _SectionFrame(sheet.section)
    here = [bars for bars in sheet.bars if bars.start <= sheet.section_x <= bars.end]
    around = next((s for s in sheet.stirrups if s.start <= sheet.section_x <= s.end), None)
    rings = "".join(closed_path(map(frame.place, ring)) for ring in sheet.section.rings)
    parts = [
        path(rings, "concrete"),
        _stirrup(around, frame) if around else "",
        *(_bars(bars, frame) for bars in here),
        *_bar_names(here, frame),
        _dimensions(frame),
    ]
    title = f"Section at x = {show(sheet.section_x, 'length')}"
    parts.append(label(SECTION_LEFT + frame.wide / 2.0, frame.foot + 32.0, title, "m"))
    return drawing(SECTION_WIDTH, frame.foot + 40.0, "section", title, parts)


class _SectionFrame:
    """From the section [mm] to the drawing, the same scale both ways."""

    def __init__(self, outline: Outline) -> None:
        ys, zs = zip(*(point for ring in outline.rings for point in ring), strict=True)
        self.width, self.height = max(ys) - min(ys), max(zs) - min(zs)
        self.scale = min(
            SECTION_BOX[0] / max(self.width, 1.0), SECTION_BOX[1] / max(self.height, 1.0)
        )
        self.left_y, self.top_z = max(ys), max(zs)
        self.wide, self.foot = self.width * self.scale, SECTION_TOP + self.height * self.scale

    def place(self, point: Place) -> Place:
        """Seen from the start: y to the left."""
        return (
            SECTION_LEFT + (self.left_y - point[0]) * self.scale,
            SECTION_TOP + (self.top_z - point[1]) * self.scale,
        )


def _bars(bars: Bars, frame: _SectionFrame) -> str:
    radius = max(bars.diameter / 2.0 * frame.scale, 1.6)
    places = (frame.place((y, bars.z)) for y in bars.ys)
    return "".join(circle(x, z, radius, "steel") for x, z in places)


def _bar_names(here: Sequence[Bars], frame: _SectionFrame) -> Iterator[str]:
    """Names at the right, each at the height of its bars, none over another."""
    x, last = SECTION_LEFT + frame.wide + 8.0, -math.inf
    for bars in sorted(here, key=lambda bars: -bars.z):
        y = frame.place((0.0, bars.z))[1] + 3.2
        y = max(y, last + 11.0)
        last = y
        yield label(x, y, bar_words(bars), "left")


def _stirrup(stirrups: Stirrups, frame: _SectionFrame) -> str:
    if stirrups.half_width is None or stirrups.bottom is None or stirrups.top is None:
        return ""
    inset = stirrups.diameter / 2.0
    y, low, high = stirrups.half_width - inset, stirrups.bottom + inset, stirrups.top - inset
    corners = [frame.place(p) for p in ((y, high), (y, low), (-y, low), (-y, high))]
    data = closed_path(corners) if stirrups.closed else line_path(corners)
    width = number(max(stirrups.diameter * frame.scale, 1.0))
    return f'<path class="link" stroke-width="{width}" d="{data}"/>'


def _dimensions(frame: _SectionFrame) -> str:
    x0, x1, y = SECTION_LEFT, SECTION_LEFT + frame.wide, frame.foot + 9.0
    top, foot, x = SECTION_TOP, frame.foot, SECTION_LEFT - 9.0
    lines = (
        f"{segment(x0, y - 3, x0, y + 3)}{segment(x0, y, x1, y)}{segment(x1, y - 3, x1, y + 3)}"
        f"{segment(x - 3, top, x + 3, top)}{segment(x, top, x, foot)}"
        f"{segment(x - 3, foot, x + 3, foot)}"
    )
    width = label((x0 + x1) / 2.0, y + 11.0, show(frame.width, "dimension"), "m")
    height = label(x - 5.0, (top + foot) / 2.0, show(frame.height, "dimension"), "m", turn=-90.0)
    return path(lines, "measure") + width + height


def diagram(drawn: Diagram, length: float) -> str:
    """Return demand against resistance along a beam, the governing place marked."""
    frame = _DiagramFrame(drawn, length)
    zero = frame.y(0.0)
    parts = [*_grid(frame), _band(drawn, frame)]
    parts += [
        path(_curve(drawn.x, curve, frame), kind)
        for kind, curves in (
            ("resistance", (drawn.resistance_high, drawn.resistance_low)),
            ("demand", (drawn.demand_high, drawn.demand_low)),
        )
        for curve in curves
    ]
    parts.append(path(segment(LEFT, zero, WIDTH - RIGHT, zero), "axis"))
    parts.append(_governing(drawn, frame))
    named = f"{drawn.title[:1].upper()}{drawn.title[1:]}, {typographic(drawn.unit)}"
    parts.append(label(LEFT, 12.0, named, "title"))
    if frame.cut:
        parts.append(label(WIDTH - RIGHT, 12.0, frame.cut, "note end"))
    return drawing(WIDTH, HEAD + PLOT + FOOT, "diagram", f"{named}, along the beam", parts)


class _DiagramFrame:
    def __init__(self, drawn: Diagram, length: float) -> None:
        self.along = (WIDTH - LEFT - RIGHT) / max(length, 1.0)
        demand = _finite(drawn.demand_high, drawn.demand_low)
        resistance = _finite(drawn.resistance_high, drawn.resistance_low)
        peak = float(np.abs(demand).max(initial=0.0))
        limit = SHOWN_BEYOND * peak if peak > 0.0 else math.inf
        shown = np.concatenate([demand, resistance[np.abs(resistance) <= limit]])
        self.cut = ""
        if resistance.size and float(np.abs(resistance).max()) > limit:
            self.cut = "resistance beyond the drawing is not shown"
            shown = np.concatenate([shown, np.sign(resistance[np.abs(resistance) > limit]) * limit])
        self.high = float(shown.max(initial=0.0)) * 1.06
        self.low = float(shown.min(initial=0.0)) * 1.06
        if self.high - self.low <= 0.0:
            self.high = 1.0
        self.scale = PLOT / (self.high - self.low)

    def x(self, place: float) -> float:
        return LEFT + place * self.along

    def y(self, value: float) -> float:
        return HEAD + (self.high - value) * self.scale


def _finite(*curves: Floats) -> Floats:
    values = np.concatenate(curves)
    return values[np.isfinite(values)]


def _pieces(x: Floats, curve: Floats, frame: _DiagramFrame) -> Iterator[list[Place]]:
    """The curve in drawing units, broken where it is not finite or leaves the drawing."""
    shown = np.isfinite(curve) & (curve <= frame.high) & (curve >= frame.low)
    across = (LEFT + x * frame.along).tolist()
    heights = (HEAD + (frame.high - curve) * frame.scale).tolist()
    piece: list[Place] = []
    for place, height, inside in zip(across, heights, shown.tolist(), strict=True):
        if inside:
            piece.append((place, height))
        elif piece:
            yield piece
            piece = []
    if piece:
        yield piece


def _curve(x: Floats, curve: Floats, frame: _DiagramFrame) -> str:
    return "".join(line_path(thinned(piece)) for piece in _pieces(x, curve, frame))


def _band(drawn: Diagram, frame: _DiagramFrame) -> str:
    """The area between the least and the greatest demand, and from both to zero."""
    high = np.nan_to_num(np.maximum(drawn.demand_high, 0.0))
    low = np.nan_to_num(np.minimum(drawn.demand_low, 0.0))
    upper = thinned([(frame.x(x), frame.y(v)) for x, v in zip(drawn.x, high, strict=True)])
    lower = thinned([(frame.x(x), frame.y(v)) for x, v in zip(drawn.x, low, strict=True)])
    return path(closed_path([*upper, *reversed(lower)]), "demanded")


def _grid(frame: _DiagramFrame) -> Iterator[str]:
    step = _step(frame.high - frame.low)
    for i in range(math.ceil(frame.low / step), math.floor(frame.high / step) + 1):
        y = frame.y(i * step)
        yield path(segment(LEFT, y, WIDTH - RIGHT, y), "grid")
        yield label(LEFT - 6.0, y + 3.2, f"{i * step:g}".replace("-", "−"), "tick")


def _step(reach: float) -> float:
    """A round step that gives two to five lines."""
    rough = reach / 4.0
    decade = 10.0 ** math.floor(math.log10(rough))
    return next(m * decade for m in (1.0, 2.0, 5.0, 10.0) if m * decade >= rough)


def _governing(drawn: Diagram, frame: _DiagramFrame) -> str:
    if not math.isfinite(drawn.governing_x):
        return ""
    x = frame.x(drawn.governing_x)
    foot = HEAD + PLOT
    side = "note" if x < WIDTH - 110.0 else "note end"
    shift = 4.0 if side == "note" else -4.0
    words = label(x + shift, foot + 12.0, f"x = {show(drawn.governing_x, 'length')}", side)
    dots = "".join(
        circle(x, frame.y(value), 2.6, kind) for value, kind in _at_governing(drawn, frame)
    )
    return path(segment(x, HEAD - 4.0, x, foot + 14.0), "governs") + dots + words


def _at_governing(drawn: Diagram, frame: _DiagramFrame) -> list[tuple[float, str]]:
    """Demand and resistance at the governing place, on the side that is used most."""
    near = np.flatnonzero(np.abs(drawn.x - drawn.governing_x) <= 1.0)
    pairs = [
        (float(demand[i]), float(resistance[i]))
        for i in near
        for demand, resistance in (
            (drawn.demand_high, drawn.resistance_high),
            (drawn.demand_low, drawn.resistance_low),
        )
    ]
    known = [p for p in pairs if all(map(math.isfinite, p)) and p[0] * p[1] > 0.0]
    if not known:
        return []
    demand, resistance = max(known, key=lambda pair: pair[0] / pair[1])
    inside = frame.low <= resistance <= frame.high
    return [(demand, "at-demand"), *([(resistance, "at-resistance")] if inside else [])]

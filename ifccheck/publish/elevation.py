"""The elevation of a beam: its outline, supports, loads, bars and stirrups to scale."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import Protocol

from ifccheck.beam import (
    SELF,
    Anchor,
    Bars,
    Beam,
    Load,
    Outline,
    RatedSpan,
    Ring,
    Run,
    Stirrups,
    Support,
)
from ifccheck.notation import bars_in_a_row
from ifccheck.publish.load_words import named_load, single_loads
from ifccheck.publish.openings import drawn_opening
from ifccheck.publish.svg import (
    circle,
    closed_path,
    drawing,
    label,
    number,
    path,
    segment,
    thinned,
)
from ifccheck.rating.disturbed import disturbed
from ifccheck.rating.runs import outline_of
from ifccheck.units import show

WIDTH, LEFT, RIGHT = 760.0, 56.0, 18.0
"""The strip that elevation and diagrams share, so that a place is the same in all of them."""
SHALLOWEST, DEEPEST = 54.0, 130.0
EXAGGERATIONS = (1, 2, 3, 4, 5, 6, 8, 10)
BAND, LETTER_WIDTH = 24.0, 5.1
MOST_BANDS = 4
ARROW = 24.0


@dataclass(frozen=True)
class Frame:
    """From the beam [mm] to the drawing."""

    length: float
    depth: float
    top: float = 0.0
    """Of the beam on the drawing"""

    @cached_property
    def along(self) -> float:
        """Drawing units per mm of length."""
        return (WIDTH - LEFT - RIGHT) / max(self.length, 1.0)

    @cached_property
    def exaggeration(self) -> int:
        """How many times heights are drawn larger than lengths."""
        natural = max(self.depth, 1.0) * self.along
        fits = [k for k in EXAGGERATIONS if natural * k <= DEEPEST] or [1]
        return next((k for k in fits if natural * k >= SHALLOWEST), fits[-1])

    @property
    def up(self) -> float:
        """Drawing units per mm of height."""
        return self.along * self.exaggeration

    @property
    def bottom(self) -> float:
        """Of the beam on the drawing."""
        return self.top + self.depth * self.up

    def x(self, place: float) -> float:
        """Return where a place along the beam is drawn, kept on the drawing."""
        return LEFT + min(max(place, -36.0 / self.along), self.length + 12.0 / self.along) * (
            self.along
        )

    def z(self, height: float) -> float:
        """Return where a height above the soffit is drawn."""
        return self.bottom - height * self.up


class Drawable(Protocol):
    """A beam with what is drawn of it: the sheet of a rating, or of a survey."""

    @property
    def beam(self) -> Beam:
        """Whose axis and outline are drawn."""

    @property
    def spans(self) -> tuple[RatedSpan, ...]:
        """Empty where nothing tells how it stands."""

    @property
    def loads(self) -> tuple[Load, ...]:
        """What acts on it."""

    @property
    def bars(self) -> tuple[Bars, ...]:
        """By place."""

    @property
    def stirrups(self) -> tuple[Stirrups, ...]:
        """By place."""

    @property
    def section(self) -> Outline | None:
        """The outline at the place of interest."""

    @property
    def section_x(self) -> float:
        """That place [mm]."""


def elevation(sheet: Drawable) -> str:
    """Return the elevation of a beam; empty where its body could not be read."""
    runs = sheet.beam.runs
    length = sheet.beam.length or max((run.end for run in runs), default=0.0)
    if not runs or length <= 0.0:
        return ""
    depth = max(z for run in runs for outline in _outlines(run) for _, z in outline)
    above = _Loads([load for load in sheet.loads if load.face == "top"], hung=False)
    below = _Loads([load for load in sheet.loads if load.face == "bottom"], hung=True)
    frame = Frame(length, depth, top=16.0 + above.height)
    foot = frame.bottom + below.height
    parts = [
        above.drawn(frame),
        below.drawn(frame),
        _body(runs, frame),
        _not_rated(runs, frame),
        *(_stirrup_set(stirrups, frame, foot) for stirrups in sheet.stirrups),
        *(drawn_opening(opening, sheet.beam, frame) for opening in sheet.beam.openings),
        *(_bar_row(i, row, frame) for i, row in enumerate(bars_in_a_row(sheet.bars))),
        _supports(sheet.spans, runs, frame),
        _span_lines(sheet.spans, length, frame, foot + 58.0),
    ]
    height = foot + 72.0
    scale = f"heights drawn {frame.exaggeration} times the lengths"
    told = "to scale" if frame.exaggeration == 1 else scale
    parts.append(label(WIDTH - RIGHT, 10.0, told, "note end"))
    return drawing(WIDTH, height, "elevation", f"Elevation of {sheet.beam.mark}", parts)


def _outlines(run: Run) -> tuple[Ring, Ring]:
    return (run.outline.rings[0], (run.outline_end or run.outline).rings[0])


def _body(runs: Sequence[Run], frame: Frame) -> str:
    outline, edges = [], []
    for run in runs:
        first, last = (_heights(ring) for ring in _outlines(run))
        x0, x1 = frame.x(run.start), frame.x(run.end)
        corners = [(x0, first[0]), (x1, last[0]), (x1, last[-1]), (x0, first[-1])]
        outline.append(closed_path((x, frame.z(z)) for x, z in corners))
        if len(first) == len(last):
            inner = zip(first[1:-1], last[1:-1], strict=True)
            edges += [segment(x0, frame.z(z0), x1, frame.z(z1)) for z0, z1 in inner]
    return path("".join(outline), "concrete") + path("".join(edges), "edge")


def _not_rated(runs: Sequence[Run], frame: Frame) -> str:
    """Hatching over the stretches beside steps, which are not rated."""
    shapes = []
    for stretch in disturbed(runs):
        x0, x1 = (frame.x(min(max(x, 0.0), frame.length)) for x in (stretch.start, stretch.end))
        shapes.append(
            closed_path([(x0, frame.top), (x1, frame.top), (x1, frame.bottom), (x0, frame.bottom)])
        )
    return path("".join(shapes), "unrated") if shapes else ""


def _heights(ring: Ring) -> list[float]:
    """Heights of the corners of an outline: soffit, edges between, top."""
    return sorted({round(z, 1) for _, z in ring})


def _bar_row(index: int, row: Sequence[Bars], frame: Frame) -> str:
    """Bars of one layer, with the pieces of them that follow a taper."""
    first, last = row[0], row[-1]
    lines = "".join(
        segment(frame.x(bars.start), frame.z(bars.z), frame.x(bars.end), frame.z(bars.z))
        for bars in row
    )
    ends = [(frame.x(first.start), first, first.start_anchor)] if not first.start_beyond else []
    ends += [(frame.x(last.end), last, last.end_anchor)] if not last.end_beyond else []
    hooks = "".join(
        segment(x, frame.z(bars.z), x, frame.z(bars.z) + _toward(bars, frame))
        for x, bars, anchor in ends
        if anchor is Anchor.HOOK
    )
    dots = "".join(
        circle(x, frame.z(bars.z), 2.0, "anchored")
        for x, bars, anchor in ends
        if anchor is Anchor.ANCHORED
    )
    share = 0.06 + 0.17 * (index % 5)
    x = frame.x(first.start + (last.end - first.start) * share)
    z = frame.z(next(b.z for b in row if frame.x(b.end) >= x - 1e-6))
    return path(lines + hooks, "bar") + dots + label(x, z + 3.2, bar_words(first), "bar-name")


def _toward(bars: Bars, frame: Frame) -> float:
    """Which way a hook is drawn: into the section."""
    return 9.0 if bars.z > frame.depth / 2.0 else -9.0


def bar_words(bars: Bars) -> str:
    """Return bars as a drawing names them: "3-25M", or "3 × 20 mm" without a designation."""
    if bars.designation:
        return f"{bars.count}-{bars.designation}"
    return f"{bars.count} × {show(bars.diameter, 'dimension')}"


def stirrup_words(stirrups: Stirrups) -> str:
    """Return stirrups as a drawing names them: "2 legs 10M @ 250 mm"."""
    legs = "legs not stated" if stirrups.legs is None else f"{stirrups.legs} legs"
    name = stirrups.designation.partition("@")[0].strip() or show(stirrups.diameter, "dimension")
    return f"{legs} {name} @ {show(stirrups.spacing, 'dimension')}"


def _stirrup_set(stirrups: Stirrups, frame: Frame, foot: float) -> str:
    bottom = frame.z(stirrups.bottom if stirrups.bottom is not None else 0.08 * frame.depth)
    top = frame.z(stirrups.top if stirrups.top is not None else 0.92 * frame.depth)
    x0, x1 = frame.x(stirrups.start), frame.x(stirrups.end)
    step = stirrups.spacing * frame.along
    count = max(int((x1 - x0) / step + 1e-6), 1) if step > 0.5 else 0
    first = x0 + (x1 - x0 - (count - 1) * step) / 2.0
    height = number(top - bottom)
    lines = "".join(f"M{number(first + i * step)} {number(bottom)}v{height}" for i in range(count))
    y = foot + 26.0
    ends = f"{segment(x0, y - 3, x0, y + 3)}{segment(x0, y, x1, y)}{segment(x1, y - 3, x1, y + 3)}"
    words = stirrup_words(stirrups)
    if len(words) * LETTER_WIDTH > x1 - x0:
        words = f"@ {show(stirrups.spacing, 'dimension')}"
    return path(lines, "stirrup") + path(ends, "measure") + label((x0 + x1) / 2, y + 11, words, "m")


def _supports(spans: Sequence[RatedSpan], runs: Sequence[Run], frame: Frame) -> str:
    if not spans:
        return ""
    (first, faces, _), (last, last_faces, _) = spans[0], spans[-1]
    return "".join(
        [
            _support(first.start, first.start_support, -1.0, faces[0], runs, frame),
            *(_inner_support(one, other, runs, frame) for one, other in pairwise(spans)),
            _support(last.end, last.end_support, 1.0, last_faces[1], runs, frame),
        ]
    )


def _inner_support(before: RatedSpan, after: RatedSpan, runs: Sequence[Run], frame: Frame) -> str:
    """A support over which the beam goes on, as wide as it is between its two faces."""
    place = before.span.end
    x, y = frame.x(place), frame.z(min(z for _, z in outline_of(runs, place).rings[0]))
    triangle = closed_path([(x, y), (x - 6, y + 11), (x + 6, y + 11)])
    ends = frame.x(before.faces[1]), frame.x(after.faces[0])
    return path(triangle, "support") + path(segment(ends[0], y, ends[1], y), "bearing")


def _support(
    place: float, support: Support, side: float, face: float, runs: Sequence[Run], frame: Frame
) -> str:
    """A support under the soffit that the beam has there, or a wall that holds its end; its
    bearing ends at the face from which the beam is checked."""
    x, soffit = frame.x(place), min(z for _, z in outline_of(runs, place).rings[0])
    y = frame.z(soffit)
    if support.kind == "free":
        return ""
    if support.kind in ("pinned", "continuous"):
        ends = frame.x(face), frame.x(face + side * support.bearing)
        x0, x1 = (x - 3.0, x + 3.0) if abs(ends[1] - ends[0]) < 6.0 else (min(ends), max(ends))
        triangle = closed_path([(x, y), (x - 6, y + 11), (x + 6, y + 11)])
        beyond = _goes_on(frame, side, y) if support.kind == "continuous" else ""
        return beyond + path(triangle, "support") + path(segment(x0, y, x1, y), "bearing")
    edge = x + side * 7.0
    top, foot = frame.top - 6.0, y + 6.0
    wall = closed_path([(x, top), (edge, top), (edge, foot), (x, foot)])
    return path(wall, "support fixed")


def _goes_on(frame: Frame, side: float, y: float) -> str:
    """The beam that this one goes on into, from its end."""
    x = frame.x(0.0 if side < 0.0 else frame.length)
    ends = x, x + side * 16.0
    return path(segment(ends[0], frame.top, ends[1], frame.top) + segment(ends[0], y, ends[1], y),
                "edge")  # fmt: skip


def _span_lines(spans: Sequence[RatedSpan], length: float, frame: Frame, y: float) -> str:
    measured = [(each.span.start, each.span.end) for each in spans] or [(0.0, length)]
    what = "span" if spans else "length"
    lines = "".join(_span_line(start, end, what, frame, y) for start, end in measured)
    return lines + label(LEFT, y + 11.0, "start, x = 0", "note")


def _span_line(start: float, end: float, what: str, frame: Frame, y: float) -> str:
    x0, x1 = frame.x(start), frame.x(end)
    line = f"{segment(x0, y - 4, x0, y + 4)}{segment(x0, y, x1, y)}{segment(x1, y - 4, x1, y + 4)}"
    words = f"{what} {show(end - start, 'length')}"
    return path(line, "measure") + label((x0 + x1) / 2.0, y - 4.0, words, "m halo")


class _Loads:
    """The loads on one face, in bands from the beam outwards; self weight has one band."""

    def __init__(self, loads: Sequence[Load], hung: bool) -> None:
        lines = [load for load in loads if load.kind == "line"]
        weight = [load for load in lines if load.case == SELF]
        self.bands = [[load] for load in lines if load.case != SELF] + [weight] * bool(weight)
        self.singles = single_loads(load for load in loads if load.kind != "line")
        self.hung = hung
        merged = len(self.singles) < sum(load.kind != "line" for load in loads)
        self.rows = [i % (6 if merged else 3) for i in range(len(self.singles))]
        """A row for each load's words, so that neighbours do not print over each other"""

    @property
    def height(self) -> float:
        """Drawing units that the loads take."""
        bands = min(len(self.bands), MOST_BANDS) * BAND + (12.0 if self.more else 0.0)
        singles = ARROW + 11.0 * max(self.rows, default=0) + 12.0 if self.singles else 0.0
        return bands + singles + (6.0 if self.hung and (bands or singles) else 0.0)

    @property
    def more(self) -> int:
        """Line loads that are only in the table."""
        return max(len(self.bands) - MOST_BANDS, 0)

    def drawn(self, frame: Frame) -> str:
        """Return the loads as SVG."""
        away = 1.0 if self.hung else -1.0
        base = frame.bottom + 6.0 if self.hung else frame.top
        peak = max((abs(v) for band in self.bands for load in band for v in load.values),
                   default=0.0) or 1.0  # fmt: skip
        parts = []
        for band in self.bands[:MOST_BANDS]:
            parts += [_line_load(load, frame, base, away, peak) for load in band]
            parts.append(_band_name(band, frame, base, away))
            base += away * BAND
        if self.more:
            loads = "line load" if self.more == 1 else "line loads"
            words = f"and {self.more} more {loads}, in the table of loads"
            parts.append(label(WIDTH / 2.0, base + away * 4.0, words, "load-name"))
            base += away * 12.0
        foot = frame.bottom if self.hung else frame.top
        for (load, words), row in zip(self.singles, self.rows, strict=True):
            parts.append(_single_load(load, words, frame, foot, base, away, row))
        return "".join(parts)


def _line_load(load: Load, frame: Frame, base: float, away: float, peak: float) -> str:
    x0, x1 = frame.x(load.start), frame.x(load.end)
    near = base + away * 1.5
    high0, high1 = (near + away * (1.5 + 8.0 * abs(v) / peak) for v in load.values)
    shape = closed_path(thinned([(x0, near), (x0, high0), (x1, high1), (x1, near)], 0.0))
    return path(shape, "load")


def _band_name(band: Sequence[Load], frame: Frame, base: float, away: float) -> str:
    """What the loads of one band are: one load by its words, several by their least and most."""
    x0, x1 = frame.x(band[0].start), frame.x(band[-1].end)
    words = named_load(band[0])
    if len(band) > 1:
        values = [value for load in band for value in load.values]
        both = dict.fromkeys(show(value, "line_load") for value in (min(values), max(values)))
        words = f"{band[0].case}: {' to '.join(both)}"
    y = base + away * (17.0 if away > 0.0 else 13.5)
    return label((x0 + x1) / 2.0, y, words, "load-name")


def _single_load(
    load: Load, words: str, frame: Frame, foot: float, base: float, away: float, row: int
) -> str:
    place = (load.start + load.end) / 2.0 if load.kind == "train" else load.start
    x, tip, tail = frame.x(place), foot + away * 1.5, base + away * (ARROW + 11.0 * row)
    room = len(words) * LETTER_WIDTH / 2.0
    middle = min(max(x, LEFT / 4.0 + room), WIDTH - 4.0 - room)
    named = label(middle, tail + away * 5.0 + 1.5, words, "load-name halo")
    if load.kind == "moment":
        turning = _turning(x, (frame.top + frame.bottom) / 2.0, load.values[0])
        return path(turning, "moment") + path(segment(x, tail, x, frame.top), "leader") + named
    downward = load.values[0] >= 0.0
    head_at, point = (max(tip, tail), 1.0) if downward else (min(tip, tail), -1.0)
    head = closed_path([(x, head_at), (x - 3, head_at - 7 * point), (x + 3, head_at - 7 * point)])
    way = segment(frame.x(load.start), tip, frame.x(load.end), tip) if load.kind == "train" else ""
    return path(way + segment(x, tail, x, tip), "force") + path(head, "head") + named


def _turning(x: float, y: float, moment: float) -> str:
    """Three quarters of a circle with its point, anticlockwise for a positive moment."""
    sweep, side = (0, -1.0) if moment >= 0 else (1, 1.0)
    arc = f"M{number(x - 11 * side)} {number(y)}A11 11 0 1 {sweep} {number(x)} {number(y + 11)}"
    return arc + f"l{number(6 * side)} -4m{number(-6 * side)} 4l{number(6 * side)} 5"

"""Layers of a framing plan that show how beams were stood: their supports and their lines."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from typing import NamedTuple

from ifccheck.beam import Beam
from ifccheck.framed import Framed, FramedEnd, FramedLine
from ifccheck.publish.svg import Place, label, line_path, number, path, segment

INSET, REACH, BESIDE, TICK = 9.0, 4.5, 6.0, 4.0
"""How far within a beam's end its support is marked, half the size of a mark, the distance of the
stroke of a line from the beam, half the stroke across it where beams meet."""


class Shown(NamedTuple):
    """A beam on the plan."""

    beam: Beam
    start: Place
    end: Place
    """Of the middle line of its stem"""
    half: float
    """Half the breadth of its stem"""


class _Way(NamedTuple):
    """A beam on the plan: its start, the unit vector along it, its length."""

    start: Place
    along: Place
    length: float
    per_mm: float

    def at(self, x: float) -> Place:
        """The place at x along the beam [mm]."""
        return (
            self.start[0] + self.along[0] * x * self.per_mm,
            self.start[1] + self.along[1] * x * self.per_mm,
        )

    def within(self, x: float) -> Place:
        """The same, drawn into the beam where it lies at its ends or beyond."""
        inset = min(INSET, self.length / 4.0)
        reached = min(max(x * self.per_mm, inset), self.length - inset)
        return self.start[0] + self.along[0] * reached, self.start[1] + self.along[1] * reached


def frame_layers(shown: Sequence[Shown], framed: Framed) -> str:
    """Return both layers of the plan of a storey, of whose beams it tells how they were stood."""
    ways = {each.beam.key: way for each in shown if (way := _way(each)) is not None}
    halves = {each.beam.key: each.half for each in shown}
    lines = "".join(_lines(ways, halves, framed))
    marks = "".join(_supports(ways, framed))
    return f"{_layer('lines', lines)}{_layer('supports', marks)}"


def _layer(name: str, parts: str) -> str:
    return f'<g class="layer {name}-layer" aria-hidden="true">{parts}</g>' if parts else ""


def _way(shown: Shown) -> _Way | None:
    """A beam whose axis was read, and that is not seen end on."""
    (x0, y0), (x1, y1) = shown.start, shown.end
    length = math.dist(shown.start, shown.end)
    if shown.beam.axis is None or length < 1.0:
        return None
    along = (x1 - x0) / length, (y1 - y0) / length
    return _Way(shown.start, along, length, length / shown.beam.length)


def _supports(ways: Mapping[str, _Way], framed: Framed) -> Iterator[str]:
    """All marks of one kind of a storey are one path; a question mark where nothing is known."""
    marks: dict[str, list[str]] = {}
    for key, way in ways.items():
        if (line := framed.lines.get(key)) is not None:
            for kind, data in _marks(line, key, way):
                marks.setdefault(kind, []).append(data)
    yield from (path("".join(marks[kind]), f"seat {kind}") for kind in sorted(marks))
    for key, way in ways.items():
        if key in framed.unknown:
            (x, y), (a, b), half = way.start, way.along, way.length / 2.0
            yield label(x + a * half, y + b * half + 4.0, "?", "unstood")


def _marks(line: FramedLine, key: str, way: _Way) -> Iterator[tuple[str, str]]:
    """Kind and data of the marks of one beam, an inner support once."""
    seen: set[int] = set()
    for span in line.of(key):
        for end, inward in ((span.start, 1.0), (span.end, -1.0)):
            if round(end.x) not in seen:
                seen.add(round(end.x))
                yield from _mark(end, inward, way)


def _mark(end: FramedEnd, inward: float, way: _Way) -> Iterator[tuple[str, str]]:
    at = way.within(end.x)
    if end.kind == "free":
        yield "tip", ring(at)
        return
    yield mark_kind(end), mark_data(end, at, (way.along[0] * inward, way.along[1] * inward))
    if end.kind == "fixed":
        yield "held", _across(at, way.along, REACH + 3.0)


def mark_kind(end: FramedEnd) -> str:
    """Return the class of the mark of a support."""
    return "stated" if end.stated else "below" if end.direct else "side"


def mark_data(end: FramedEnd, at: Place, inward: Place) -> str:
    """Return the mark of a support: a rhomb where it presses back, a clasp that opens into the
    beam where that frames into a side, a cross where the brief alone says that it is there."""
    (x, y), (a, b), r = at, inward, REACH
    if end.stated:
        return segment(x - r, y - r, x + r, y + r) + segment(x - r, y + r, x + r, y - r)
    if end.direct:
        corners = [(r, 0.0), (0.0, r), (-r, 0.0), (0.0, -r)]
    else:
        corners = [(r, r), (-r, r), (-r, -r), (r, -r)]
    data = line_path([(x + a * u - b * v, y + b * u + a * v) for u, v in corners])
    return f"{data}z" if end.direct else data


def ring(at: Place) -> str:
    """Return the mark of a tip."""
    (x, y), r = at, number(REACH)
    across = number(2.0 * REACH)
    return f"M{number(x - REACH)} {number(y)}a{r} {r} 0 1 0 {across} 0a{r} {r} 0 1 0-{across} 0z"


def _across(at: Place, along: Place, half: float) -> str:
    (x, y), (a, b) = at, along
    return segment(x - b * half, y + a * half, x + b * half, y - a * half)


def _lines(ways: Mapping[str, _Way], halves: Mapping[str, float], framed: Framed) -> Iterator[str]:
    """One stroke beside the beams of each line of several spans, with its inner supports."""
    drawn = dict.fromkeys(
        line for key in ways if (line := framed.lines.get(key)) and len(line.spans) > 1
    )
    yield path("".join(_line(line, ways, halves) for line in drawn), "joined")


def _line(line: FramedLine, ways: Mapping[str, _Way], halves: Mapping[str, float]) -> str:
    """The part of a line that lies on this storey."""
    here = [span for span in line.spans if span.beam in ways]
    beside = max(halves[span.beam] for span in here) + BESIDE
    stroke: list[Place] = []
    ticks: list[str] = []
    for span in here:
        way, sign = ways[span.beam], -1.0 if span.reversed else 1.0
        a, b = way.along[0] * sign, way.along[1] * sign
        places = [(x - b * beside, y + a * beside) for x, y in (way.at(e.x) for e in span.ends)]
        if stroke:
            ticks.append(_across(places[0], (a, b), TICK))
        stroke += places
    return line_path(stroke) + "".join(ticks)

"""Framing plans: one drawing per storey, true in position, width and orientation."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from html import escape

import numpy as np
import numpy.typing as npt

from ifccheck.beam import Axis, Beam, Box, Member, Model, Outline, Run
from ifccheck.framed import Framed
from ifccheck.publish.framed_words import standing_words
from ifccheck.publish.plan_labels import Labels, Stroke
from ifccheck.publish.plan_layers import Shown, frame_layers
from ifccheck.publish.svg import (
    Place,
    closed_path,
    label,
    number,
    path,
    segment,
)
from ifccheck.publish.tint import band
from ifccheck.publish.words import falls_short, plain, utilisation_words, verdict_phrase
from ifccheck.rating import Rating

Floats = npt.NDArray[np.float64]
_Breadth = Callable[[Outline], Place]

WIDTH, TALLEST, MARGIN = 1000.0, 620.0, 24.0
REACH = 300.0
"""Members this far below or above the beams of a storey are still drawn with them [mm]."""
LIGHT = {"IfcColumn": "column", "IfcWall": "wall", "IfcBeam": "member", "IfcMember": "member"}
"""Classes of other members that are drawn, by the beginning of their name."""
DRAW_ORDER = ("none", "u0", "u1", "u2", "u3", "u4", "over")
_CORNERS = np.array([(i, j, k) for i in (-1, 1) for j in (-1, 1) for k in (-1, 1)], dtype=float)


@dataclass(frozen=True, slots=True)
class Plan:
    """The framing plan of one storey."""

    storey: str
    elevation: float | None
    svg: str
    beams: int
    not_drawn: tuple[str, ...]
    """Marks of the beams whose place could not be read"""


@dataclass(frozen=True, slots=True)
class Look:
    """How a beam is shown in a plan, and what is said of it."""

    kind: str
    """Class of its tint"""
    told: str
    """Said when it is pointed at"""
    words: str = ""
    """With its mark"""
    always: bool = False
    """Whether the words are shown even where they lie over other beams"""
    more: tuple[str, ...] = ()
    """Said once all marks stand: the first that still finds room"""


@dataclass(frozen=True, slots=True)
class _Shape:
    """A beam seen from above [mm]."""

    beam: Beam
    whole: tuple[tuple[Place, ...], ...]
    stem: tuple[tuple[Place, ...], ...]
    """Narrower than the whole where a flange stands out above"""


@dataclass(frozen=True, slots=True)
class _Sheet:
    """From the building [mm] to the drawing, north up."""

    scale: float
    west: float
    north: float
    left: float
    height: float

    def place(self, point: Sequence[float]) -> Place:
        return (
            self.left + (point[0] - self.west) * self.scale,
            MARGIN + (self.north - point[1]) * self.scale,
        )


def framing_plans(
    model: Model,
    ratings: Mapping[str, Rating],
    rows: Mapping[str, int],
    framed: Framed | None = None,
) -> tuple[Plan, ...]:
    """Return a plan for every storey with beams, tinted by how much each beam is used."""
    looks = {beam.key: _rated(beam, ratings[beam.key], framed) for beam in model.beams}
    return storey_plans(model, looks, rows, framed)


def storey_plans(
    model: Model,
    looks: Mapping[str, Look],
    rows: Mapping[str, int],
    framed: Framed | None = None,
) -> tuple[Plan, ...]:
    """Return a plan for every storey with beams, from the lowest up.

    ``looks`` tells how each beam is shown, ``rows`` the number of the table row that it links to;
    ``framed`` how the beams were stood, where that is shown too.
    """
    members = _Members(model, framed)
    heights = {storey.name: storey.elevation for storey in model.storeys}
    by_storey: dict[str, list[Beam]] = {}
    for beam in model.beams:
        by_storey.setdefault(beam.storey, []).append(beam)
    ordered = sorted(by_storey, key=lambda name: (heights.get(name, math.inf), name))
    return tuple(
        _plan(name, heights.get(name), by_storey[name], members, looks, rows) for name in ordered
    )


def _rated(beam: Beam, rating: Rating, framed: Framed | None) -> Look:
    told, used = f"{beam.mark}: {verdict_phrase(rating)}", ""
    if not math.isnan(rating.utilisation):
        used = utilisation_words(rating.utilisation)
        told += f", utilisation {used}"
    if framed is not None:
        told += f"; {standing_words(framed, beam.key)}"
    return Look(band(rating), told, used, always=falls_short(rating.utilisation))


class _Members:
    """The boxes of all members, seen from above, and how the beams among them were stood."""

    def __init__(self, model: Model, framed: Framed | None) -> None:
        self.framed = framed
        beams = {beam.step_id for beam in model.beams}
        self.hulls = {m.step_id: _hull(m.box) for m in model.members if m.step_id in beams}
        self.others = [
            (kind, _hull(m.box), _low_and_high(m.box))
            for m in model.members
            if m.step_id not in beams and (kind := _kind(m))
        ]

    def near(self, low: float, high: float) -> list[tuple[str, tuple[Place, ...]]]:
        """The light members that reach into the heights of a storey's beams."""
        return [
            (kind, hull)
            for kind, hull, (bottom, top) in self.others
            if bottom <= high + REACH and top >= low - REACH
        ]


def _kind(member: Member) -> str | None:
    return next((kind for name, kind in LIGHT.items() if member.ifc_class.startswith(name)), None)


def _corners(box: Box) -> Floats:
    axes = np.array(box.axes) * np.array(box.half)[:, None]
    return np.asarray(np.array(box.centre) + _CORNERS @ axes)


def _low_and_high(box: Box) -> tuple[float, float]:
    heights = _corners(box)[:, 2]
    return float(heights.min()), float(heights.max())


def _hull(box: Box) -> tuple[Place, ...]:
    """The box's outline from above: the convex hull of its corners."""
    places = sorted({(round(float(x), 1), round(float(y), 1)) for x, y, _ in _corners(box)})
    return (*_half_hull(places), *_half_hull(places[::-1]))


def _half_hull(places: Sequence[Place]) -> list[Place]:
    chain: list[Place] = []
    for place in places:
        while len(chain) > 1 and _turn(chain[-2], chain[-1], place) <= 0.0:
            chain.pop()
        chain.append(place)
    return chain[:-1]


def _turn(a: Place, b: Place, c: Place) -> float:
    return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])


def _plan(
    name: str,
    elevation: float | None,
    beams: Sequence[Beam],
    members: _Members,
    looks: Mapping[str, Look],
    rows: Mapping[str, int],
) -> Plan:
    shapes = [shape for beam in beams if (shape := _shape(beam, members.hulls))]
    drawn = {shape.beam.key for shape in shapes}
    missing = tuple(beam.mark for beam in beams if beam.key not in drawn)
    if not shapes:
        return Plan(name, elevation, "", len(beams), missing)
    others = members.near(*_heights(shapes))
    sheet = _fitted([p for s in shapes for ring in s.whole for p in ring])
    shapes.sort(key=lambda s: DRAW_ORDER.index(looks[s.beam.key].kind))
    parts = [path(closed_path(map(sheet.place, hull)), kind) for kind, hull in others]
    parts += [_beam(shape, sheet, looks[shape.beam.key], rows[shape.beam.key]) for shape in shapes]
    if members.framed is not None:
        shown = [
            Shown(shape.beam, *_ends(shape, sheet), _half_width(shape) * sheet.scale)
            for shape in shapes
        ]
        parts.append(frame_layers(shown, members.framed))
    parts += _marks(shapes, sheet, looks)
    parts.append(_scale_bar(sheet))
    title = escape(plain(f"Framing plan of {name or 'no storey'}"), quote=True)
    svg = (
        f'<svg class="plan" viewBox="0 0 {number(WIDTH)} {number(sheet.height)}" role="group"'
        f' tabindex="0" aria-label="{title}: arrow keys move from beam to beam, Enter opens its'
        f' sheet">{"".join(parts)}</svg>'
    )
    return Plan(name, elevation, svg, len(beams), missing)


def _heights(shapes: Sequence[_Shape]) -> tuple[float, float]:
    axes = [shape.beam.axis for shape in shapes if shape.beam.axis]
    ends = [axis.origin[2] + t * axis.x[2] for axis in axes for t in (0.0, axis.length)]
    depths = [z for s in shapes for run in s.beam.runs for _, z in run.outline.rings[0]]
    return min(ends, default=math.inf), max(ends, default=-math.inf) + max(depths, default=0.0)


def _shape(beam: Beam, hulls: Mapping[int, tuple[Place, ...]]) -> _Shape | None:
    if beam.axis is None or not beam.runs:
        hull = hulls.get(beam.step_id)
        return _Shape(beam, (hull,), (hull,)) if hull and len(hull) > 2 else None
    axis = beam.axis
    whole = tuple(_seen_from_above(axis, run, _breadth) for run in beam.runs)
    return _Shape(beam, whole, tuple(_seen_from_above(axis, run, _stem) for run in beam.runs))


def _breadth(outline: Outline) -> Place:
    across = [y for y, _ in outline.rings[0]]
    return min(across), max(across)


def _stem(outline: Outline) -> Place:
    """Breadth of the lower half, which a flange above does not widen."""
    ring = outline.rings[0]
    heights = [z for _, z in ring]
    middle = (max(heights) + min(heights)) / 2.0
    across = [y for y, z in ring if z < middle]
    for (y0, z0), (y1, z1) in zip(ring, (*ring[1:], ring[0]), strict=True):
        if (z0 < middle) != (z1 < middle):
            across.append(y0 + (y1 - y0) * (middle - z0) / (z1 - z0))
    return min(across), max(across)


def _seen_from_above(axis: Axis, run: Run, breadth: _Breadth) -> tuple[Place, ...]:
    first = breadth(run.outline)
    last = breadth(run.outline_end or run.outline)
    return (
        _above(axis, run.start, first[0]),
        _above(axis, run.end, last[0]),
        _above(axis, run.end, last[1]),
        _above(axis, run.start, first[1]),
    )


def _above(axis: Axis, x: float, y: float) -> Place:
    return (
        axis.origin[0] + x * axis.x[0] + y * axis.y[0],
        axis.origin[1] + x * axis.x[1] + y * axis.y[1],
    )


def _fitted(places: Sequence[Place]) -> _Sheet:
    eastings, northings = [p[0] for p in places], [p[1] for p in places]
    wide = max(max(eastings) - min(eastings), 1.0)
    high = max(max(northings) - min(northings), 1.0)
    scale = min((WIDTH - 2 * MARGIN) / wide, TALLEST / high)
    height = 2 * MARGIN + high * scale + 22.0
    return _Sheet(scale, min(eastings), max(northings), (WIDTH - wide * scale) / 2.0, height)


def _beam(shape: _Shape, sheet: _Sheet, look: Look, row: int) -> str:
    kind = look.kind
    stem = "".join(closed_path(map(sheet.place, ring)) for ring in shape.stem)
    whole = "".join(closed_path(map(sheet.place, ring)) for ring in shape.whole)
    flange = path(whole, f"{kind} flange") if whole != stem else ""
    dashes = path(_along(shape, sheet), "dashes") if kind == "over" else ""
    told = escape(plain(look.told))
    return (
        f'<a href="#r{row}" data-row="{row}" tabindex="-1"><title>{told}</title>'
        f"{flange}{path(stem, f'{kind} body')}{dashes}"
        f"{path(_start_mark(shape, sheet), 'start')}</a>"
    )


def _ends(shape: _Shape, sheet: _Sheet) -> tuple[Place, Place]:
    """The ends of the stem's middle line; the longer way of a beam of which only the box is
    known."""
    first, last = shape.stem[0], shape.stem[-1]
    if shape.beam.axis is None and math.dist(first[0], first[1]) < math.dist(first[1], first[2]):
        first = last = (*first[1:], first[0])
    return sheet.place(_middle(first[0], first[-1])), sheet.place(_middle(last[1], last[2]))


def _middle(one: Place, other: Place) -> Place:
    return (one[0] + other[0]) / 2.0, (one[1] + other[1]) / 2.0


def _along(shape: _Shape, sheet: _Sheet) -> str:
    start, end = _ends(shape, sheet)
    return segment(*start, *end)


def _start_mark(shape: _Shape, sheet: _Sheet) -> str:
    """A stroke across the beam near its start, standing out on both sides."""
    (x0, y0), (x1, y1) = _ends(shape, sheet)
    length = math.hypot(x1 - x0, y1 - y0)
    if shape.beam.axis is None or length < 1.0:
        return ""
    along, across = ((x1 - x0) / length, (y1 - y0) / length), _half_width(shape) * sheet.scale + 2.5
    inset = min(5.0, length / 6.0)
    x, y = x0 + along[0] * inset, y0 + along[1] * inset
    return segment(
        x - along[1] * across, y + along[0] * across, x + along[1] * across, y - along[0] * across
    )


def _half_width(shape: _Shape) -> float:
    first = shape.stem[0]
    breadth = math.dist(first[0], first[-1])
    if shape.beam.axis is None:
        breadth = min(breadth, math.dist(first[0], first[1]))
    return breadth / 2.0


def _marks(shapes: Sequence[_Shape], sheet: _Sheet, looks: Mapping[str, Look]) -> Iterator[str]:
    """Mark and words beside each beam, or the mark alone, where there is room."""
    strokes = {s.beam.key: Stroke(*_ends(s, sheet), _half_width(s) * sheet.scale) for s in shapes}
    labels = Labels(list(strokes.values()))
    for shape in reversed(shapes):
        look, stroke = looks[shape.beam.key], strokes[shape.beam.key]
        yield labels.set(stroke, plain(shape.beam.mark), look.words, always=look.always)
    for shape in reversed(shapes):
        more = [plain(text) for text in looks[shape.beam.key].more]
        yield labels.add(strokes[shape.beam.key], more)


def _scale_bar(sheet: _Sheet) -> str:
    metre = 1000.0 * sheet.scale
    length = next((m for m in (50, 20, 10, 5, 2, 1) if m * metre <= 180.0), 1)
    x, y = MARGIN, sheet.height - 10.0
    end = x + length * metre
    bar = f"{segment(x, y - 3, x, y + 3)}{segment(x, y, end, y)}{segment(end, y - 3, end, y + 3)}"
    return path(bar, "scale") + label(end + 6.0, y + 3.0, f"{length} m", "scale-text")

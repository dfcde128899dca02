"""How far one source of reinforcement differs from the one that rates a beam, in numbers."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import NamedTuple

from ifccheck.beam import Bars, Beam, DescribedZone, Face, Reinforcement
from ifccheck.units import show

AGREEMENT = 0.05
"""Sources whose areas differ by no more than this part are taken to agree."""
LEAST_STRETCH = 0.05
"""Differences over less than this part of the length, as where bars end, are left out."""
LEAST_SHIFT = 5.0
"""Places that differ by no more than this are taken to be one: rounding of drawings [mm]"""
MOST_STRETCHES = 3
"""Stretches that are told of each kind of steel."""


class _Amount(NamedTuple):
    """Steel at a place: bars [mm2], stirrups [mm2/mm], or how far from a face it lies [mm]; None
    where the source does not say."""

    value: float | None
    text: str


class _Stretch(NamedTuple):
    start: float
    end: float
    taken: _Amount
    other: _Amount


@dataclass(frozen=True, slots=True)
class _Steel:
    """One kind of steel, and how much of it a source has at a place, or where it lies there."""

    name: str
    at: Callable[[Beam, Reinforcement, float], _Amount]
    is_place: bool = False
    """A place that only the other source gives is no difference."""

    def differs(self, stretch: _Stretch) -> bool:
        """Whether the sources differ on a stretch."""
        one, two = stretch.taken.value, stretch.other.value
        if two is None:
            return False
        if one is None:
            return two > 0.0 and not self.is_place
        least = LEAST_SHIFT if self.is_place else 0.0
        return abs(one - two) > max(AGREEMENT * max(one, two), least)


def difference(beam: Beam, taken: Reinforcement, other: Reinforcement) -> str:
    """Return how another source differs from the one that is used, empty where they agree.

    Areas are compared face by face wherever either changes along the beam, and so are the clear
    cover and the distance of the bars from their face where both give them. What the other source
    does not speak of is no difference; steel of which only the other speaks is one.
    """
    parts = [part for steel in _KINDS for part in _told(beam, steel, taken, other)]
    return f"{taken.source} used; {other.source} differs: {'; '.join(parts)}" if parts else ""


def _told(beam: Beam, steel: _Steel, taken: Reinforcement, other: Reinforcement) -> Iterator[str]:
    found = [
        stretch
        for stretch in _stretches(beam, steel, taken, other)
        if stretch.end - stretch.start >= LEAST_STRETCH * beam.length and steel.differs(stretch)
    ]
    for stretch in found[:MOST_STRETCHES]:
        yield f"{steel.name} {_words(stretch, taken.source)}{_where(beam, stretch)}"
    if len(found) > MOST_STRETCHES:
        yield f"{steel.name} on {len(found) - MOST_STRETCHES} more stretches"


def _stretches(
    beam: Beam, steel: _Steel, taken: Reinforcement, other: Reinforcement
) -> list[_Stretch]:
    """The beam cut where either source changes; neighbours of equal amounts made one."""
    places = {0.0, beam.length, *_ends(beam, taken), *_ends(beam, other)}
    cuts = sorted(place for place in places if 0.0 <= place <= beam.length)
    found: list[_Stretch] = []
    for start, end in pairwise(cuts):
        middle = 0.5 * (start + end)
        amounts = steel.at(beam, taken, middle), steel.at(beam, other, middle)
        if found and (found[-1].taken, found[-1].other) == amounts:
            start = found.pop().start
        found.append(_Stretch(start, end, *amounts))
    return found


def _ends(beam: Beam, source: Reinforcement) -> Iterator[float]:
    for bar in source.bars:
        yield from (bar.start, bar.end)
    for stirrups in source.stirrups:
        yield from (stirrups.start, stirrups.end)
    for zone in source.zones:
        yield from _extent(beam, zone)


def _extent(beam: Beam, zone: DescribedZone) -> tuple[float, float]:
    return (
        0.0 if zone.start is None else zone.start,
        beam.length if zone.end is None else zone.end,
    )


def _words(stretch: _Stretch, used: str) -> str:
    one, two = stretch.taken, stretch.other
    if one.value is None:
        return f"{two.text}, not stated by {used}"
    more = 100.0 * (two.value / one.value - 1.0) if one.value and two.value else None
    percent = "" if more is None else f" ({more:+.0f} %)"
    return f"{two.text} against {one.text}{percent}"


def _where(beam: Beam, stretch: _Stretch) -> str:
    margin = LEAST_STRETCH * beam.length
    if stretch.start < margin and stretch.end > beam.length - margin:
        return ""
    return f" between {show(stretch.start, 'length')} and {show(stretch.end, 'length')}"


# How much of each ---------------------------------------------------------------------------------


def _zones_at(beam: Beam, source: Reinforcement, x: float) -> list[DescribedZone]:
    extents = [(zone, *_extent(beam, zone)) for zone in source.zones]
    return [zone for zone, start, end in extents if start <= x <= end]


def _bottom(beam: Beam, source: Reinforcement, x: float) -> _Amount:
    if source.zones:
        return _described(_zones_at(beam, source, x), "bottom")
    low, _ = _thirds(beam)
    return _drawn([bar for bar in source.bars if bar.z < low], x)


def _top(beam: Beam, source: Reinforcement, x: float) -> _Amount:
    if source.zones:
        return _described(_zones_at(beam, source, x), "top")
    _, high = _thirds(beam)
    return _drawn([bar for bar in source.bars if bar.z > high], x)


def _described(zones: Sequence[DescribedZone], face: Face) -> _Amount:
    stated = [groups for zone in zones if (groups := getattr(zone, face)) is not None]
    rows = [row.group for zone in zones for row in zone.rows if row.face == face]
    if not stated and not rows:
        return _NOT_STATED
    return _area(sum(group.count * group.area for groups in (*stated, rows) for group in groups))


def _drawn(bars: Sequence[Bars], x: float) -> _Amount:
    return _area(sum(bar.count * bar.area for bar in bars if bar.start <= x <= bar.end))


def _area(area: float) -> _Amount:
    return _Amount(area, show(area, "area") if area else "none")


def _stirrups(beam: Beam, source: Reinforcement, x: float) -> _Amount:
    if source.zones:
        zones = _zones_at(beam, source, x)
        groups = [zone.stirrups for zone in zones if zone.stirrups is not None]
        if not groups and not any(zone.no_stirrups for zone in zones):
            return _NOT_STATED
        return _per_length([(group.legs, group.area, group.spacing) for group in groups])
    sets = [each for each in source.stirrups if each.start <= x <= each.end]
    return _per_length([(each.legs, each.leg_area, each.spacing) for each in sets])


def _per_length(sets: Sequence[tuple[int | None, float, float]]) -> _Amount:
    """Stirrups as legs, area of a leg [mm2] and spacing [mm], together."""
    known = [(legs * area, spacing) for legs, area, spacing in sets if legs is not None]
    if len(known) < len(sets):
        return _NOT_STATED
    each = " + ".join(f"{area:.0f} mm2 at {spacing:.0f} mm" for area, spacing in known)
    ratio = sum(area / spacing for area, spacing in known)
    return _Amount(ratio, f"{each}, {1000.0 * ratio:.0f} mm2/m" if known else "none")


def _bottom_place(beam: Beam, source: Reinforcement, x: float) -> _Amount:
    return _place(beam, source, x, "bottom")


def _top_place(beam: Beam, source: Reinforcement, x: float) -> _Amount:
    return _place(beam, source, x, "top")


def _place(beam: Beam, source: Reinforcement, x: float, face: Face) -> _Amount:
    """How far the middle of the bars of a face lies from it; not stated where any is given by its
    number alone."""
    placed: list[tuple[float, float]]
    if source.zones:
        zones = _zones_at(beam, source, x)
        rows = [row for zone in zones for row in zone.rows if row.face == face]
        placed = (
            []
            if any(getattr(zone, face) for zone in zones)
            else [(row.group.count * row.group.area, row.z) for row in rows]
        )
    else:
        low, high = _thirds(beam)
        there = [bar for bar in source.bars if bar.start <= x <= bar.end]
        of_face = [bar for bar in there if (bar.z < low if face == "bottom" else bar.z > high)]
        placed = [(bar.count * bar.area, bar.z) for bar in of_face]
    area = sum(each for each, _ in placed)
    if not area:
        return _NOT_STATED
    bottom, top = _heights(beam)
    height = sum(each * z for each, z in placed) / area
    return _distance(height - bottom if face == "bottom" else top - height)


def _cover(beam: Beam, source: Reinforcement, x: float) -> _Amount:
    """Clear cover: as stated, the greatest of several, or as the stirrups are drawn, the least."""
    if source.zones:
        stated = [zone.cover for zone in _zones_at(beam, source, x) if zone.cover is not None]
        return _distance(max(stated)) if stated else _NOT_STATED
    if len({end for run in beam.runs for end in (run.outline, run.outline_end) if end}) > 1:
        return _NOT_STATED
    bottom, top = _heights(beam)
    sets = [each for each in source.stirrups if each.start <= x <= each.end]
    drawn = [each.bottom - bottom for each in sets if each.bottom is not None]
    drawn += [top - each.top for each in sets if each.top is not None]
    return _distance(min(drawn)) if drawn else _NOT_STATED


def _distance(distance: float) -> _Amount:
    return _Amount(distance, show(distance, "dimension"))


_NOT_STATED = _Amount(None, "")
_KINDS = (
    _Steel("bottom bars", _bottom),
    _Steel("top bars", _top),
    _Steel("stirrups", _stirrups),
    _Steel("clear cover", _cover, is_place=True),
    _Steel("middle of the bottom bars from the soffit", _bottom_place, is_place=True),
    _Steel("middle of the top bars from the top", _top_place, is_place=True),
)


def _thirds(beam: Beam) -> tuple[float, float]:
    """Heights below which bars are bottom bars, and above which they are top bars [mm]."""
    low, high = _heights(beam)
    return low + (high - low) / 3.0, high - (high - low) / 3.0


def _heights(beam: Beam) -> tuple[float, float]:
    """The least and the greatest height of the outlines along a beam [mm]."""
    outlines = [end for run in beam.runs for end in (run.outline, run.outline_end) if end]
    heights = [z for outline in outlines for ring in outline.rings for _, z in ring]
    return min(heights, default=0.0), max(heights, default=0.0)

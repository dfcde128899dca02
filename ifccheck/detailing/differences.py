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
MOST_STRETCHES = 3
"""Stretches that are told of each kind of steel."""


class _Amount(NamedTuple):
    """Steel at a place: bars [mm2], or stirrups [mm2/mm]; None where the source does not say."""

    value: float | None
    text: str


class _Stretch(NamedTuple):
    start: float
    end: float
    taken: _Amount
    other: _Amount


@dataclass(frozen=True, slots=True)
class _Steel:
    """One kind of steel, and how much of it a source has at a place."""

    name: str
    at: Callable[[Beam, Reinforcement, float], _Amount]


def difference(beam: Beam, taken: Reinforcement, other: Reinforcement) -> str:
    """Return how another source differs from the one that is used, empty where they agree.

    Areas are compared face by face wherever either changes along the beam. What the other
    source does not speak of is no difference; what only the other speaks of is one.
    """
    parts = [part for steel in _KINDS for part in _told(beam, steel, taken, other)]
    return f"{taken.source} used; {other.source} differs: {'; '.join(parts)}" if parts else ""


def _told(beam: Beam, steel: _Steel, taken: Reinforcement, other: Reinforcement) -> Iterator[str]:
    found = [
        stretch
        for stretch in _stretches(beam, steel, taken, other)
        if stretch.end - stretch.start >= LEAST_STRETCH * beam.length and _differ(stretch)
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


def _differ(stretch: _Stretch) -> bool:
    one, two = stretch.taken.value, stretch.other.value
    if two is None:
        return False
    if one is None:
        return two > 0.0
    return abs(one - two) > AGREEMENT * max(one, two)


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


_NOT_STATED = _Amount(None, "")
_KINDS = (
    _Steel("bottom bars", _bottom),
    _Steel("top bars", _top),
    _Steel("stirrups", _stirrups),
)


def _thirds(beam: Beam) -> tuple[float, float]:
    """Heights below which bars are bottom bars, and above which they are top bars [mm]."""
    outlines = [end for run in beam.runs for end in (run.outline, run.outline_end) if end]
    heights = [z for outline in outlines for ring in outline.rings for _, z in ring]
    low, high = min(heights, default=0.0), max(heights, default=0.0)
    return low + (high - low) / 3.0, high - (high - low) / 3.0

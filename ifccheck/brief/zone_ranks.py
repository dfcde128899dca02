"""Zones of a row for one beam laid over those of rows for many, field by field."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence, Set
from dataclasses import replace
from itertools import pairwise
from typing import Any, NamedTuple

from ifccheck.beam import Beam, DescribedZone, Remark
from ifccheck.units import show

BARS = ("top", "bottom", "side")
STEEL = (*BARS, "stirrups")
VALUES = ("cover", "bar_yield", "stirrup_yield")
YIELDS = {"bar_yield": BARS, "stirrup_yield": ("stirrups",)}
"""Fields of the steel that each yield strength is of."""
_SHORTEST = 1.0
"""Stretches shorter than this [mm] are not told apart."""
_Place = tuple[float, float]
_Key = tuple[str, str, str]
"""The row that replaces, the row that is replaced, and the field."""


class Merged(NamedTuple):
    """Zones of which no two contradict each other, and what replaced what."""

    zones: tuple[DescribedZone, ...]
    remarks: tuple[Remark, ...]


def by_rank(beam: Beam, own: Sequence[DescribedZone], wide: Sequence[DescribedZone]) -> Merged:
    """Return the zones of rows for the beam itself before those of rows for many beams.

    Where both hold, a field of which the first speaks is taken from it alone. Steel without a
    yield strength of its own keeps that of the steel which it replaces.
    """
    zones: list[DescribedZone] = []
    replaced: dict[_Key, list[_Place]] = {}
    for start, end in _stretches(beam, (*own, *wide)):
        first, second = (_held(beam, each, start, end) for each in (own, wide))
        zones += [_completed(zone, second, start, end) for zone in first]
        for zone in second:
            overruled = [(name, z) for name in (*STEEL, *VALUES) for z in first if speaks(z, name)]
            names = {name for name, _ in overruled}
            zones += _without(replace(zone, start=start, end=end), names)
            for name, exact in overruled:
                if speaks(zone, name) and _said(zone, name) != _said(exact, name):
                    key = (exact.origin, zone.origin, name)
                    replaced.setdefault(key, []).append((start, end))
    return Merged(tuple(zones), tuple(_remarks(beam, replaced)))


def extent(beam: Beam, zone: DescribedZone) -> tuple[float, float]:
    """Return where a zone starts and ends [mm]."""
    return (
        0.0 if zone.start is None else zone.start,
        beam.length if zone.end is None else zone.end,
    )


def speaks(zone: DescribedZone, name: str) -> bool:
    """Return whether a zone says anything of a field."""
    return getattr(zone, name) is not None or (name == "stirrups" and zone.no_stirrups)


def _stretches(beam: Beam, zones: Sequence[DescribedZone]) -> Iterator[tuple[float, float]]:
    cuts: list[float] = []
    for place in sorted(place for zone in zones for place in extent(beam, zone)):
        if not cuts or place - cuts[-1] > _SHORTEST:
            cuts.append(place)
    yield from pairwise(cuts)


def _held(
    beam: Beam, zones: Sequence[DescribedZone], start: float, end: float
) -> list[DescribedZone]:
    """Zones that hold on a stretch."""
    middle = 0.5 * (start + end)
    extents = [(zone, *extent(beam, zone)) for zone in zones]
    return [zone for zone, low, high in extents if low <= middle <= high]


def _completed(
    zone: DescribedZone, wide: Sequence[DescribedZone], start: float, end: float
) -> DescribedZone:
    """A zone on a stretch, with the yields of the steel that it replaces and is silent on."""
    values: dict[str, Any] = {}
    for name, steel in YIELDS.items():
        for other in wide if getattr(zone, name) is None else ():
            given = getattr(other, name)
            if given is not None and any(speaks(zone, s) and speaks(other, s) for s in steel):
                values[name] = min(values.get(name, given), given)
    return replace(zone, start=start, end=end, **values)


def _without(zone: DescribedZone, names: Set[str]) -> list[DescribedZone]:
    """A zone without the fields of some names; none where nothing is left of it.

    A yield strength goes with the last of the steel that it is of.
    """
    blank: dict[str, Any] = dict.fromkeys(names)
    if "stirrups" in names:
        blank["no_stirrups"] = False
    for name, steel in YIELDS.items():
        stated = {each for each in steel if speaks(zone, each)}
        if stated and stated <= names:
            blank[name] = None
    left = replace(zone, **blank)
    return [left] if any(speaks(left, name) for name in (*STEEL, *VALUES)) else []


def _said(zone: DescribedZone, name: str) -> object:
    return (getattr(zone, name), zone.no_stirrups if name == "stirrups" else False)


def _remarks(beam: Beam, replaced: Mapping[_Key, Sequence[_Place]]) -> Iterator[Remark]:
    together: dict[tuple[str, str, tuple[_Place, ...]], list[str]] = {}
    for (exact, wide, name), places in replaced.items():
        together.setdefault((exact, wide, tuple(places)), []).append(name.replace("_", " "))
    for (exact, wide, held), names in together.items():
        low, high = held[0][0], held[-1][1]
        where = f" between {show(low, 'length')} and {show(high, 'length')}"
        whole = low <= _SHORTEST and high >= beam.length - _SHORTEST
        text = f"{exact} names the beam and replaces {', '.join(names)} of {wide}"
        yield Remark(beam.key, "schedule", text + ("" if whole else where), "note")

"""Which of several sources rates a beam, and how far the others differ from it."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from typing import NamedTuple

from ifccheck.beam import (
    Bars,
    Beam,
    DescribedZone,
    Face,
    Reason,
    Reinforcement,
    Remark,
    SourceName,
    Stirrups,
)
from ifccheck.units import show

STAGE = "reinforcement"

AGREEMENT = 0.05
"""Sources whose totals differ by no more than this are taken to agree."""


class Chosen(NamedTuple):
    """The source that rates a beam; None where there is none, and why."""

    reinforcement: Reinforcement | None
    remarks: tuple[Remark, ...] = ()
    reasons: tuple[Reason, ...] = ()


def choose_source(beam: Beam, order: Sequence[SourceName]) -> Chosen:
    """Take the first source in the order that speaks, and report what the others say.

    What a source could not read makes the beam not rated where that source is the one taken,
    or where no source speaks at all; otherwise it is a remark.
    """
    found = [r for source in order for r in beam.reinforcement if r.source == source]
    speaking = [r for r in found if _speaks(r)]
    if not speaking:
        reasons = tuple(reason for r in found for reason in r.reasons)
        remarks = tuple(remark for r in found for remark in r.remarks)
        return Chosen(None, remarks, reasons or (Reason(_nothing(beam)),))
    taken, others = speaking[0], speaking[1:]
    unread = [
        Remark(beam.key, STAGE, f"{r.source}: {reason.text}; {taken.source} used instead", "doubt")
        for r in found
        if r is not taken
        for reason in r.reasons
    ]
    differing = [_difference(beam, taken, other) for other in others]
    return Chosen(
        taken, (*taken.remarks, *unread, *(r for r in differing if r is not None)), taken.reasons
    )


def _nothing(beam: Beam) -> str:
    unused = sorted({r.source for r in beam.reinforcement if _speaks(r)})
    if not unused:
        return "no reinforcement found"
    return f"no reinforcement found in the sources of the brief (the model has {', '.join(unused)})"


def _speaks(reinforcement: Reinforcement) -> bool:
    if reinforcement.bars or reinforcement.stirrups:
        return True
    return any(
        zone.top is not None
        or zone.bottom is not None
        or zone.side is not None
        or zone.stirrups is not None
        or zone.no_stirrups
        or zone.rows
        for zone in reinforcement.zones
    )


@dataclass(frozen=True, slots=True)
class _Totals:
    """Greatest steel anywhere along the beam; None where the source does not say."""

    bottom: float | None
    """[mm2]"""
    top: float | None
    """[mm2]"""
    stirrups: float | None
    """Area of all legs per length [mm2/mm]"""


def _difference(beam: Beam, taken: Reinforcement, other: Reinforcement) -> Remark | None:
    one, two = _totals(beam, taken), _totals(beam, other)
    parts = [
        *_differs("bottom bars", one.bottom, two.bottom, _area),
        *_differs("top bars", one.top, two.top, _area),
        *_differs("stirrups", one.stirrups, two.stirrups, _area_per_length),
    ]
    if not parts:
        return None
    text = f"{taken.source} used; {other.source} differs: {'; '.join(parts)}"
    return Remark(beam.key, STAGE, text, "doubt")


def _differs(
    what: str, one: float | None, two: float | None, write: Callable[[float], str]
) -> list[str]:
    if one is None or two is None:
        return []
    if abs(one - two) <= AGREEMENT * max(one, two):
        return []
    return [f"{what} {write(two)} against {write(one)}"]


def _area(area: float) -> str:
    return show(area, "area")


def _area_per_length(area: float) -> str:
    return f"{area * 1000.0:.0f} mm2/m"


def _totals(beam: Beam, source: Reinforcement) -> _Totals:
    if source.zones:
        return _described_totals(source.zones)
    low, high = _thirds(beam)
    return _Totals(
        bottom=_greatest_together([b for b in source.bars if b.z < low]),
        top=_greatest_together([b for b in source.bars if b.z > high]),
        stirrups=_greatest(_stirrup_ratio(s) for s in source.stirrups),
    )


def _described_totals(zones: Sequence[DescribedZone]) -> _Totals:
    bottom, top = (
        [sum(g.count * g.area for g in groups) for groups in faces if groups is not None]
        for faces in ([z.bottom for z in zones], [z.top for z in zones])
    )
    bottom += _greatest_of_rows(zones, "bottom")
    top += _greatest_of_rows(zones, "top")
    ratios: list[float | None] = [0.0 for zone in zones if zone.no_stirrups]
    for zone in zones:
        if zone.stirrups is not None:
            group = zone.stirrups
            known = group.legs is not None
            ratios.append((group.legs or 0) * group.area / group.spacing if known else None)
    return _Totals(
        bottom=max(bottom, default=None),
        top=max(top, default=None),
        stirrups=_greatest(ratios) if ratios else None,
    )


def _greatest_of_rows(zones: Sequence[DescribedZone], face: Face) -> list[float]:
    """Greatest area of rows at a face that any section holds [mm2]; empty where there are none."""
    spans = [(zone.start or 0.0, math.inf if zone.end is None else zone.end) for zone in zones]
    areas = [
        sum(row.group.count * row.group.area for row in zone.rows if row.face == face)
        for zone in zones
    ]
    held = [(start, end, area) for (start, end), area in zip(spans, areas, strict=True) if area]
    return [sum(area for s, e, area in held if s <= x < e) for x, _, _ in held]


def _thirds(beam: Beam) -> tuple[float, float]:
    """Heights below which bars are bottom bars, and above which they are top bars [mm]."""
    outlines = [end for run in beam.runs for end in (run.outline, run.outline_end) if end]
    heights = [z for outline in outlines for ring in outline.rings for _, z in ring]
    low, high = min(heights, default=0.0), max(heights, default=0.0)
    return low + (high - low) / 3.0, high - (high - low) / 3.0


def _greatest_together(bars: Sequence[Bars]) -> float:
    """Greatest area that any section along the beam holds [mm2]."""
    starts = [bar.start for bar in bars]
    return max(
        (sum(b.count * b.area for b in bars if b.start <= x < b.end) for x in starts), default=0.0
    )


def _stirrup_ratio(stirrups: Stirrups) -> float | None:
    if stirrups.legs is None:
        return None
    return stirrups.legs * stirrups.leg_area / stirrups.spacing


def _greatest(ratios: Iterable[float | None]) -> float | None:
    """The greatest; None where any is not known, 0 where there are none."""
    found = list(ratios)
    known = [ratio for ratio in found if ratio is not None]
    return max(known, default=0.0) if len(known) == len(found) else None

"""The beam schedule laid on the beams: described zones of reinforcement."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from itertools import combinations

from ifccheck.beam import Beam, DescribedZone, Reason, Reinforcement, Remark
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Position, ScheduleRow
from ifccheck.brief.selecting import Found, parts_of
from ifccheck.units import show

TOLERANCE = 1.0
"""Distance [mm] by which a zone may lie beyond the end of a beam, or over another zone."""
STEEL = ("top", "bottom", "side", "stirrups")
VALUES = ("cover", "bar_yield", "stirrup_yield")


def with_schedule(
    rows: Sequence[ScheduleRow], matches: Matches, beams: Mapping[str, Beam]
) -> dict[str, Beam]:
    """Return the beams with what the schedule says of their reinforcement.

    Rows that contradict each other, or reach beyond the beam, become reasons not to rate it.
    """
    rows_of: dict[str, list[ScheduleRow]] = {}
    for row in rows:
        for key in matches[row.place]:
            rows_of.setdefault(key, []).append(row)
    return {
        key: replace(beam, reinforcement=(*beam.reinforcement, _described(beam, rows_of[key])))
        if key in rows_of
        else beam
        for key, beam in beams.items()
    }


def schedule_remarks(rows: Sequence[ScheduleRow], found: Sequence[Found]) -> tuple[Remark, ...]:
    """Return a remark for every mark of the schedule that is in no model of the run."""
    return tuple(
        Remark(
            None,
            "schedule",
            f"{row.place}: no beam is marked {' '.join(part.beams or ())}, the row is not used",
            "doubt",
        )
        for row in rows
        for place, part in parts_of(row)
        if not any(of_model[place] for of_model in found)
    )


def _described(beam: Beam, rows: Sequence[ScheduleRow]) -> Reinforcement:
    zones = tuple(_zone(beam, row) for row in rows)
    return Reinforcement(
        source="schedule", zones=zones, reasons=(*_beyond(beam, zones), *_conflicts(beam, zones))
    )


def _zone(beam: Beam, row: ScheduleRow) -> DescribedZone:
    return DescribedZone(
        start=_place(beam, row.start),
        end=_place(beam, row.end),
        top=row.top,
        bottom=row.bottom,
        side=row.side,
        stirrups=row.stirrups,
        no_stirrups=row.no_stirrups,
        cover=row.cover,
        bar_yield=row.bar_yield,
        stirrup_yield=row.stirrup_yield,
        origin=row.place,
    )


def _place(beam: Beam, position: Position | None) -> float | None:
    if position is None or beam.axis is None:
        return None
    x = position.on(beam.length)
    return min(x, beam.length) if x <= beam.length + TOLERANCE else x


def _extent(beam: Beam, zone: DescribedZone) -> tuple[float, float]:
    return (
        0.0 if zone.start is None else zone.start,
        beam.length if zone.end is None else zone.end,
    )


def _beyond(beam: Beam, zones: Sequence[DescribedZone]) -> list[Reason]:
    reasons = []
    for zone in zones:
        start, end = _extent(beam, zone)
        if end > beam.length + TOLERANCE:
            text = f"{zone.origin}: reaches to {show(end, 'length')}, beyond the beam's end"
            reasons.append(Reason(text))
        elif beam.axis is not None and end <= start:
            reasons.append(Reason(f"{zone.origin}: the zone has no length on this beam"))
    return reasons


def _conflicts(beam: Beam, zones: Sequence[DescribedZone]) -> list[Reason]:
    """Rows that speak of the same thing at the same place: bars twice, or unequal values."""
    reasons = []
    for one, other in combinations(zones, 2):
        (a, b), (c, d) = _extent(beam, one), _extent(beam, other)
        if min(b, d) - max(a, c) <= TOLERANCE:
            continue
        both = [name for name in STEEL if _speaks(one, name) and _speaks(other, name)]
        both += [name for name in VALUES if _differ(getattr(one, name), getattr(other, name))]
        if both:
            words = ", ".join(name.replace("_", " ") for name in both)
            where = f"between {show(max(a, c), 'length')} and {show(min(b, d), 'length')}"
            reasons.append(Reason(f"{one.origin} and {other.origin} both give {words} {where}"))
    return reasons


def _speaks(zone: DescribedZone, name: str) -> bool:
    return getattr(zone, name) is not None or (name == "stirrups" and zone.no_stirrups)


def _differ(one: float | None, other: float | None) -> bool:
    return one is not None and other is not None and one != other

"""The beam schedule laid on the beams: described zones of reinforcement.

A row that names a beam by its own mark goes before rows that reach it by a wildcard or a range,
field by field, where both hold. Rows of one rank that speak of the same thing contradict each
other.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence, Set
from dataclasses import replace
from itertools import combinations

from ifccheck.beam import Beam, DescribedZone, Reason, Reinforcement, Remark
from ifccheck.brief.mark_ranges import is_exact
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Position, ScheduleRow
from ifccheck.brief.selecting import Found, parts_of, unreached
from ifccheck.brief.zone_ranks import STEEL, VALUES, by_rank, extent, speaks
from ifccheck.units import show

TOLERANCE = 1.0
"""Distance [mm] by which a zone may lie beyond the end of a beam, or over another zone."""


def with_schedule(
    rows: Sequence[ScheduleRow], matches: Matches, beams: Mapping[str, Beam]
) -> dict[str, Beam]:
    """Return the beams with what the schedule says of their reinforcement.

    Rows that contradict each other, or reach beyond the beam, become reasons not to rate it.
    """
    rows_of: dict[str, list[ScheduleRow]] = {}
    exact = {
        (row.place, key)
        for row in rows
        for place, part in parts_of(row)
        if is_exact(part.beams)
        for key in matches[place]
    }
    for row in rows:
        for key in matches[row.place]:
            rows_of.setdefault(key, []).append(row)
    return {
        key: _with_rows(beam, rows_of[key], exact) if key in rows_of else beam
        for key, beam in beams.items()
    }


def schedule_remarks(rows: Sequence[ScheduleRow], found: Sequence[Found]) -> tuple[Remark, ...]:
    """Return a remark for every mark of the schedule that is in no model of the run."""
    return tuple(
        Remark(
            None,
            "schedule",
            f"{row.place}: no beam is marked {part.said}, the row is not used",
            "doubt",
        )
        for row in rows
        for part in unreached(row, found)
    )


def _with_rows(beam: Beam, rows: Sequence[ScheduleRow], exact: Set[tuple[str, str]]) -> Beam:
    own = [_zone(beam, row) for row in rows if (row.place, beam.key) in exact]
    wide = [_zone(beam, row) for row in rows if (row.place, beam.key) not in exact]
    reasons = (*_beyond(beam, [*own, *wide]), *_conflicts(beam, own), *_conflicts(beam, wide))
    if own and wide and beam.axis and not reasons:
        zones, remarks = by_rank(beam, own, wide)
    else:
        zones, remarks = tuple(_zone(beam, row) for row in rows), ()
    described = Reinforcement("schedule", zones=zones, reasons=reasons, remarks=remarks)
    return replace(beam, reinforcement=(*beam.reinforcement, described))


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
    if -TOLERANCE <= x <= beam.length + TOLERANCE:
        return min(max(x, 0.0), beam.length)
    return x


def _beyond(beam: Beam, zones: Sequence[DescribedZone]) -> list[Reason]:
    reasons = []
    for zone in zones:
        start, end = extent(beam, zone)
        if start < -TOLERANCE:
            text = f"{zone.origin}: begins {show(-start, 'length')} before the beam's start"
            reasons.append(Reason(text))
        elif end > beam.length + TOLERANCE:
            text = f"{zone.origin}: reaches to {show(end, 'length')}, beyond the beam's end"
            reasons.append(Reason(text))
        elif beam.axis is not None and end <= start:
            reasons.append(Reason(f"{zone.origin}: the zone has no length on this beam"))
    return reasons


def _conflicts(beam: Beam, zones: Sequence[DescribedZone]) -> list[Reason]:
    """Rows that speak of the same thing at the same place: bars twice, or unequal values."""
    reasons = []
    for one, other in combinations(zones, 2):
        (a, b), (c, d) = extent(beam, one), extent(beam, other)
        if min(b, d) - max(a, c) <= TOLERANCE:
            continue
        both = [name for name in STEEL if speaks(one, name) and speaks(other, name)]
        both += [name for name in VALUES if _differ(getattr(one, name), getattr(other, name))]
        if both:
            words = ", ".join(name.replace("_", " ") for name in both)
            where = f"between {show(max(a, c), 'length')} and {show(min(b, d), 'length')}"
            reasons.append(Reason(f"{one.origin} and {other.origin} both give {words} {where}"))
    return reasons


def _differ(one: float | None, other: float | None) -> bool:
    return one is not None and other is not None and one != other

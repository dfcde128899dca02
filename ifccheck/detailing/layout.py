"""Described reinforcement turned into bars and stirrups with their places."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from typing import Literal, NamedTuple

from ifccheck.beam import (
    Anchor,
    BarGroup,
    Bars,
    Beam,
    DescribedZone,
    Face,
    Given,
    Outline,
    Reason,
    Remark,
    Stirrups,
)
from ifccheck.detailing.joining import joined
from ifccheck.detailing.layers import (
    ClearSpacing,
    Placed,
    Space,
    bottom_layers,
    side_rows,
    top_layers,
)
from ifccheck.detailing.room import NoRoomError, soffit_and_top, web
from ifccheck.detailing.rows import placed_rows, rows_of
from ifccheck.detailing.segments import PLACES, Kind, Place, Segment, segments_of
from ifccheck.notation import bars_in_a_row, show_bars
from ifccheck.units import show

STAGE = "reinforcement"

UNKNOWN_STIRRUP = 12.0
"""Diameter that bars are kept clear of where no one states the stirrups [mm]"""


class Layout(NamedTuple):
    """Described reinforcement of a beam with its places."""

    bars: tuple[Bars, ...] = ()
    stirrups: tuple[Stirrups, ...] = ()
    stirrups_known: bool = True
    """False where on some stretch no one says whether there are stirrups"""
    silent: tuple[Face, ...] = ()
    """Faces of whose bars nothing is said on some stretch: taken as without"""
    remarks: tuple[Remark, ...] = ()
    reasons: tuple[Reason, ...] = ()


def lay_out(
    beam: Beam,
    zones: Sequence[DescribedZone],
    *,
    clear_spacing: ClearSpacing,
    stated_cover: Given | None = None,
    fallback_cover: Given | None = None,
) -> Layout:
    """Place bars that are given by number and size as a detailer would.

    Clear cover to the stirrup, the stirrup, then bars spread over the width in one layer while
    the least clear spacing allows, the rest in further layers at that spacing. Bottom bars use
    the width of the outline where they lie, top bars that of the web. Rows of bars whose height is
    given lie at that height, side by side.

    Bars end where their zone does, anchored at the beam's ends; those that the next zone holds
    too go on through it, at the less favourable of the heights found.

    Parameters
    ----------
    beam
        With its outlines along the axis.
    zones
        As one source describes them.
    clear_spacing
        Least clear distance between bars of a diameter [mm], by the standard.
    stated_cover, fallback_cover
        Clear cover to the stirrup that goes before, and after, that of the zone [mm].
    """
    segments = segments_of(beam, zones)
    findings = _Findings(beam, tuple(z.cover for z in zones if z.cover is not None))
    sections = [
        _section(segment, clear_spacing, stated_cover, fallback_cover, findings)
        for segment in segments
    ]
    bars = joined(beam, segments, [section.bars for section in sections])
    known = all(
        any(zone.stirrups is not None or zone.no_stirrups for zone in segment.zones)
        for segment in segments
    )
    findings.conclude(bars, known)
    covers = [section.cover for section in sections]
    return Layout(
        bars=bars,
        stirrups=tuple(_stirrups(segments, covers)),
        stirrups_known=known,
        silent=findings.silent,
        remarks=tuple(findings.remarks),
        reasons=tuple(dict.fromkeys(findings.reasons)),
    )


@dataclass(slots=True)
class _Findings:
    """What is found out on the way."""

    beam: Beam
    covers: tuple[float, ...]
    """Of all zones that give one [mm]"""
    remarks: list[Remark] = field(default_factory=list)
    reasons: list[Reason] = field(default_factory=list)
    silent: tuple[Face, ...] = ()

    def remark(self, text: str, kind: Literal["assumption", "note"]) -> None:
        remark = Remark(self.beam.key, STAGE, text, kind)
        if remark not in self.remarks:
            self.remarks.append(remark)

    def hear_nothing_of(self, face: Face) -> None:
        if face not in self.silent:
            self.silent = (*self.silent, face)

    def conclude(self, bars: Sequence[Bars], known: bool) -> None:
        if bars:
            self.remark(f"bars laid out: {_summary(bars)}", "note")
        if any(Anchor.ANCHORED in (bar.start_anchor, bar.end_anchor) for bar in bars):
            self.remark("bars given without their ends are taken as anchored", "assumption")
        if bars and any(run.outline_end is not None for run in self.beam.runs):
            self.remark(
                "where the section tapers, bars are laid out along its faces, in pieces of one"
                " height each; their force is that of bars inclined as the face beside them",
                "assumption",
            )
        for face in self.silent:
            self.remark(f"{face} bars not stated: taken as none", "assumption")
        if not known:
            self.remark(
                f"stirrups not stated: bars laid out clear of {UNKNOWN_STIRRUP:.0f} mm stirrups",
                "assumption",
            )


def _summary(bars: Sequence[Bars]) -> str:
    """How many bars of what size lie at which height, from the lowest up."""
    counts: dict[tuple[float, float, str], int] = {}
    for row in bars_in_a_row(bars):
        heights = [bar.z for bar in row]
        key = (min(heights), max(heights), row[0].designation)
        counts[key] = counts.get(key, 0) + row[0].count
    return ", ".join(
        f"{count}-{designation} at {low:.0f}{f' to {high:.0f}' if high > low else ''} mm"
        for (low, high, designation), count in sorted(counts.items())
    )


# One section -----------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class Section:
    """Bars of one segment, each of its kind, and the cover."""

    cover: float | None
    bars: tuple[tuple[Kind, Placed], ...] = ()


def _section(
    segment: Segment,
    clear_spacing: ClearSpacing,
    stated: Given | None,
    fallback: Given | None,
    findings: _Findings,
) -> Section:
    kinds = {place: _kinds(segment, place, findings) for place in PLACES}
    cover = _cover(segment, stated, fallback, findings)
    if cover is None:
        return Section(None)
    space = Space(segment.outline, cover + _stirrup_diameter(segment), clear_spacing)
    try:
        return Section(cover, (*_placed(space, kinds), *placed_rows(space, rows_of(segment))))
    except NoRoomError as error:
        where = f"{show(segment.start, 'length')} to {show(segment.end, 'length')}"
        bars = "; ".join(_described(segment, place) for place in PLACES)
        findings.reasons.append(Reason(f"bars do not fit from {where} ({bars}): {error}"))
        return Section(cover)


def _kinds(segment: Segment, place: Place, findings: _Findings) -> list[Kind]:
    """Bars of one place, one entry each, in the order in which they are placed."""
    speaking = [zone for zone in segment.zones if getattr(zone, place) is not None]
    if not speaking and place != "side" and not _has_row_at(segment, place):
        findings.hear_nothing_of(place)
    if len(speaking) > 1:
        origins = " and ".join(zone.origin for zone in speaking)
        findings.reasons.append(Reason(f"{place} bars given twice: {origins}"))
    kinds = [
        Kind(place, g.diameter, g.area, g.designation, _bar_yield(segment, zone), zone.origin)
        for zone in speaking[:1]
        for g in getattr(zone, place)
        for _ in range(g.count)
    ]
    return sorted(kinds, key=lambda kind: -kind.diameter)


def _has_row_at(segment: Segment, face: Face) -> bool:
    return any(row.face == face for zone in segment.zones for row in zone.rows)


def _bar_yield(segment: Segment, zone: DescribedZone) -> float | None:
    """Of the zone itself, else of those that give the yield here and no bars of their own."""
    apart = [z.bar_yield for z in segment.zones if z.bar_yield is not None and not _has_bars(z)]
    return zone.bar_yield if zone.bar_yield is not None else min(apart, default=None)


def _has_bars(zone: DescribedZone) -> bool:
    return bool(zone.rows) or any(getattr(zone, place) for place in PLACES)


def _stirrup_yield(segment: Segment, zone: DescribedZone) -> float | None:
    apart = [z.stirrup_yield for z in segment.zones if z.stirrup_yield and z.stirrups is None]
    return zone.stirrup_yield if zone.stirrup_yield is not None else min(apart, default=None)


def _cover(
    segment: Segment, stated: Given | None, fallback: Given | None, findings: _Findings
) -> float | None:
    """What the brief states, else the zones here, else those of elsewhere, else the fallback."""
    if stated is not None:
        return stated.value
    here = [zone.cover for zone in segment.zones if zone.cover is not None]
    if covers := here or findings.covers:
        return max(covers)
    if fallback is None:
        findings.reasons.append(
            Reason("cover unknown: neither the reinforcement's source nor the brief gives one")
        )
        return None
    if fallback.assumed:
        findings.remark(
            f"cover assumed: {show(fallback.value, 'dimension')}, {fallback.source}", "assumption"
        )
    return fallback.value


def _stirrup_diameter(segment: Segment) -> float:
    stated = [zone.stirrups.diameter for zone in segment.zones if zone.stirrups is not None]
    if stated:
        return max(stated)
    return 0.0 if any(zone.no_stirrups for zone in segment.zones) else UNKNOWN_STIRRUP


def _placed(space: Space, kinds: dict[Place, list[Kind]]) -> list[tuple[Kind, Placed]]:
    bottom = bottom_layers(space, [kind.diameter for kind in kinds["bottom"]])
    top = top_layers(space, [kind.diameter for kind in kinds["top"]])
    soffit, highest = soffit_and_top(space.outline)
    low = min((p.z for p in bottom), default=soffit + space.inset)
    high = max((p.z for p in top), default=highest - space.inset)
    side = side_rows(space, [kind.diameter for kind in kinds["side"]], low, high)
    found = [
        (kinds[place][p.bar], p)
        for place, places in zip(PLACES, (bottom, top, side), strict=True)
        for p in places
    ]
    _apart(space, found)
    return found


def _apart(space: Space, bars: Sequence[tuple[Kind, Placed]]) -> None:
    """Make sure that the layers of the bottom stay clear of those of the top."""
    lower = [p.z + 0.5 * kind.diameter for kind, p in bars if kind.place == "bottom"]
    upper = [p.z - 0.5 * kind.diameter for kind, p in bars if kind.place == "top"]
    if not lower or not upper:
        return
    greatest = max(kind.diameter for kind, _ in bars if kind.place != "side")
    if min(upper) - max(lower) < space.clear_spacing(greatest):
        raise NoRoomError("the layers of bottom and top bars meet")


def _described(segment: Segment, place: Place) -> str:
    groups: list[BarGroup] = [g for zone in segment.zones for g in getattr(zone, place) or ()]
    groups += [row.group for zone in segment.zones for row in zone.rows if row.face == place]
    return f"{place} {show_bars(tuple(groups))}"


# Stirrups ----------------------------------------------------------------------------------------


def _stirrups(segments: Sequence[Segment], covers: Sequence[float | None]) -> Iterable[Stirrups]:
    for segment, cover in zip(segments, covers, strict=True):
        for zone in segment.zones:
            if zone.stirrups is None:
                continue
            group = zone.stirrups
            soffit, top = soffit_and_top(segment.outline)
            stated = _stirrup_yield(segment, zone)
            yield Stirrups(
                start=segment.start,
                end=segment.end,
                spacing=group.spacing,
                diameter=group.diameter,
                leg_area=group.area,
                legs=group.legs,
                yield_strength=None if stated is None else Given(stated, zone.origin),
                bottom=None if cover is None else soffit + cover,
                top=None if cover is None else top - cover,
                half_width=_half_width(segment.outline, cover),
                designation=group.designation,
                origin=zone.origin,
            )


def _half_width(outline: Outline, cover: float | None) -> float | None:
    """Half the width of a stirrup in the web [mm]; None where it is not known."""
    if cover is None:
        return None
    try:
        right, left = web(outline)
    except NoRoomError:
        return None
    return 0.5 * (left - right) - cover

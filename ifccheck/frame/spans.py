"""Where a beam spans, from how its ends stand and what they meet."""

from __future__ import annotations

from collections.abc import Sequence
from operator import attrgetter
from typing import Literal, NamedTuple

from ifccheck.beam import Beam, Contact, Given, RatedSpan, Reason, Remark, Span, Support
from ifccheck.frame.boxes import section_extent
from ifccheck.frame.carrying import END_TO_END, pressed_ends
from ifccheck.frame.contacts import RESTING, TOLERANCE, is_seat
from ifccheck.units import show

End = Literal["start", "end"]

UNKNOWN_BEARING = 0.05
"""Part of a beam's length that a bearing may cover of which neither model nor brief tells."""


class Standing(NamedTuple):
    """How one beam stands alone."""

    spans: tuple[RatedSpan, ...]
    """In their order along the beam"""
    bearings: tuple[float, float]
    """How far the bearings that the brief states reach in from either end [mm]"""
    source: str
    """Where the span runs from and to, for people"""
    reasons: tuple[Reason, ...] = ()
    remarks: tuple[Remark, ...] = ()

    @property
    def reach(self) -> tuple[float, float]:
        """x of the start of its first span and of the end of its last [mm]."""
        return self.spans[0].span.start, self.spans[-1].span.end

    @property
    def ends(self) -> tuple[Support, Support]:
        """How the start of its first span and the end of its last are held."""
        return self.spans[0].span.start_support, self.spans[-1].span.end_support


class _Seating(NamedTuple):
    """How one end is seated."""

    centre: float
    """How far the centre of the support lies beyond the beam's end; inside where negative [mm]"""
    face: float
    """How far the support's face lies inside the beam's end [mm]"""
    inner: float
    """The most that the support may reach in [mm]"""
    told: str
    inferred: bool = False


def stand_alone(
    beam: Beam,
    supports: tuple[Support, Support],
    contacts: Sequence[Contact],
    stated: Given | None,
) -> Standing:
    """Stand a beam on its two supports.

    A span runs between the centres of its supports, a cantilever's from the face of its support.
    Where an end meets the face of another member, the centre lies beyond the end: by half the
    bearing that the brief states, else by half of what the model shows of that member beyond the
    end, and by no more than half the beam's depth (the clear span plus the depth need not be
    exceeded: CSA A23.3-14 9.2.3, from memory). That holds however far the end is drawn into the
    member or lies on it; a bearing counts within the beam only as far as the model shows the
    member there. A span that the engineer states replaces that length: a cantilever's is counted
    from the face, any other lies centred.

    Parameters
    ----------
    beam
        With an axis.
    supports, contacts
        Of its start and end, and all that touches it.
    stated
        The span that the brief states [mm].
    """
    length, half_depth = beam.length, _depth(beam) / 2.0
    seats = (
        _seating(length, half_depth, "start", supports[0], contacts),
        _seating(length, half_depth, "end", supports[1], contacts),
    )
    start, end = _between(length, supports, seats)
    source = f"from {seats[0].told} to {seats[1].told}"
    cantilever = "free" in (supports[0].kind, supports[1].kind)
    if cantilever:
        source = "from the face of its support to its free end"
    if stated is not None:
        start, end = _stated(start, end, supports, stated.value)
        source = stated.source
    return Standing(
        spans=(
            RatedSpan(
                Span(start, end, *supports),
                faces=(seats[0].face, length - seats[1].face),
                direct=pressed_ends(contacts),
            ),
        ),
        bearings=(seats[0].face, seats[1].face),
        source=source,
        reasons=() if stated is None else _too_short(length, seats, stated),
        remarks=() if stated is not None or cantilever else _remarks(beam.key, seats, source),
    )


def _seating(
    length: float, half_depth: float, end: End, support: Support, contacts: Sequence[Contact]
) -> _Seating:
    if support.kind == "free":
        return _Seating(0.0, 0.0, 0.0, f"its free {end}")
    seats = _seats(end, contacts)
    if not seats:
        unknown = UNKNOWN_BEARING * length
        return _Seating(0.0, support.bearing, support.bearing or unknown, f"its {end}")
    facing = [contact for contact in seats if contact.side == "end"]
    return _seated(length, half_depth, end, support, facing or seats)


def _seats(end: End, contacts: Sequence[Contact]) -> list[Contact]:
    """What surely holds an end; without such, what it faces and that may be its support."""
    sure = [c for c in contacts if c.place == end and not c.doubt and is_seat(c)]
    return sure or [
        contact
        for contact in contacts
        if contact.place == end
        and contact.side in ("below", "end")
        and contact.doubt != END_TO_END
        and contact.other_class not in RESTING
    ]


_how_far_beyond = attrgetter("beyond")


def _inside(contact: Contact, length: float) -> float:
    return contact.end if contact.place == "start" else length - contact.start


def _seated(
    length: float, half_depth: float, end: End, support: Support, seats: Sequence[Contact]
) -> _Seating:
    """An end that lies on a member, meets its face, or is drawn some way into it.

    The centre lies half the bearing beyond the face of the support, wherever in it the end is.
    """
    inside = max([_inside(contact, length) for contact in seats])
    widest = max(seats, key=_how_far_beyond)
    half = (support.bearing or inside + widest.beyond) / 2.0
    within = min(support.bearing, inside)
    beyond = round(max(min(half, half_depth) - inside, -within / 2.0), 6)
    told = f"its {end}"
    if beyond > 0.0:
        whose = "its stated bearing" if support.bearing else widest.other
        what = f"the centre of {whose}" if half <= half_depth else "half its depth"
        told = f"{what}, {show(beyond, 'dimension')} beyond its {end}"
    elif beyond < 0.0:
        told = f"the middle of its stated bearing, {show(-beyond, 'dimension')} within its {end}"
    return _Seating(beyond, within, inside, told, inferred=beyond > 0.0 and not support.bearing)


def _depth(beam: Beam) -> float:
    if not beam.runs:
        return 0.0
    *_, low, high = section_extent(beam)
    return high - low


def _between(
    length: float, supports: tuple[Support, Support], seats: Sequence[_Seating]
) -> tuple[float, float]:
    """From centre to centre, or from the face to the tip."""
    first, last = supports
    if last.kind == "free":
        return seats[0].face, length
    if first.kind == "free":
        return 0.0, length - seats[1].face
    return -seats[0].centre, length + seats[1].centre


def _stated(
    start: float, end: float, supports: tuple[Support, Support], span: float
) -> tuple[float, float]:
    if supports[1].kind == "free":
        return start, start + span
    if supports[0].kind == "free":
        return end - span, end
    middle = (start + end) / 2.0
    return middle - span / 2.0, middle + span / 2.0


def _too_short(length: float, seats: Sequence[_Seating], stated: Given) -> tuple[Reason, ...]:
    """Refuse a stated span that does not even reach from face to face."""
    clear = length - sum(seat.inner for seat in seats)
    if stated.value >= clear - TOLERANCE:
        return ()
    text = (
        f"the stated span of {show(stated.value, 'length')} ({stated.source}) is less than the"
        f" {show(clear, 'length')} between the faces of its supports"
    )
    return (Reason(text),)


def _remarks(key: str, seats: Sequence[_Seating], source: str) -> tuple[Remark, ...]:
    if not any(seat.inferred for seat in seats):
        return ()
    return (Remark(key, "supports", f"the span is taken {source}", "assumption"),)

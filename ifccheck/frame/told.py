"""What an engineer must see of how beams are carried, in words."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

from ifccheck.beam import Contact, Reason, Remark
from ifccheck.frame.beam_lines import LineSpan
from ifccheck.frame.seats import Seat
from ifccheck.units import show

_ANSWER = "; say how its ends stand under [[supports]]"


def supported(seat: Seat) -> Remark:
    """What carries a beam at one place."""
    how = {"below": "from below", "through": "passing through it, the shallower or higher of both"}
    way = how.get(seat.way, "meeting its face" if seat.direct else "framing into its side")
    text = f"supported at x = {_x(seat.x)} by {seat.carrier_name}, {way}, {_mm(seat.width)} wide"
    if seat.others:
        text += f" (also there: {', '.join(seat.others)})"
    return _assumed(seat.beam, text)


def hangs_over(span: LineSpan) -> Remark:
    """A cantilever, or an overhang past the last support."""
    beam, start, end, _ = span
    held, tip = (start, end) if end.kind == "free" else (end, start)
    length = show(end.x - start.x, "length")
    if held.kind == "fixed" and held.seat:
        whose = f"built into {held.seat.carrier_name}"
        if not held.seat.carrier:
            whose = "fixed by the brief"
        return _assumed(beam, f"a cantilever of {length}, {whose} at x = {_x(held.x)}")
    return _assumed(beam, f"it hangs over by {length}, to its tip at x = {_x(tip.x)}")


def meets(seat: Seat, other: str, *, goes_on: bool, passes: bool) -> Remark:
    """Whether a beam goes on into the one that it meets over a support.

    ``passes``: moment would pass, if nothing but the supports of the other were unknown.
    """
    where = f"over {seat.carrier_name} at x = {_x(seat.x)}"
    if goes_on:
        return _assumed(seat.beam, f"goes on into {other} {where} with all moment")
    why = "the other's supports are unknown" if passes else "nothing shows bars that run through"
    return _assumed(seat.beam, f"meets {other} {where}, and takes no moment from it: {why}")


def goes_on_into(other: str) -> Reason:
    """Say that a beam may carry, or bend with, one that does not stand."""
    return Reason(
        f"reactions not included: it goes on into {other}, of which nothing tells how it stands",
        blocking=False,
    )


def lies_along(contact: Contact) -> str:
    """Say that something carries a beam from end to end."""
    return f"it lies on {contact.other} from end to end and does not span{_ANSWER}"


def unsure(seats: Sequence[Seat]) -> str:
    """Say what may carry a beam and cannot be counted on."""
    places = "; ".join(
        f"at x = {_x(seat.x)} it touches only what may not carry it ({seat.doubt})"
        for seat in seats
    )
    between = [seat.carrier_name for seat in seats if seat.place == "between"]
    if not between:
        return f"{places}{_ANSWER}"
    name = between[0].rpartition(" (")[0]
    return f'{places}; if it does not hold the beam, write ignore = ["{name}"] under [[supports]]'


def no_way(seats: Sequence[Seat]) -> str:
    """Say why a beam cannot stand on what carries it."""
    if not seats:
        return f"nothing that could carry it touches it{_ANSWER}"
    (seat, *_) = seats
    return (
        f"only {seat.carrier_name} carries it, at x = {_x(seat.x)}, and nothing shows that it holds"
        f" a moment there{_ANSWER}"
    )


def leans(other: str) -> str:
    """Say that a beam stands only with another that does not."""
    return f"it stands only as it goes on into {other}, whose own supports are unknown{_ANSWER}"


def crossing(contact: Contact) -> Reason:
    """Say that two beams cross at one level."""
    at = _x((contact.start + contact.end) / 2.0)
    text = (
        f"{contact.other} crosses it at one level at x = {at}: nothing tells which of the two"
        " carries the other"
    )
    return Reason(text, blocking=False)


def _assumed(beam: str, text: str) -> Remark:
    return Remark(beam, "supports", text, "assumption")


@lru_cache(maxsize=4096)
def _x(x: float) -> str:
    return show(x, "length")


@lru_cache(maxsize=4096)
def _mm(width: float) -> str:
    return show(width, "dimension")


def soft(seat: Seat) -> Reason:
    """Say that a beam may hang over from its built-in end."""
    text = (
        f"{seat.carrier_name} at x = {_x(seat.x)} is not much stiffer than this beam as a"
        f" cantilever, and it may hang over from its other end{_ANSWER}"
    )
    return Reason(text, blocking=False)

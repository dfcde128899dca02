"""How columns above and below a support resist the turning of a beam's end."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import Literal

import numpy as np

from ifccheck.beam import Beam, Contact, Member
from ifccheck.frame.contacts import TOLERANCE, kind_of
from ifccheck.frame.seats import Seat
from ifccheck.frame.spanning import Spanning, spanning_of
from ifccheck.frame.webs import levels_of, ring_of

FarEnd = Literal["fixed", "pinned"]
"""How the columns are held at their other ends"""

STIFFNESS: Mapping[FarEnd, float] = {"fixed": 4.0, "pinned": 3.0}
"""Moment that turns one end of a straight member by 1, in units of E I / L"""


def column_stiffness(
    beam: Beam,
    seat: Seat,
    contacts: Sequence[Contact],
    members: Mapping[int, Member],
    far: FarEnd,
) -> float:
    """Moment that turns the columns at a support by 1, in units of the beam's E [mm3].

    Sum over the columns above and below of 4 I / L, or of 3 I / L where their far ends are
    pinned. The length runs from the far end of the column's body to half the beam's depth; I is
    that of its outline in plan, whole, for bending in the vertical plane of the beam. The
    columns are taken to have the same modulus E as the beam.

    Parameters
    ----------
    beam, seat, contacts
        A beam with an axis, one of its seats, and all that touches it.
    members
        By step id.
    far
        How the columns are held at their far ends.

    References
    ----------
    Slope and deflection of a prismatic member: with the far end fixed, M = 4 E I / L; pinned,
    M = 3 E I / L.
    """
    body = spanning_of(beam)
    middle = body.soffit(min(max(seat.x, 0.0), body.length)) + body.depth / 2.0
    columns = {c.other_step: members[c.other_step] for c in _columns(seat, contacts)}
    return STIFFNESS[far] * sum(_parts(column, middle, body) for column in columns.values())


def _columns(seat: Seat, contacts: Iterable[Contact]) -> Iterable[Contact]:
    for contact in contacts:
        near = contact.end >= seat.low - TOLERANCE and contact.start <= seat.high + TOLERANCE
        holds = contact.bears and not contact.doubt and contact.side != "side"
        if near and holds and kind_of(contact.other_class) == "IfcColumn":
            yield contact


def _parts(column: Member, middle: float, body: Spanning) -> float:
    """I / L of what of a column lies below the beam, and of what lies above it [mm3]."""
    low, high = levels_of(column.box)
    half = body.depth / 2.0 + TOLERANCE
    lengths = [length for length in (middle - low, high - middle) if length > half]
    inertia = second_moment(column, body)
    return sum(inertia / length for length in lengths)


def second_moment(column: Member, body: Spanning) -> float:
    """Second moment of area of a column's outline, for bending along a beam [mm4]."""
    x, y, _ = body.x
    along = np.array((x, y)) / np.hypot(x, y)
    ring = np.array(column.plan or ring_of(column.box))
    s, t = ring @ along, ring @ np.array((-along[1], along[0]))
    s, t = s - s.mean(), t - t.mean()
    after_s, after_t = np.roll(s, -1), np.roll(t, -1)
    double = s * after_t - after_s * t
    area = double.sum() / 2.0
    first = ((s + after_s) * double).sum() / 6.0
    second = ((s * s + s * after_s + after_s * after_s) * double).sum() / 12.0
    return float(abs(second - first * first / area))

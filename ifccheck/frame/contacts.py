"""Which members touch a beam, where along it, and whether they bear, stand or frame into it.

Members that can hold a beam or be held by it make contacts: beams, columns, members, walls,
footings, piles and bearings, and proxies at a beam's ends. Slabs, plates, coverings, roofs and
stairs make none: their box covers a whole floor and so tells nothing of where they bear, and
their weight is the engineer's to state as a load. Bars and parts never do.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np

from ifccheck.beam import Beam, Contact, Member, Reason
from ifccheck.frame.boxes import (
    Bools,
    Boxes,
    Floats,
    Ints,
    beam_boxes,
    member_boxes,
    near_pairs,
    overlaps,
)

TOLERANCE = 10.0
"""Members with a gap of up to this touch [mm]."""

FRAMING = ("IfcBeam", "IfcColumn", "IfcMember")
"""Members that bring the reaction of others."""

UPRIGHT = (
    "IfcColumn", "IfcWall", "IfcFooting", "IfcPile", "IfcCaissonFoundation", "IfcBearing",
)  # fmt: skip
"""Members that stand and do not span."""

TOUCHING = (*FRAMING, *UPRIGHT)

PROXY = "IfcBuildingElementProxy"

END_DEPTHS = 1.5
"""An end contact covers at most so many depths of the beam ..."""

END_PART = 1.0 / 8.0
"""... or this part of its length, whichever is more: at an eighth of a simple span the moment
of an even load is 44 % of that at midspan, so that what reaches further bears on the span
itself. It never reaches past the middle."""

_NAMED = 3

_Place = Literal["start", "end", "between"]
_Side = Literal["below", "above", "side", "end"]


@dataclass(frozen=True, slots=True)
class _Touches:
    """Pairs of a beam and another member that touch, one row each (P)."""

    beam: Ints
    other: Ints
    covered: Floats
    """Least and greatest place of the common part along the beam's x, y and z, from the
    middle of its box [mm] (P, 3, 2)"""
    half: Floats
    """Half extents of the beam [mm] (P, 3)"""
    within: Bools
    """The other lies wholly within the beam's box (P)"""
    upright: Bools
    """The other is of a kind that stands on the ground, not one that spans (P)"""


def find_contacts(
    beams: Sequence[Beam], members: Sequence[Member], tolerance: float = TOLERANCE
) -> Mapping[str, tuple[Contact, ...]]:
    """Contacts of every beam, by its key and in the order of their place along it.

    The boxes of bodies are compared, each in its own orientation. A contact that reaches an
    end of the beam is an end contact; one that is longer than an end support can be is one
    between the ends as well. What runs alongside the beam or stands on it over such a length
    is no end contact, and neither is what lies wholly within the beam's box: they cannot hold
    its end. A column, wall or foundation that the beam passes into is below it where it reaches
    under the soffit, even if it is drawn up to the beam's top or beyond. A beam whose body
    could not be read has no contacts.

    Parameters
    ----------
    beams
        Beams of one model.
    members
        Members of that model, the beams themselves included.
    tolerance
        Greatest gap between two members that touch [mm].
    """
    solid = [beam for beam in beams if beam.axis is not None and beam.runs]
    bearing = [member for member in members if _class_of(member) in (*TOUCHING, PROXY)]
    touches = _find_touches(solid, bearing, tolerance)
    found: dict[str, list[Contact]] = {beam.key: [] for beam in beams}
    for contact in _contacts(solid, bearing, touches, tolerance):
        found[contact.beam].append(contact)
    return {key: tuple(sorted(contacts, key=_order)) for key, contacts in found.items()}


def _class_of(member: Member) -> str:
    """The class without the suffix of its restricted kinds."""
    return member.ifc_class.removesuffix("StandardCase").removesuffix("ElementedCase")


def _order(contact: Contact) -> tuple[float, float, str, str]:
    return contact.start, contact.end, contact.other, contact.place


def _find_touches(beams: Sequence[Beam], members: Sequence[Member], tolerance: float) -> _Touches:
    own, others = beam_boxes(beams), member_boxes(members)
    grown = own.grown(tolerance)
    beam, other = near_pairs(grown, others)
    foreign = ~_is_itself(beams, members, beam, other)
    beam, other = beam[foreign], other[foreign]
    covered = overlaps(grown.take(beam), others.take(other))
    touching = np.flatnonzero(~np.isnan(covered[:, 0, 0]))
    beam, other = beam[touching], other[touching]
    within = _within(grown.take(beam), others.take(other))
    upright = np.array([_class_of(member) in UPRIGHT for member in members], np.bool_)
    return _Touches(beam, other, covered[touching], own.half[beam], within, upright[other])


def _is_itself(beams: Sequence[Beam], members: Sequence[Member], beam: Ints, other: Ints) -> Bools:
    ids = np.array([b.step_id for b in beams], np.int64)
    member_ids = np.array([m.step_id for m in members], np.int64)
    return np.asarray(ids[beam] == member_ids[other])


def _within(outer: Boxes, inner: Boxes) -> Bools:
    """Whether each inner box lies wholly in its outer one."""
    offset = inner.corners() - outer.centre[:, None, :]
    places = np.abs(np.einsum("pkd,psd->psk", outer.axes, offset))
    return np.asarray((places <= outer.half[:, None, :]).all(axis=(1, 2)))


def _contacts(
    beams: Sequence[Beam], members: Sequence[Member], touches: _Touches, tolerance: float
) -> list[Contact]:
    below, above, beside = _sides(touches, tolerance)
    places = _places(touches, above | beside, tolerance)
    length = 2.0 * touches.half[:, 0]
    start = np.clip(touches.covered[:, 0, 0] + touches.half[:, 0], 0.0, length)
    end = np.clip(touches.covered[:, 0, 1] + touches.half[:, 0], 0.0, length)
    contacts = []
    for place, there in places.items():
        for row in np.flatnonzero(there).tolist():
            member = members[touches.other[row]]
            if _class_of(member) == PROXY and (place == "between" or touches.within[row]):
                continue
            side = _side(place, bool(below[row]), bool(above[row]), bool(beside[row]))
            contacts.append(
                Contact(
                    beam=beams[touches.beam[row]].key,
                    other=f"{member.name or member.guid} ({member.ifc_class})",
                    other_class=member.ifc_class,
                    start=float(start[row]),
                    end=float(end[row]),
                    place=place,
                    side=side,
                )
            )
    return contacts


def _sides(touches: _Touches, tolerance: float) -> tuple[Bools, Bools, Bools]:
    """Whether the other lies under the soffit, stands on the top, or lies beside the beam."""
    y, z = touches.covered[:, 1], touches.covered[:, 2]
    half_width, half_depth = touches.half[:, 1], touches.half[:, 2]
    lateral = (y[:, 0] >= half_width - tolerance) | (y[:, 1] <= -half_width + tolerance)
    above = z[:, 0] >= half_depth - tolerance
    reaches_under = z[:, 0] <= -half_depth - tolerance / 2.0
    under = z[:, 1] <= -half_depth + tolerance
    below = under | (touches.upright & reaches_under & ~lateral)
    return below, above & ~below, lateral & ~below & ~above


def _side(place: _Place, below: bool, above: bool, beside: bool) -> _Side:
    if below:
        return "below"
    if above:
        return "above"
    return "side" if beside or place == "between" else "end"


def _places(touches: _Touches, cannot_hold_long: Bools, tolerance: float) -> dict[_Place, Bools]:
    """At which ends each touch is, and whether it is between them (P each)."""
    x, half_length = touches.covered[:, 0], touches.half[:, 0]
    depth, length = 2.0 * touches.half[:, 2], 2.0 * half_length
    covered = np.minimum(x[:, 1], half_length) - np.maximum(x[:, 0], -half_length)
    limit = np.minimum(np.maximum(END_DEPTHS * depth, END_PART * length), half_length)
    long = covered > limit
    may_hold = ~touches.within & ~(long & cannot_hold_long)
    at_start = may_hold & (x[:, 0] <= -half_length + tolerance)
    at_end = may_hold & (x[:, 1] >= half_length - tolerance)
    return {"start": at_start, "end": at_end, "between": long | ~(at_start | at_end)}


def between_reactions(
    contacts: Sequence[Contact], *, free_start: bool = False, free_end: bool = False
) -> tuple[Contact, ...]:
    """Contacts that may bring the reaction of another member to a beam between its supports.

    Those are beams, columns and members, but no columns under it, and at a free end any of
    them: what touches the tip of a cantilever hangs on it, and so may a beam under its soffit.
    """
    tips = {"start"} if free_start else set()
    tips |= {"end"} if free_end else set()
    found = []
    for contact in contacts:
        kind = contact.other_class.removesuffix("StandardCase")
        hangs = contact.side != "below" or kind not in UPRIGHT
        if kind in FRAMING and (contact.place in tips or (contact.place == "between" and hangs)):
            found.append(contact)
    return tuple(found)


def reactions_reason(contacts: Sequence[Contact]) -> Reason | None:
    """Why a beam with such contacts is not rated; None without any."""
    others = sorted({contact.other for contact in contacts})
    if not others:
        return None
    named = ", ".join(others[:_NAMED])
    rest = f" and {len(others) - _NAMED} more" if len(others) > _NAMED else ""
    return Reason(f"reactions not included: {named}{rest}", blocking=False)

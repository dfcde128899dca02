"""Which members touch a beam, where along it, and whether they bear, stand or frame into it.

Members that can hold a beam or be held by it make contacts: beams, columns, members, walls,
footings, piles and bearings; what can only load it does too: proxies, stairs, ramps and
assemblies. Slabs, plates, coverings and roofs make none: their box covers a whole floor and so
tells nothing of where they bear, and their weight is the engineer's to state as a load. Bars
and parts never do.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import repeat
from typing import Literal

import numpy as np

from ifccheck.beam import Beam, Contact, Member, Run
from ifccheck.frame.along import along_runs
from ifccheck.frame.boxes import (
    Bools,
    Boxes,
    Floats,
    Ints,
    beam_boxes,
    holds,
    member_boxes,
    near_pairs,
    overlaps,
)
from ifccheck.frame.plans import within_plan

TOLERANCE = 10.0
"""Members with a gap of up to this touch, so that one may hold the other [mm]."""

NEAR = 50.0
"""Members with a gap of up to this may load each other: models leave joints open [mm]."""

FRAMING = ("IfcBeam", "IfcColumn", "IfcMember")
"""Members that bring the reaction of others."""

UPRIGHT = (
    "IfcColumn", "IfcWall", "IfcFooting", "IfcPile", "IfcDeepFoundation", "IfcCaissonFoundation",
    "IfcBearing",
)  # fmt: skip
"""Members that stand and do not span."""

TOUCHING = (*FRAMING, *UPRIGHT)

PROXY = "IfcBuildingElementProxy"

RESTING = (
    PROXY, "IfcElementAssembly", "IfcStair", "IfcStairFlight", "IfcRamp", "IfcRampFlight",
)  # fmt: skip
"""Members that may rest on a beam and are no support."""

END_DEPTHS = 1.5
"""An end contact covers at most so many depths of the beam ..."""

END_PART = 1.0 / 8.0
"""... or this part of its length, whichever is more: at an eighth of a simple span the moment
of an even load is 44 % of that at midspan, so that what reaches further bears on the span
itself. It never reaches past the middle."""

_STEEP = math.sqrt(0.5)

_Place = Literal["start", "end", "between"]
_Side = Literal["below", "above", "side", "end"]
_SIDES: tuple[_Side, ...] = ("below", "above", "side", "end")


@dataclass(frozen=True, slots=True)
class _Spanning:
    """What spans: the beams, or other members, that contacts are sought of (B)."""

    keys: Sequence[str]
    steps: Ints
    boxes: Boxes
    """x along the span, z up"""
    runs: Sequence[Sequence[Run]]
    """Of each; empty where only the box is known"""


@dataclass(frozen=True, slots=True)
class _Neighbours:
    """Members that make contacts with what spans (M)."""

    members: Sequence[Member]
    told: Sequence[str]
    """Name and class of each, for people"""
    steps: Ints
    boxes: Boxes
    upright: Bools
    """Of a kind that stands on the ground, not one that spans (M)"""
    rests: Bools
    """Of a kind that is no support (M)"""
    proxy: Bools
    """(M)"""


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
    reach: Floats
    """Least and greatest place of the other along the beam's x, from its middle [mm] (P, 2)"""
    width: Floats
    """What the other covers along the beam's y, or the beam where that is less [mm] (P)"""
    tolerance: float
    """Gap up to which they touch [mm]"""


def find_contacts(
    beams: Sequence[Beam], members: Sequence[Member]
) -> Mapping[str, tuple[Contact, ...]]:
    """Contacts of every beam, by its key and in the order of their place along it.

    The boxes of bodies are compared, each in its own orientation. A contact that reaches an
    end of the beam is an end contact; one that is longer than an end support can be is one
    between the ends as well. What runs alongside the beam or stands on it over such a length
    is no end contact, and neither is what lies wholly within the beam's box: they cannot hold
    its end. A column, wall or foundation that the beam passes into is below it where it reaches
    under the soffit, even if it is drawn up to the beam's top or beyond; one that does not
    stands on it. What only comes near (a gap of up to NEAR) may load the beam and holds
    nothing. A beam whose body could not be read has no contacts.

    Parameters
    ----------
    beams
        Beams of one model.
    members
        Members of that model, the beams themselves included.
    """
    solid = [beam for beam in beams if beam.axis is not None and beam.runs]
    steps = np.array([beam.step_id for beam in solid], np.int64)
    keys, runs = [beam.key for beam in solid], [beam.runs for beam in solid]
    spanning = _Spanning(keys, steps, beam_boxes(solid), runs)
    return {beam.key: () for beam in beams} | _contacts_of(spanning, members)


def contacts_of_others(
    beams: Sequence[Beam], members: Sequence[Member]
) -> Mapping[str, tuple[Contact, ...]]:
    """Contacts of what spans as a beam does and is not among the beams whose body was read.

    By the key of a beam in scope, else by "#" and the step id.
    """
    solid = {beam.step_id for beam in beams if beam.axis is not None and beam.runs}
    keys = {beam.step_id: beam.key for beam in beams}
    lying = [m for m in members if m.step_id not in solid and _spans(m)]
    spanning = _Spanning(
        [keys.get(member.step_id, f"#{member.step_id}") for member in lying],
        np.array([member.step_id for member in lying], np.int64),
        _along_spans(member_boxes(lying)),
        [()] * len(lying),
    )
    return _contacts_of(spanning, members)


def _spans(member: Member) -> bool:
    """Whether it is a beam by its class, and longest along what is nearer level than upright."""
    if _class_of(member) not in ("IfcBeam", "IfcMember"):
        return False
    longest = max(range(3), key=lambda row: member.box.half[row])
    return abs(member.box.axes[longest][2]) < _STEEP


def _along_spans(boxes: Boxes) -> Boxes:
    """The same boxes with their longest axis as x, and of the rest the more upright one as z."""
    rows = np.arange(len(boxes.half))
    along = boxes.half.argmax(axis=1) if rows.size else rows
    steep = np.abs(boxes.axes[:, :, 2])
    steep[rows, along] = -1.0
    up = steep.argmax(axis=1) if rows.size else rows
    order = np.stack([along, 3 - along - up, up], axis=1)
    axes, half = boxes.axes[rows[:, None], order], boxes.half[rows[:, None], order]
    axes[:, 2] *= np.where(axes[:, 2, 2] < 0.0, -1.0, 1.0)[:, None]
    return Boxes(boxes.centre, axes, half)


def _contacts_of(spanning: _Spanning, members: Sequence[Member]) -> dict[str, tuple[Contact, ...]]:
    if not spanning.keys:
        return {}
    neighbours = _neighbours(members)
    found: dict[str, list[Contact]] = {key: [] for key in spanning.keys}
    for touches in _find_touches(spanning, neighbours):
        for contact in _contacts(spanning, neighbours, touches):
            found[contact.beam].append(contact)
    return {key: tuple(sorted(contacts, key=_order)) for key, contacts in found.items()}


def _neighbours(members: Sequence[Member]) -> _Neighbours:
    makes_contacts = {*TOUCHING, *RESTING}
    chosen = [member for member in members if _class_of(member) in makes_contacts]
    kinds = [_class_of(member) for member in chosen]
    return _Neighbours(
        chosen,
        [f"{member.name or member.guid} ({member.ifc_class})" for member in chosen],
        np.array([member.step_id for member in chosen], np.int64),
        member_boxes(chosen),
        upright=np.array([kind in UPRIGHT for kind in kinds], np.bool_),
        rests=np.array([kind in RESTING for kind in kinds], np.bool_),
        proxy=np.array([kind == PROXY for kind in kinds], np.bool_),
    )


def _class_of(member: Member) -> str:
    return kind_of(member.ifc_class)


@lru_cache(maxsize=1024)
def kind_of(ifc_class: str) -> str:
    """The class without the suffix of its restricted kinds."""
    return ifc_class.removesuffix("StandardCase").removesuffix("ElementedCase")


def _order(contact: Contact) -> tuple[float, float, str, str]:
    return contact.start, contact.end, contact.other, contact.place


def _find_touches(spanning: _Spanning, neighbours: _Neighbours) -> tuple[_Touches, _Touches]:
    """Pairs that touch, and those that only come near."""
    beam, other = near_pairs(spanning.boxes.grown(NEAR), neighbours.boxes)
    foreign = spanning.steps[beam] != neighbours.steps[other]
    beam, other = beam[foreign], other[foreign]
    touching, rest = _touches(spanning, neighbours, (beam, other), TOLERANCE)
    near, _ = _touches(spanning, neighbours, rest, NEAR)
    return touching, near


def _touches(
    spanning: _Spanning, neighbours: _Neighbours, pairs: tuple[Ints, Ints], tolerance: float
) -> tuple[_Touches, tuple[Ints, Ints]]:
    """Those of the pairs that touch, and the other pairs."""
    own = spanning.boxes
    grown = own.grown(tolerance)
    covered = overlaps(grown.take(pairs[0]), neighbours.boxes.take(pairs[1]))
    within_plan(covered, grown, neighbours.members, pairs)
    along_runs(covered, spanning.runs, pairs[0], tolerance)
    apart = np.isnan(covered[:, 0, 0])
    beam, other = pairs[0][~apart], pairs[1][~apart]
    outer, inner = own.take(beam), neighbours.boxes.take(other)
    touching = _Touches(
        beam,
        other,
        covered[~apart],
        outer.half,
        holds(outer.grown(TOLERANCE), inner),
        neighbours.upright[other],
        _reach(outer, inner),
        _width(outer, inner),
        tolerance,
    )
    return touching, (pairs[0][apart], pairs[1][apart])


def _reach(own: Boxes, others: Boxes) -> Floats:
    """What each other box covers along the x of its beam, from the beam's middle (P, 2)."""
    x = own.axes[:, 0]
    middle = np.einsum("pd,pd->p", others.centre - own.centre, x)
    half = np.einsum("pk,pk->p", others.half, np.abs(np.einsum("pkd,pd->pk", others.axes, x)))
    return np.stack([middle - half, middle + half], axis=-1)


def _width(own: Boxes, others: Boxes) -> Floats:
    """The lesser of the widths of each pair along the y of the beam (P)."""
    turn = np.abs(np.einsum("pkd,pd->pk", others.axes, own.axes[:, 1]))
    reach = np.einsum("pk,pk->p", others.half, turn)
    return np.asarray(2.0 * np.minimum(reach, own.half[:, 1]))


def _common(touches: _Touches, row: int) -> Floats:
    """What each pair has in common along one axis of the beam [mm] (P)."""
    half = touches.half[:, row, None]
    low, high = np.clip(touches.covered[:, row], -half, half).T
    return np.asarray(high - low)


def _contacts(spanning: _Spanning, neighbours: _Neighbours, touches: _Touches) -> Iterator[Contact]:
    half_length = touches.half[:, 0]
    length = 2.0 * half_length
    start = np.clip(touches.covered[:, 0, 0] + half_length, 0.0, length)
    end = np.clip(touches.covered[:, 0, 1] + half_length, 0.0, length)
    beyond: dict[_Place, Floats] = {
        "start": -half_length - touches.reach[:, 0],
        "end": touches.reach[:, 1] - half_length,
        "between": np.zeros_like(length),
    }
    below, above, beside = _sides(touches)
    side = np.select([below, above, beside], [0, 1, 2], 3)
    hidden = touches.within & neighbours.proxy[touches.other]
    bears = ~neighbours.rests[touches.other] & (touches.tolerance <= TOLERANCE)
    across = _common(touches, 1) / np.maximum(touches.width, 1e-9)
    depth = np.maximum(2.0 * touches.half[:, 2], 1e-9)
    at_soffit = touches.covered[:, 2, 0] <= -touches.half[:, 2] + TOLERANCE
    sits = at_soffit & (end - start >= NEAR)
    upward = np.where(sits, 1.0, _common(touches, 2) / depth)
    for place, there in _places(touches, above | beside).items():
        rows = np.flatnonzero(there & ~hidden)
        sides = np.minimum(side, 2) if place == "between" else side
        others = touches.other[rows].tolist()
        members = [neighbours.members[other] for other in others]
        yield from map(
            Contact,
            [spanning.keys[own] for own in touches.beam[rows].tolist()],
            [neighbours.told[other] for other in others],
            [member.ifc_class for member in members],
            start[rows].tolist(),
            end[rows].tolist(),
            repeat(place),
            [_SIDES[which] for which in sides[rows].tolist()],
            [member.step_id for member in members],
            np.fmax(beyond[place][rows], 0.0).tolist(),
            bears[rows].tolist(),
            [member.doubt for member in members],
            across[rows].tolist(),
            upward[rows].tolist(),
        )


def _sides(touches: _Touches) -> tuple[Bools, Bools, Bools]:
    """Whether the other lies under the soffit, stands on the top, or lies beside the beam.

    What lies under it but beyond its end, or beyond its faces, does not carry it: it is beside.
    """
    (x, y, z), tolerance = np.moveaxis(touches.covered, 1, 0), touches.tolerance
    half_length, half_width, half_depth = touches.half.T
    lateral = (y[:, 0] >= half_width - tolerance) | (y[:, 1] <= -half_width + tolerance)
    past_end = (x[:, 0] >= half_length - tolerance) | (x[:, 1] <= -half_length + tolerance)
    in_plan = ~lateral & ~past_end
    reaches_under = z[:, 0] <= -half_depth - tolerance / 2.0
    under = z[:, 1] <= -half_depth + tolerance
    below = in_plan & (under | (touches.upright & reaches_under))
    planted = in_plan & touches.upright & ~reaches_under
    above = ~below & (planted | (z[:, 0] >= half_depth - tolerance))
    return below, above, (lateral | under) & ~below & ~above


def _places(touches: _Touches, cannot_hold_long: Bools) -> dict[_Place, Bools]:
    """At which ends each touch is, and whether it is between them (P each)."""
    x, half_length, tolerance = touches.covered[:, 0], touches.half[:, 0], touches.tolerance
    depth, length = 2.0 * touches.half[:, 2], 2.0 * half_length
    covered = np.minimum(x[:, 1], half_length) - np.maximum(x[:, 0], -half_length)
    limit = np.minimum(np.maximum(END_DEPTHS * depth, END_PART * length), half_length)
    long = covered > limit
    may_hold = ~touches.within & ~(long & cannot_hold_long)
    at_start = may_hold & (x[:, 0] <= -half_length + tolerance)
    at_end = may_hold & (x[:, 1] >= half_length - tolerance)
    return {"start": at_start, "end": at_end, "between": long | ~(at_start | at_end)}


def is_seat(contact: Contact) -> bool:
    """Whether the other lies so that it can hold the end of the beam that it touches."""
    return contact.bears and contact.place != "between" and contact.side in ("below", "end")

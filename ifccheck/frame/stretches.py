"""Which stretch of a beam's axis lies over what carries it.

A contact covers all that the two boxes have in common, to the farthest corner. What stands askew
is measured on the beam's axis alone; and what need not fill its box, such as a ledge or a flange,
bears no farther in than the beam's own end.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence, Set
from typing import NamedTuple

from ifccheck.beam import Beam, Box, Contact, Member
from ifccheck.frame.boxes import section_extent
from ifccheck.frame.carrying import Judged
from ifccheck.frame.contacts import kind_of
from ifccheck.frame.spanning import Spanning
from ifccheck.frame.webs import levels_of

HOLDS_MOMENT = ("IfcColumn", "IfcWall")

_SQUARE = 0.0175
"""Sine of the angle up to which a box counts as square to a beam: 1 degree"""

_UPRIGHT = 0.5

_FILLED = 0.99


class Carriers(NamedTuple):
    """What is known of the bodies of what may carry."""

    boxes: Mapping[int, Box]
    """By step id, of those with one box and no outline in plan"""
    uprights: Mapping[int, tuple[float, float]]
    """Least and greatest height of columns and walls [mm], by step id"""
    unfilled: Set[int]
    """Step ids of beams that may not fill their boxes"""


def carriers_of(
    members: Sequence[Member], judged: Mapping[str, Sequence[Judged]], beams: Sequence[Beam]
) -> Carriers:
    """What is known of the bodies of all members.

    Parameters
    ----------
    members, beams
        Of one model.
    judged
        Contacts of all that spans, by key.
    """
    boxes: dict[int, Box] = {}
    uprights: dict[int, tuple[float, float]] = {}
    twice: set[int] = set()
    for member in members:
        step = member.step_id
        if step in boxes:
            twice.add(step)
        if not member.plan:
            boxes[step] = member.box
        if kind_of(member.ifc_class) in HOLDS_MOMENT:
            uprights[step] = levels_of(member.box)
    for step in twice:
        del boxes[step]
    return Carriers(boxes, uprights, _unfilled(judged.values(), beams))


def _unfilled(judged: Iterable[Sequence[Judged]], beams: Sequence[Beam]) -> set[int]:
    spanning = {
        contact.other_step: carrier
        for own in judged
        for contact, carrier in own
        if carrier is not None and contact.bears
    }
    by_key = {beam.key: beam for beam in beams} if spanning else {}
    return {step for step, key in spanning.items() if not _fills(by_key.get(key))}


def _fills(beam: Beam | None) -> bool:
    """Whether a beam is known to be a rectangle from end to end."""
    if beam is None or len(beam.runs) != 1 or beam.runs[0].outline_end is not None:
        return False
    (ring, *more) = beam.runs[0].outline.rings
    y_low, y_high, z_low, z_high = section_extent(beam)
    double = sum(
        y0 * z1 - y1 * z0 for (y0, z0), (y1, z1) in zip(ring, (*ring[1:], ring[0]), strict=True)
    )
    return not more and abs(double) / 2.0 >= _FILLED * (y_high - y_low) * (z_high - z_low)


def stretch_of(body: Spanning, contact: Contact, carriers: Carriers) -> tuple[float, float]:
    """Faces of what carries a beam, in the beam's own x [mm]."""
    low, high, place, step = contact.start, contact.end, contact.place, contact.other_step
    if place == "start":
        low -= contact.beyond
    elif place == "end":
        high += contact.beyond
    known = step not in carriers.unfilled
    if (box := carriers.boxes.get(step)) is not None and _askew(body, box):
        crossed = _crossed(body, box)
        low, high = crossed or (low, high)
        known = known and crossed is not None
    return (low, high) if known else _least(body, contact, low, high)


def _least(body: Spanning, contact: Contact, low: float, high: float) -> tuple[float, float]:
    """The faces where nothing tells how far in the carrier reaches."""
    if contact.place == "start":
        return min(low, 0.0), min(high, 0.0)
    if contact.place == "end":
        return max(low, body.length), max(high, body.length)
    middle = (low + high) / 2.0
    return middle, middle


def _askew(body: Spanning, box: Box) -> bool:
    """Whether no side of a box is square to the beam in plan."""
    dx, dy, _ = body.x
    ux, uy, uz = box.axes[0]
    if abs(uz) > _UPRIGHT:
        ux, uy, _ = box.axes[1]
    return min(abs(ux * dx + uy * dy), abs(ux * dy - uy * dx)) > _SQUARE


def _crossed(body: Spanning, box: Box) -> tuple[float, float] | None:
    """Where the beam's axis passes through a box in plan; None where it passes by."""
    (px, py, _), (dx, dy, _), (cx, cy, _) = body.origin, body.x, box.centre
    low, high = -math.inf, math.inf
    for (ux, uy, uz), half in zip(box.axes, box.half, strict=True):
        along = ux * dx + uy * dy
        if abs(uz) <= _UPRIGHT and along:
            offset = (px - cx) * ux + (py - cy) * uy
            one, other = (-half - offset) / along, (half - offset) / along
            low, high = max(low, min(one, other)), min(high, max(one, other))
    return (low, high) if low < high else None

"""What columns stand on: the ground, what stands on it, or beams that may stand."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence, Set
from typing import NamedTuple

import numpy as np

from ifccheck.beam import Member
from ifccheck.frame.boxes import Boxes, member_boxes, near_pairs
from ifccheck.frame.carrying import Judged
from ifccheck.frame.contacts import NEAR, TOLERANCE, kind_of
from ifccheck.frame.webs import levels_of

ON_NOTHING = (
    "nothing that the model shows carries it: if it stands, name it in load_bearing of [frame]"
)
RAKING = (
    "it rakes, and nothing tells what it holds: if it carries, name it in load_bearing of [frame]"
)
SLIM = "it is less than 100 mm thick: if it carries, name it in load_bearing of [frame]"

ON_GROUND = 300.0
"""A foot up to so far over the lowest foot of a column or wall, or the lowest top of a footing,
stands on the ground [mm]."""

SLIMMEST = 100.0
"""What is slimmer carries no beam unless the brief says so [mm]."""

_UPRIGHT = 0.99
_BELOW = 1.0
"""What carries a foot reaches at least so far under it [mm]."""
_FIRM = ("IfcFooting", "IfcPile", "IfcDeepFoundation", "IfcCaissonFoundation", "IfcSlab")
"""What stands, whatever is drawn under it"""
_BEAMS = ("IfcBeam", "IfcMember")
_POSTS = ("IfcColumn", "IfcFooting", *_BEAMS)
"""What must stand on something itself to carry a beam"""


class Feet(NamedTuple):
    """What columns stand on, by step id, of those that may not be counted on at once."""

    doubts: Mapping[int, str]
    """Why nothing tells that a column stands"""
    on_beams: Mapping[int, Set[str]]
    """Keys of the beams of which one must stand"""


def feet_of(
    members: Sequence[Member],
    judged: Mapping[str, Sequence[Judged]],
    keys: Mapping[int, str],
    firm: Set[int],
    named: Set[int],
) -> Feet:
    """What the columns stand on that may carry a beam.

    Parameters
    ----------
    members
        Of one model.
    judged
        Contacts of all that spans, by key.
    keys
        Of all that spans, by step id.
    firm
        Step ids of beams that stand on the ground.
    named
        Step ids of what the brief says carries.
    """
    posts = {
        contact.other_step
        for own in judged.values()
        for contact, carrier in own
        if contact.bears and carrier is None and contact.side in ("below", "end")
        if kind_of(contact.other_class) in _POSTS
    } - (named | firm)
    bodies = [member for member in members if member.step_id in posts]
    doubts = {one.step_id: why for one in bodies if (why := _shape_doubt(one))}
    on_beams: dict[int, Set[str]] = {}
    if not posts - doubts.keys():
        return Feet(doubts, on_beams)
    found = _Feet(members, keys, firm | named, posts)
    for step in posts - doubts.keys():
        under = found.under(step)
        if under is None:
            continue
        doubts[step] = ON_NOTHING
        if under:
            on_beams[step] = under
    return Feet(doubts, on_beams)


def _shape_doubt(member: Member) -> str:
    """Why a post may carry nothing, by its box."""
    box, kind = member.box, kind_of(member.ifc_class)
    upright = max(range(3), key=lambda row: abs(box.axes[row][2]))
    if kind in _BEAMS and abs(box.axes[upright][2]) < _UPRIGHT:
        return RAKING
    half = [half for row, half in enumerate(box.half) if row != upright]
    return SLIM if kind != "IfcFooting" and 2.0 * min(half) < SLIMMEST else ""


class _Feet:
    """The columns and walls of a model and what lies under the feet of each."""

    def __init__(
        self, members: Sequence[Member], keys: Mapping[int, str], firm: Set[int], posts: Set[int]
    ) -> None:
        self._members, self._keys, self._firm = members, keys, firm
        self._kinds = [kind_of(member.ifc_class) for member in members]
        feet = [
            levels_of(member.box)[kind == "IfcFooting"]
            for member, kind in zip(members, self._kinds, strict=True)
            if kind in ("IfcColumn", "IfcWall", "IfcFooting")
        ]
        self._ground = min(feet, default=-math.inf) + ON_GROUND
        self._known: dict[int, Set[str] | None] = {}
        self._rows: dict[int, list[int]] = {}
        uprights = [
            row
            for row, (member, kind) in enumerate(zip(members, self._kinds, strict=True))
            if kind in ("IfcColumn", "IfcWall") or member.step_id in posts
        ]
        for row in uprights:
            self._rows.setdefault(members[row].step_id, []).append(row)
        self._under = self._found_under(np.array(uprights, np.intp))

    def _found_under(
        self, uprights: np.ndarray[tuple[int], np.dtype[np.intp]]
    ) -> dict[int, list[int]]:
        boxes = member_boxes(self._members)
        one, other = near_pairs(_soles(boxes.take(uprights)), boxes)
        found: dict[int, list[int]] = {}
        for row, under in zip(uprights[one].tolist(), other.tolist(), strict=True):
            found.setdefault(row, []).append(under)
        return found

    def under(self, step: int) -> Set[str] | None:
        """Keys of beams of which one must stand for a column to stand; None where it stands in
        any case, empty where it stands on nothing."""
        if step not in self._known:
            self._known[step] = frozenset()  # what is under it cannot stand on it
            self._known[step] = self._of(step)
        return self._known[step]

    def _of(self, step: int) -> Set[str] | None:
        beams: set[str] = set()
        for row in self._rows[step]:
            if levels_of(self._members[row].box)[0] <= self._ground:
                return None
            for other in self._under.get(row, ()):
                on = self._on(other, step)
                if on is None:
                    return None
                beams |= on
        return beams

    def _on(self, row: int, step: int) -> Set[str] | None:
        """What must stand for a member to carry a foot."""
        member, kind = self._members[row], self._kinds[row]
        other = member.step_id
        if other == step or member.doubt or member.bears is False:
            return frozenset()
        if kind in _FIRM or other in self._firm:
            return None
        if other in self._rows:
            return self.under(other)
        return {self._keys[other]} if kind in _BEAMS and other in self._keys else frozenset()


def _soles(boxes: Boxes) -> Boxes:
    """What lies right under boxes, from their feet down to as far as joints are left open."""
    rows = np.arange(len(boxes.half))
    upright = np.abs(boxes.axes[:, :, 2]).argmax(axis=1)
    down = -np.sign(boxes.axes[rows, upright, 2])[:, None] * boxes.axes[rows, upright]
    middle = (boxes.half[rows, upright] + (NEAR + _BELOW) / 2.0)[:, None]
    half = np.maximum(boxes.half - TOLERANCE, _BELOW)
    half[rows, upright] = (NEAR - _BELOW) / 2.0
    return Boxes(boxes.centre + middle * down, boxes.axes, half)

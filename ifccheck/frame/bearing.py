"""Which members may be counted on to carry a beam, by what is said of them.

A wall or a member may be a partition, a mullion or cladding: it carries where the model calls it
load bearing or the brief names it, and not otherwise. What the model says bears no load carries
nothing.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence, Set
from typing import NamedTuple

from ifccheck.beam import Contact, Member
from ifccheck.frame.carrying import Judged
from ifccheck.frame.contacts import kind_of

NOT_SAID = (
    "nothing says that it carries: if it does, name it in load_bearing of [frame] or set"
    " LoadBearing in its {} to TRUE, if not to FALSE"
)
CONTRADICTED = "the brief names it in load_bearing, and the model says that it bears no load"

BESIDE = "they overlap over less than half of the width of either"
SHALLOW = "it covers less than a third of the depth of the beam's end"

LEAST_ACROSS = 0.5
"""What carries a beam covers at least so much of its width, or lies within it so far."""

LEAST_UPWARD = 1.0 / 3.0
"""What an end meets covers at least so much of the beam's depth, or carries not."""

_SET_OF = {"IfcWall": "Pset_WallCommon", "IfcMember": "Pset_MemberCommon"}
"""The property set of what may carry nothing, by its class"""


class Bearing(NamedTuple):
    """What may not be counted on to carry, by step id."""

    doubts: Mapping[int, str]
    """Why"""
    never: Set[int]
    """What carries nothing for certain"""


def bearing_of(members: Iterable[Member], named: Set[int], beams: Set[int]) -> Bearing:
    """What is said of the members of a model.

    Parameters
    ----------
    members
        Of the model.
    named
        Step ids of those that the brief says carry.
    beams
        Step ids of those that are rated as beams.
    """
    doubts: dict[int, str] = {}
    never: set[int] = set()
    for member in members:
        step = member.step_id
        if member.bears is False:
            if step in named:
                doubts[step] = CONTRADICTED
            else:
                never.add(step)
        elif member.bears is None and step not in named and step not in beams:
            common = _SET_OF.get(kind_of(member.ifc_class))
            if common is not None:
                doubts[step] = NOT_SAID.format(common)
    return Bearing(doubts, never)


def with_bearing(
    judged: Mapping[str, Sequence[Judged]], bearing: Bearing
) -> dict[str, list[Judged]]:
    """The contacts with what is said of the members that they are with, and with what speaks
    against those that have too little in common with the beam."""
    doubts, never = bearing
    return {
        key: [_told(one, doubts) for one in own if one[0].other_step not in never]
        for key, own in judged.items()
    }


def with_doubts(
    judged: Mapping[str, Sequence[Judged]], doubts: Mapping[int, str]
) -> Mapping[str, Sequence[Judged]]:
    """The contacts with what speaks against members, by step id."""
    if not doubts:
        return judged
    return {key: [_told(one, doubts) for one in own] for key, own in judged.items()}


def _told(one: Judged, doubts: Mapping[int, str]) -> Judged:
    contact, carrier = one
    if contact.doubt or not contact.bears:
        return one
    doubt = doubts.get(contact.other_step, "") or _grazing(contact)
    return (contact._replace(doubt=doubt), carrier) if doubt else one


def _grazing(contact: Contact) -> str:
    """Why too little of a member lies under a beam, or before its end, to carry it."""
    if contact.side in ("below", "end") and contact.across < LEAST_ACROSS:
        return BESIDE
    return SHALLOW if contact.side == "end" and contact.upward < LEAST_UPWARD else ""

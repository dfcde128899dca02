"""Which beams are carried: from the ground up, so that none holds itself up by another.

An end is held by what the brief states of it, by a member that stands, or by a beam that is
itself carried. Beams that only lean on each other are carried by none.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence, Set
from typing import Literal, NamedTuple

from ifccheck.beam import Beam, Contact, Model, OutOfScope, SupportKind
from ifccheck.frame.contacts import contacts_of_others, find_contacts, is_seat

End = Literal["start", "end"]
ENDS: tuple[End, End] = ("start", "end")

STANDING_USES = ("footing", "bearing")
"""Beams left out of scope for these uses stand on the ground."""

SPANNING_MATERIALS = ("steel", "timber", "aluminium")
"""Beams left out of scope for these materials carry others where they are carried."""

END_TO_END = "the two meet end to end, and neither can hold the other"
NOT_CARRIED = "nothing shows that it is carried at both of its own ends"

Stated = Mapping[str, Mapping[End, SupportKind]]
"""How the brief's entries say that ends of beams stand, by the key of the beam."""


DIRECT_CLASSES = ("IfcColumn", "IfcWall", "IfcFooting", "IfcPile", "IfcBearing")
"""What presses back over the depth of an end that meets its face."""


Judged = tuple[Contact, str | None]
"""A contact, and the key of the beam that would carry by it; None for the ground"""


class Touching(NamedTuple):
    """What touches what in a model, before anything is said of what carries."""

    beams: Mapping[str, tuple[Contact, ...]]
    """Of its beams, by key"""
    others: Mapping[str, tuple[Contact, ...]]
    """Of what else spans, by key, or by "#" and step id"""


def touching_in(model: Model) -> Touching:
    """Find what touches the beams of a model and all else that spans in it."""
    return Touching(
        find_contacts(model.beams, model.members), contacts_of_others(model.beams, model.members)
    )


def contacts_of(model: Model, touching: Touching, stated: Stated) -> dict[str, tuple[Contact, ...]]:
    """Contacts of every beam of a model, with a doubt on each that nothing shows to carry it.

    ``stated`` is what the brief's entries say of ends.
    """
    return carried_contacts(*touching, model.beams, model.out_of_scope, stated)


def unheld_ends(contacts: Sequence[Contact]) -> tuple[End, ...]:
    """Return the ends of a beam that nothing which touches it can be counted on to hold.

    Where something that may hold it touches it from below between its ends, neither end can be
    taken as the one that is held.
    """
    if any(c.place == "between" and c.side == "below" and c.bears for c in contacts):
        return ENDS
    held = {contact.place for contact in contacts if is_seat(contact) and not contact.doubt}
    return tuple(end for end in ENDS if end not in held)


def carried_contacts(
    contacts: Mapping[str, Sequence[Contact]],
    others: Mapping[str, Sequence[Contact]],
    beams: Sequence[Beam],
    out_of_scope: Sequence[OutOfScope],
    stated: Stated,
) -> dict[str, tuple[Contact, ...]]:
    """The contacts of every beam, with a doubt on each that nothing shows to carry it.

    Parameters
    ----------
    contacts
        Of the beams, by key.
    others
        Of what else spans, by key, or by "#" and step id.
    beams, out_of_scope
        Of the same model.
    stated
        What the brief's entries say of ends.
    """
    everything = {**others, **contacts}
    judged = judged_contacts(everything, beams, out_of_scope)
    seats = {
        key: [each for each in own if not each[0].doubt and is_seat(each[0])]
        for key, own in judged.items()
    }
    carried = _carried(seats, stated)
    return {key: _with_doubts(judged[key], carried) for key in contacts}


def _with_doubts(judged: Sequence[Judged], carried: Set[str]) -> tuple[Contact, ...]:
    return tuple(
        [
            contact._replace(doubt=NOT_CARRIED)
            if carrier is not None
            and carrier not in carried
            and not contact.doubt
            and is_seat(contact)
            else contact
            for contact, carrier in judged
        ]
    )


def judged_contacts(
    everything: Mapping[str, Sequence[Contact]],
    beams: Sequence[Beam],
    out_of_scope: Iterable[OutOfScope],
) -> dict[str, list[Judged]]:
    """Every contact with the beam that would carry by it, and what speaks against it at once.

    Parameters
    ----------
    everything
        Contacts of all that spans, by key, or by "#" and step id.
    beams, out_of_scope
        Of the same model.
    """
    keys = {int(key[1:]): key for key in everything if key.startswith("#")}
    keys |= {beam.step_id: beam.key for beam in beams}
    left_out = {each.step_id: each.reason for each in out_of_scope}
    steps = {key: step for step, key in keys.items()}
    meeting = _ends_meeting(everything, steps)
    return {
        key: [_judged_alone(contact, steps[key], keys, left_out, meeting) for contact in own]
        for key, own in everything.items()
    }


def _judged_alone(
    contact: Contact,
    step: int,
    keys: Mapping[int, str],
    left_out: Mapping[int, str],
    meeting: Set[tuple[int, int]],
) -> Judged:
    reason = left_out.get(contact.other_step, "")
    carrier = None if reason in STANDING_USES else keys.get(contact.other_step)
    if not contact.doubt and (doubt := _doubt(contact, step, reason, meeting)):
        contact = contact._replace(doubt=doubt)
    return contact, carrier


def _ends_meeting(
    everything: Mapping[str, Sequence[Contact]], steps: Mapping[str, int]
) -> set[tuple[int, int]]:
    """Pairs (one, other) of steps of which the one meets the other with its end."""
    return {
        (steps[key], contact.other_step)
        for key, own in everything.items()
        for contact in own
        if contact.place != "between" and contact.side == "end"
    }


def _doubt(contact: Contact, step: int, reason: str, meeting: Set[tuple[int, int]]) -> str:
    if reason and reason not in (*STANDING_USES, *SPANNING_MATERIALS):
        return f"it is left out as {reason}"
    if contact.side == "end" and (contact.other_step, step) in meeting and is_seat(contact):
        return END_TO_END
    return ""


def _carried(seats: Mapping[str, Sequence[Judged]], stated: Stated) -> set[str]:
    """Keys of all that is carried, found from the ground up."""
    held: dict[str, set[End]] = defaultdict(set)
    resting: dict[str, list[tuple[str, End]]] = defaultdict(list)
    for key, own in seats.items():
        said = stated.get(key, {})
        held[key] |= {end for end in ENDS if said.get(end, "free") != "free"}
        for contact, carrier in own:
            place = contact.place
            if place == "between" or said.get(place) == "free":
                continue
            if carrier is None:
                held[key].add(place)
            else:
                resting[carrier].append((key, place))
    carried: set[str] = set()
    waiting = [key for key in seats if _stands(held[key], stated.get(key, {}))]
    while waiting:
        carrier = waiting.pop()
        if carrier in carried:
            continue
        carried.add(carrier)
        for key, end in resting[carrier]:
            held[key].add(end)
            if _stands(held[key], stated.get(key, {})):
                waiting.append(key)
    return carried


def _stands(held: set[End], said: Mapping[End, SupportKind]) -> bool:
    """Whether both ends are held, or the one fixed end of a cantilever is stated."""
    if len(held) == len(ENDS):
        return True
    return set(said.values()) == {"fixed", "free"}


def pressed_ends(contacts: Sequence[Contact]) -> tuple[bool, bool]:
    """Whether the reaction presses into each end, by what the end touches.

    An end that touches nothing, or meets the side of another beam, or what may not carry it,
    is taken as not compressed.
    """
    pressed = {
        contact.place
        for contact in contacts
        if is_seat(contact)
        and not contact.doubt
        and (contact.side == "below" or contact.other_class.startswith(DIRECT_CLASSES))
    }
    return "start" in pressed, "end" in pressed

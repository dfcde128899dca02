"""What may rest on a beam between its supports, and bring reactions that no one has told."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence, Set

from ifccheck.beam import Beam, Contact, Reason, Unmeasured
from ifccheck.frame.contacts import FRAMING, RESTING, TOLERANCE, UPRIGHT, is_seat, kind_of
from ifccheck.frame.spans import Standing
from ifccheck.units import show

LONG_WALL = 1000.0
"""A wall that stands along so much of a beam loads it as a line [mm]."""

_NAMED = 3


def unknown_reactions(
    beam: Beam,
    contacts: Sequence[Contact],
    standing: Standing,
    unmeasured: Sequence[Unmeasured],
) -> list[Reason]:
    """Why a beam is not rated whose loads are not stated to be complete; empty where it is."""
    resting = resting_between(beam, contacts, standing)
    reasons = reactions_reason(resting), unmeasured_reason(beam, unmeasured)
    return [reason for reason in reasons if reason]


def resting_between(
    beam: Beam, contacts: Sequence[Contact], standing: Standing
) -> tuple[Contact, ...]:
    """Contacts that may bring a reaction to a beam as it stands; see ``between_reactions``."""
    first, last = standing.ends
    return between_reactions(
        contacts,
        beam.length,
        standing.bearings,
        free_start=first.kind == "free",
        free_end=last.kind == "free",
    )


def between_reactions(
    contacts: Sequence[Contact],
    length: float = math.inf,
    bearings: tuple[float, float] = (0.0, 0.0),
    *,
    free_start: bool = False,
    free_end: bool = False,
) -> tuple[Contact, ...]:
    """Contacts that may bring the reaction of another member to a beam between its supports.

    Those are beams, columns, members, proxies, stairs, ramps and assemblies, and walls that
    stand on it, but no columns under it; at an end also what reaches further in than that which
    holds the end, and at a free end any of them: what touches the tip of a cantilever hangs on
    it, and so may a beam under its soffit.

    Parameters
    ----------
    contacts
        Of one beam.
    length
        Of the beam [mm].
    bearings
        How far the bearings that the brief states reach in from either end [mm].
    """
    tips = {"start"} if free_start else set()
    tips |= {"end"} if free_end else set()
    return _resting(contacts, contacts, length, bearings, tips)


def _resting(
    sought: Iterable[Contact],
    contacts: Sequence[Contact],
    length: float,
    bearings: tuple[float, float],
    tips: Set[str],
) -> tuple[Contact, ...]:
    """Those sought that may bring a reaction, among all contacts of a beam."""
    # Under a held end, or against its face, a contact only holds it.
    doubtful = [
        c
        for c in sought
        if (c.place == "between" or c.side not in ("below", "end") or c.place in tips)
        and _may_rest(c)
    ]
    if not doubtful:
        return ()
    held = _held_stretches(contacts, length, bearings)
    return tuple(c for c in doubtful if _loads_span(c, tips, held, length))


def loaded_from_side(
    contacts: Sequence[Contact], length: float, bearings: tuple[float, float]
) -> bool:
    """Whether anything meets the side of a beam where it is not held."""
    beside = [contact for contact in contacts if contact.side == "side"]
    if not beside:
        return False
    if any(contact.place == "between" for contact in beside):
        return True
    return bool(_resting(beside, contacts, length, bearings, set()))


_MAY_REST = {*FRAMING, *RESTING}


def _may_rest(contact: Contact) -> bool:
    kind = kind_of(contact.other_class)
    return kind in _MAY_REST or (kind == "IfcWall" and contact.side == "above")


def _loads_span(contact: Contact, tips: Set[str], held: Mapping[str, float], length: float) -> bool:
    if contact.place in tips:
        return True
    if contact.place == "between":
        return contact.side != "below" or kind_of(contact.other_class) not in UPRIGHT
    reach = contact.end if contact.place == "start" else length - contact.start
    return reach > held[contact.place] + TOLERANCE


def _held_stretches(
    contacts: Sequence[Contact], length: float, bearings: tuple[float, float]
) -> dict[str, float]:
    """How far in from either end the beam lies on what holds it [mm]."""
    held = {"start": bearings[0], "end": bearings[1]}
    for contact in contacts:
        if contact.place != "between" and is_seat(contact) and not contact.doubt:
            reach = contact.end if contact.place == "start" else length - contact.start
            held[contact.place] = max(held[contact.place], reach)
    return held


def reactions_reason(contacts: Sequence[Contact]) -> Reason | None:
    """Why a beam with such contacts is not rated; None without any."""
    if not contacts:
        return None
    others = sorted({_told(contact) for contact in contacts})
    named = ", ".join(others[:_NAMED])
    rest = f" and {len(others) - _NAMED} more" if len(others) > _NAMED else ""
    return Reason(f"reactions not included: {named}{rest}", blocking=False)


def unmeasured_reason(beam: Beam, unmeasured: Sequence[Unmeasured]) -> Reason | None:
    """Why a beam is not rated where members may rest on it that no one knows the place of."""
    near = unmeasured_near(beam, unmeasured)
    if not near:
        return None
    names = names_of(near)
    rest = f" and {len(names) - _NAMED} more" if len(names) > _NAMED else ""
    count = "1 member has" if len(near) == 1 else f"{len(near)} members have"
    text = f"{count} no readable extent ({', '.join(names[:_NAMED])}{rest})"
    return Reason(f"reactions not included: {text}", blocking=False)


def unmeasured_near(beam: Beam, unmeasured: Sequence[Unmeasured]) -> list[Unmeasured]:
    """Members that may touch a beam for all that the model tells."""
    return [
        each
        for each in unmeasured
        if each.step_id != beam.step_id and (not beam.storey or each.storey in ("", beam.storey))
    ]


def names_of(unmeasured: Sequence[Unmeasured]) -> list[str]:
    """What people call members of which nobody knows where they are, in order."""
    return sorted({each.name or f"{each.ifc_class} #{each.step_id}" for each in unmeasured})


def _told(contact: Contact) -> str:
    along = contact.end - contact.start
    if kind_of(contact.other_class) == "IfcWall" and along >= LONG_WALL:
        return f"{contact.other}, which stands along {show(along, 'length')} of it"
    return contact.other

"""Where each beam may be carried, at its ends and between them, by what touches it.

What lies under a beam may carry it, wherever along it; so may what the beam's end meets or runs
into. Of two beams that cross through each other the deeper one, or the one that lies lower,
carries the other; where neither does, nothing tells which.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from operator import attrgetter
from typing import Literal, NamedTuple

from ifccheck.beam import Contact, Member
from ifccheck.frame.carrying import DIRECT_CLASSES, Judged
from ifccheck.frame.contacts import TOLERANCE, kind_of
from ifccheck.frame.spanning import Spanning, heights

Place = Literal["start", "end", "between"]
Way = Literal["below", "end", "through"]
"""Whether the carrier lies under the beam, its end meets it, or the beam passes through it"""

BUILT_IN_DEPTH = 0.75
"""A column or wall holds a moment that it covers so much of the beam's depth for."""

DEEPER = 1.25
"""A beam so many times as deep as one that crosses it is about twice as stiff, and carries it."""

LOWER = 0.25
"""A beam lies lower than one that crosses it by so much of the lesser depth, or carries not."""

LEVEL = 0.02
"""Slope up to which what lies along a beam counts as level, and two beams as parallel"""

CORBEL = 1000.0
"""What is no longer, and fastened to the face of a column or wall, may be a corbel [mm]."""

_HOLDS_MOMENT = ("IfcColumn", "IfcWall")
_BEAMS = ("IfcBeam", "IfcMember")


class Seat(NamedTuple):
    """A place where something carries a beam; places along the beam's own x [mm]."""

    beam: str
    place: Place
    x: float
    """The centre, no more than half the beam's depth from the face at an end; it may lie beyond
    the beam's end"""
    low: float
    high: float
    """The faces; one of them may lie beyond the beam's end"""
    carrier: int
    """Step id; 0 where the brief alone says that this end is held"""
    carrier_name: str
    """Name and class, for people"""
    carrier_class: str
    carrier_beam: str
    """Key of the carrier where that spans too ("#" and step id out of scope); else empty"""
    way: Way
    direct: bool
    """The reaction presses into the beam from below or over its depth; else it needs hangers"""
    built_in: bool
    """The beam's end runs into, or meets, a column or wall over most of its depth"""
    others: tuple[str, ...] = ()
    """What else may carry it there"""
    doubt: str = ""
    """Why nothing there can be counted on; empty where the carrier can"""

    @property
    def width(self) -> float:
        """From face to face [mm]."""
        return self.high - self.low


class Candidate(NamedTuple):
    """One member that may carry a beam where it touches it."""

    contact: Contact
    carrier: str | None
    """Key of the beam that would carry; None for what stands"""
    way: Way
    low: float
    high: float
    built_in: bool

    @property
    def rank(self) -> tuple[int, float, bool, str, int]:
        """Order of those at one place: what stands first, under the beam first, the wider first."""
        order = ("below", "end", "through").index(self.way) + 2 * (self.carrier is not None)
        contact = self.contact
        between = contact.place == "between"
        return order, self.low - self.high, between, contact.other, contact.other_step


class Cluster(NamedTuple):
    """Members that touch a beam at one place and may carry it there."""

    places: frozenset[Place]
    candidates: tuple[Candidate, ...]

    @property
    def place(self) -> Place:
        """Where along the beam it is."""
        return "start" if "start" in self.places else "end" if "end" in self.places else "between"

    @property
    def whole(self) -> bool:
        """Whether it reaches from end to end."""
        return {"start", "end"} <= self.places


def clusters_of(
    body: Spanning,
    judged: Sequence[Judged],
    members: Mapping[int, Member],
    deeper: Mapping[int, str],
) -> tuple[Cluster, ...]:
    """Places along a beam where something may carry it, in their order.

    Parameters
    ----------
    body
        The beam.
    judged
        Its contacts.
    members
        By step id.
    deeper
        Keys of the beams that cross through it and carry it, by step id.
    """
    found = sorted(_candidates(body, judged, members, deeper), key=_where)
    clusters: list[list[Candidate]] = []
    reach = 0.0
    for candidate in found:
        if clusters and candidate.low <= reach + TOLERANCE:
            clusters[-1].append(candidate)
            reach = max(reach, candidate.high)
        else:
            clusters.append([candidate])
            reach = candidate.high
    return tuple([_cluster(each) for each in clusters])


def _where(candidate: Candidate) -> tuple[float, float, str, int]:
    return candidate.low, candidate.high, candidate.contact.other, candidate.contact.other_step


def _cluster(candidates: Sequence[Candidate]) -> Cluster:
    places = frozenset([each.contact.place for each in candidates])
    if len(candidates) == 1:
        return Cluster(places, tuple(candidates))
    distinct = {each.contact.other_step: each for each in sorted(candidates, key=_rank)[::-1]}
    hung = any(each.way == "below" and each.carrier is not None for each in candidates)
    chosen = sorted(distinct.values(), key=_rank)
    return Cluster(places, tuple([c._replace(built_in=c.built_in and not hung) for c in chosen]))


_rank = attrgetter("rank")


def _candidates(
    body: Spanning,
    judged: Sequence[Judged],
    members: Mapping[int, Member],
    deeper: Mapping[int, str],
) -> Iterator[Candidate]:
    for contact, carrier in judged:
        if not contact.bears:
            continue
        if (way := _way(contact, deeper)) is None:
            continue
        low, high = contact.start, contact.end
        if contact.place == "start":
            low -= contact.beyond
        elif contact.place == "end":
            high += contact.beyond
        built_in = contact.place != "between" and _holds_moment(body, contact, members)
        yield Candidate(contact, carrier, way, low, high, built_in)


def _way(contact: Contact, deeper: Mapping[int, str]) -> Way | None:
    if contact.side == "below" or contact.side == "end":
        return contact.side
    if contact.place == "between" and contact.side == "side" and contact.other_step in deeper:
        return "through"
    return None


def _holds_moment(body: Spanning, contact: Contact, members: Mapping[int, Member]) -> bool:
    if kind_of(contact.other_class) not in _HOLDS_MOMENT:
        return False
    soffit = body.soffit(0.0 if contact.place == "start" else body.length)
    low, high = heights(members[contact.other_step].box)
    return low <= soffit + TOLERANCE and high >= soffit + BUILT_IN_DEPTH * body.depth - TOLERANCE


def corbels(judged: Mapping[str, Sequence[Judged]], bodies: Mapping[str, Spanning]) -> set[str]:
    """Keys of what juts out of a column or wall, of whatever shape."""
    return {
        key
        for key, body in bodies.items()
        if body.length <= CORBEL and any(_fastens(contact) for contact, _ in judged[key])
    }


def _fastens(contact: Contact) -> bool:
    beside = contact.side in ("side", "end") and contact.bears and not contact.doubt
    return beside and kind_of(contact.other_class) in _HOLDS_MOMENT


def seat_of(body: Spanning, cluster: Cluster, held: Sequence[Candidate], doubt: str = "") -> Seat:
    """The seat of a beam at a place, on the first of those that can be counted on there."""
    first, place = held[0], cluster.place
    contact = first.contact
    half = min(first.high - first.low, body.depth) / 2.0
    centre = {
        "start": first.high - half,
        "end": first.low + half,
        "between": (first.low + first.high) / 2.0,
    }
    return Seat(
        beam=body.key,
        place=place,
        x=centre[place],
        low=first.low,
        high=first.high,
        carrier=contact.other_step,
        carrier_name=contact.other,
        carrier_class=contact.other_class,
        carrier_beam=first.carrier or "",
        way=first.way,
        direct=first.way == "below" or contact.other_class.startswith(DIRECT_CLASSES),
        built_in=first.built_in,
        others=tuple([each.contact.other for each in cluster.candidates if each is not first]),
        doubt=doubt,
    )


class Crossings(NamedTuple):
    """Beams that cross through each other."""

    deeper: Mapping[str, Mapping[int, str]]
    """Of each that is carried so, the keys of those that carry it, by step id"""
    level: Mapping[str, tuple[Contact, ...]]
    """Of each, those of which nothing tells which carries the other"""


def crossings(judged: Mapping[str, Sequence[Judged]], bodies: Mapping[str, Spanning]) -> Crossings:
    """Find beams that pass through each other, neither ending there."""
    passing = {
        (bodies[key].step, contact.other_step): (key, carrier, contact)
        for key, own in judged.items()
        for contact, carrier in own
        if contact.place == "between" and contact.side == "side" and contact.bears
        if carrier is not None and kind_of(contact.other_class) in _BEAMS
    }
    deeper: dict[str, dict[int, str]] = {}
    level: dict[str, tuple[Contact, ...]] = {}
    for (step, other_step), (key, carrier, contact) in passing.items():
        own, other = bodies[key], bodies[carrier]
        if (other_step, step) not in passing or _parallel(own, other):
            continue
        back = passing[other_step, step][2]
        carries = _carries(other, _middle(back), own, _middle(contact))
        if carries:
            deeper.setdefault(key, {})[other_step] = carrier
        elif not _carries(own, _middle(contact), other, _middle(back)):
            level[key] = (*level.get(key, ()), contact)
    return Crossings(deeper, level)


def _middle(contact: Contact) -> float:
    return (contact.start + contact.end) / 2.0


def _parallel(own: Spanning, other: Spanning) -> bool:
    (ax, ay, _), (bx, by, _) = own.x, other.x
    return abs(ax * by - ay * bx) <= LEVEL


def _carries(other: Spanning, there: float, own: Spanning, here: float) -> bool:
    """Whether one beam carries another that passes through it, by depth and by height."""
    fall = own.soffit(here) - other.soffit(there)
    drop = fall + own.depth - other.depth
    lesser = LOWER * min(own.depth, other.depth)
    lies_lower, lies_higher = min(fall, drop) >= lesser, max(fall, drop) <= -lesser
    if other.depth >= DEEPER * own.depth:
        return not lies_higher
    return lies_lower and own.depth < DEEPER * other.depth

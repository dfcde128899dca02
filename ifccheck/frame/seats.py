"""Where each beam may be carried, at its ends and between them, by what touches it.

What lies under a beam may carry it, wherever along it; so may what the beam's end meets or runs
into. Of two beams that cross through each other the deeper one, or the one that lies lower,
carries the other; where neither does, nothing tells which.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from itertools import pairwise
from operator import attrgetter
from typing import Literal, NamedTuple

from ifccheck.beam import Contact
from ifccheck.frame.carrying import DIRECT_CLASSES, END_TO_END, End, Judged
from ifccheck.frame.contacts import TOLERANCE, kind_of
from ifccheck.frame.spanning import Spanning
from ifccheck.frame.stretches import HOLDS_MOMENT, Carriers, stretch_of

Place = Literal["start", "end", "between"]
Way = Literal["below", "end", "through"]
"""Whether the carrier lies under the beam, its end meets it, or the beam passes through it"""

BUILT_IN_DEPTH = 0.75
"""A column or wall holds a moment that it covers so much of the beam's depth for ..."""

BUILT_IN_WIDTH = 0.5
"""... and that is so many times as thick along the beam as that is deep."""

DEEPER = 1.25
"""A beam so many times as deep as one that crosses it carries it, if ..."""

STIFFER = 8.0
"""... it is so many times as stiff: all but a ninth of what they share then goes to it."""

LOWER = 0.25
"""A beam lies lower than one that crosses it by so much of the lesser depth, or carries not."""

LEVEL = 0.02
"""Slope up to which what lies along a beam counts as level, and two beams as parallel"""

CORBEL = 1000.0
"""What is no longer, and fastened to the face of a column or wall, may be a corbel [mm]."""

_FILLING = ("IfcWall", "IfcMember")
"""What may end under a beam's soffit and carry nothing: partitions, mullions, braces"""
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
        """Order of those at one place: what is sure first, of these what stands, of these what
        lies under the beam, of these the wider."""
        contact = self.contact
        spans = self.carrier is not None or kind_of(contact.other_class) == "IfcMember"
        way = ("below", "end", "through").index(self.way)
        order = way + 2 * spans + 4 * bool(contact.doubt)
        between = contact.place == "between"
        return order, self.low - self.high, between, contact.other, contact.other_step


class Cluster(NamedTuple):
    """Members that touch a beam at one place and may carry it there."""

    place: Place
    """Where along the beam it is"""
    candidates: tuple[Candidate, ...]
    """What may be counted on first"""
    stands: bool
    """Whether one of them stands by itself and nothing speaks against it"""
    carriers: tuple[str, ...]
    """Keys of those that span, and that nothing speaks against at once"""
    whole: bool = False
    """Whether it reaches from end to end of the beam"""


def clusters_of(
    body: Spanning,
    judged: Sequence[Judged],
    carriers: Carriers,
    deeper: Mapping[int, str],
) -> list[Cluster]:
    """Places along a beam where something may carry it, in their order.

    Parameters
    ----------
    body
        The beam.
    judged
        Its contacts, in their order along it.
    carriers
        What is known of the bodies of all members.
    deeper
        Keys of the beams that cross through it and carry it, by step id.
    """
    filling = _filling(judged)
    clusters: list[list[Candidate]] = []
    fillers: dict[int, Candidate] = {}
    reach = 0.0
    for contact, carrier in judged:
        if not contact.bears or contact.side == "above":
            continue
        if (way := _way(contact, deeper)) is None:
            continue
        candidate = _candidate(body, contact, carrier, way, carriers)
        if contact.other_step in filling:
            fillers[contact.other_step] = candidate
        elif clusters and candidate.low <= reach + TOLERANCE:
            clusters[-1].append(candidate)
            reach = max(reach, candidate.high)
        else:
            clusters.append([candidate])
            reach = candidate.high
    parts = [part for each in clusters for part in (_parted(each) if len(each) > 1 else (each,))]
    found = [_alone(each[0]) if len(each) == 1 else _together(each) for each in parts]
    return _with_fillers(found, fillers.values()) if fillers else found


def _with_fillers(clusters: Sequence[Cluster], fillers: Iterable[Candidate]) -> list[Cluster]:
    """The places, and those where something may carry the beam and may only fill the space.

    What fills no more than lies over a sure carrier changes nothing.
    """
    held = [each for cluster in clusters for each in cluster.candidates if not each.contact.doubt]
    unsure = [
        Cluster("between", (one,), stands=False, carriers=())
        for one in fillers
        if not any(
            one.low >= each.low - TOLERANCE and one.high <= each.high + TOLERANCE for each in held
        )
    ]
    return sorted((*clusters, *unsure), key=_low)


def _low(cluster: Cluster) -> float:
    return cluster.candidates[0].low


def _filling(judged: Sequence[Judged]) -> set[int]:
    """Step ids of what reaches under a beam between its ends and may carry nothing."""
    return {
        contact.other_step
        for contact, _ in judged
        if contact.place == "between"
        and contact.side == "below"
        and contact.doubt
        and kind_of(contact.other_class) in _FILLING
    }


def _parted(candidates: Sequence[Candidate]) -> Iterator[Sequence[Candidate]]:
    """What may carry a beam at one place, apart from what reaches an end of it that nothing sure
    holds."""
    held = {each.contact.place for each in candidates if not each.contact.doubt} or None
    kinds: dict[bool, list[Candidate]] = {True: [], False: []}
    for each in candidates:
        place = each.contact.place
        alone = held is not None and place != "between" and place not in held
        alone = alone and each.contact.doubt != END_TO_END
        kinds[alone].append(each)
    return (kinds[which] for which in (True, False) if kinds[which])


def _alone(candidate: Candidate) -> Cluster:
    contact, carrier, *_ = candidate
    sure = not contact.doubt
    carriers = (carrier,) if sure and carrier is not None else ()
    return Cluster(contact.place, (candidate,), sure and carrier is None, carriers)


def _together(candidates: Sequence[Candidate]) -> Cluster:
    places = {each.contact.place for each in candidates}
    best = {each.contact.other_step: each for each in sorted(candidates, key=_rank, reverse=True)}
    hung = any(each.way == "below" and each.carrier is not None for each in candidates)
    chosen = [
        each._replace(built_in=each.built_in and not hung)
        for each in sorted(best.values(), key=_rank)
    ]
    sure = [each for each in chosen if not each.contact.doubt]
    place: Place = "start" if "start" in places else "end" if "end" in places else "between"
    return Cluster(
        place=place,
        candidates=(_least_far_in(place, chosen[0], sure), *chosen[1:]),
        stands=any(each.carrier is None for each in sure),
        carriers=tuple([each.carrier for each in sure if each.carrier is not None]),
        whole={"start", "end"} <= places,
    )


def _least_far_in(place: Place, first: Candidate, sure: Sequence[Candidate]) -> Candidate:
    """What carries an end, bearing no farther in than any other that stands under it: a pad on a
    column's head may be all that touches."""
    under = [each for each in sure if each.way == "below" and each.carrier is None]
    if first not in under or place == "between":
        return first
    if place == "start":
        return first._replace(high=min([each.high for each in under if each.high > first.low]))
    return first._replace(low=max([each.low for each in under if each.low < first.high]))


_rank = attrgetter("rank")


def _candidate(
    body: Spanning, contact: Contact, carrier: str | None, way: Way, carriers: Carriers
) -> Candidate:
    low, high = stretch_of(body, contact, carriers)
    place, levels = contact.place, carriers.uprights.get(contact.other_step)
    thick = high - low >= BUILT_IN_WIDTH * body.depth - TOLERANCE
    built_in = levels is not None and place != "between" and thick and _covers(body, place, *levels)
    return Candidate(contact, carrier, way, low, high, built_in)


def _way(contact: Contact, deeper: Mapping[int, str]) -> Way | None:
    if contact.side == "below" or contact.side == "end":
        return contact.side
    if contact.place == "between" and contact.side == "side" and contact.other_step in deeper:
        return "through"
    return None


def _covers(body: Spanning, end: End, low: float, high: float) -> bool:
    """Whether what stands from one height to another covers most of the depth of a beam's end."""
    soffit = body.soffit(0.0 if end == "start" else body.length)
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
    return beside and kind_of(contact.other_class) in HOLDS_MOMENT


def seat_of(body: Spanning, cluster: Cluster, first: Candidate, doubt: str = "") -> Seat:
    """The seat of a beam at a place, on one of those that may carry it there."""
    contact, _, way, low, high, _ = first
    place = cluster.place
    half = min(high - low, body.depth) / 2.0
    x = high - half if place == "start" else low + half if place == "end" else (low + high) / 2.0
    others: tuple[str, ...] = ()
    if len(cluster.candidates) > 1:
        others = tuple([each.contact.other for each in cluster.candidates if each is not first])
    return Seat(
        body.key,
        place,
        x,
        low,
        high,
        contact.other_step,
        contact.other,
        contact.other_class,
        first.carrier or "",
        way,
        way == "below" or contact.other_class.startswith(DIRECT_CLASSES),
        first.built_in,
        others,
        doubt,
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
        held = _carries(other, _middle(back), own, _middle(contact))
        if held and _is_stiffer(other, own, judged[key]):
            deeper.setdefault(key, {})[other_step] = carrier
        elif not _stands(judged[key], contact) and not (
            _carries(own, _middle(contact), other, _middle(back))
            and _is_stiffer(own, other, judged[carrier])
        ):
            level[key] = (*level.get(key, ()), contact)
    return Crossings(deeper, level)


def _stands(judged: Sequence[Judged], crossing: Contact) -> bool:
    """Whether a beam lies on what stands where another crosses it."""
    return any(
        contact.side == "below" and contact.bears and not contact.doubt and carrier is None
        for contact, carrier in judged
        if contact.start <= crossing.end and contact.end >= crossing.start
    )


def _is_stiffer(other: Spanning, own: Spanning, judged: Sequence[Judged]) -> bool:
    """Whether a beam is stiff enough to carry another, of which the contacts are given."""
    span = _greatest_span(own, judged)
    return stiffness(other, other.length) >= STIFFER * stiffness(own, span)


def stiffness(body: Spanning, span: float) -> float:
    """I / L^3 of a beam by its box [mm]."""
    return body.width * body.depth**3 / 12.0 / span**3


def _greatest_span(body: Spanning, judged: Sequence[Judged]) -> float:
    """The greatest distance between what stands under a beam, or its length [mm]."""
    places = sorted(
        _middle(contact)
        for contact, carrier in judged
        if contact.bears and not contact.doubt and carrier is None
        if contact.side in ("below", "end")
    )
    return max((b - a for a, b in pairwise(places)), default=body.length) or body.length


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

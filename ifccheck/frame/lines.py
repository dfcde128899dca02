"""How beams stand in lines: spans from support to support, overhangs and cantilevers, as the
model shows them and the brief says."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence, Set
from graphlib import TopologicalSorter
from itertools import pairwise
from operator import attrgetter
from typing import NamedTuple

from ifccheck.beam import Contact, EndKind, Model, Reason, Remark, SupportKind
from ifccheck.frame import told
from ifccheck.frame.beam_lines import BeamLine, LineSpan, SpanEnd, chains
from ifccheck.frame.bearing import bearing_of, with_bearing, with_doubts
from ifccheck.frame.carrying import ENDS, STANDING_USES, End, Judged, Stated, judged_contacts
from ifccheck.frame.feet import Feet, feet_of
from ifccheck.frame.ground_up import Joint, Order, order_of, told_against, without_free
from ifccheck.frame.joints import (
    ON_ITS_OWN,
    RunsThrough,
    carried_apart,
    continuous_joints,
    meeting_ends,
    stated_apart,
)
from ifccheck.frame.seats import (
    STIFFER,
    Cluster,
    Place,
    Seat,
    clusters_of,
    corbels,
    crossings,
    seat_of,
    stiffness,
)
from ifccheck.frame.spanning import Spanning, all_spanning
from ifccheck.frame.stretches import Carriers, carriers_of
from ifccheck.units import show

_NO_ORDER = Order({}, frozenset())


class Lines(NamedTuple):
    """How all beams of a model stand."""

    lines: tuple[BeamLine, ...]
    unknown: Mapping[str, Reason]
    """Of each beam with a readable body that is in no line, why"""
    seats: Mapping[str, tuple[Seat, ...]]
    """Of all that spans, out of scope too ("#" and step id), in order along it"""
    order: tuple[str, ...]
    """All that stands: what carries comes before what it carries"""
    doubts: Mapping[str, tuple[Reason, ...]]
    """On beams that cross others at one level, that go on into beams that do not stand, or that
    may go on into what stands on something else"""
    remarks: Mapping[str, tuple[Remark, ...]]


SHORT = 100.0
"""A beam that reaches so far past the outer face of its support ends on it [mm] ..."""
SHORT_PART = 0.25
"""... if that is no more than this part of its depth: its load there goes into the support."""


class _Frame(NamedTuple):
    """What lines are made of."""

    bodies: Mapping[str, Spanning]
    clusters: Mapping[str, Sequence[Cluster]]
    meeting: Mapping[Joint, Joint]
    joints: Mapping[Joint, Joint]
    """Those that meet and pass moment on"""
    parted: Mapping[Joint, str]
    """Why others do not, where bars or the brief would have it"""
    stated: Stated
    order: Order
    level: Mapping[str, Sequence[Contact]]
    """Of beams, those that cross at one level"""


class _Given(NamedTuple):
    """What frames are made of."""

    judged: Mapping[str, Sequence[Judged]]
    bodies: Mapping[str, Spanning]
    carriers: Carriers
    keys: Sequence[str]
    """Of beams with a body that was read"""
    stated: Stated
    runs_through: RunsThrough


def find_lines(
    model: Model,
    contacts: Mapping[str, Sequence[Contact]],
    others: Mapping[str, Sequence[Contact]],
    stated: Stated,
    runs_through: RunsThrough,
    load_bearing: Set[int] = frozenset(),
) -> Lines:
    """Stand all beams of a model, from the ground up.

    Parameters
    ----------
    model
        As it was read.
    contacts
        Of its beams, by key, as ``find_contacts`` gives them; without any with a member that the
        brief says does not hold that beam.
    others
        Of what else spans, as ``contacts_of_others`` gives them.
    stated
        What the brief's entries say of ends.
    runs_through
        Whether a beam passes moment on into another that it meets over their support: asked of
        both, of which one is enough.
    load_bearing
        Step ids of members that the brief says carry what lies on them or ends at them.
    """
    everything = {**contacts, **others}
    rated = {beam.step_id for beam in model.beams}
    judged = with_bearing(
        judged_contacts(everything, model.beams, model.out_of_scope),
        bearing_of(model.members, load_bearing, rated),
    )
    members = {member.step_id: member for member in model.members}
    bodies = all_spanning(model.beams, members, others)
    carriers = carriers_of(model.members, judged, model.beams)
    keys = [beam.key for beam in model.beams if beam.axis is not None and beam.runs]
    steps = {body.step: key for key, body in bodies.items()}
    firm = {one.step_id for one in model.out_of_scope if one.reason in STANDING_USES}
    feet = feet_of(model.members, judged, steps, firm, load_bearing)
    given = _Given(judged, bodies, carriers, keys, stated, runs_through)
    frame, seats = _with_columns(given, feet)
    unknown = _unknown(frame, keys, seats)
    spans = {
        key: tuple(_spans(frame, key, seats[key], unknown)) for key in keys if key not in unknown
    }
    return Lines(
        lines=tuple(chains(spans, frame.joints, bodies)),
        unknown=unknown,
        seats=seats,
        order=_carriers_first(seats, frame.order),
        doubts=_doubts(frame, spans, seats),
        remarks={key: tuple(_remarks(frame, seats[key], own)) for key, own in spans.items()},
    )


def _with_columns(given: _Given, feet: Feet) -> tuple[_Frame, dict[str, tuple[Seat, ...]]]:
    """What stands and on what; columns stand on beams once those do."""
    standing: set[int] = set()
    while True:
        doubts = {step: why for step, why in feet.doubts.items() if step not in standing}
        frame, seats = _framed(given, with_doubts(given.judged, doubts))
        beams = frame.order.rounds.keys()
        now = {step for step, under in feet.on_beams.items() if under & beams}
        if now <= standing:
            return frame, seats
        standing |= now


def _framed(
    given: _Given, judged: Mapping[str, Sequence[Judged]]
) -> tuple[_Frame, dict[str, tuple[Seat, ...]]]:
    """What stands and on what, by contacts with all that speaks against them."""
    _, bodies, carriers, keys, stated, runs_through = given
    crossed = crossings(judged, bodies)
    clusters = {
        key: without_free(
            clusters_of(body, judged[key], carriers, crossed.deeper.get(key, {})),
            stated.get(key, {}),
        )
        for key, body in bodies.items()
    }
    meeting = meeting_ends({key: clusters[key] for key in keys}, bodies)
    joints = continuous_joints(meeting, clusters, runs_through)
    frame = _Frame(bodies, clusters, meeting, joints, {}, stated, _NO_ORDER, crossed.level)
    return _stood(frame, stated_apart(joints, stated), corbels(judged, bodies))


def _stood(
    frame: _Frame, apart: Mapping[Joint, str], fastened: Set[str]
) -> tuple[_Frame, dict[str, tuple[Seat, ...]]]:
    """What stands and on what, with moment passed on only between beams that stand on the same."""
    while True:
        joints = {one: other for one, other in frame.joints.items() if one not in apart}
        order = order_of(frame.clusters, frame.stated, joints, fastened)
        frame = frame._replace(joints=joints, parted={**frame.parted, **apart}, order=order)
        seats = {key: _seats(frame, key) for key in frame.clusters}
        apart = carried_apart(joints, seats)
        if not apart:
            return frame, seats


def _seats(frame: _Frame, key: str) -> tuple[Seat, ...]:
    body, order = frame.bodies[key], frame.order
    found = []
    for cluster in frame.clusters[key]:
        first = cluster.candidates[0]
        if first.carrier is None and not first.contact.doubt:
            found.append(seat_of(body, cluster, first))
            continue
        sure = [each for each in cluster.candidates if not order.speaks_against(key, each)]
        doubt = "" if sure else told_against(key, cluster, order)
        found.append(seat_of(body, cluster, sure[0] if sure else first, doubt))
    said = frame.stated.get(key)
    return _with_the_brief(body, found, said) if said else tuple(found)


def _with_the_brief(
    body: Spanning, seats: Sequence[Seat], said: Mapping[End, SupportKind]
) -> tuple[Seat, ...]:
    """The seats, and those of ends of which the brief alone says that they are held."""
    ends = [end for end in ENDS if said.get(end, "free") != "free"]
    found = [seat for seat in seats if not (seat.doubt and seat.place in ends)]
    places = {seat.place for seat in found}
    found += [_by_word(body, end) for end in ends if end not in places]
    return tuple(sorted(found, key=_x))


_x = attrgetter("x")


def _by_word(body: Spanning, end: End) -> Seat:
    """The seat of an end of which the brief alone says that it is held."""
    x = 0.0 if end == "start" else body.length
    return Seat(body.key, end, x, x, x, 0, "the brief", "", "", "end", direct=False, built_in=False)


def _unknown(
    frame: _Frame, keys: Sequence[str], seats: Mapping[str, Sequence[Seat]]
) -> dict[str, Reason]:
    """Why beams do not stand, of those of which nothing tells how."""
    rounds = frame.order.rounds
    unknown: dict[str, Reason] = {}
    for key in sorted(keys, key=lambda key: rounds.get(key, len(rounds))):
        if why := _why_not(frame, key, seats[key], unknown):
            unknown[key] = Reason(f"supports unknown: {why}")
    return unknown


def _why_not(frame: _Frame, key: str, seats: Sequence[Seat], unknown: Mapping[str, Reason]) -> str:
    """Why nothing tells how a beam stands; empty where it is told."""
    whole = [cluster for cluster in frame.clusters[key] if cluster.whole]
    if whole:
        return told.lies_along(whole[0].candidates[0].contact)
    doubted = [seat for seat in seats if seat.doubt]
    if doubted:
        return told.unsure(doubted)
    if key not in frame.order.rounds:
        return told.no_way(seats)
    if len(seats) == 1 and not _holds_alone(seats[0], frame.stated.get(key, {})):
        leans_on = [frame.joints[key, end][0] for end in ENDS if (key, end) in frame.joints]
        if any(other in unknown for other in leans_on):
            return told.leans(frame.bodies[leans_on[0]].told)
    return ""


def _doubts(
    frame: _Frame, standing: Iterable[str], seats: Mapping[str, Sequence[Seat]]
) -> dict[str, tuple[Reason, ...]]:
    """What may bear on beams beside what rests on them."""
    found = {key: list(map(told.crossing, own)) for key, own in frame.level.items()}
    standing = set(standing)
    for key in standing:
        for other in [frame.joints[key, end][0] for end in ENDS if (key, end) in frame.joints]:
            if other not in standing:
                found.setdefault(key, []).append(told.goes_on_into(frame.bodies[other].told))
        if soft := _soft_end(frame, key, seats[key]):
            found.setdefault(key, []).append(soft)
        for end in ENDS:
            if frame.parted.get((key, end)) == ON_ITS_OWN:
                other = frame.meeting[key, end][0]
                found.setdefault(key, []).append(_how(end, frame.bodies[other].told))
    return {key: tuple(own) for key, own in found.items()}


def _soft_end(frame: _Frame, key: str, seats: Sequence[Seat]) -> Reason | None:
    """Why a beam that is built in at one end may hang over, though its other end meets a beam.

    That beam holds it up where it gives way much less at its middle, 48 E I / L^3, than this one
    does as a cantilever, 3 E I / L^3.
    """
    if len(seats) != 2 or frame.stated.get(key):
        return None
    for built, other in (seats, seats[::-1]):
        carrier = frame.bodies.get(other.carrier_beam)
        if built.built_in and carrier is not None and built.place != "between":
            own, under = (stiffness(each, each.length) for each in (frame.bodies[key], carrier))
            if 48.0 * under < STIFFER * 3.0 * own:
                return told.soft(other)
    return None


def _how(end: End, other: str) -> Reason:
    """Say that a beam may bend with one that it meets over two supports."""
    text = (
        f"reactions not sure: moment may pass into {other}, and {ON_ITS_OWN}; call its {end}"
        " pinned under [[supports]]"
    )
    return Reason(text, blocking=False)


def _holds_alone(seat: Seat, said: Mapping[End, SupportKind]) -> bool:
    place = seat.place
    if place == "between":
        return False
    return said[place] == "fixed" if place in said else seat.built_in


def _spans(
    frame: _Frame, key: str, seats: Sequence[Seat], unknown: Mapping[str, Reason]
) -> Iterator[LineSpan]:
    """Spans of one beam, in its own x."""
    first, last, length = seats[0], seats[-1], frame.bodies[key].length
    goes_on: dict[Place, bool] = {
        end: frame.joints[key, end][0] not in unknown for end in ENDS if (key, end) in frame.joints
    }
    if len(seats) == 1 and not goes_on.get(first.place):
        yield _cantilever(first, length)
        return
    said = frame.stated.get(key, {})
    kind: EndKind = "continuous"
    slip = _slip(frame.bodies[key])
    if first.place != "start" and first.low > slip:
        yield LineSpan(key, SpanEnd("free", 0.0, 0.0), SpanEnd(kind, first.x, first.low, first))
    elif not goes_on.get("start"):
        kind = said.get("start", "pinned")
    for before, after in pairwise(seats):
        start = SpanEnd(kind, before.x, max(before.high, 0.0), before)
        kind = "continuous"
        if after is last and _ends_at(last, length, slip) and not goes_on.get("end"):
            kind = said.get("end", "pinned")
        yield LineSpan(key, start, SpanEnd(kind, after.x, min(after.low, length), after))
    if not _ends_at(last, length, slip):
        tip = SpanEnd("free", length, length)
        yield LineSpan(key, SpanEnd("continuous", last.x, last.high, last), tip)


def _ends_at(seat: Seat, length: float, slip: float) -> bool:
    """Whether a beam does not hang over past its last seat."""
    return seat.place == "end" or seat.high >= length - slip


def _slip(body: Spanning) -> float:
    """What a beam may reach past a support and be no overhang [mm]."""
    return min(SHORT, SHORT_PART * body.depth)


def _cantilever(seat: Seat, length: float) -> LineSpan:
    if seat.place == "start":
        held = SpanEnd("fixed", seat.high, seat.high, seat)
        return LineSpan(seat.beam, held, SpanEnd("free", length, length))
    held = SpanEnd("fixed", seat.low, seat.low, seat)
    return LineSpan(seat.beam, SpanEnd("free", 0.0, 0.0), held)


def _remarks(frame: _Frame, seats: Sequence[Seat], spans: Sequence[LineSpan]) -> Iterator[Remark]:
    """What an engineer must see of how a beam was stood."""
    for seat in seats:
        yield told.supported(seat) if seat.carrier else _held(seat)
    first, last = spans[0].start, spans[-1].end
    if first.kind == "free":
        yield told.hangs_over(spans[0])
    if last.kind == "free":
        yield told.hangs_over(spans[-1])
    for end, seat in ((first, seats[0]), (last, seats[-1])):
        place = seat.place
        if place != "between" and end.seat is seat and (seat.beam, place) in frame.meeting:
            other = frame.bodies[frame.meeting[seat.beam, place][0]].told
            passes = (seat.beam, place) in frame.joints
            if why := frame.parted.get((seat.beam, place)):
                yield _apart(seat, other, why)
            else:
                yield told.meets(seat, other, goes_on=end.kind == "continuous", passes=passes)


def _held(seat: Seat) -> Remark:
    """Say that nothing in the model carries an end."""
    text = f"held at its {seat.place} by the brief alone: nothing in the model is taken to carry it"
    return Remark(seat.beam, "supports", text, "assumption")


def _apart(seat: Seat, other: str, why: str) -> Remark:
    """Say why a beam does not go on into one that it meets."""
    where = f"over {seat.carrier_name} at x = {show(seat.x, 'length')}"
    text = f"meets {other} {where}, and takes no moment from it: {why}"
    return Remark(seat.beam, "supports", text, "assumption")


def _carriers_first(seats: Mapping[str, Sequence[Seat]], order: Order) -> tuple[str, ...]:
    """All that stands, what carries before what it carries."""
    below = {
        key: {seat.carrier_beam for seat in seats[key] if seat.carrier_beam and not seat.doubt}
        for key in order.rounds
    }
    resting = {key: carriers & order.rounds.keys() for key, carriers in below.items() if carriers}
    first = [key for key in order.rounds if key not in resting]
    later = TopologicalSorter(resting).static_order()
    return (*first, *(key for key in later if key in resting))

"""Beams that stand in the building: on what the model shows, loaded by what rests on them."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence, Set
from dataclasses import dataclass, field, replace
from functools import cache, cached_property

from ifccheck.beam import Beam, Contact, Given, Load, Model, Reason, Remark
from ifccheck.brief.cases import cases_of
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Brief, FrameOptions
from ifccheck.brief.supports import stated_bearings, stated_ends
from ifccheck.demand.overrules import Overrules, Springs, overruled, several_spans
from ifccheck.demand.path import LoadPath, load_path
from ifccheck.demand.standing import standing_in_lines
from ifccheck.errors import BriefError
from ifccheck.frame.beam_lines import BeamLine
from ifccheck.frame.boxes import section_extent
from ifccheck.frame.carrying import Touching
from ifccheck.frame.column_springs import column_stiffness
from ifccheck.frame.contacts import TOLERANCE
from ifccheck.frame.joints import RunsThrough, by_bars
from ifccheck.frame.lines import Lines, find_lines
from ifccheck.frame.seats import Seat
from ifccheck.frame.spans import Standing
from ifccheck.rating.runways import Runway
from ifccheck.units import clipped

ONE_OF_SEVERAL = Reason(
    "supports unknown: its span is stated, but it makes several or goes on into another beam; state"
    " its supports instead"
)
_CAST_IN = (
    "ends that run into columns or walls count as pinned: no moment is asked of them there, nor of"
    " those (restraint under [frame])"
)
_HANGERS = "frames into its side: the hanger steel there is not checked"


@dataclass(frozen=True)
class Framing:
    """How all beams of a model stand in it."""

    lines: Lines
    standing: dict[str, Standing]
    unknown: dict[str, Reason]
    """Why beams do not stand"""
    beams: Mapping[str, Beam]
    path: LoadPath = field(default_factory=LoadPath)
    passed: Mapping[str, Sequence[Reason]] = field(default_factory=dict)
    """Why what rests on a beam does not give all that acts on it"""
    beside: Mapping[str, Sequence[Reason]] = field(default_factory=dict)
    """Why beams that one goes on into, or that are fixed into it, may do more to it than is told"""

    @property
    def through_lines(self) -> dict[str, frozenset[str]]:
        """Cases that act on beams through their lines, by key."""
        return {key: each.cases for key, each in self.path.continuity.items()}

    @cached_property
    def standing_keys(self) -> Mapping[int, str]:
        """Keys of the beams that stand, by step id."""
        return {self.beams[key].step_id: key for key in self.standing}


def stand_in_building(
    model: Model,
    brief: Brief,
    matches: Matches,
    touching: Touching,
    ignored: Mapping[str, Sequence[Contact]],
    spans: Mapping[str, Given],
) -> Framing:
    """Stand all beams on what the model shows under them and the brief says of them.

    ``ignored`` are contacts that hold no beam, ``spans`` are lengths that the brief states.
    """
    contacts = _without(ignored, touching.beams)
    beams = {beam.key: beam for beam in model.beams}
    stated = stated_ends(brief, matches)
    bearing = load_bearing(brief, contacts)
    assert brief.frame is not None
    through = runs_through(brief.frame, beams)
    shown = find_lines(model, contacts, touching.others, stated, through, bearing)
    said = _overrules(brief, matches, beams, spans)
    if brief.frame.restraint == "columns":
        said = said._replace(springs=column_springs(model, beams, contacts))
    refused = _refused(shown.lines, said, beams)
    unknown = {**shown.unknown, **refused}
    left = [line for line in shown.lines if line.beams[0].key not in refused]
    lines = shown._replace(lines=overruled(left, said))
    sources = dict.fromkeys(stated, "brief, [[supports]]")
    standing = standing_in_lines(lines.lines, beams, lines.remarks, sources)
    return Framing(lines, standing, unknown, beams)


def _without(
    ignored: Mapping[str, Sequence[Contact]], contacts: Mapping[str, Sequence[Contact]]
) -> Mapping[str, Sequence[Contact]]:
    """The contacts without any with a member that does not hold the beam, wherever it touches."""
    left = dict(contacts)
    for key, own in ignored.items():
        steps = {each.other_step for each in own}
        left[key] = [each for each in contacts[key] if each.other_step not in steps]
    return left


def column_springs(
    model: Model, beams: Mapping[str, Beam], contacts: Mapping[str, Sequence[Contact]]
) -> Springs:
    """What columns above and below a support need to turn, with far ends fixed."""
    members = {member.step_id: member for member in model.members}

    @cache
    def spring(seat: Seat) -> float:
        touching = contacts.get(seat.beam, ())
        return column_stiffness(beams[seat.beam], seat, touching, members, "fixed")

    return spring


def _refused(
    lines: Sequence[BeamLine], said: Overrules, beams: Mapping[str, Beam]
) -> dict[str, Reason]:
    """Why all beams of lines do not stand in which the span of one is stated."""
    stated = set(several_spans(lines, said))
    found: dict[str, Reason] = {}
    for line in lines:
        own = [beam.key for beam in line.beams if beam.key in stated]
        if own:
            mark = beams[own[0]].mark
            reason = Reason(f"supports unknown: the span of {mark}, in one line with it, is stated")
            found |= {each.key: reason for each in line.beams}
            found |= dict.fromkeys(own, ONE_OF_SEVERAL)
    return found


def _overrules(
    brief: Brief, matches: Matches, beams: Mapping[str, Beam], spans: Mapping[str, Given]
) -> Overrules:
    assert brief.frame is not None
    bearings = stated_bearings(brief, matches)
    sizes = {key: (_depth(beams[key]), beams[key].length) for key, _ in bearings if beams[key].runs}
    ends = {(key, end) for key, own in stated_ends(brief, matches).items() for end in own}
    return Overrules(brief.frame.restraint, bearings, sizes, spans, ends)


def _depth(beam: Beam) -> float:
    *_, low, high = section_extent(beam)
    return high - low


def runs_through(options: FrameOptions, beams: Mapping[str, Beam]) -> RunsThrough:
    """Whether a beam passes moment on over a support into another, as the brief has it."""
    if options.continuity != "bars":
        always = options.continuity == "always"
        return lambda meeting: always
    drawn = {
        key: [bar for each in beam.reinforcement if each.source == "bars" for bar in each.bars]
        for key, beam in beams.items()
    }
    return by_bars(beams, drawn)


def load_bearing(brief: Brief, contacts: Mapping[str, Sequence[Contact]]) -> set[int]:
    """Step ids of what the brief says carries the beams that lie on it; raises BriefError for a
    mark that touches no beam."""
    assert brief.frame is not None
    touching = [contact for own in contacts.values() for contact in own]
    found: set[int] = set()
    for mark in brief.frame.load_bearing:
        steps = {contact.other_step for contact in touching if contact.goes_by(mark)}
        if not steps:
            raise BriefError(
                f"{brief.at('frame.load_bearing')}: {clipped(mark, 120)} touches no beam: correct"
                " or remove it"
            )
        found |= steps
    return found


def with_reactions(
    framing: Framing,
    beams: Mapping[str, Beam],
    loads: Mapping[str, Sequence[Load]],
    unit_weights: Mapping[str, float],
    brief: Brief,
    runways: Mapping[str, Runway],
) -> Framing:
    """The same with what beams give each other."""
    path = load_path(framing.lines.lines, beams, loads, unit_weights, cases_of(brief), runways)
    for key, reason in path.in_a_ring.items():
        framing.standing.pop(key, None)
        framing.unknown[key] = reason
    return replace(framing, path=path)


def unsettled(
    framing: Framing, contacts: Mapping[str, Sequence[Contact]], key: str
) -> list[Contact]:
    """Contacts of a beam that may bring it a reaction which is not known.

    What carries it brings none, what rests on it gives its own, and what stands on something else
    where both touch gives it to that.
    """
    settled = {seat.carrier for seat in framing.lines.seats.get(key, ())}
    settled |= {framing.beams[other].step_id for other in framing.path.resting.get(key, ())}
    return [
        contact
        for contact in contacts.get(key, ())
        if contact.other_step not in settled and not _stands_there(framing, contacts, contact)
    ]


def _stands_there(
    framing: Framing, contacts: Mapping[str, Sequence[Contact]], contact: Contact
) -> bool:
    """Whether what touches a beam stands on something else at every place where it does."""
    other = framing.standing_keys.get(contact.other_step)
    if other is None:
        return False
    step, depth = framing.beams[contact.beam].step_id, _depth(framing.beams[other])
    places = [each for each in contacts.get(other, ()) if each.other_step == step]
    seats = [each for each in framing.lines.seats[other] if each.carrier not in (0, step)]
    return bool(places) and all(
        any(_over(place, seat, depth / 2.0) for seat in seats) for place in places
    )


def _over(contact: Contact, seat: Seat, past: float) -> bool:
    """Whether a beam touches another over what carries it, and no farther past its faces."""
    middle = (contact.start + contact.end) / 2.0
    if not seat.low - TOLERANCE <= middle <= seat.high + TOLERANCE:
        return False
    return contact.start >= seat.low - past and contact.end <= seat.high + past


def cast_in(framing: Framing, key: str) -> Iterator[Remark]:
    """What is assumed of ends that run into columns or walls and count as pinned."""
    spans = framing.standing[key].spans
    kinds = {"start": spans[0].span.start_support.kind, "end": spans[-1].span.end_support.kind}
    if any(s.built_in and kinds.get(s.place) == "pinned" for s in framing.lines.seats[key]):
        yield Remark(key, "supports", _CAST_IN, "assumption")


def hangers(framing: Framing, key: str) -> Iterator[Remark]:
    """What is not checked where beams frame into the side of another."""
    for other in sorted(framing.path.resting.get(key, ())):
        seats = [seat for seat in framing.lines.seats[other] if seat.carrier_beam == key]
        if any(not seat.direct for seat in seats):
            yield Remark(key, "demand", f"{framing.beams[other].mark} {_HANGERS}", "doubt")


def with_doubts(framing: Framing, own: Set[str]) -> Framing:
    """The same with why beams may not be called adequate as what rests on them, on beams that they
    go on into, or on what those carry is not all known; ``own`` are keys of beams of which what
    acts on themselves is not."""
    passed: dict[str, list[Reason]] = {}
    beside: dict[str, list[Reason]] = {}
    for line in framing.path.solved:
        keys = [each.key for each in line.beams]
        for key in keys:
            for carrier, reason in _twisted(framing, key):
                beside.setdefault(carrier, []).append(reason)
        doubtful = [key for key in keys if key in own or key in passed or key in beside]
        if not doubtful:
            continue
        for key in keys:
            others = [other for other in doubtful if other != key]
            if others:
                beside.setdefault(key, []).append(_not_known(framing, others[0]))
        for node in line.nodes:
            for seat in node.seats:
                if seat.beam in framing.path.resting.get(seat.carrier_beam, ()):
                    passed.setdefault(seat.carrier_beam, []).append(_not_known(framing, seat.beam))
    return replace(framing, passed=passed, beside=beside)


def _not_known(framing: Framing, key: str) -> Reason:
    mark = framing.beams[key].mark
    return Reason(f"reactions not included: not all that acts on {mark} is known", blocking=False)


def _twisted(framing: Framing, key: str) -> Iterator[tuple[str, Reason]]:
    """Beams into which one is fixed, whose moment twists them or loads them with one."""
    if key not in framing.standing:
        return
    spans = framing.standing[key].spans
    kinds = {"start": spans[0].span.start_support.kind, "end": spans[-1].span.end_support.kind}
    for seat in framing.lines.seats[key]:
        if seat.carrier_beam in framing.beams and kinds.get(seat.place) == "fixed":
            mark = framing.beams[key].mark
            text = f"torsion: {mark} is fixed into it, and its moment is not followed"
            yield seat.carrier_beam, Reason(text, blocking=False)

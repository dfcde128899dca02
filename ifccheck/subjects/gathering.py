"""Joins what the model and the brief say of each beam into what its rating rests on."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import TypeVar

from ifccheck.beam import Beam, Contact, Given, Load, Model, Reason, Remark, Support
from ifccheck.brief.loads import loads_on_beams
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Brief
from ifccheck.brief.model_cases import (
    doubts_by_beam,
    taken_loads,
    uncarried,
    untaken_by_beam,
    upward_of,
)
from ifccheck.brief.statements import (
    BeamStatement,
    default_materials,
    materials,
    slab_flange,
    span_reason,
    statements,
)
from ifccheck.brief.supports import (
    ignored_contacts,
    overruled_supports,
    resolve_supports,
    stated_ends,
)
from ifccheck.frame.bar_ends import Surroundings
from ifccheck.frame.carrying import contacts_of, touching_in
from ifccheck.frame.flanges import NO_MEETING, Slabs
from ifccheck.frame.openings import Net, net_of
from ifccheck.frame.reactions import loaded_from_side, resting_between
from ifccheck.frame.slab_flanges import Asked, Counted, counted
from ifccheck.frame.spans import Standing, stand_alone
from ifccheck.framed import Framed
from ifccheck.rating.shape import deep_member, shape_reasons, stances
from ifccheck.rating.stiffness import varies
from ifccheck.rating.subject import Subject, Unrated
from ifccheck.standards import Standard
from ifccheck.subjects.acting import NO_STATEMENT, judge_loads, load_doubts
from ifccheck.subjects.concrete import Concrete, concrete_of
from ifccheck.subjects.findings import Findings, Sources
from ifccheck.subjects.flange_widths import with_widths
from ifccheck.subjects.floors import NO_FLOOR_LOADS, FloorLoads, floor_loads
from ifccheck.subjects.framed import framed
from ifccheck.subjects.framing import (
    Framing,
    cast_in,
    hangers,
    stand_in_building,
    with_doubts,
    with_reactions,
)
from ifccheck.subjects.slab_steel import SlabSteel, slab_steel_of
from ifccheck.subjects.stated import stated_texts
from ifccheck.subjects.steel import Steel, steel_of
from ifccheck.subjects.trains import fixed_cranes, judge_trains, trains_of

Row = TypeVar("Row", Load, Remark)

_VARYING_STIFFNESS = (
    "moments of its fixed ends are those of a span whose stiffness varies with its outline"
    " (concrete uncracked, steel left out)"
)


@dataclass(frozen=True, slots=True)
class Gathered:
    """All beams of one model, ready to be rated or known not to be."""

    subjects: tuple[Subject, ...]
    unrated: tuple[Unrated, ...]
    loads: tuple[Load, ...]
    """On every beam, rated or not"""
    through_lines: Mapping[str, frozenset[str]]
    """Cases that act on beams through their lines, by key, rated or not"""
    framed: Framed | None = None
    """How beams were stood on what the model shows; None where the brief states it"""
    floors: FloorLoads = NO_FLOOR_LOADS
    """What slabs bring to beams"""


def gather(model: Model, brief: Brief, matches: Matches, standard: Standard) -> Gathered:
    """Gather everything that the rating of each beam of a model rests on."""
    beams = {beam.key: beam for beam in model.beams}
    sources = _sources(model, brief, matches, standard, beams)
    stated = {key: each.span for key, each in sources.statements.items() if each.span}
    framing = None
    if brief.frame:
        framing = stand_in_building(
            model, brief, matches, sources.touching, sources.ignored, stated
        )
    standing = framing.standing if framing else _standing_alone(beams, sources)
    spans = {key: each.reach for key, each in standing.items()}
    floors = floor_loads(model, brief, matches, standing, brief.basis.concrete_unit_weight)
    trains = trains_of(brief, matches, beams, standing, framing)
    sources = replace(sources, floors=floors, runways=trains.runways)
    loads = (
        *floors.loads,
        *loads_on_beams(brief, matches, beams, spans, sources.contacts),
        *taken_loads(brief, model.loads, beams, spans),
        *trains.loads,
    )
    if framing:
        framing = _with_reactions(framing, beams, _by_beam(loads), sources)
        loads = (*loads, *framing.path.passed_on())
        sources = replace(sources, framing=framing)
    of_beam = _by_beam(loads)
    found = [
        _one(beam, sources, standing.get(beam.key), of_beam.get(beam.key, ()))
        for beam in model.beams
    ]
    return _gathered(found, loads, framing, floors)


def _sources(
    model: Model, brief: Brief, matches: Matches, standard: Standard, beams: Mapping[str, Beam]
) -> Sources:
    """What is known of all beams before it is told how they stand."""
    touching = touching_in(model)
    contacts = contacts_of(model, touching, stated_ends(brief, matches))
    supports, remarks = _supports(brief, matches, beams, contacts)
    return Sources(
        brief=brief,
        standard=standard,
        touching=touching,
        contacts=contacts,
        unmeasured=model.unmeasured,
        statements=statements(brief, matches),
        materials=materials(brief, matches),
        defaults=default_materials(brief),
        supports=supports,
        support_remarks=_by_beam(remarks),
        slabs=Slabs(model.beams, model.slabs, model.members),
        around=Surroundings(model.members, _not_concrete(model)),
        unit_weight=Given(brief.basis.concrete_unit_weight, "brief, basis.concrete_unit_weight"),
        crane_cases=fixed_cranes(brief),
        stances=stances(model.beams),
        ignored=ignored_contacts(brief, matches, contacts),
        upward=_upward(brief, model),
        action_doubts=doubts_by_beam(brief, model.loads),
        untaken=untaken_by_beam(brief, model.loads),
        uncarried=uncarried(brief, model.loads),
        permanent_cases={case.name for case in brief.cases if case.nature == "permanent"},
    )


def _gathered(
    found: Sequence[Subject | Unrated],
    loads: tuple[Load, ...],
    framing: Framing | None,
    floors: FloorLoads,
) -> Gathered:
    return Gathered(
        subjects=tuple(each for each in found if isinstance(each, Subject)),
        unrated=tuple(each for each in found if isinstance(each, Unrated)),
        loads=loads,
        through_lines=framing.through_lines if framing else {},
        framed=framed(framing) if framing else None,
        floors=floors,
    )


def _supports(
    brief: Brief,
    matches: Matches,
    beams: Mapping[str, Beam],
    contacts: Mapping[str, Sequence[Contact]],
) -> tuple[Mapping[str, tuple[Support, Support] | Reason], Sequence[Remark]]:
    """What the brief says of the ends of every beam; nothing where the model tells it."""
    if brief.frame:
        return {}, overruled_supports(brief, matches)
    return resolve_supports(brief, matches, beams, contacts)


def _standing_alone(beams: Mapping[str, Beam], sources: Sources) -> dict[str, Standing]:
    return {
        key: stand_alone(
            beams[key], pair, sources.contacts.get(key, ()), _stated_span(sources, key)
        )
        for key, pair in sources.supports.items()
        if not isinstance(pair, Reason) and beams[key].axis
    }


def _with_reactions(
    framing: Framing,
    beams: Mapping[str, Beam],
    loads: Mapping[str, Sequence[Load]],
    sources: Sources,
) -> Framing:
    """The same with what beams give each other, and doubts of what they do not."""
    weights = {
        key: concrete_of(beams[key], sources, Findings(key)).unit_weight.value
        for key in framing.standing
    }
    framing = with_reactions(framing, beams, loads, weights, sources.brief, sources.runways)
    known = replace(sources, framing=framing)
    received = framing.path.loads
    own = {
        key
        for key, standing in framing.standing.items()
        if load_doubts(beams[key], known, standing, [*loads.get(key, ()), *received.get(key, ())])
    }
    return with_doubts(framing, own)


def _not_concrete(model: Model) -> frozenset[int]:
    """Step ids of beams that are left out and no concrete that bars may run on into."""
    return frozenset(
        each.step_id for each in model.out_of_scope if each.reason not in ("footing", "wall")
    )


def _upward(brief: Brief, model: Model) -> dict[str, bool]:
    entries = {entry.place: entry.upward for entry in brief.loads if entry.acts_upward}
    return {**entries, **upward_of(brief, model.loads)}


def _by_beam(rows: Sequence[Row]) -> dict[str, list[Row]]:
    grouped: dict[str, list[Row]] = {}
    for row in rows:
        if row.beam is not None:
            grouped.setdefault(row.beam, []).append(row)
    return grouped


def _stated_span(sources: Sources, key: str) -> Given | None:
    statement = sources.statements.get(key)
    return statement.span if statement else None


def _one(
    beam: Beam, sources: Sources, standing: Standing | None, loads: Sequence[Load]
) -> Subject | Unrated:
    findings = Findings(beam.key, list(beam.reasons), list(beam.remarks))
    statement = sources.statements.get(beam.key, NO_STATEMENT)
    stated = stated_texts(beam.key, sources, statement, loads)
    contacts = sources.contacts.get(beam.key, ())
    findings.remarks += [*sources.support_remarks.get(beam.key, ()), *statement.remarks]
    findings.remarks += [
        Remark(beam.key, "brief", f"the engineer states: {text}", "assumption") for text in stated
    ]
    concrete = concrete_of(beam, sources, findings)
    findings.hear(sources.stances.get(beam.key, ()))
    _judge_standing(beam, sources, statement, standing, findings)
    steel = steel_of(beam, sources, findings) if beam.runs else None
    judge_loads(beam, sources, statement, standing, loads, findings)
    judge_trains(beam.key, sources, loads, findings)
    net, more = Net(), SlabSteel()
    if standing and steel:
        slab = counted(beam, _asked(beam, sources, statement, concrete), loads)
        net = _net(beam, sources, standing, loads, steel, slab, findings)
        more = slab_steel_of(beam, net.body, steel, statement, sources, findings)
    findings.take(net)
    if standing is None or steel is None or any(reason.blocking for reason in findings.reasons):
        return Unrated(beam, _distinct(findings.reasons), tuple(findings.remarks))
    return Subject(
        beam=beam,
        spans=standing.spans,
        span_source=standing.source,
        side_loaded=loaded_from_side(contacts, beam.length, standing.bearings),
        statements=stated,
        bars=(*steel.bars, *more.counted),
        stirrups=steel.stirrups,
        stirrups_known=steel.stirrups_known,
        silent=steel.silent,
        reinforcement_source=steel.source,
        loads=tuple(loads),
        concrete_strength=concrete.strength,
        unit_weight=concrete.unit_weight,
        density_factor=concrete.density_factor,
        aggregate_size=concrete.aggregate_size,
        bar_yield=(*steel.bar_yield, *more.yields),
        stirrup_yield=steel.stirrup_yield,
        reasons=_distinct(findings.reasons),
        remarks=tuple(findings.remarks),
        slab_bars=more.listed,
        slab_bars_from=more.source,
        body=net.body,
        runway=sources.runways.get(beam.key),
        continuity=sources.framing.path.continuity.get(beam.key) if sources.framing else None,
    )


def _judge_standing(
    beam: Beam,
    sources: Sources,
    statement: BeamStatement,
    standing: Standing | None,
    findings: Findings,
) -> None:
    """Note every doubt about how the beam stands."""
    if standing is None and beam.axis:
        given = sources.framing.unknown if sources.framing else sources.supports
        unknown = given.get(beam.key)
        findings.refuse(unknown.text if isinstance(unknown, Reason) else "supports unknown")
    elif standing is not None:
        overhang = span_reason(statement, beam, standing.ends)
        findings.reasons += [overhang] if overhang else standing.reasons
        findings.remarks += standing.remarks
        if sources.framing:
            findings.reasons += sources.framing.lines.doubts.get(beam.key, ())
            findings.remarks += hangers(sources.framing, beam.key)
            findings.remarks += cast_in(sources.framing, beam.key)
        kinds = {end.kind for end in standing.ends}
        if varies(beam.runs) and kinds & {"fixed", "continuous"} and "free" not in kinds:
            findings.remarks.append(Remark(beam.key, "demand", _VARYING_STIFFNESS, "assumption"))
        findings.reasons += shape_reasons(beam.runs, standing.spans, sources.standard)


def _asked(beam: Beam, sources: Sources, statement: BeamStatement, concrete: Concrete) -> Asked:
    """What the brief lets count of the slabs that meet a beam."""
    wanted, source = slab_flange(sources.brief, statement)
    return Asked(
        near=sources.slabs.names_near(beam),
        meeting=NO_MEETING if wanted == "none" else sources.slabs.meeting(beam),
        wanted=wanted,
        source=source,
        strength=concrete.strength.value,
        unit_weight=concrete.unit_weight.value,
        permanent=sources.permanent_cases,
        loads_complete=statement.loads_complete,
        weighed=sources.floors.weighed,
    )


def _net(
    beam: Beam,
    sources: Sources,
    standing: Standing,
    loads: Sequence[Load],
    steel: Steel,
    slab: Counted,
    findings: Findings,
) -> Net:
    """What is rated of the beam: with its flanges, without its openings."""
    contacts = sources.contacts.get(beam.key, ())
    resting = resting_between(beam, contacts, standing) if beam.openings else ()
    net = net_of(beam, standing, loads, steel, slab, resting)
    if net.body is None:
        return net
    findings.reasons += deep_member(net.body.runs, standing.spans, sources.standard)
    if not net.body.flanges:
        return net
    return replace(net, body=with_widths(net.body, standing.spans, sources.standard))


def _distinct(reasons: Sequence[Reason]) -> tuple[Reason, ...]:
    return tuple({reason.text: reason for reason in reasons}.values())

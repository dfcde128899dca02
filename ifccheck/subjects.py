"""Joins what the model and the brief say of each beam into what its rating rests on."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence, Set
from dataclasses import dataclass, field
from functools import lru_cache
from typing import TypeVar

from ifccheck.beam import (
    Bars,
    Beam,
    Contact,
    Face,
    Given,
    Load,
    Model,
    Reason,
    Reinforcement,
    Remark,
    Stirrups,
    Support,
    Unmeasured,
)
from ifccheck.brief.loads import loads_on_beams
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Brief
from ifccheck.brief.statements import (
    BeamStatement,
    MaterialStatement,
    default_materials,
    materials,
    span_reason,
    statements,
)
from ifccheck.brief.supports import resolve_supports, stated_ends
from ifccheck.detailing import Layout, choose_source, lay_out
from ifccheck.frame.carrying import contacts_of, pressed_ends
from ifccheck.frame.openings import Net, net_of
from ifccheck.frame.reactions import loaded_from_side, unknown_reactions
from ifccheck.frame.spans import Standing, stand_alone
from ifccheck.rating.subject import Subject, Unrated
from ifccheck.standards import Standard
from ifccheck.units import show

Row = TypeVar("Row", Load, Remark)

_CRANE = "crane loads stand where the brief puts them: they are not moved, and carry no impact"
_LAYOUT_AGGREGATE = 20.0
_WEIGHT_OF_DENSITY = 9.80665e-9
"""Unit weight [N/mm3] for each kg/m3, at standard gravity."""
_NO_MATERIAL = MaterialStatement()
_NO_STATEMENT = BeamStatement()
_THROUGH_THE_WEB = "loads are assumed to act through the web: torsion is not checked"


@dataclass(frozen=True, slots=True)
class Gathered:
    """All beams of one model, ready to be rated or known not to be."""

    subjects: tuple[Subject, ...]
    unrated: tuple[Unrated, ...]
    loads: tuple[Load, ...]
    """On every beam, rated or not"""


@dataclass(slots=True)
class _Findings:
    """Reasons and remarks on one beam while it is gathered."""

    key: str
    reasons: list[Reason] = field(default_factory=list)
    remarks: list[Remark] = field(default_factory=list)

    def refuse(self, text: str, *, blocking: bool = True) -> None:
        """Note why the beam cannot be rated."""
        self.reasons.append(Reason(text, blocking))

    def take(self, net: Net) -> None:
        """Note what openings bring."""
        self.reasons += net.reasons
        self.remarks += net.remarks

    def assume(self, label: str, given: Given) -> Given:
        """Note an assumed value."""
        if given.assumed:
            text = f"{label} assumed: {given.source}"
            self.remarks.append(Remark(self.key, "basis", text, "assumption"))
        return given


@dataclass(frozen=True, slots=True)
class _Sources:
    """What is known of all beams of a model, by key."""

    brief: Brief
    standard: Standard
    contacts: Mapping[str, Sequence[Contact]]
    unmeasured: Sequence[Unmeasured]
    statements: Mapping[str, BeamStatement]
    materials: Mapping[str, MaterialStatement]
    defaults: MaterialStatement
    supports: Mapping[str, tuple[Support, Support] | Reason]
    support_remarks: Mapping[str, Sequence[Remark]]
    unit_weight: Given
    """By the brief [N/mm3]"""
    crane_cases: Set[str]


def gather(model: Model, brief: Brief, matches: Matches, standard: Standard) -> Gathered:
    """Gather everything that the rating of each beam of a model rests on."""
    beams = {beam.key: beam for beam in model.beams}
    contacts = contacts_of(model, stated_ends(brief, matches))
    supports, remarks = resolve_supports(brief, matches, beams, contacts)
    sources = _Sources(
        brief=brief,
        standard=standard,
        contacts=contacts,
        unmeasured=model.unmeasured,
        statements=statements(brief, matches),
        materials=materials(brief, matches),
        defaults=default_materials(brief),
        supports=supports,
        support_remarks=_by_beam(remarks),
        unit_weight=Given(brief.basis.concrete_unit_weight, "brief, basis.concrete_unit_weight"),
        crane_cases={case.name for case in brief.cases if case.nature == "crane"},
    )
    standing = {
        key: stand_alone(beams[key], pair, contacts.get(key, ()), _stated_span(sources, key))
        for key, pair in supports.items()
        if not isinstance(pair, Reason) and beams[key].axis
    }
    spans = {key: each.span for key, each in standing.items()}
    loads = loads_on_beams(brief, matches, beams, spans, contacts)
    of_beam = _by_beam(loads)
    found = [
        _one(beam, sources, standing.get(beam.key), of_beam.get(beam.key, ()))
        for beam in model.beams
    ]
    return Gathered(
        subjects=tuple(each for each in found if isinstance(each, Subject)),
        unrated=tuple(each for each in found if isinstance(each, Unrated)),
        loads=loads,
    )


def _by_beam(rows: Sequence[Row]) -> dict[str, list[Row]]:
    grouped: dict[str, list[Row]] = {}
    for row in rows:
        if row.beam is not None:
            grouped.setdefault(row.beam, []).append(row)
    return grouped


def _stated_span(sources: _Sources, key: str) -> Given | None:
    statement = sources.statements.get(key)
    return statement.span if statement else None


def _one(
    beam: Beam, sources: _Sources, standing: Standing | None, loads: Sequence[Load]
) -> Subject | Unrated:
    findings = _Findings(beam.key, list(beam.reasons), list(beam.remarks))
    statement = sources.statements.get(beam.key, _NO_STATEMENT)
    stated = _stated(statement)
    contacts = sources.contacts.get(beam.key, ())
    findings.remarks += [*sources.support_remarks.get(beam.key, ()), *statement.remarks]
    findings.remarks += [
        Remark(beam.key, "brief", f"the engineer states: {text}", "assumption") for text in stated
    ]
    concrete = _concrete(beam, sources, findings)
    if standing is None and beam.axis:
        unknown = sources.supports[beam.key]
        findings.refuse(unknown.text if isinstance(unknown, Reason) else "supports unknown")
    elif standing is not None:
        supports = (standing.span.start_support, standing.span.end_support)
        overhang = span_reason(statement, beam, supports)
        findings.reasons += [overhang] if overhang else standing.reasons
        findings.remarks += standing.remarks
    steel = _steel(beam, sources, findings) if beam.runs else None
    _judge_loads(beam, sources, statement, standing, loads, findings)
    net = net_of(beam, standing, loads, steel) if standing and steel else Net()
    findings.take(net)
    if standing is None or steel is None or any(reason.blocking for reason in findings.reasons):
        return Unrated(beam, _distinct(findings.reasons), tuple(findings.remarks))
    return Subject(
        beam=beam,
        line=standing.line,
        faces=standing.faces,
        span_source=standing.source,
        direct=pressed_ends(contacts),
        side_loaded=loaded_from_side(contacts, beam.length, standing.bearings),
        statements=stated,
        bars=steel.bars,
        stirrups=steel.stirrups,
        stirrups_known=steel.stirrups_known,
        silent=steel.silent,
        reinforcement_source=steel.source,
        loads=tuple(loads),
        concrete_strength=concrete.strength,
        unit_weight=concrete.unit_weight,
        density_factor=concrete.density_factor,
        aggregate_size=concrete.aggregate_size,
        bar_yield=steel.bar_yield,
        stirrup_yield=steel.stirrup_yield,
        reasons=_distinct(findings.reasons),
        remarks=tuple(findings.remarks),
        body=net.body,
    )


def _distinct(reasons: Sequence[Reason]) -> tuple[Reason, ...]:
    return tuple({reason.text: reason for reason in reasons}.values())


def _stated(statement: BeamStatement) -> tuple[str, ...]:
    """What the engineer stated that overrules a doubt: it must be seen."""
    found = []
    if statement.unloaded:
        found.append("unloaded = true: self weight alone is meant")
    if statement.loads_complete:
        found.append("loads_complete = true: what rests on the beam is in the loads given")
    return tuple(found)


# Concrete ------------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class _Concrete:
    strength: Given
    density_factor: Given
    aggregate_size: Given
    unit_weight: Given


def _concrete(beam: Beam, sources: _Sources, findings: _Findings) -> _Concrete:
    stated = sources.materials.get(beam.key, _NO_MATERIAL)
    findings.remarks += stated.remarks
    strength = _strength(beam, stated, sources, findings)
    density = stated.density or beam.concrete_density
    return _Concrete(
        strength=findings.assume("concrete strength", strength),
        density_factor=_density_factor(density, sources.standard.density_factor),
        aggregate_size=_aggregate(stated, sources, findings),
        unit_weight=_unit_weight(stated.density or beam.greatest_density, sources, findings),
    )


@lru_cache(maxsize=256)
def _density_factor(density: Given | None, factor_of: Callable[[float | None], float]) -> Given:
    if density is None:
        return Given(factor_of(None), "normal density", assumed=True)
    return Given(factor_of(density.value), density.source)


def _unit_weight(density: Given | None, sources: _Sources, findings: _Findings) -> Given:
    """The brief's unit weight [N/mm3], or that of a density stated for the beam if greater.

    A lesser density changes nothing: the brief's figure holds the weight of the steel too.
    """
    brief = sources.unit_weight
    if density is None or density.value * _WEIGHT_OF_DENSITY <= brief.value:
        return brief
    stated = Given(density.value * _WEIGHT_OF_DENSITY, density.source)
    text = (
        f"self weight by {show(density.value, 'density')} from {density.source}:"
        f" {show(stated.value, 'unit_weight')}, more than the"
        f" {show(brief.value, 'unit_weight')} of the brief"
    )
    findings.remarks.append(Remark(findings.key, "basis", text, "doubt"))
    return stated


def _strength(
    beam: Beam, stated: MaterialStatement, sources: _Sources, findings: _Findings
) -> Given:
    """The brief's statement, the model's, the brief's default; nan where there is none.

    A strength that the model states and that cannot be read is no silence: no default fills it.
    """
    if stated.concrete_strength is None and beam.strength_reason is not None:
        findings.reasons.append(beam.strength_reason)
        return Given(math.nan, "not read")
    given = stated.concrete_strength or beam.concrete_strength or sources.defaults.concrete_strength
    if given is None:
        findings.refuse(
            "concrete strength unknown: neither the model nor the brief gives one (write"
            " defaults.concrete_strength or an entry of [[materials]])"
        )
        return Given(math.nan, "not known")
    return given


def _aggregate(stated: MaterialStatement, sources: _Sources, findings: _Findings) -> Given:
    """Size of the aggregate; where no one gives it, checks that need it cannot be made."""
    size = stated.aggregate_size or sources.defaults.aggregate_size
    if size is None:
        return Given(math.nan, "not given in the brief (defaults.aggregate_size)")
    return findings.assume("largest aggregate", size)


# Reinforcement ---------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class _Steel:
    bars: tuple[Bars, ...]
    stirrups: tuple[Stirrups, ...]
    stirrups_known: bool
    source: str
    bar_yield: tuple[Given, ...]
    stirrup_yield: tuple[Given, ...]
    silent: tuple[Face, ...]


def _steel(beam: Beam, sources: _Sources, findings: _Findings) -> _Steel | None:
    stated = sources.materials.get(beam.key, _NO_MATERIAL)
    chosen = choose_source(beam, sources.brief.sources)
    findings.remarks += chosen.remarks
    findings.reasons += chosen.reasons
    if chosen.reinforcement is None:
        return None
    placed = _placed(beam, chosen.reinforcement, sources, stated, findings)
    defaults = sources.defaults
    return _Steel(
        bars=placed.bars,
        stirrups=placed.stirrups,
        stirrups_known=placed.stirrups_known,
        source=chosen.reinforcement.source,
        bar_yield=_yields(placed.bars, stated.bar_yield, defaults.bar_yield, "bars", findings),
        stirrup_yield=_yields(
            placed.stirrups, stated.stirrup_yield, defaults.stirrup_yield, "stirrups", findings
        ),
        silent=placed.silent,
    )


def _placed(
    beam: Beam,
    reinforcement: Reinforcement,
    sources: _Sources,
    stated: MaterialStatement,
    findings: _Findings,
) -> Layout:
    """Bars and stirrups by place: as modelled, or laid out from a description."""
    if not reinforcement.zones:
        if reinforcement.bars and not reinforcement.stirrups:
            text = "no stirrups are modelled: none are counted on"
            findings.remarks.append(Remark(beam.key, "reinforcement", text, "doubt"))
        return Layout(reinforcement.bars, reinforcement.stirrups)
    size = _aggregate_for_layout(stated, sources, findings)
    laid = lay_out(
        beam,
        reinforcement.zones,
        clear_spacing=lambda diameter: sources.standard.clear_spacing(diameter, size),
        stated_cover=stated.cover,
        fallback_cover=beam.cover or sources.defaults.cover,
    )
    findings.remarks += laid.remarks
    findings.reasons += laid.reasons
    return laid


def _aggregate_for_layout(
    stated: MaterialStatement, sources: _Sources, findings: _Findings
) -> float:
    size = stated.aggregate_size or sources.defaults.aggregate_size
    if size is not None:
        return size.value
    text = f"bars laid out for aggregate of {_LAYOUT_AGGREGATE:g} mm: the brief gives no size"
    findings.remarks.append(Remark(findings.key, "reinforcement", text, "assumption"))
    return _LAYOUT_AGGREGATE


def _yields(
    steel: Sequence[Bars | Stirrups],
    stated: Given | None,
    default: Given | None,
    what: str,
    findings: _Findings,
) -> tuple[Given, ...]:
    """Yield strength of each set: the brief's statement, the model's, the brief's default."""
    given = [each for bar in steel if (each := stated or bar.yield_strength or default)]
    if len(given) < len(steel):
        findings.refuse(f"yield strength of the {what} unknown: neither model nor brief gives one")
        return ()
    for assumed in dict.fromkeys([each for each in given if each.assumed]):
        findings.assume(f"yield strength of the {what}", assumed)
    return tuple(given)


# Loads and supports ------------------------------------------------------------------------------


def _judge_loads(
    beam: Beam,
    sources: _Sources,
    statement: BeamStatement,
    standing: Standing | None,
    loads: Sequence[Load],
    findings: _Findings,
) -> None:
    """Note every doubt about what acts on the beam."""
    if not loads and not statement.unloaded:
        findings.refuse("no load assigned", blocking=False)
    hung = sorted({load.origin for load in loads if load.face == "bottom"})
    if hung:
        places = ", ".join(hung)
        findings.refuse(f"hung load: hanger steel is not checked ({places})", blocking=False)
    if statement.torsion:
        findings.refuse("torsion: it is not checked", blocking=False)
    else:
        findings.remarks.append(Remark(beam.key, "demand", _THROUGH_THE_WEB, "assumption"))
    if sources.crane_cases and any(load.case in sources.crane_cases for load in loads):
        findings.remarks.append(Remark(beam.key, "demand", _CRANE, "assumption"))
    if standing and not statement.loads_complete:
        contacts = sources.contacts.get(beam.key, ())
        findings.reasons += unknown_reactions(beam, contacts, standing, sources.unmeasured)

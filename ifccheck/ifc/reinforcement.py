"""The reinforcement that a model holds for its beams, source by source."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import replace

import numpy as np

from ifccheck.beam import Reason, Reinforcement, Remark
from ifccheck.ifc.bar_columns import name_of
from ifccheck.ifc.bar_findings import Findings
from ifccheck.ifc.bar_hosts import BarHosts, Hosts
from ifccheck.ifc.bar_meshes import MESH
from ifccheck.ifc.bar_paths import Ints
from ifccheck.ifc.bar_rows import BarPlaces, Rows
from ifccheck.ifc.bar_table import BarTable, gather_bars
from ifccheck.ifc.bar_ties import Found, find_rows
from ifccheck.ifc.beam_frames import BeamFrames, make_frames
from ifccheck.ifc.context import BeamFrame, Context
from ifccheck.ifc.couplers import Couplers
from ifccheck.ifc.described import read_described
from ifccheck.ifc.entity import Entity
from ifccheck.ifc.physical import Physical, reduce_bars
from ifccheck.ifc.sections import read_sections
from ifccheck.ifc.step_table import StepTable


def read_reinforcement(
    context: Context,
    hosts: Mapping[int, BeamFrame],
    mapping: Mapping[str, str],
    statements: StepTable | None = None,
) -> Mapping[int, tuple[Reinforcement, ...]]:
    """Read all reinforcement of beams, by STEP id of the beam.

    ``mapping`` tells which property of the project's own holds what: field to "Set.Property".
    With the ``statements`` of the file many bars are read in half the time.
    """
    sections = read_sections(context, hosts)
    described = read_described(context, hosts, mapping)
    physical, asides = _physical(context, hosts, sections.keys() | described.keys(), statements)
    found: dict[int, tuple[Reinforcement, ...]] = {}
    for beam in hosts:
        sources = [source[beam] for source in (physical, sections, described) if beam in source]
        if beam in asides:
            sources[0] = replace(sources[0], remarks=sources[0].remarks + asides[beam])
        found[beam] = tuple(sources)
    return found


def _instances(context: Context, name: str) -> tuple[Entity, ...]:
    """All entities of a class; none where the schema has no such class."""
    try:
        return tuple(context.file.by_type(name))
    except RuntimeError:
        return ()


def _physical(
    context: Context,
    hosts: Mapping[int, BeamFrame],
    described: Collection[int],
    statements: StepTable | None,
) -> tuple[dict[int, Reinforcement], dict[int, tuple[Remark, ...]]]:
    """Bars by beam, and remarks on bars for beams whose reinforcement is described otherwise."""
    hosts = {step_id: frame for step_id, frame in hosts.items() if frame.runs}
    if not hosts:
        return {}, {}
    frames = make_frames(hosts)
    findings = Findings([frame.guid for frame in hosts.values()])
    finder = Hosts(context.file, context.relations, hosts)
    bars, ties = _tied_bars(context, finder, statements)
    table = gather_bars(context, bars, statements)
    places = BarPlaces(table, frames, Couplers(context))
    found = find_rows(places, ties.take(table.product))
    places.guests = found.guests
    _tell_unreadable(context, table, bars, ties, frames, findings)
    _tell_astray(places, found.astray, findings)
    _tell_notes(places, found.tied, findings)
    physical = reduce_bars(places, found.tied, findings)
    spoken_for = {row for row, step_id in enumerate(frames.ids) if step_id in described}
    _tell_without_main_bars(found, physical, findings, spoken_for)
    _tell_by_place(places, found, findings)
    return _collected(frames, physical, findings, described)


def _tied_bars(
    context: Context, finder: Hosts, statements: StepTable | None
) -> tuple[Ints, BarHosts]:
    """Bars that may lie in one of the beams, by STEP ids, and how each is tied."""
    bars = all_bars(context, statements)
    bars = np.concatenate((bars, _tied_meshes(context, finder)))
    ties = finder.of_all(bars)
    near = ~ties.tied("elsewhere")
    return bars[near], ties.take(near)


def _tied_meshes(context: Context, finder: Hosts) -> Ints:
    """STEP ids of meshes of beams; one that no relation ties is that of a slab or a wall."""
    meshes = all_meshes(context)
    if not len(meshes):
        return meshes
    return meshes[finder.of_all(meshes).tied("part", "beside")]


def all_meshes(context: Context) -> Ints:
    """STEP ids of meshes."""
    return np.array([mesh.id() for mesh in _instances(context, MESH)], dtype=np.intp)


def all_bars(context: Context, statements: StepTable | None) -> Ints:
    """STEP ids of bars, and of other elements whose type is that of a bar."""
    bars = None if statements is None else statements.ids_of("IFCREINFORCINGBAR")
    if bars is None:
        listed = [bar.id() for bar in context.file.by_type("IfcReinforcingBar")]
        bars = np.array(listed, dtype=np.intp)
    types = [entity.id() for entity in _instances(context, "IfcReinforcingBarType")]
    if not types:
        return bars
    typed = np.fromiter(context.relations.types, dtype=np.intp)
    type_ids = np.fromiter(context.relations.types.values(), dtype=np.intp)
    typed = typed[np.isin(type_ids, types)]
    return np.concatenate((bars, typed[~np.isin(typed, bars)]))


def _tell_unreadable(
    context: Context,
    table: BarTable,
    bars: Ints,
    ties: BarHosts,
    frames: BeamFrames,
    findings: Findings,
) -> None:
    index = frames.index()
    for bar, text in table.unreadable.items():
        beams = ties.of(bar).beams
        name = _name_of(context.file.by_id(bars.item(bar))) if beams else ""
        for beam in beams:
            findings.reason(index[beam], text, (name,))


def _name_of(bar: Entity) -> str:
    """What people call a bar that could not be read."""
    return f"{name_of(bar)} #{bar.id()}".strip()


def _tell_notes(places: BarPlaces, tied: Rows, findings: Findings) -> None:
    notes, table = places.table.notes, places.table
    if not notes:
        return
    product = table.product[table.bar[tied.strand]]
    for row in np.flatnonzero(np.isin(product, list(notes))).tolist():
        bar = (places.label(tied.strand.item(row)),)
        findings.remark(tied.beam.item(row), notes[product.item(row)], bar)


def _tell_astray(places: BarPlaces, astray: Rows, findings: Findings) -> None:
    """Bars beside a beam in its assembly that lie in none of the beams there."""
    beams_beside = np.bincount(astray.strand, minlength=1)
    text = "lies beside it in its assembly, but in no concrete beam there"
    for strand, beam in zip(astray.strand.tolist(), astray.beam.tolist(), strict=True):
        bar = (places.label(strand),)
        if beams_beside[strand] == 1:
            findings.reason(beam, text, bar)
        else:
            findings.remark(beam, text, bar)


def _tell_without_main_bars(
    found: Found, physical: Physical, findings: Findings, described: Collection[int]
) -> None:
    """Beams with bars of which none runs along them; ``described``: what is said of those."""
    of_relations = np.ones(len(found.tied.beam), dtype=bool)
    of_relations[len(of_relations) - len(found.by_place.beam) :] = False
    for beam in np.unique(found.tied.beam[of_relations]).tolist():
        if beam not in physical.bars:
            findings.reason(beam, "no longitudinal bar is among the bars that the model ties to it")
    for beam in np.unique(found.by_place.beam).tolist():
        if beam not in physical.bars and beam not in described and not findings.reasons(beam):
            findings.reason(beam, "no longitudinal bar is among the bars that lie in it")


def _tell_by_place(places: BarPlaces, found: Found, findings: Findings) -> None:
    """Bars that lie in beams, and that no relation ties to one."""
    place = "lies in the beam, and no relation ties it to any member: found by its place"
    loose = "lies in the beam, but no relation ties it to it: not counted"
    for rows, text in ((found.by_place, place), (found.loose, loose)):
        for strand, beam in zip(rows.strand.tolist(), rows.beam.tolist(), strict=True):
            findings.remark(beam, text, (places.label(strand),))
    contested = "lies in it and in another beam alike, and no relation tells whose it is"
    rows = found.contested
    for strand, beam in zip(rows.strand.tolist(), rows.beam.tolist(), strict=True):
        findings.reason(beam, contested, (places.label(strand),))


def _collected(
    frames: BeamFrames, physical: Physical, findings: Findings, described: Collection[int]
) -> tuple[dict[int, Reinforcement], dict[int, tuple[Remark, ...]]]:
    sources: dict[int, Reinforcement] = {}
    asides: dict[int, tuple[Remark, ...]] = {}
    for beam in sorted({*physical.bars, *physical.stirrups, *findings.beams()}):
        step_id = frames.ids[beam]
        reasons = findings.reasons(beam)
        if beam not in physical.bars and not reasons:
            if step_id in described:
                asides[step_id] = findings.remarks(beam)
                continue
            reasons = (Reason("bars lie in it or beside it that no relation ties to it"),)
        sources[step_id] = Reinforcement(
            source="bars",
            bars=physical.bars.get(beam, ()),
            stirrups=physical.stirrups.get(beam, ()),
            reasons=reasons,
            remarks=findings.remarks(beam),
        )
    return sources, asides

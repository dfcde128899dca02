"""The way of loads from beam to beam: lines solved in order of dependence, reactions passed on.

What rests on a beam is solved before it. Its reactions, case by case and unfactored, become
point loads on what carries it; those of a case that may act on some spans and not on others as
the most that it may press and the most that it may lift, of which either may act.
"""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np

from ifccheck.analysis.lines import continuous, outer_moments
from ifccheck.analysis.parts import Parts
from ifccheck.analysis.spans import FREE, in_line
from ifccheck.analysis.statics import Solved, solve
from ifccheck.analysis.stiffness import with_varying_stiffness
from ifccheck.beam import Beam, Case, Load, Reason
from ifccheck.demand.rows import Rows, curvature_on, line_table, loads_on, nodes_of, rows_of
from ifccheck.demand.trains import moving_cases, train_forces
from ifccheck.frame.beam_lines import BeamLine, Node
from ifccheck.framed import Balance
from ifccheck.mechanics.arrays import Floats, Ints
from ifccheck.rating.runways import Runway
from ifccheck.rating.subject import Continuity
from ifccheck.units import show

IN_A_RING = "supports unknown: what carries it is itself carried by what it carries"

_NOTHING = 1e-9
"""Part of all that a line carries in a case below which a reaction is none"""
_UPRIGHT = 1e-6
"""Square of the horizontal part of a unit vector below which it is upright"""


@dataclass(frozen=True, slots=True)
class LoadPath:
    """What beams do to each other."""

    loads: dict[str, list[Load]] = field(default_factory=lambda: defaultdict(list))
    """Reactions that each beam receives, by key"""
    continuity: dict[str, Continuity] = field(default_factory=dict)
    """Of beams in lines of more than one span"""
    resting: dict[str, set[str]] = field(default_factory=lambda: defaultdict(set))
    """Beams whose reactions each beam receives"""
    solved: list[BeamLine] = field(default_factory=list)
    """Lines, each after all that rests on it"""
    in_a_ring: dict[str, Reason] = field(default_factory=dict)
    """Beams that wait for each other, and are not solved"""
    balance: list[Balance] = field(default_factory=list)
    moving: tuple[str, ...] = ()
    """Cases of trains, which the balance leaves out: what they give depends on where they stand"""

    def passed_on(self) -> Iterator[Load]:
        """All reactions that beams receive."""
        return (load for own in self.loads.values() for load in own)


class _Given(NamedTuple):
    """What all rounds work on."""

    beams: Mapping[str, Beam]
    loads: Mapping[str, Sequence[Load]]
    unit_weights: Mapping[str, float]
    cases: Sequence[Case]
    line_of: Mapping[str, int]
    runways: Mapping[str, Runway]


def load_path(
    lines: Sequence[BeamLine],
    beams: Mapping[str, Beam],
    loads: Mapping[str, Sequence[Load]],
    unit_weights: Mapping[str, float],
    cases: Sequence[Case],
    runways: Mapping[str, Runway],
) -> LoadPath:
    """Solve all lines and pass their reactions on.

    Parameters
    ----------
    lines
        How beams stand.
    beams
        By key.
    loads
        Of the brief, by the key of the beam that they act on.
    unit_weights
        For self weight, of every beam [N/mm3].
    cases
        All cases, ``self`` among them.
    runways
        Lines that trains run along, by the key of each of their beams.
    """
    line_of = {each.key: number for number, line in enumerate(lines) for each in line.beams}
    given = _Given(beams, loads, unit_weights, cases, line_of, runways)
    path, solved = LoadPath(moving=tuple(sorted(moving_cases(runways)))), set[int]()
    for some in _rounds(lines, line_of):
        solved |= set(some)
        path.solved.extend([lines[number] for number in some])
        _solve([lines[number] for number in some], given, path)
    for number, line in enumerate(lines):
        if number not in solved:
            path.in_a_ring.update({each.key: Reason(IN_A_RING) for each in line.beams})
    return path


def _rounds(lines: Sequence[BeamLine], line_of: Mapping[str, int]) -> Iterator[list[int]]:
    """Lines that may be solved together, each after all that rests on it."""
    carriers = [
        {line_of[key] for key in _carrying(line) if key in line_of} - {number}
        for number, line in enumerate(lines)
    ]
    waiting = [0] * len(lines)
    for carried in carriers:
        for carrier in carried:
            waiting[carrier] += 1
    ready = [number for number, count in enumerate(waiting) if not count]
    while ready:
        yield ready
        freed = []
        for number in ready:
            for carrier in carriers[number]:
                waiting[carrier] -= 1
                if not waiting[carrier]:
                    freed.append(carrier)
        ready = sorted(freed)


def _carrying(line: BeamLine) -> Iterator[str]:
    return (_carrier(node) for node in line.nodes if node.seats)


def _carrier(node: Node) -> str:
    """Key of the beam that carries a line at a support, the same for all beams that meet there;
    empty where that stands on the ground."""
    return node.seats[0].carrier_beam if node.seats else ""


def _solve(lines: Sequence[BeamLine], given: _Given, path: LoadPath) -> None:
    """Solve some lines, and note what they give on."""
    rows = rows_of(lines)
    received = {key: path.loads[key] for key in rows.keys if key in path.loads}
    loads = {key: [*given.loads.get(key, ()), *received.get(key, ())] for key in rows.keys}
    table, parts = loads_on(rows, given.beams, loads, given.unit_weights, given.cases)
    solved = solve(rows.spans, table, parts.case.size)
    curvature = curvature_on(rows, given.beams, table)
    if curvature is not None:
        solved = with_varying_stiffness(solved, curvature)
    joined = line_table(rows, given.beams)
    if joined.line.size:
        solved = continuous(solved, joined, curvature)
    forces = _at_nodes(rows, solved)
    _note_continuity(rows, solved, parts, forces, given.cases, path)
    _pass_on(rows, forces, parts, given, path)
    path.balance.extend(_balance(rows, forces, received, solved.totals.force, parts, given))


def _note_continuity(
    rows: Rows,
    solved: Solved,
    parts: Parts,
    forces: Floats,
    cases: Sequence[Case],
    path: LoadPath,
) -> None:
    """Keep the moments at the ends of spans that go on, and what comes from beside at supports."""
    near, far = outer_moments(solved, np.arange(rows.beam_of.size))
    simple = (solved.spans.start_kind != FREE) & (solved.spans.end_kind != FREE)
    moments = np.stack([np.where(simple, near, 0.0), np.where(simple, far, 0.0)], axis=-1)
    goes_on = in_line(solved.spans)
    bends = np.abs(moments).max(axis=-1) > _NOTHING * solved.moment_scale
    for beam in np.unique(rows.beam_of[goes_on]).tolist():
        spans = np.flatnonzero(rows.beam_of == beam)
        acting = np.unique(parts.case[bends[:, spans[goes_on[spans]]].any(axis=1)]).tolist()
        path.continuity[rows.keys[beam]] = Continuity(
            places=tuple(rows.place[spans].tolist()),
            spans=len(rows.lines[rows.line[spans[0]]].spans),
            parts=parts,
            moments=moments[:, spans] * goes_on[spans][:, None],
            beside=_beside(rows, solved, forces, spans),
            cases=frozenset([cases[case].name for case in acting]),
        )


def _beside(rows: Rows, solved: Solved, forces: Floats, spans: Ints) -> Floats:
    """What other beams of its line bring to the supports at both ends of a beam (P, 2)."""
    first, last = spans[0], spans[-1]
    against = rows.against[first]
    nodes = rows.left[first] + against, rows.left[last] + 1 - against
    own_first = solved.start.reaction[:, first]
    own_last = solved.totals.force[:, last] - solved.start.reaction[:, last]
    return np.stack([forces[:, nodes[0]] - own_first, forces[:, nodes[1]] - own_last], axis=-1)


def _at_nodes(rows: Rows, solved: Solved) -> Floats:
    """Upward force of every node on its line, part by part [N] (P, J)."""
    first = solved.start.reaction
    last = solved.totals.force - first
    forces = np.zeros((len(first), rows.nodes))
    against = rows.against == 1
    np.add.at(forces.T, rows.left, np.where(against, last, first).T)
    np.add.at(forces.T, rows.left + 1, np.where(against, first, last).T)
    return forces


def _pass_on(rows: Rows, forces: Floats, parts: Parts, given: _Given, path: LoadPath) -> None:
    """Lay the reactions of lines on the beams that carry them."""
    whole = parts.whole(np.abs(forces)).max(axis=0, initial=0.0)
    for line, place, node in nodes_of(rows):
        carrier = _carrier(rows.lines[line].nodes[place])
        if carrier in given.line_of:
            of_node = rows.lines[line].nodes[place]
            beam = given.beams[of_node.seats[0].beam]
            path.resting[carrier].update([seat.beam for seat in of_node.seats])
            x = _place_on(beam, of_node.seats[0].x, given.beams[carrier])
            least = _NOTHING * float(whole[node])
            passed = [
                each
                for each in _forces(forces[:, node], parts, given.cases)
                if abs(each[1]) > least
            ]
            if beam.key in given.runways:
                passed += train_forces(given.runways[beam.key], place)
            path.loads[carrier] += [
                _reaction(beam, carrier, case, force, x, apart) for case, force, apart in passed
            ]


def _forces(
    of_parts: Floats, parts: Parts, cases: Sequence[Case]
) -> Iterator[tuple[str, float, bool]]:
    """What a support gives in every case: the whole, or what presses and, apart, what lifts."""
    first = parts.first.tolist()
    for number, case in enumerate(cases):
        own = of_parts[first[number] : first[number + 1]]
        if not case.by_spans:
            yield case.name, float(own.sum()), False
        else:
            yield case.name, float(np.maximum(own, 0.0).sum()), False
            yield case.name, float(np.minimum(own, 0.0).sum()), True


def _place_on(beam: Beam, x: float, carrier: Beam) -> float:
    """x on the carrier of a place along a beam, within the carrier [mm].

    Forces act vertically: they meet the carrier where that lies in plan, however it slopes; on one
    that stands upright, of which nothing is rated, at their height.
    """
    assert beam.axis is not None
    assert carrier.axis is not None
    own, along = beam.axis, carrier.axis
    away = [own.origin[i] + x * own.x[i] - along.origin[i] for i in range(3)]
    level = along.x[0] ** 2 + along.x[1] ** 2
    if level < _UPRIGHT:
        place = away[2] * along.x[2]
    else:
        place = (away[0] * along.x[0] + away[1] * along.x[1]) / level
    return min(max(place, 0.0), along.length)


def _reaction(beam: Beam, carrier: str, case: str, force: float, x: float, apart: bool) -> Load:
    told = f"{show(force, 'force')} from {beam.mark}"
    return Load(
        carrier, case, "point", x, x, (force, force),
        origin=f"reaction of {beam.mark} ({beam.ifc_class})",
        text=f"{told}, where it lifts" if apart else told, apart=apart,
    )  # fmt: skip


def _balance(
    rows: Rows,
    forces: Floats,
    received: Mapping[str, Sequence[Load]],
    total: Floats,
    parts: Parts,
    given: _Given,
) -> Iterator[Balance]:
    """What goes in and out of the beams of each storey; ``total`` is on each span (P, S)."""
    storeys: dict[str, int] = {}
    of_beam = [storeys.setdefault(given.beams[key].storey, len(storeys)) for key in rows.keys]
    row_of_case = {case.name: row for row, case in enumerate(given.cases)}
    every, taken, passed, ground = np.zeros((4, len(given.cases), len(storeys)))
    np.add.at(every.T, np.array(of_beam)[rows.beam_of], parts.whole(total).T)
    for key, storey in zip(rows.keys, of_beam, strict=True):
        for load in received.get(key, ()):
            taken[row_of_case[load.case], storey] += load.values[0]
    held, moving = parts.whole(forces), moving_cases(given.runways)
    for line, place, node in nodes_of(rows):
        of_node = rows.lines[line].nodes[place]
        if of_node.seats:
            goes_to = passed if _carrier(of_node) in given.line_of else ground
            goes_to[:, storeys[given.beams[of_node.seats[0].beam].storey]] += held[:, node]
    for name, column in storeys.items():
        for row, case in enumerate(given.cases):
            if case.name in moving:
                continue
            into, out = float(taken[row, column]), float(passed[row, column])
            own = float(every[row, column]) - into
            yield Balance(name, case.name, own, into, out, float(ground[row, column]))

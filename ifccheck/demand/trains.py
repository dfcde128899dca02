"""Trains laid on the lines that they run along, and what those give to beams that carry them."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import replace
from typing import NamedTuple

import numpy as np

from ifccheck.analysis.line_table import simple_lines
from ifccheck.analysis.loads import load_table
from ifccheck.analysis.moving import MovingCase, moving_reactions
from ifccheck.analysis.trains import Train
from ifccheck.beam import Beam, Load, Reason
from ifccheck.demand.rows import Rows, curvature_on, line_table, rows_of
from ifccheck.errors import BriefError
from ifccheck.frame.beam_lines import BeamLine, LineBeam, LineSpan, Node, SpanEnd
from ifccheck.frame.spans import Standing
from ifccheck.rating.runways import Runway
from ifccheck.units import show

_TOLERANCE = 1.0
"""How far a way between stops may reach past the spans that carry it [mm]"""


class Laid(NamedTuple):
    """Trains on all beams of the lines that they run along."""

    loads: tuple[Load, ...]
    runways: dict[str, Runway]
    """By the key of each beam of a line with a train"""


def lay_trains(
    trains: Sequence[Load], lines: Iterable[BeamLine], beams: Mapping[str, Beam]
) -> Laid:
    """Lay trains on lines.

    A train reaches every beam of its line, wherever its way lies: the line passes on what it does.

    Parameters
    ----------
    trains
        On the beams that are named for them. On beams that are in no line they stay as they are.
    lines
        How beams stand.
    beams
        By key.

    Raises
    ------
    BriefError
        Where two beams of one line are each given a way for the same train, or a way has no room.
    """
    on_beam: dict[str, list[Load]] = {}
    for load in trains:
        on_beam.setdefault(load.beam, []).append(load)
    found: list[Load] = []
    runways: dict[str, Runway] = {}
    for line in lines:
        named = [load for each in line.beams for load in on_beam.pop(each.key, ())]
        if named:
            once = list(_once(named, beams))
            runways |= _runways(line, once, beams)
            found += [_on(each.key, load, beams) for load in once for each in line.beams]
    rest = (load for own in on_beam.values() for load in own)
    return Laid((*found, *rest), runways)


def line_alone(key: str, standing: Standing) -> BeamLine:
    """A beam of one span that stands by itself, as a line."""
    (one,) = standing.spans
    start, end = one.span.start_support, one.span.end_support
    ends = (
        SpanEnd(start.kind, one.span.start, one.faces[0]),
        SpanEnd(end.kind, one.span.end, one.faces[1]),
    )
    nodes = tuple(Node(each.kind, ()) for each in ends)
    return BeamLine((LineBeam(key, False),), (LineSpan(key, *ends),), nodes)


def train_forces(runway: Runway, node: int) -> Iterator[tuple[str, float, bool]]:
    """The most that a support gives under each train of a line, and, apart, the least."""
    numbered = runway.numbered(range(len(runway.trains)))
    found = moving_reactions(runway.spans, runway.lines, numbered, runway.curvature)
    for row, (case, _) in enumerate(runway.trains):
        most, least = float(found.greatest[row, node]), float(found.least[row, node])
        if most > 0.0:
            yield case, most, False
        if least < 0.0:
            yield case, least, True


def moving_cases(runways: Mapping[str, Runway]) -> set[str]:
    """Cases that trains on any line make."""
    return {case for runway in runways.values() for case, _ in runway.trains}


def scattered(
    received: Mapping[str, Sequence[Load]], runways: Mapping[str, Runway], cases: Iterable[str]
) -> dict[str, Reason]:
    """Why what trains give to beams that carry theirs is not followed: a train on one of several
    beams that rest on another is not on the others, which may be worse.

    Parameters
    ----------
    received
        Reactions, by the key of the beam that carries them.
    runways
        By key of their beams.
    cases
        Those that hold a train.
    """
    found = {}
    moving = set(cases)
    for key, loads in received.items() if moving else ():
        own = {case for case, _ in runways[key].trains} if key in runways else set()
        for case in moving & {load.case for load in loads}:
            places = [load.start for load in loads if load.case == case]
            if case in own or max(places) - min(places) > _TOLERANCE:
                text = (
                    f"reactions of {case}, which moves, meet it at several places or act beside its"
                    " own wheels"
                )
                found[key] = Reason(f"{text}: that is not followed yet", blocking=False)
    return found


def _once(named: Sequence[Load], beams: Mapping[str, Beam]) -> Iterator[Load]:
    """The trains of a line, each once; several beams may be named for one that runs along all."""
    first: dict[str, Load] = {}
    for load in named:
        other = first.setdefault(load.case, load)
        if other is load:
            yield load
        elif load.travel is None or not load.travel.whole:
            raise BriefError(
                f"{load.origin}: from and to reach two beams of one line,"
                f" {beams[other.beam].mark} and {beams[load.beam].mark}: name the beam on which"
                " they are measured alone"
            )


def _on(key: str, load: Load, beams: Mapping[str, Beam]) -> Load:
    """A train as it is told of on each beam of its line."""
    if load.travel and load.travel.whole:
        return load._replace(beam=key, start=0.0, end=beams[key].length)
    if key == load.beam:
        return load
    text = f"{load.text}, on {beams[load.beam].mark} of its line"
    return load._replace(beam=key, start=0.0, end=0.0, text=text)


def _runways(
    line: BeamLine, trains: Sequence[Load], beams: Mapping[str, Beam]
) -> dict[str, Runway]:
    rows = rows_of([line])
    several = len(line.spans) > 1
    one = np.zeros(1, np.intp)
    table = (
        line_table(rows, beams)
        if several
        else simple_lines(rows.spans, one, one, rows.against == 1, np.ones(1))
    )
    curvature = curvature_on(rows, beams, load_table([], {}, {}))
    moving = tuple((load.case, _moving(line, load)) for load in trains)
    return {
        key: Runway(rows.spans, table, curvature, _own(rows, beam), moving)
        for beam, key in enumerate(rows.keys)
    }


def _own(rows: Rows, beam: int) -> tuple[int, ...]:
    return tuple(np.flatnonzero(rows.beam_of == beam).tolist())


def _moving(line: BeamLine, load: Load) -> MovingCase:
    """A train on its way along a line."""
    travel = load.travel
    assert travel is not None
    length = sum(span.length for span in line.spans)
    low, high = 0.0, length
    if not travel.whole:
        low, high = sorted(_along(line, load.beam, x) for x in (load.start, load.end))
    start, end = max(low, 0.0), min(high, length)
    if end - start <= _TOLERANCE:
        raise BriefError(f"{load.origin}: its way from {show(load.start, 'length')} meets no span")
    clipped = max(start - low, high - end) > _TOLERANCE
    moving = MovingCase(
        case=0,
        line=0,
        trains=tuple(Train(np.array(one.places), np.array(one.forces)) for one in travel.trains),
        start=start,
        end=end,
        stays=travel.stops and not clipped,
        turns=travel.turned,
        approach=travel.approach,
        dynamic=travel.dynamic,
    )
    if any(train.length > end - start for train in moving.trains):
        if travel.stops and not clipped:
            raise BriefError(
                f"{load.origin}: its way of {show(end - start, 'length')} has no room for the train"
            )
        moving = replace(moving, stays=False)
    return moving


def _along(line: BeamLine, beam: str, x: float) -> float:
    """Place along a line of a place on one of its beams [mm]; beyond its spans beyond them."""
    before, nearest = 0.0, None
    for span in line.spans:
        if span.beam == beam:
            off = max(span.start.x - x, x - span.end.x, 0.0)
            along = before + (span.end.x - x if span.reversed else x - span.start.x)
            if nearest is None or off < nearest[0]:
                nearest = off, along
        before += span.length
    assert nearest is not None
    return nearest[1]

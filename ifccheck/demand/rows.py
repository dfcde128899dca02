"""Lines of beams as the rows that the analysis works on."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache

import numpy as np

from ifccheck.analysis.line_table import LineTable, simple_lines
from ifccheck.analysis.loads import LoadTable, join_loads, load_table, on_spans
from ifccheck.analysis.parts import Parts, parts_of
from ifccheck.analysis.spans import KIND_CODES, SpanTable, in_line
from ifccheck.analysis.stations import make_stations, places
from ifccheck.analysis.stiffness import Curvature, indeterminate, places_between
from ifccheck.beam import SELF, Beam, Case, Load, Outline
from ifccheck.frame.beam_lines import BeamLine, LineSpan
from ifccheck.mechanics.arrays import Floats, Ints
from ifccheck.rating.runs import outline_of, profile_of, run_table
from ifccheck.rating.stiffness import second_moments, varies
from ifccheck.rating.weights import self_weight


@dataclass(frozen=True, slots=True)
class Rows:
    """Lines that are solved together, as tables."""

    lines: Sequence[BeamLine]
    keys: Sequence[str]
    """Of their beams (B)"""
    spans: SpanTable
    """In the order of the beams and along each (S)"""
    beam_of: Ints
    """Beam of each span (S)"""
    line: Ints
    """Line of each span (S)"""
    place: Ints
    """Which span of its line each is, from 0 (S)"""
    left: Ints
    """Node before each span along its line, counted through all lines (S)"""
    against: Ints
    """1 where the span's own x runs against the line, else 0 (S)"""

    @property
    def nodes(self) -> int:
        """Supports and tips of all lines."""
        return sum(len(line.nodes) for line in self.lines)


def rows_of(lines: Sequence[BeamLine]) -> Rows:
    """Number the spans of some lines, beam by beam."""
    along: dict[str, list[tuple[LineSpan, int, int, int]]] = {}
    node = 0
    for number, line in enumerate(lines):
        for place, span in enumerate(line.spans):
            along.setdefault(span.beam, []).append((span, number, place, node + place))
        node += len(line.nodes)
    ordered = [sorted(own, key=_start) for own in along.values()]
    every = [each for own in ordered for each in own]
    spans = [span for span, *_ in every]
    return Rows(
        lines=lines,
        keys=tuple(along),
        spans=SpanTable(
            np.array([span.start.x for span in spans]),
            np.array([span.end.x for span in spans]),
            np.array([KIND_CODES[span.start.kind] for span in spans]),
            np.array([KIND_CODES[span.end.kind] for span in spans]),
        ),
        beam_of=np.repeat(np.arange(len(ordered)), [len(own) for own in ordered]),
        line=np.array([number for _, number, _, _ in every]),
        place=np.array([place for _, _, place, _ in every]),
        left=np.array([before for *_, before in every]),
        against=np.array([int(span.reversed) for span in spans]),
    )


def _start(each: tuple[LineSpan, int, int, int]) -> float:
    return each[0].start.x


def loads_on(
    rows: Rows,
    beams: Mapping[str, Beam],
    loads: Mapping[str, Sequence[Load]],
    unit_weights: Mapping[str, float],
    cases: Sequence[Case],
) -> tuple[LoadTable, Parts]:
    """All loads on some lines, self weight among them, by the parts of their cases."""
    own = [load for key in rows.keys for load in loads.get(key, ()) if load.travel is None]
    row_of_case = {case.name: row for row, case in enumerate(cases)}
    row_of_beam = {key: row for row, key in enumerate(rows.keys)}
    runs, _ = run_table([beams[key].runs for key in rows.keys], [False] * len(rows.keys))
    first = np.flatnonzero(np.diff(rows.beam_of, prepend=-1))
    last = np.append(first[1:], rows.beam_of.size) - 1
    ends = np.stack([rows.spans.start[first], rows.spans.end[last]], axis=-1)
    weights = np.array([unit_weights[key] for key in rows.keys])
    tables = [self_weight(runs, ends, row_of_case[SELF], weights)]
    apart = [load for load in own if load.apart]
    tables.append(load_table([load for load in own if not load.apart], row_of_beam, row_of_case))
    together = on_spans(join_loads(*tables), rows.spans, rows.beam_of)
    alone = on_spans(load_table(apart, row_of_beam, row_of_case), rows.spans, rows.beam_of)
    parts = parts_of(
        [case.by_spans for case in cases], int(rows.place.max()) + 1, apart=bool(apart)
    )
    return join_loads(
        parts.of(together, rows.place, apart=False), parts.of(alone, rows.place, apart=True)
    ), parts


def line_table(rows: Rows, beams: Mapping[str, Beam]) -> LineTable:
    """The lines that hold a moment at some support: of several spans, or with columns."""
    held = np.zeros(len(rows.lines), np.bool_)
    held[rows.line[in_line(rows.spans)]] = True
    joined = np.flatnonzero(held[rows.line])
    order = joined[np.lexsort((rows.place[joined], rows.line[joined]))]
    _, line = np.unique(rows.line[order], return_inverse=True)
    stiffness = np.array(
        [
            _second_moment(outline_of(beams[rows.keys[beam]].runs, middle))
            for beam, middle in zip(
                rows.beam_of[order].tolist(),
                ((rows.spans.start + rows.spans.end) / 2.0)[order].tolist(),
                strict=True,
            )
        ]
    )
    table = simple_lines(rows.spans, line, order, rows.against[order] == 1, stiffness)
    springs = [
        node.spring for each in np.flatnonzero(held).tolist() for node in rows.lines[each].nodes
    ]
    return replace(table, rotational_spring=np.array(springs))


def curvature_on(rows: Rows, beams: Mapping[str, Beam], loads: LoadTable) -> Curvature | None:
    """Where curvature is summed along spans whose stiffness varies; None where none does.

    Stiffness is that of the concrete outline, uncracked and without steel, as in ``line_table``.
    """
    varying = np.array([varies(beams[key].runs) for key in rows.keys])[rows.beam_of]
    wanted = varying & indeterminate(rows.spans)
    if not wanted.any():
        return None
    span, changes = _changes(rows, beams, np.flatnonzero(wanted).tolist())
    extra = places(span, changes, two_sided=False)
    span, x, length = places_between(make_stations(rows.spans, loads, extra))
    kept = wanted[span]
    span, x, length = span[kept], x[kept], length[kept]
    inertia = [
        _second_moment(outline_of(beams[rows.keys[rows.beam_of[row]]].runs, place))
        for row, place in zip(span.tolist(), x.tolist(), strict=True)
    ]
    return Curvature(span, x, length / np.array(inertia))


def _changes(rows: Rows, beams: Mapping[str, Beam], spans: Sequence[int]) -> tuple[Ints, Floats]:
    found = [
        (span, place)
        for span in spans
        for run in beams[rows.keys[rows.beam_of[span]]].runs
        for place in (run.start, run.end)
    ]
    span_of, x = np.array(found, dtype=np.float64).T
    return span_of.astype(np.intp), x


@lru_cache(maxsize=16384)
def _second_moment(outline: Outline) -> float:
    return float(second_moments(profile_of(outline).strips[None])[0])


def nodes_of(rows: Rows) -> Iterator[tuple[int, int, int]]:
    """Line, place among its nodes, and the number of every node of all lines."""
    number = 0
    for line, each in enumerate(rows.lines):
        for place in range(len(each.nodes)):
            yield line, place, number
            number += 1

"""The loads of a run as one flat table, sorted by beam."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, fields, replace
from typing import Self

import numpy as np

from ifccheck.analysis.spans import SpanTable, by_spans
from ifccheck.beam import Load, LoadKind
from ifccheck.mechanics.arrays import Bools, Floats, Ints

LINE, POINT, MOMENT = 0, 1, 2

_SHORT = 1e-6
"""A line no longer than this has one intensity [mm]"""

_KIND_CODES: Mapping[LoadKind, int] = {"line": LINE, "point": POINT, "moment": MOMENT}


@dataclass(frozen=True, slots=True)
class LoadTable:
    """One row per load (P), sorted by beam; the meaning of the values is that of ``beam.Load``."""

    beam: Ints
    """Row of the beam (P)"""
    case: Ints
    """Row of the load case (P)"""
    kind: Ints
    """LINE, POINT or MOMENT (P)"""
    start: Floats
    """x from the beam's start [mm] (P)"""
    end: Floats
    """x of the end of a line; equal to ``start`` for the others [mm] (P)"""
    value_start: Floats
    """[N/mm], [N] or [N*mm] by kind (P)"""
    value_end: Floats
    """Intensity at the end of a line [N/mm] (P)"""

    def with_case(self, case: Ints) -> Self:
        """The same loads in other cases."""
        return replace(self, case=case)

    def take(self, rows: Ints) -> Self:
        """The loads of the given rows, which must keep the order by beam."""
        return type(self)(*(getattr(self, f.name)[rows] for f in fields(self)))


def load_table(
    loads: Sequence[Load], beam_index: Mapping[str, int], case_index: Mapping[str, int]
) -> LoadTable:
    """Loads of the domain as a table.

    Parameters
    ----------
    loads
        Loads on the beams of ``beam_index``, in any order.
    beam_index, case_index
        Row of each beam by its key and of each case by its name.

    Raises
    ------
    KeyError
        Where a load names a beam or a case without a row: a load is never dropped here.
    """
    return by_beam(
        LoadTable(
            beam=np.array([beam_index[load.beam] for load in loads], np.intp),
            case=np.array([case_index[load.case] for load in loads], np.intp),
            kind=np.array([_KIND_CODES[load.kind] for load in loads], np.intp),
            start=np.array([load.start for load in loads], np.float64),
            end=np.array([_end_of(load) for load in loads], np.float64),
            value_start=np.array([load.values[0] for load in loads], np.float64),
            value_end=np.array([load.values[1] for load in loads], np.float64),
        )
    )


def intensity_at(line: LoadTable, x: Floats) -> Floats:
    """Intensity of trapezoidal lines at x, one place each [N/mm] (P)."""
    length = line.end - line.start
    part = np.divide(x - line.start, length, out=np.zeros_like(x), where=length > _SHORT)
    return line.value_start + (line.value_end - line.value_start) * part


def on_spans(loads: LoadTable, spans: SpanTable, beam_of: Ints) -> LoadTable:
    """Loads on beams as loads on their spans.

    A line is cut where one span ends and the next begins; a point load or a moment there belongs
    to the next. What lies before the first span or after the last belongs to that one.

    Parameters
    ----------
    loads
        With the rows of the beams (P).
    spans
        Of all beams, in the order of the beams and along each (S).
    beam_of
        Beam of each span (S).
    """
    if spans.start.size == beam_of[-1] + 1:
        return loads
    row, span = by_spans(beam_of, loads.beam)
    on = replace(loads.take(row), beam=span)
    first, last = np.diff(beam_of, prepend=-1) > 0, np.diff(beam_of, append=beam_of.size) > 0
    low, high = np.where(first, -np.inf, spans.start)[span], np.where(last, np.inf, spans.end)[span]
    line = on.kind == LINE
    start, end = np.maximum(on.start, low), np.minimum(on.end, high)
    cut = replace(
        on,
        start=np.where(line, start, on.start),
        end=np.where(line, end, on.end),
        value_start=np.where(line, intensity_at(on, start), on.value_start),
        value_end=np.where(line, intensity_at(on, end), on.value_end),
    )
    return by_beam(cut.take(np.flatnonzero(_acts_on(on, low, high))))


def _acts_on(loads: LoadTable, low: Floats, high: Floats) -> Bools:
    """Whether each load has a part between its two places (P)."""
    short = (loads.kind != LINE) | (loads.end <= loads.start)
    held = (loads.start >= low) & (loads.start < high)
    return np.where(short, held, np.minimum(loads.end, high) > np.maximum(loads.start, low))


def _end_of(load: Load) -> float:
    return load.end if load.kind == "line" else load.start


def self_weight_lines(
    *,
    beam: Ints,
    case: int,
    start: Floats,
    end: Floats,
    area_start: Floats,
    area_end: Floats,
    unit_weight: Floats,
) -> LoadTable:
    """Self weight of section runs as line loads.

    w = A gamma at each end of a run, linear between.

    Parameters
    ----------
    beam
        Row of the beam of each run (R).
    case
        Row of the case that self weight makes.
    start, end
        Stretch of each run [mm] (R).
    area_start, area_end
        Concrete area at its ends [mm2] (R).
    unit_weight
        [N/mm3] (R).
    """
    return by_beam(
        LoadTable(
            beam=np.asarray(beam, np.intp),
            case=np.full(len(beam), case, np.intp),
            kind=np.full(len(beam), LINE, np.intp),
            start=np.asarray(start, np.float64),
            end=np.asarray(end, np.float64),
            value_start=np.asarray(area_start * unit_weight, np.float64),
            value_end=np.asarray(area_end * unit_weight, np.float64),
        )
    )


def join_loads(*tables: LoadTable) -> LoadTable:
    """Several tables as one."""
    return by_beam(
        LoadTable(
            *(
                np.concatenate([getattr(table, f.name) for table in tables])
                for f in fields(LoadTable)
            )
        )
    )


def by_beam(loads: LoadTable) -> LoadTable:
    """The same loads sorted by beam, else in the order given."""
    return loads.take(np.argsort(loads.beam, kind="stable").astype(np.intp, copy=False))

"""The spans of a run: where each beam is held, and how."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.beam import EndKind, Span
from ifccheck.mechanics.arrays import Bools, Floats, Ints

FREE, PINNED, FIXED = 0, 1, 2
CONTINUOUS = 3
"""A supported end beyond which its line goes on, or at which springs hold it"""

KIND_CODES: Mapping[EndKind, int] = {
    "free": FREE,
    "pinned": PINNED,
    "fixed": FIXED,
    "continuous": CONTINUOUS,
}


@dataclass(frozen=True, slots=True)
class SpanTable:
    """Spans, one row each (B): where each beam makes one, the rows of the beams."""

    start: Floats
    """x of the support, or of the tip at a free end [mm] (B)"""
    end: Floats
    start_kind: Ints
    """FREE, PINNED, FIXED or, where a line holds it, CONTINUOUS (B)"""
    end_kind: Ints

    @property
    def length(self) -> Floats:
        """Length of each span [mm] (B)."""
        return self.end - self.start


def span_table(spans: Sequence[Span]) -> SpanTable:
    """Single spans of the domain, one per beam row, as a table.

    Raises
    ------
    ValueError
        Where a span has no length or its two ends cannot hold it up.
    """
    table = SpanTable(
        start=np.array([span.start for span in spans], np.float64),
        end=np.array([span.end for span in spans], np.float64),
        start_kind=np.array([KIND_CODES[span.start_support.kind] for span in spans], np.intp),
        end_kind=np.array([KIND_CODES[span.end_support.kind] for span in spans], np.intp),
    )
    require_standing(table)
    return table


def by_spans(beam_of: Ints, beam: Ints) -> tuple[Ints, Ints]:
    """Rows that belong to beams, once for every span of their beam.

    Parameters
    ----------
    beam_of
        Beam of each span, ascending (S).
    beam
        Beam of each row (R).

    Returns
    -------
    tuple
        Row and span of each pair, in the order of the rows and then of the spans.
    """
    first, after = (np.searchsorted(beam_of, beam, side=side) for side in ("left", "right"))
    counts = after - first
    row = np.repeat(np.arange(beam.size), counts)
    within = np.arange(row.size) - np.repeat(np.cumsum(counts) - counts, counts)
    return row, first[row] + within


def require_standing(spans: SpanTable) -> None:
    """Refuse spans without length and those that their supports cannot hold up.

    Raises
    ------
    ValueError
        Naming the first row at fault.
    """
    short = np.flatnonzero(~(spans.length > 0.0))
    if short.size:
        raise ValueError(f"span of row {short[0]} has no length")
    falling = np.flatnonzero(~stands(spans.start_kind, spans.end_kind))
    if falling.size:
        raise ValueError(f"span of row {falling[0]} is not held by its supports")


def stands(start_kind: Ints, end_kind: Ints) -> Bools:
    """Whether a pair of end supports holds a span: two supports, or one that can hold a moment."""
    held: Bools = (start_kind != FREE) & (end_kind != FREE)
    for kind in (FIXED, CONTINUOUS):
        held |= (start_kind == kind) | (end_kind == kind)
    return held


def between_supports(spans: SpanTable) -> Bools:
    """Whether both ends of a span are supported (B)."""
    return np.asarray((spans.start_kind != FREE) & (spans.end_kind != FREE))


def in_line(spans: SpanTable) -> Bools:
    """Whether a span has an end that only its line can hold (B)."""
    return np.asarray((spans.start_kind == CONTINUOUS) | (spans.end_kind == CONTINUOUS))


def alone(spans: SpanTable) -> SpanTable:
    """The spans without the lines that hold them: those that go on are simple between two
    supports, and fixed at the support where the other end is free."""
    joined = in_line(spans)
    if not joined.any():
        return spans
    simple = joined & between_supports(spans)

    def kind(given: Ints) -> Ints:
        rooted = np.where(joined & (given == CONTINUOUS), FIXED, given)
        return np.where(simple, PINNED, rooted)

    return replace(spans, start_kind=kind(spans.start_kind), end_kind=kind(spans.end_kind))

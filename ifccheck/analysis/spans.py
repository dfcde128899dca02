"""The spans of a run: where each beam is held, and how."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Span, SupportKind
from ifccheck.mechanics.arrays import Bools, Floats, Ints

FREE, PINNED, FIXED = 0, 1, 2

_KIND_CODES: Mapping[SupportKind, int] = {"free": FREE, "pinned": PINNED, "fixed": FIXED}


@dataclass(frozen=True, slots=True)
class SpanTable:
    """One single span per beam (B)."""

    start: Floats
    """x of the support, or of the tip at a free end [mm] (B)"""
    end: Floats
    start_kind: Ints
    """FREE, PINNED or FIXED (B)"""
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
        start_kind=np.array([_KIND_CODES[span.start_support.kind] for span in spans], np.intp),
        end_kind=np.array([_KIND_CODES[span.end_support.kind] for span in spans], np.intp),
    )
    require_standing(table)
    return table


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
    """Whether a pair of end supports holds a span: two supports, or one that is fixed."""
    held: Bools = (start_kind != FREE) & (end_kind != FREE)
    held |= (start_kind == FIXED) | (end_kind == FIXED)
    return held

"""Lines as a table: which spans follow each other, and what holds them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.spans import CONTINUOUS, FIXED, FREE, PINNED, SpanTable, in_line
from ifccheck.mechanics.arrays import Bools, Floats, Ints


@dataclass(frozen=True, slots=True)
class LineTable:
    """Spans in the order in which they follow each other, line by line (S), and the nodes of the
    lines: their supports and tips (J = S + number of lines).

    Nodes are counted along each line: ``left`` and ``right`` tell those of each span.
    """

    line: Ints
    """Row of the line of each span: 0, 0, 0, 1, 1 ... (S)"""
    span: Ints
    """Row of the span among all spans (S)"""
    reversed: Bools
    """Whether the span's own x runs against the line (S)"""
    stiffness: Floats
    """Bending stiffness EI [N*mm2], or relative where no spring or settlement counts (S)"""
    vertical_spring: Floats
    """What a support needs to sink [N/mm]; inf where it cannot, 0 at a tip (J)"""
    rotational_spring: Floats
    """What a support needs to turn [N*mm/rad]: 0 without columns, inf where fixed (J). Of no
    account where the end of a line is PINNED or FIXED"""
    settlement: Floats | None = None
    """How far the ground below each support sinks in each case [mm] (K, J)"""

    @property
    def left(self) -> Ints:
        """Node before each span along its line (S)."""
        return np.arange(len(self.line)) + self.line

    @property
    def right(self) -> Ints:
        """Node after each span (S)."""
        return self.left + 1

    @property
    def nodes(self) -> int:
        """Number of nodes of all lines."""
        return len(self.vertical_spring)

    @property
    def first_nodes(self) -> Ints:
        """First node of each line."""
        new = np.diff(self.line, prepend=-1) > 0
        return np.asarray(self.left[new])


def simple_lines(
    spans: SpanTable, line: Ints, span: Ints, reversed_: Bools, stiffness: Floats
) -> LineTable:
    """Lines on supports that neither sink nor hold a moment, tips where spans are FREE.

    Parameters
    ----------
    spans
        All spans (B).
    line, span, reversed_, stiffness
        Columns of the table (S).
    """
    count = len(line) + (int(line[-1]) + 1 if len(line) else 0)
    table = LineTable(line, span, reversed_, stiffness, np.full(count, np.inf), np.zeros(count))
    table.vertical_spring[tips(spans, table)] = 0.0
    return table


def end_kinds(spans: SpanTable, lines: LineTable) -> tuple[Ints, Ints]:
    """How each span is held at its left and right end along the line (S)."""
    start, end = spans.start_kind[lines.span], spans.end_kind[lines.span]
    return np.where(lines.reversed, end, start), np.where(lines.reversed, start, end)


def tips(spans: SpanTable, lines: LineTable) -> Bools:
    """Nodes that are free ends (J)."""
    left, right = end_kinds(spans, lines)
    free = np.zeros(lines.nodes, np.bool_)
    free[lines.left[left == FREE]] = True
    free[lines.right[right == FREE]] = True
    return free


def require_lines(spans: SpanTable, lines: LineTable) -> None:
    """Refuse lines that are broken at a support, and those that their supports do not hold.

    Raises
    ------
    ValueError
        Naming a span of the first line at fault.
    """
    left, right = end_kinds(spans, lines)
    outer_left = np.diff(lines.line, prepend=-1) != 0
    outer_right = np.roll(outer_left, -1)
    broken = ~outer_left & (left != CONTINUOUS) | ~outer_right & (right != CONTINUOUS)
    if broken.any():
        row = lines.span[np.flatnonzero(broken)[0]]
        raise ValueError(f"span of row {row} does not go on at a support within its line")
    _require_rest(spans, lines)
    vertical, turning = springs_of(spans, lines)
    if not ((vertical >= 0.0).all() and (turning >= 0.0).all()):
        raise ValueError("a support of a line has a spring below 0")
    if not (np.isfinite(lines.stiffness) & (lines.stiffness > 0.0)).all():
        raise ValueError("a span of a line has no stiffness")
    if not len(lines.line):
        return
    held = np.add.reduceat((vertical > 0.0).astype(np.intp), lines.first_nodes)
    fixed = np.add.reduceat((turning > 0.0).astype(np.intp), lines.first_nodes)
    falling = np.flatnonzero((held == 0) | ((held == 1) & (fixed == 0)))
    if falling.size:
        row = lines.span[np.searchsorted(lines.line, falling[0])]
        raise ValueError(f"line of the span of row {row} is not held by its supports")


def _require_rest(spans: SpanTable, lines: LineTable) -> None:
    """Refuse supports that sink below spans which are solved as if they could not."""
    sinks = ~np.isinf(lines.vertical_spring)
    if lines.settlement is not None:
        sinks = sinks | (lines.settlement != 0.0).any(axis=0)
    sinks &= ~tips(spans, lines)
    sinking = np.flatnonzero((sinks[lines.left] | sinks[lines.right]) & ~in_line(spans)[lines.span])
    if sinking.size:
        row = lines.span[sinking[0]]
        raise ValueError(f"span of row {row} has supports that sink but no CONTINUOUS end")


def springs_of(spans: SpanTable, lines: LineTable) -> tuple[Floats, Floats]:
    """Vertical and rotational spring of each node, by the kinds of the ends of lines (J)."""
    turning = lines.rotational_spring.copy()
    for kinds, nodes in zip(end_kinds(spans, lines), (lines.left, lines.right), strict=True):
        turning[nodes[kinds == PINNED]] = 0.0
        turning[nodes[kinds == FIXED]] = np.inf
    free = tips(spans, lines)
    return np.where(free, 0.0, lines.vertical_spring), np.where(free, 0.0, turning)

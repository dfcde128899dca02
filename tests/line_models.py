"""Continuous lines for tests, and an independent solution of them by finite elements."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from ifccheck.analysis.line_table import LineTable
from ifccheck.analysis.loads import LINE, MOMENT, POINT, LoadTable, by_beam
from ifccheck.analysis.spans import CONTINUOUS, FREE, SpanTable

Load = tuple[int, float, float, float, float]
"""kind, start, end, value at the start, value at the end; x from the left end of the line"""


@dataclass
class Line:
    """One line in its own coordinate; a node at both ends of every span."""

    lengths: list[float]
    loads: list[list[Load]]
    """Of each span, x from its left end"""
    stiffness: list[float]
    vertical: list[float] = field(default_factory=list)
    rotational: list[float] = field(default_factory=list)
    settlement: list[float] = field(default_factory=list)
    tips: tuple[bool, bool] = (False, False)
    """Overhangs at the left and at the right"""
    against: list[bool] = field(default_factory=list)
    """Spans whose own x runs against the line"""

    def __post_init__(self) -> None:
        nodes = len(self.lengths) + 1
        self.vertical = self.vertical or [np.inf] * nodes
        self.rotational = self.rotational or [0.0] * nodes
        self.settlement = self.settlement or [0.0] * nodes
        self.against = self.against or [False] * len(self.lengths)
        for tip, node in zip(self.tips, (0, -1), strict=True):
            if tip:
                self.vertical[node] = self.rotational[node] = self.settlement[node] = 0.0


def tables(
    lines: list[Line], case: int = 0, cases: int = 1
) -> tuple[SpanTable, LoadTable, LineTable]:
    """All lines as tables; a span against the line has its loads mirrored."""
    spans, rows, line_of, settlement = [], [], [], []
    for number, line in enumerate(lines):
        count = len(line.lengths)
        for place, length in enumerate(line.lengths):
            kinds = [
                FREE if tip and place == edge else CONTINUOUS
                for tip, edge in zip(line.tips, (0, count - 1), strict=True)
            ]
            origin = 100.0 * (place + 1)
            against = line.against[place]
            spans.append((origin, origin + length, *(kinds[::-1] if against else kinds)))
            rows += [
                (len(spans) - 1, case, *placed(load, length, origin, against))
                for load in line.loads[place]
            ]
            line_of.append(number)
        settlement += line.settlement
    start, end, first, last = (np.array(column) for column in zip(*spans, strict=True))
    shifted = np.zeros((cases, len(settlement)))
    shifted[case] = settlement
    table = LineTable(
        line=np.array(line_of),
        span=np.arange(len(spans)),
        reversed=np.concatenate([np.array(line.against, bool) for line in lines]),
        stiffness=np.concatenate([line.stiffness for line in lines]),
        vertical_spring=np.concatenate([line.vertical for line in lines]),
        rotational_spring=np.concatenate([line.rotational for line in lines]),
        settlement=shifted,
    )
    return SpanTable(start, end, first, last), load_rows(rows), table


def load_rows(rows: list[tuple[int, int, int, float, float, float, float]]) -> LoadTable:
    """Loads (beam, case, kind, start, end, values) as a table."""
    columns = list(zip(*rows, strict=True)) if rows else [()] * 7
    whole = [np.array(column, np.intp) for column in columns[:3]]
    return by_beam(LoadTable(*whole, *(np.array(column, float) for column in columns[3:])))


def placed(load: Load, length: float, origin: float, against: bool) -> Load:
    """A load of a span in the span's own coordinate."""
    kind, start, end, one, two = load
    if not against:
        return kind, origin + start, origin + end, one, two
    sign = -1.0 if kind == MOMENT else 1.0
    return kind, origin + length - end, origin + length - start, sign * two, sign * one


@dataclass
class Solution:
    """What finite elements give along one line, at both ends of every element (E, 2)."""

    x: NDArray[np.float64]
    moment: NDArray[np.float64]
    shear: NDArray[np.float64]
    deflection: NDArray[np.float64]
    """At every node of the mesh, downward [mm]"""
    force: NDArray[np.float64]
    """Upward force of each support [N]"""
    turning: NDArray[np.float64]
    """Anticlockwise moment of each support [N*mm]"""


def finite_elements(
    line: Line,
    divisions: int,
    stiffness_at: Callable[[float], float] | None = None,
    refined: int = 1,
) -> Solution:
    """Cubic beam elements with consistent loads and a dense matrix.

    Exact but for rounding where stiffness is constant in every span: the mesh has a node at every
    edge of a load, and each stretch between is cut into ``refined`` parts. Degrees
    of freedom: deflection downward and its slope.
    """
    bounds = np.concatenate([[0.0], np.cumsum(line.lengths)])
    loads = [
        (kind, low + start, low + end, one, two)
        for low, part in zip(bounds, line.loads, strict=False)
        for kind, start, end, one, two in part
    ]
    rough = mesh_of(line, bounds, loads, divisions)
    parts = rough[:-1, None] + np.diff(rough)[:, None] * np.arange(refined) / refined
    mesh = np.append(parts.ravel(), rough[-1])
    count = len(mesh)
    matrix, force = np.zeros((2 * count, 2 * count)), np.zeros(2 * count)
    elements = []
    for element in range(count - 1):
        low, high = mesh[element], mesh[element + 1]
        h, middle = high - low, (low + high) / 2.0
        span = min(int(np.searchsorted(bounds, middle)) - 1, len(line.lengths) - 1)
        ei = line.stiffness[span] if stiffness_at is None else stiffness_at(middle)
        own = ei / h**3 * np.array(
            [
                [12.0, 6.0 * h, -12.0, 6.0 * h],
                [6.0 * h, 4.0 * h * h, -6.0 * h, 2.0 * h * h],
                [-12.0, -6.0 * h, 12.0, -6.0 * h],
                [6.0 * h, 2.0 * h * h, -6.0 * h, 4.0 * h * h],
            ]
        )  # fmt: skip
        at = slice(2 * element, 2 * element + 4)
        acting = sum((consistent(load, low, h) for load in loads), np.zeros(4))
        matrix[at, at] += own
        force[at] += acting
        elements.append((own, acting, at))
    for kind, start, _, value, _ in loads:
        node = int(np.argmin(np.abs(mesh - start)))
        if kind == POINT:
            force[2 * node] += value
        elif kind == MOMENT:
            force[2 * node + 1] -= value
    return read(line, bounds, mesh, matrix, force, elements)


def mesh_of(
    line: Line, bounds: NDArray[np.float64], loads: list[Load], divisions: int
) -> NDArray[np.float64]:
    even = [np.linspace(low, high, divisions + 1) for low, high in pairwise(bounds.tolist())]
    edges = [load[1] for load in loads] + [load[2] for load in loads]
    places = np.sort(np.concatenate([bounds, *even, np.array(edges)]))
    return places[np.concatenate([[True], np.diff(places) > 1e-7])]


def consistent(load: Load, low: float, h: float) -> NDArray[np.float64]:
    """Nodal loads of a line load that is linear over the whole element (q0, q1 at its ends)."""
    kind, start, end, one, two = load
    middle = low + h / 2.0
    if kind != LINE or end - start < 1e-6 or not start < middle < end:
        return np.zeros(4)
    q0, q1 = (one + (two - one) * (x - start) / (end - start) for x in (low, low + h))
    return np.array(
        [
            h * (7.0 * q0 + 3.0 * q1) / 20.0,
            h * h * (3.0 * q0 + 2.0 * q1) / 60.0,
            h * (3.0 * q0 + 7.0 * q1) / 20.0,
            -h * h * (2.0 * q0 + 3.0 * q1) / 60.0,
        ]
    )


def read(line, bounds, mesh, matrix, force, elements) -> Solution:  # type: ignore[no-untyped-def]
    nodes = [int(np.argmin(np.abs(mesh - place))) for place in bounds]
    sprung, loaded = matrix.copy(), force.copy()
    known = np.zeros(len(force))
    rigid = np.zeros(len(force), bool)
    for node, vertical, rotational, sinks in zip(
        nodes, line.vertical, line.rotational, line.settlement, strict=True
    ):
        for freedom, spring, rest in ((2 * node, vertical, sinks), (2 * node + 1, rotational, 0.0)):
            if np.isinf(spring):
                rigid[freedom], known[freedom] = True, rest
            else:
                sprung[freedom, freedom] += spring
                loaded[freedom] += spring * rest
    free = ~rigid
    found = known.copy()
    found[free] = np.linalg.solve(
        sprung[np.ix_(free, free)], loaded[free] - sprung[np.ix_(free, rigid)] @ known[rigid]
    )
    ends = np.array([own @ found[at] - acting for own, acting, at in elements])
    held = matrix @ found - force
    return Solution(
        x=np.stack([mesh[:-1], mesh[1:]], axis=1),
        moment=np.stack([ends[:, 1], -ends[:, 3]], axis=1),
        shear=np.stack([-ends[:, 0], ends[:, 2]], axis=1),
        deflection=found[::2],
        force=-np.array([held[2 * node] for node in nodes]),
        turning=-np.array([held[2 * node + 1] for node in nodes]),
    )

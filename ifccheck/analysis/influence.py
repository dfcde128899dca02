"""Influence lines: what a unit load does at a place, as it stands anywhere on a line.

Along each span the moments at the supports are cubic in the place of the load, for which four
places of it are enough; where stiffness varies the span is cut into pieces for that. Moment and
shear at a station follow by equilibrium of its span.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.line_table import LineTable
from ifccheck.analysis.lines import continuous, outer_moments, support_reactions
from ifccheck.analysis.loads import POINT, LoadTable
from ifccheck.analysis.spans import SpanTable
from ifccheck.analysis.statics import solve
from ifccheck.analysis.stations import StationTable
from ifccheck.analysis.stiffness import Curvature, with_varying_stiffness
from ifccheck.mechanics.arrays import Bools, Floats, Ints

PIECES = 32
"""Pieces of a span whose stiffness varies, on each of which its influence is taken as cubic"""

_THIRDS = np.arange(4) / 3.0
CUBIC = np.linalg.inv(_THIRDS[:, None] ** np.arange(4))
"""From values at 0, 1/3, 2/3 and 1 to the coefficients of 1, t, t^2, t^3 (4, 4)"""


@dataclass(frozen=True, slots=True)
class Influence:
    """Effects (E) at several places (T), as polynomials on pieces of a line."""

    edges: Floats
    """Where each piece begins, and the last ends, along the line [mm] (T, P + 1)"""
    origin: Floats
    """Where t = 0 for each piece [mm] (T, P)"""
    width: Floats
    """Length over which t goes to 1 [mm] (T, P)"""
    cubic: Floats
    """Coefficients of 1, t, t^2, t^3 (E, T, P, 4)"""

    def take(self, rows: slice) -> Influence:
        """Those of some of the places."""
        return Influence(self.edges[rows], self.origin[rows], self.width[rows], self.cubic[:, rows])


@dataclass(frozen=True, slots=True)
class LineInfluence:
    """What a unit load on a line does to the ends of its spans and its supports."""

    rows: Ints
    """Spans along the line, among all spans (S)"""
    low: Floats
    """Where each begins along the line [mm] (S)"""
    against: Bools
    length: Floats
    start: Floats
    """x of the start of each span [mm] (S)"""
    span: Ints
    """Span along the line of each piece (Q)"""
    edges: Floats
    """(Q + 1)"""
    ends: Floats
    """Moment at the left and right end of each span, as cubics (2, S, Q, 4)"""
    force: Floats
    """Reaction of each node, as cubics (nodes, Q, 4)"""


def line_influence(
    spans: SpanTable, lines: LineTable, line: int, curvature: Curvature | None = None
) -> LineInfluence:
    """Influence of a unit load anywhere on one line; parameters as for ``lines.continuous``.

    References
    ----------
    First principles: superposition; the moments at the ends of a span are linear in the turns of
    the ends of the loaded span, which are cubic in the place of the load.
    """
    here, table, bent = _alone(spans, lines, line, curvature)
    varying = np.zeros(len(here.start), np.bool_)
    if bent is not None:
        varying[bent.beam] = True
    length, against = here.length, table.reversed
    low = np.cumsum(length) - length
    pieces = np.where(varying, PIECES, 1)
    span = np.repeat(np.arange(len(length)), pieces)
    number = np.arange(len(span)) - np.repeat(np.cumsum(pieces) - pieces, pieces)
    part = (number[:, None] + _THIRDS) / pieces[span][:, None]
    part = np.where(against[span][:, None], 1.0 - part, part)
    x = here.start[span][:, None] + part * length[span][:, None]
    unit = _unit_loads(np.repeat(span, 4), x.ravel())
    solved = solve(here, unit, 4 * len(span))
    if bent is not None:
        solved = with_varying_stiffness(solved, bent)
    solved = continuous(solved, table, bent)
    moments = np.stack(outer_moments(solved, table.span))
    moments = np.where(against, moments[::-1], moments)
    return LineInfluence(
        rows=lines.span[lines.line == line],
        low=low,
        against=against,
        length=length,
        start=here.start,
        span=span,
        edges=np.append(low[span] + length[span] * number / pieces[span], low[-1] + length[-1]),
        ends=_cubics(moments),
        force=_cubics(support_reactions(solved, table).force[None])[0],
    )


def _alone(
    spans: SpanTable, lines: LineTable, line: int, curvature: Curvature | None
) -> tuple[SpanTable, LineTable, Curvature | None]:
    """One line by itself, its spans counted from 0."""
    held = np.flatnonzero(lines.line == line)
    rows = lines.span[held]
    nodes = slice(lines.left[held[0]], lines.right[held[-1]] + 1)
    here = SpanTable(
        spans.start[rows], spans.end[rows], spans.start_kind[rows], spans.end_kind[rows]
    )
    table = replace(
        lines,
        line=np.zeros(len(held), np.intp),
        span=np.arange(len(held)),
        reversed=lines.reversed[held],
        stiffness=lines.stiffness[held],
        vertical_spring=lines.vertical_spring[nodes],
        rotational_spring=lines.rotational_spring[nodes],
        settlement=None,
    )
    if curvature is None or not np.isin(curvature.beam, rows).any():
        return here, table, None
    number = np.full(len(spans.start), -1)
    number[rows] = np.arange(len(rows))
    kept = number[curvature.beam] >= 0
    beam, x = number[curvature.beam][kept], curvature.x[kept]
    flexibility = curvature.flexibility[kept]
    order = np.argsort(beam, kind="stable")
    return here, table, Curvature(beam[order], x[order], flexibility[order])


def _unit_loads(beam: Ints, x: Floats) -> LoadTable:
    """A unit load at each place, each a case of its own."""
    one = np.ones(len(x))
    case, kind = np.arange(len(x)), np.full(len(x), POINT)
    return LoadTable(beam, case, kind, x, x, one, one)


def _cubics(values: Floats) -> Floats:
    """Values by unit case (E, 4 Q, S) as cubics on the pieces (E, S, Q, 4)."""
    of_pieces = values.transpose(0, 2, 1).reshape(values.shape[0], values.shape[2], -1, 4)
    return np.asarray(of_pieces @ CUBIC.T)


def of_reactions(line: LineInfluence) -> Influence:
    """Influence on the reactions of the nodes of a line: one effect, upward [N]."""
    nodes = len(line.force)
    edges = np.broadcast_to(line.edges, (nodes, len(line.edges)))
    return Influence(edges, edges[:, :-1], np.diff(edges, axis=1), line.force[None])


def of_stations(line: LineInfluence, stations: StationTable) -> Influence:
    """Influence on moment and shear at stations of the spans of a line.

    With the load at u' from the left end of the span of the station at s, and the moments m of
    the ends of that span,

        M = m_left (1 - s/L) + m_right s/L + min(s (1 - u'/L), u' (1 - s/L)),
        V = (m_right - m_left)/L + (1 - u'/L right of the station, -u'/L left of it),

    without the last terms where the load is on another span.

    Parameters
    ----------
    line
        Influence on the line.
    stations
        Stations on its spans alone (T), which are seen with the load just left and just right of
        them, whatever their side.

    Returns
    -------
    Influence
        Moment [N*mm] and shear [N], positive as along the own x of each span.
    """
    number = np.full(int(line.rows.max()) + 1, -1)
    number[line.rows] = np.arange(len(line.rows))
    own = number[stations.beam]
    length, against = line.length[own], line.against[own]
    s = stations.x - line.start[own]
    s = np.where(against, length - s, s)
    at = line.low[own] + s
    cut = np.searchsorted(line.edges, at, side="right") - 1
    first = np.searchsorted(line.span, own)
    cut = np.clip(cut, first, np.searchsorted(line.span, own, side="right") - 1)
    piece = np.arange(len(line.span) + 1)
    beyond = piece > cut[:, None]
    source = piece - beyond
    edge = np.arange(len(line.edges) + 1)
    edges = line.edges[np.minimum(edge - (edge > cut[:, None]), len(line.edges) - 1)]
    edges[np.arange(len(at)), cut + 1] = at
    left, right = (np.take_along_axis(end[own], source[:, :, None], axis=1) for end in line.ends)
    part, over = (s / length)[:, None], length[:, None]
    cubic = np.stack(
        [
            left * (1.0 - part)[:, :, None] + right * part[:, :, None],
            (right - left) / over[:, :, None],
        ]
    )
    inside = line.span[source] == own[:, None]
    origin, width = line.edges[source], np.diff(line.edges)[source]
    before = (origin - line.low[own][:, None]) / over
    step = width / over
    moment = np.where(beyond, s[:, None] * (1.0 - before), before * (over - s[:, None]))
    slope = np.where(beyond, -s[:, None] * step, step * (over - s[:, None]))
    cubic[0, :, :, 0] += inside * moment
    cubic[0, :, :, 1] += inside * slope
    cubic[1, :, :, 0] += inside * (beyond - before)
    cubic[1, :, :, 1] -= inside * step
    cubic[1] *= np.where(against, -1.0, 1.0)[:, None, None]
    return Influence(edges, origin, width, cubic)

"""Lines: spans that go on over their supports, joined by direct stiffness, all lines at once.

Every span stays a row of its own. Its line adds moments at its supported ends and tells how far
they turn and sink; along the span all is as for a single span.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ifccheck.analysis.blocks import Blocks, solve_blocks
from ifccheck.analysis.line_table import LineTable, require_lines, springs_of, tips
from ifccheck.analysis.spans import FREE, between_supports, in_line
from ifccheck.analysis.statics import Solved, Start
from ifccheck.analysis.stiffness import Curvature, end_turns
from ifccheck.mechanics.arrays import Bools, Floats, Ints


@dataclass(frozen=True, slots=True)
class Reactions:
    """What supports give to their lines, from the spans on both sides."""

    force: Floats
    """Upward [N] (K, J)"""
    moment: Floats
    """Anticlockwise with x along the line and z up, as a moment load [N*mm] (K, J)"""


def continuous(solved: Solved, lines: LineTable, curvature: Curvature | None = None) -> Solved:
    """Join the spans of lines at their supports.

    With v downward, t = v' at the nodes and b the turn of the ends of the simple span under its
    loads, the moments at the two ends of a span of length L, sagging positive, follow from

        F m = (t_left - (v_right - v_left)/L - b_left, (v_right - v_left)/L - t_right - b_right),

    F being L / 6EI [[2, 1], [1, 2]] or, where stiffness varies, the integrals of ``end_turns``.
    The nodes are in equilibrium: m_right - m_left + k_t t = 0, and the shears of both sides
    together are k_v (v - settlement).

    Parameters
    ----------
    solved
        Spans (B) as ``statics.solve`` leaves them.
    lines
        Spans of the lines (S): CONTINUOUS at every end within a line; at the ends of a line
        CONTINUOUS (springs count), PINNED, FIXED or FREE. A span without a CONTINUOUS end is a
        line of its own and stays as it is.
    curvature
        Of spans whose stiffness varies, those of no line may be among them; length over the
        same measure of stiffness as ``lines.stiffness``. Deflections of such spans are nan.

    Returns
    -------
    Solved
        The same spans with moments at their ends and, times their stiffness, slope and
        deflection at their start.

    Raises
    ------
    ValueError
        Naming a span at fault, or a line that its supports do not hold.

    References
    ----------
    First principles: slope-deflection equations; the unit load theorem.
    """
    require_lines(solved.spans, lines)
    if not len(lines.line):
        return solved
    springs = springs_of(solved.spans, lines)
    members = _members(solved, lines, curvature)
    sunk, turned = _displacements(lines, springs, members)
    moments = _moments(lines, springs, members, sunk, turned)
    return _with_lines(solved, lines, members, moments, (sunk, turned))


def support_reactions(solved: Solved, lines: LineTable) -> Reactions:
    """What every support gives to its line, by case; solved by ``continuous``.

    The sum of the shears of both sides and the jump of the moment: in equilibrium with the loads
    but for rounding.
    """
    near, far = outer_moments(solved, lines.span)
    first = solved.start.reaction[:, lines.span]
    last = solved.totals.force[:, lines.span] - first
    against = lines.reversed
    force = np.zeros((len(first), lines.nodes))
    moment = np.zeros_like(force)
    force[:, lines.left] += np.where(against, last, first)
    force[:, lines.right] += np.where(against, first, last)
    moment[:, lines.left] -= np.where(against, far, near)
    moment[:, lines.right] += np.where(against, near, far)
    turning = springs_of(solved.spans, lines)[1]
    return Reactions(np.where(tips(solved.spans, lines), 0.0, force), moment * (turning > 0.0))


def outer_moments(solved: Solved, rows: Ints) -> tuple[Floats, Floats]:
    """Moments at start and end of spans, beyond all that acts there (K, S)."""
    start, totals = solved.start, solved.totals
    near = start.moment[:, rows]
    along = start.reaction[:, rows] * solved.spans.length[rows]
    return near, near + along - totals.moment[:, rows]


@dataclass(frozen=True, slots=True)
class _Members:
    """Spans of lines seen along their line, left end first (S); pairs are left and right."""

    length: Floats
    bends: Bools
    """Between two supports of its line; the moments of the others are known"""
    constant: Bools
    """One stiffness along the span"""
    stiff: Floats
    """Inverse of the flexibility of the ends (S, 2, 2); 0 where moments are known"""
    turn: Floats
    """b: turn of the ends of the simple span (2, K, S)"""
    force: Floats
    """What the span standing alone brings down at its ends [N] (2, K, S)"""
    root: Floats
    """Moments at the ends where they are known: those of overhangs [N*mm] (2, K, S); else 0"""


def _members(solved: Solved, lines: LineTable, curvature: Curvature | None) -> _Members:
    rows, spans = lines.span, solved.spans
    bends = (between_supports(spans) & in_line(spans))[rows]
    constant = np.ones(len(rows), np.bool_)
    length = spans.length[rows]
    unit = length / (6.0 * lines.stiffness)
    flexible = [2.0 * unit, unit, 2.0 * unit]
    near = solved.start.slope[:, rows]
    whole = solved.start.reaction[:, rows] * length**2 / 2.0 - solved.totals.slope[:, rows]
    turn = np.stack([near, whole - near]) / lines.stiffness
    if curvature is not None:
        sums = end_turns(solved, curvature)
        constant = sums.near[rows] == 0.0
        varying = (sums.near[rows], sums.across[rows], sums.far[rows])
        flexible = [np.where(constant, *both) for both in zip(flexible, varying, strict=True)]
        turn = np.where(constant, turn, np.stack([sums.start[:, rows], sums.end[:, rows]]))
    first = solved.start.reaction[:, rows]
    force = np.stack([first, solved.totals.force[:, rows] - first])
    root = np.stack(outer_moments(solved, rows))
    against = lines.reversed
    near, across, far = np.where(against, flexible[::-1], flexible)
    stiff = np.array([[far, -across], [-across, near]]) / (near * far - across**2)
    return _Members(
        length=length,
        bends=bends,
        constant=constant,
        stiff=np.where(bends, stiff, 0.0).transpose(2, 0, 1),
        turn=np.where(bends, np.where(against, turn[::-1], turn), 0.0),
        force=np.where(against, force[::-1], force),
        root=np.where(bends, 0.0, np.where(against, root[::-1], root)),
    )


def _displacements(
    lines: LineTable, springs: tuple[Floats, Floats], members: _Members
) -> tuple[Floats, Floats]:
    """How far every node sinks [mm] and turns, clockwise positive [rad] (K, J)."""
    left, right, length = lines.left, lines.right, members.length
    one, none = np.ones_like(length), np.zeros_like(length)
    turns = np.array(
        [
            [1.0 / length, one, -1.0 / length, none],
            [-1.0 / length, none, 1.0 / length, -one],
        ]
    ).transpose(2, 0, 1)
    back = turns.transpose(0, 2, 1) @ members.stiff
    stiff = back @ turns
    diagonal = np.zeros((lines.nodes, 2, 2))
    diagonal[left] += stiff[:, :2, :2]
    diagonal[right] += stiff[:, 2:, 2:]
    cases = members.turn.shape[1]
    driven = back @ members.turn.transpose(2, 0, 1)
    loads = np.zeros((lines.nodes, 2, cases))
    loads[left] += driven[:, :2]
    loads[right] += driven[:, 2:]
    loads[left, 0] += members.force[0].T
    loads[right, 0] += members.force[1].T
    loads[left, 1] -= members.root[0].T
    loads[right, 1] += members.root[1].T
    blocks = Blocks(lines.first_nodes, left, diagonal, stiff[:, :2, 2:], loads)
    sprung = blocks.held(np.stack(springs, axis=1), _settled(lines, cases))
    solution = solve_blocks(sprung)
    return solution[:, 0].T, solution[:, 1].T


def _settled(lines: LineTable, cases: int) -> Floats:
    """Where the springs of each node stand without force (J, 2, K)."""
    settled = np.zeros((lines.nodes, 2, cases))
    if lines.settlement is not None:
        settled[:, 0] = lines.settlement.T
    return settled


def _moments(
    lines: LineTable,
    springs: tuple[Floats, Floats],
    members: _Members,
    sunk: Floats,
    turned: Floats,
) -> Floats:
    """Moment at the left and right end of each span [N*mm] (2, K, S).

    Where nothing but the line itself holds a moment both sides have the same, that of an
    overhang where there is one, and the end of a line has none.
    """
    left, right = lines.left, lines.right
    chord = (sunk[:, right] - sunk[:, left]) / members.length
    bent = np.stack([turned[:, left] - chord, chord - turned[:, right]]) - members.turn
    moments = np.einsum("sij,jks->iks", members.stiff, bent) + members.root
    sides = np.bincount(left, minlength=lines.nodes) + np.bincount(right, minlength=lines.nodes)
    rooted = np.zeros(lines.nodes, np.bool_)
    rooted[left[~members.bends]] = rooted[right[~members.bends]] = True
    agreed, weights = np.zeros((moments.shape[1], lines.nodes)), np.zeros(lines.nodes)
    for nodes, moment in zip((left, right), moments, strict=True):
        weight = (~members.bends | ~rooted[nodes]).astype(np.float64)
        agreed[:, nodes] += moment * weight
        weights[nodes] += weight
    agreed = np.where(sides == 2, agreed / weights, 0.0)
    loose = springs[1] == 0.0
    ends = [
        np.where(loose[nodes] & members.bends, agreed[:, nodes], moment)
        for nodes, moment in zip((left, right), moments, strict=True)
    ]
    return np.stack(ends)


def _with_lines(
    solved: Solved,
    lines: LineTable,
    members: _Members,
    moments: Floats,
    displaced: tuple[Floats, Floats],
) -> Solved:
    """The spans with what their line does at their start."""
    rows, against = lines.span, lines.reversed
    start = solved.start
    near, far = np.where(against, moments[::-1], moments) * members.bends
    reaction, moment = start.reaction.copy(), start.moment.copy()
    reaction[:, rows] += (far - near) / members.length
    moment[:, rows] += near
    slope, deflection = start.slope.copy(), start.deflection.copy()
    slope[:, rows], deflection[:, rows] = _shape_at_start(solved, lines, members, displaced)
    force_scale, moment_scale = _scales(solved, lines, displaced[0])
    return replace(
        solved,
        start=Start(reaction, moment, slope, deflection),
        force_scale=force_scale,
        moment_scale=moment_scale,
    )


def _shape_at_start(
    solved: Solved, lines: LineTable, members: _Members, displaced: tuple[Floats, Floats]
) -> tuple[Floats, Floats]:
    """Slope and deflection at the start of each span, times its stiffness (K, S).

    An overhang whose root is its end turns and sinks about that, as a whole.
    """
    rows, against, (sunk, turned) = lines.span, lines.reversed, displaced
    rooted_far = solved.spans.start_kind[rows] == FREE
    node = np.where(against != rooted_far, lines.right, lines.left)
    turn = turned[:, node] * np.where(against, -1.0, 1.0)
    sink = sunk[:, node] - np.where(rooted_far, turn * members.length, 0.0)
    stiffness = np.where(members.constant, lines.stiffness, np.nan)
    overhang = ~members.bends
    slope = np.where(overhang, solved.start.slope[:, rows], 0.0)
    deflection = np.where(overhang, solved.start.deflection[:, rows], 0.0)
    return slope + turn * stiffness, deflection + sink * stiffness


def _scales(solved: Solved, lines: LineTable, sunk: Floats) -> tuple[Floats, Floats]:
    """Sizes of each case's loads and settlements, of the whole line, for each span (K, B)."""
    rows = lines.span
    firsts = np.flatnonzero(np.diff(lines.line, prepend=-1))
    length = solved.spans.length[rows]
    force = solved.force_scale.copy(), solved.moment_scale.copy()
    settled = np.zeros((len(sunk), len(rows)))
    if lines.settlement is not None:
        most = np.maximum.reduceat(np.abs(lines.settlement), lines.first_nodes, axis=1)
        settled = most[:, lines.line] * lines.stiffness / length**3
    whole = np.add.reduceat(force[0][:, rows] + settled, firsts, axis=1)
    reach = np.maximum.reduceat(length, firsts)
    force[0][:, rows] = whole[:, lines.line]
    force[1][:, rows] = (whole * reach)[:, lines.line]
    return force

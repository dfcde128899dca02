"""Symmetric systems of two unknowns per node along lines, solved for all lines at once."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ifccheck.mechanics.arrays import Floats, Ints


@dataclass(frozen=True, slots=True)
class Blocks:
    """Block tridiagonal systems, one for each line, with several right-hand sides (K)."""

    first: Ints
    """First node of each line"""
    left: Ints
    """Node before each link between two neighbours of a line (S), in the order of nodes"""
    diagonal: Floats
    """(J, 2, 2)"""
    link: Floats
    """Row of the node before and column of the node after (S, 2, 2)"""
    right_hand: Floats
    """(J, 2, K)"""

    def held(self, springs: Floats, rest: Floats) -> Blocks:
        """The systems with a spring at each unknown.

        Parameters
        ----------
        springs
            (J, 2); inf where the unknown has the value at rest, whatever acts.
        rest
            Values without force in the springs (J, 2, K).
        """
        diagonal, link, right_hand = (
            part.copy() for part in (self.diagonal, self.link, self.right_hand)
        )
        idle = (np.einsum("jii->ji", diagonal) == 0.0) & (springs == 0.0)
        rigid = np.isinf(springs) | idle
        soft = np.where(rigid, 0.0, springs)
        known = np.where(rigid[:, :, None] & ~idle[:, :, None], rest, 0.0)
        if known.any():
            right_hand -= diagonal @ known
            right_hand[self.left] -= link @ known[self.left + 1]
            right_hand[self.left + 1] -= link.transpose(0, 2, 1) @ known[self.left]
        right_hand = np.where(rigid[:, :, None], known, right_hand + soft[:, :, None] * rest)
        loose = ~rigid
        diagonal *= loose[:, :, None] & loose[:, None, :]
        diagonal[:, [0, 1], [0, 1]] += np.where(rigid, 1.0, soft)
        link *= loose[self.left][:, :, None] & loose[self.left + 1][:, None, :]
        return replace(self, diagonal=diagonal, link=link, right_hand=right_hand)


def solve_blocks(blocks: Blocks) -> Floats:
    """The unknowns (J, 2, K), by elimination from one end of each line to the other.

    The systems must be positive definite: every line is held.
    """
    counts = np.diff(blocks.first, append=len(blocks.diagonal))
    order = np.argsort(-counts, kind="stable")
    first, longest = blocks.first[order], int(counts.max(initial=0))
    active = [int((counts > step).sum()) for step in range(longest)]
    link_of = np.zeros(len(blocks.diagonal), np.intp)
    link_of[blocks.left] = np.arange(len(blocks.left))
    inverse, right_hand = blocks.diagonal.copy(), blocks.right_hand.copy()
    for step in range(longest):
        node = first[: active[step]] + step
        if step:
            link = blocks.link[link_of[node - 1]]
            carried = link.transpose(0, 2, 1) @ inverse[node - 1]
            inverse[node] -= carried @ link
            right_hand[node] -= carried @ right_hand[node - 1]
        inverse[node] = _inverse(inverse[node])
    found = np.empty_like(right_hand)
    for step in reversed(range(longest)):
        node = first[: active[step]] + step
        on = node[: active[step + 1]] if step + 1 < longest else node[:0]
        right_hand[on] -= blocks.link[link_of[on]] @ found[on + 1]
        found[node] = inverse[node] @ right_hand[node]
    return found


def _inverse(matrix: Floats) -> Floats:
    """Inverse of matrices (n, 2, 2)."""
    (a, b), (c, d) = matrix.transpose(1, 2, 0)
    inverse: Floats = (np.array([[d, -b], [-c, a]]) / (a * d - b * c)).transpose(2, 0, 1)
    return inverse

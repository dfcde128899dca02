"""What each case asks of the supports of a beam, for its sheet."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

import numpy as np

from ifccheck.beam import Case
from ifccheck.mechanics.arrays import Floats, Ints
from ifccheck.rating.shares import Arising
from ifccheck.rating.subject import Subject


@dataclass(frozen=True, slots=True)
class CaseReaction:
    """What one case, unfactored, asks of the supports."""

    case: str
    """Its name; of one that moves also whether the most or the least is meant"""
    forces: tuple[float, ...]
    """Upward, on the beam, of each support from its start to its end [N]"""
    start_moment: float
    """Moment of the beam just inside [N*mm], sagging positive; 0 where it is pinned"""
    end_moment: float


def reactions_of(
    arisen: Arising, acting: Iterable[tuple[int, Case]], subject: Subject, row: int
) -> Iterator[CaseReaction]:
    """The reactions of the cases that act on a beam, which is a row of its batch."""
    spans = np.flatnonzero(arisen.beam_of == row)
    moving = {load.case for load in subject.loads if load.travel is not None}
    for number, case in acting:
        if case.name in moving:
            yield from _of_train(arisen, number, case.name, spans)
        else:
            forces = _at_supports(arisen.reactions[number, spans])
            yield _reaction(case.name, forces, arisen.end_moments[number], spans)


def _of_train(arisen: Arising, number: int, name: str, spans: Ints) -> Iterator[CaseReaction]:
    """The most and the least that a train asks of each support, wherever it stands: of the whole
    support, also where a line goes on over it."""
    assert arisen.moved is not None
    for which, forces, moments in zip(("most", "least"), *arisen.moved, strict=True):
        at_supports = [forces[number, spans[0], 0], *forces[number, spans, 1]]
        yield _reaction(f"{name}, {which}", at_supports, moments[number], spans)


def _reaction(name: str, forces: Iterable[float], moments: Floats, spans: Ints) -> CaseReaction:
    ends = float(moments[spans[0], 0]), float(moments[spans[-1], 1])
    return CaseReaction(name, tuple(map(float, forces)), *ends)


def _at_supports(of_spans: Floats) -> list[float]:
    """The forces of the supports, of which an inner one serves two spans (S, 2)."""
    forces = np.zeros(len(of_spans) + 1)
    forces[:-1] += of_spans[:, 0]
    forces[1:] += of_spans[:, 1]
    return forces.tolist()

"""Holes and recesses in a body that is whole on both sides of them."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ifccheck.ifc.entity import UnreadableError
from ifccheck.ifc.figures import alike, polygon_of
from ifccheck.ifc.tracing import FINE, Piece

SAME = 0.5
"""Sections before and behind a hole that differ by less than this go on alike [mm]."""

Blemish = tuple[str, float, float]
"""What it is, and where it begins and ends [mm]"""


def bridged(pieces: Sequence[Piece]) -> tuple[list[Piece], tuple[Blemish, ...]]:
    """Return pieces with the section carried on through holes, and the holes.

    A hole may begin and end with a notch: as many pieces beside it as it takes for the section to
    go on alike on both sides belong to it, if they are shorter than the section is deep or wide.

    Raises UnreadableError where the section is in parts and does not go on alike behind them.
    """
    kept = list(pieces)
    holes: list[Blemish] = []
    at = 0
    while at < len(kept):
        if kept[at].kind == "whole":
            at += 1
            continue
        until = next((k for k in range(at, len(kept)) if kept[k].kind == "whole"), len(kept))
        start, end = kept[at].start, kept[until - 1].end
        if end - start < FINE:
            del kept[at:until]
            continue
        span = _span_of_hole(kept, at, until)
        if span is None:
            raise UnreadableError(_in_parts(pieces, start, end))
        first, last = span
        start, end = kept[first].start, kept[last - 1].end
        holes.append(("hole in the body", start, end))
        kept[first:last] = [kept[first - 1].moved_to(start, end)]
        at = first
    if not kept:
        raise UnreadableError("body is in separate parts all along")
    return kept, tuple(holes)


def _span_of_hole(pieces: Sequence[Piece], at: int, until: int) -> tuple[int, int] | None:
    """The pieces that make a hole together with those from ``at`` to ``until``; None where the
    section does not go on alike on both sides of them."""
    if any(piece.kind == "empty" for piece in pieces[at:until]):
        return None
    for first in range(at, 0, -1):
        before = pieces[first - 1]
        if before.kind != "whole" or pieces[at].start - before.end > _size(before):
            return None
        for last in range(until, len(pieces)):
            after = pieces[last]
            if after.kind != "whole" or after.start - pieces[until - 1].end > _size(before):
                break
            if _goes_on(before, after) and _within(before, pieces[first:last]):
                return first, last
    return None


def _size(piece: Piece) -> float:
    """The depth or width of a section, the greater [mm]."""
    return float(np.ptp(piece.last[0], axis=0).max())


def _within(before: Piece, pieces: Sequence[Piece]) -> bool:
    """Whether the sections of pieces lie within the section before them, carried on."""
    return all(
        polygon_of(before.at(x)).buffer(SAME).contains(polygon_of(figure))
        for piece in pieces
        if piece.kind == "whole"
        for x, figure in ((piece.start, piece.first), (piece.end, piece.last))
    )


def _in_parts(pieces: Sequence[Piece], start: float, end: float) -> str:
    origin = pieces[0].start
    return (
        f"section is in separate parts from {(start - origin) / 1e3:.2f} to"
        f" {(end - origin) / 1e3:.2f} m along the body"
    )


def _goes_on(before: Piece, after: Piece) -> bool:
    return alike(before.at(after.start), after.first, SAME)


def without_recesses(runs: Sequence[Piece]) -> tuple[list[Piece], tuple[Blemish, ...]]:
    """Return runs with the section carried on past recesses, and the recesses.

    A recess is a stretch shorter than the section is deep or wide, on which the section lies
    within what it is on both sides, and changes along it. One that is of one section all along
    stays: it makes two steps.
    """
    kept = list(runs)
    recesses: list[Blemish] = []
    at = 1
    while at < len(kept) - 1:
        until = _past_recess(kept, at)
        if until is None:
            at += 1
            continue
        start, end = kept[at].start, kept[until - 1].end
        recesses.append(("recess in the body", start, end))
        before, after = kept[at - 1], kept[until]
        if after.constant == before.constant:
            kept[at - 1 : until + 1] = [before.moved_to(before.start, after.end)]
        else:
            kept[at - 1 : until] = [before.moved_to(before.start, end)]
    return kept, tuple(recesses)


def _past_recess(runs: Sequence[Piece], at: int) -> int | None:
    """The first run behind a recess that begins with run ``at``; None where none does."""
    before = runs[at - 1]
    for until in range(at + 1, len(runs)):
        hollow = runs[until - 1]
        if hollow.end - runs[at].start > _size(before) or not _within(before, [hollow]):
            return None
        shaped = until - at > 1 or not hollow.constant
        if shaped and _goes_on(before, runs[until]):
            return until
    return None

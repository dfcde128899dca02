"""What openings leave of the outlines of a beam, and what slabs add to them.

An opening counts as the box round it, and flange that lies beyond a box is taken as gone too: it
can take no compression over from the web there.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import pairwise
from typing import TYPE_CHECKING

from ifccheck.beam import Flange, Opening, Outline, Reason, Run
from ifccheck.frame.figures import Stretch, figure_of, narrowest, outline_of, parts_of
from ifccheck.units import show

if TYPE_CHECKING:
    from shapely.geometry.base import BaseGeometry

NOTHING = 0.1
"""What takes off less than this takes nothing off [mm]"""
LAP = 1.0
"""How far the box of a flange is taken into the web, so that both become one figure [mm]"""
WIDE = 1e6
"""Beyond every outline [mm]"""


def place_of(opening: Opening) -> str:
    """Where an opening is, for people."""
    return f"opening at x = {show(opening.start, 'length')} to {show(opening.end, 'length')}"


def net_runs(
    runs_of_beam: Sequence[Run], openings: Sequence[Opening], *, beyond: bool = True
) -> tuple[tuple[Run, ...], list[Reason]]:
    """The runs cut where openings begin and end, each with what is left of its outline.

    Tapers stay as they are: no opening may lie in one. Without ``beyond`` flange that lies beyond
    an opening is left: it carries nothing, but weighs.
    """
    runs: list[Run] = []
    gone: list[Reason] = []
    for run in runs_of_beam:
        if run.outline_end is not None:
            runs.append(run)
            continue
        for start, end in _pieces(run, openings):
            here = [one for one in openings if one.start < end and one.end > start]
            whole = figure_of(run.outline)
            figure = without(whole, here, beyond=beyond)
            if figure is whole:
                runs.append(Run(start, end, run.outline))
            elif not parts_of(figure):
                gone.append(Reason(f"{place_of(here[0])} takes the whole section"))
            else:
                left = outline_of(figure, run.outline.name)
                runs.append(Run(start, end, left, whole=run.outline))
    return tuple(runs), gone


def _pieces(run: Run, stretches: Sequence[Opening | Flange]) -> Iterator[Stretch]:
    edges = {run.start, run.end}
    edges |= {x for one in stretches for x in (one.start, one.end) if run.start < x < run.end}
    yield from pairwise(sorted(edges))


def with_flanges(runs: Sequence[Run], flanges: Sequence[Flange]) -> tuple[Run, ...]:
    """The runs cut where flanges begin and end, each with the slab that counts there."""
    return tuple(
        piece
        for run in runs
        for piece in ((run,) if run.outline_end is not None else _flanged(run, flanges))
    )


def _flanged(run: Run, flanges: Sequence[Flange]) -> Iterator[Run]:
    for start, end in _pieces(run, flanges):
        here = [one for one in flanges if one.start < end and one.end > start]
        yield Run(start, end, _with_slab(run.outline, here) if here else run.outline)


def _with_slab(outline: Outline, flanges: Sequence[Flange]) -> Outline:
    from shapely import box

    figure = figure_of(outline)
    for one in flanges:
        right = one.right - (LAP if one.outward > 0.0 else 0.0)
        left = one.left + (LAP if one.outward < 0.0 else 0.0)
        figure = figure.union(box(right, one.bottom, left, one.top))
    return outline_of(figure, outline.name)


def without(
    whole: BaseGeometry, openings: Sequence[Opening], *, beyond: bool = True
) -> BaseGeometry:
    """An outline less the boxes of openings, and less the flange that lies ``beyond`` them."""
    from shapely import box

    if not openings:
        return whole
    figure, (_, (right, left)) = whole, narrowest(whole)
    for one in openings:
        to_right = -WIDE if beyond and one.right < right + NOTHING else one.right
        to_left = WIDE if beyond and one.left > left - NOTHING else one.left
        figure = figure.difference(box(to_right, one.bottom, to_left, one.top))
    return figure if figure.area < whole.area - NOTHING else whole

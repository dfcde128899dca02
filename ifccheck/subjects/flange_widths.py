"""How far the slab that is cast with a beam counts as its flange, by the standard."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from ifccheck.beam import FlangeWidth, RatedBody, RatedSpan, Run
from ifccheck.rating.runs import profile_of
from ifccheck.standards import Standard

SAME = 0.05
"""Overhangs that differ by less are one [mm]"""


def with_widths(body: RatedBody, spans: Sequence[RatedSpan], standard: Standard) -> RatedBody:
    """The body with how far its flanges count, stretch by stretch along it: by its shortest span,
    where it has several."""
    shortest = min(each.length for each in spans)
    widths: list[FlangeWidth] = []
    for run in body.runs:
        held = (one for one in body.flanges if one.start < run.end and one.end > run.start)
        if any(held):
            width = _width(run, shortest, standard)
            if widths and _go_on(widths[-1], width):
                widths[-1] = replace(widths[-1], end=width.end)
            else:
                widths.append(width)
    return replace(
        body,
        widths=tuple(widths),
        width_source=f"{standard.title}, {standard.flange_clause}",
        steel_source=f"{standard.title}, {standard.flange_steel_clause}",
    )


def _width(run: Run, span: float, standard: Standard) -> FlangeWidth:
    left, right, thickness = profile_of(run.outline, run.whole).overhangs
    sizes = dict(
        zip(
            ("left", "right", "thickness", "span"),
            (np.array([value]) for value in (left, right, thickness, span)),
            strict=True,
        )
    )
    pushed, pulled = standard.flange_overhangs(**sizes), standard.flange_steel_overhangs(**sizes)
    return FlangeWidth(run.start, run.end, *(float(side[0]) for side in (*pushed, *pulled)))


def _go_on(one: FlangeWidth, after: FlangeWidth) -> bool:
    """Whether a stretch goes on where another ends, with the same overhangs."""
    names = ("left", "right", "steel_left", "steel_right")
    apart = max(abs(getattr(one, name) - getattr(after, name)) for name in names)
    return abs(after.start - one.end) < SAME and apart < SAME

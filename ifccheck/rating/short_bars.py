"""Tells where a beam has no resistance because its tension bars end short of the place."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from functools import lru_cache

from ifccheck.beam import Bars, Face, Outline, Remark
from ifccheck.rating.results import LimitStateRating
from ifccheck.rating.runs import outline_of
from ifccheck.rating.subject import Subject
from ifccheck.units import show

AT_END = 1.0
"""A bar does nothing so near to its end [mm]"""
TENSIONED: dict[str, Face] = {"FlexureSagging": "bottom", "FlexureHogging": "top"}
"""The face in tension, by limit state"""


def short_bar_remarks(subject: Subject, states: Sequence[LimitStateRating]) -> Iterator[Remark]:
    """Yield why there is no resistance in flexure where bars of that face end before."""
    for state in states:
        face = TENSIONED.get(state.name)
        if face and math.isinf(state.utilisation):
            bars = _bars_of(subject, face, state.position)
            if bars and not any(_reaches(bar, state.position) for bar in bars):
                text = _words(subject, face, bars, state.position)
                yield Remark(subject.beam.key, "rating", text, "doubt")


def _bars_of(subject: Subject, face: Face, x: float) -> list[Bars]:
    low, high = _extent(subject, x)
    middle = (low + high) / 2.0
    return [bar for bar in subject.bars if (bar.z < middle) == (face == "bottom")]


def _extent(subject: Subject, x: float) -> tuple[float, float]:
    """Heights of soffit and top [mm]."""
    return _heights_of(outline_of(subject.runs, x))


@lru_cache(maxsize=4096)
def _heights_of(outline: Outline) -> tuple[float, float]:
    heights = [z for _, z in outline.rings[0]]
    return min(heights), max(heights)


def _reaches(bar: Bars, x: float) -> bool:
    return bar.start + AT_END < x < bar.end - AT_END


def _words(subject: Subject, face: Face, bars: Sequence[Bars], x: float) -> str:
    before = [bar.end for bar in bars if bar.end - AT_END <= x]
    behind = [bar.start for bar in bars if bar.start + AT_END >= x]
    ends = [max(before)] if before else []
    ends += [min(behind)] if behind else []
    places = " and ".join(f"x = {show(end, 'length')}" for end in ends)
    said = f"no tension bars reach beyond x = {show(x, 'length')}: the {face} bars end at {places}"
    return said + _near_support(subject, x)


def _near_support(subject: Subject, x: float) -> str:
    """What to state where the place is within a depth of the end of the span."""
    end = min(subject.ends, key=lambda place: abs(place - x))
    low, high = _extent(subject, x)
    if abs(end - x) > high - low:
        return ""
    return (
        f"; the support is taken at x = {show(end, 'length')}: state the bearing under"
        " [[supports]] or the span under [[beams]]"
    )

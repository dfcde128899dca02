"""Tells where a beam has no resistance because its tension bars end short of the place."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from functools import lru_cache

from ifccheck.beam import Face, Outline, Remark
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
        if state.utilisation == math.inf and state.name in TENSIONED:
            text = _short_bars(subject, TENSIONED[state.name], state.position)
            if text:
                yield Remark(subject.beam.key, "rating", text, "doubt")


def _short_bars(subject: Subject, face: Face, x: float) -> str:
    """Where the bars of a face end that has some, none of which is at work at a place; else ""."""
    low, high = _heights_of(outline_of(subject.runs, x))
    middle = (low + high) / 2.0
    bars = [bar for bar in subject.bars if (bar.z < middle) == (face == "bottom")]
    before = [bar.end for bar in bars if bar.end - AT_END <= x]
    behind = [bar.start for bar in bars if bar.start + AT_END >= x]
    if not bars or any(bar.start + AT_END < x < bar.end - AT_END for bar in bars):
        return ""
    ends = [max(before)] if before else []
    ends += [min(behind)] if behind else []
    return _words(face, x, tuple(ends), _near_support(subject, x, high - low))


@lru_cache(maxsize=4096)
def _heights_of(outline: Outline) -> tuple[float, float]:
    """Heights of soffit and top [mm]."""
    heights = [z for _, z in outline.rings[0]]
    return min(heights), max(heights)


def _near_support(subject: Subject, x: float, depth: float) -> float | None:
    """The end of the span where a place is within a depth of it."""
    start, last = subject.ends
    end = start if abs(start - x) <= abs(last - x) else last
    return end if abs(end - x) <= depth else None


@lru_cache(maxsize=4096)
def _words(face: Face, x: float, ends: tuple[float, ...], support: float | None) -> str:
    """What is short, and what to state where that is near the end of the span."""
    places = " and ".join(f"x = {show(end, 'length')}" for end in ends)
    said = f"no tension bars reach beyond x = {show(x, 'length')}: the {face} bars end at {places}"
    if support is None:
        return said
    return (
        f"{said}; the support is taken at x = {show(support, 'length')}: state the bearing under"
        " [[supports]] or the span under [[beams]]"
    )

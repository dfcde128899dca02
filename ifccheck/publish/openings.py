"""Openings in the elevation of a beam."""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING

from ifccheck.beam import Beam, Opening, Ring, Run
from ifccheck.publish.svg import closed_path, label, number, path
from ifccheck.units import show

if TYPE_CHECKING:
    from ifccheck.publish.elevation import Frame

ALMOST = 1.0
"""How far from the side an opening may end and still be right through [mm]"""
LETTER_WIDTH = 5.1


def drawn_opening(opening: Opening, beam: Beam, frame: Frame) -> str:
    """Return an opening to scale: empty where it is right through, else hidden behind its edge."""
    x0, x1 = frame.x(opening.start), frame.x(opening.end)
    low, high = frame.z(opening.bottom), frame.z(opening.top)
    edge = (
        _ellipse(x0, x1, low, high)
        if opening.shape == "circle"
        else closed_path([(x0, low), (x1, low), (x1, high), (x0, high)])
    )
    kind = "void" if is_through(opening, beam) else "void hidden"
    words = size_words(opening)
    if len(words) * LETTER_WIDTH > x1 - x0:
        return path(edge, kind)
    return path(edge, kind) + label((x0 + x1) / 2, (low + high) / 2 + 3, words, "m")


def size_words(opening: Opening) -> str:
    """Return the size of an opening as it is seen from the side."""
    long, high = opening.end - opening.start, opening.top - opening.bottom
    if opening.shape == "circle":
        return f"Ø {show(long, 'dimension')}"
    return f"{long:.0f} × {high:.0f} mm"


def is_through(opening: Opening, beam: Beam) -> bool:
    """Whether an opening reaches from side to side of the beam at the middle of its height."""
    height = (opening.bottom + opening.top) / 2.0
    for run in beam.runs:
        if run.start < opening.end and run.end > opening.start:
            ys = _sides(run, height)
            if ys and (opening.right > min(ys) + ALMOST or opening.left < max(ys) - ALMOST):
                return False
    return True


def _sides(run: Run, height: float) -> list[float]:
    return [y for ring in run.outline.rings for y in _crossings(ring, height)]


def _crossings(ring: Ring, height: float) -> list[float]:
    return [
        y0 + (y1 - y0) * (height - z0) / (z1 - z0)
        for (y0, z0), (y1, z1) in pairwise((*ring, ring[0]))
        if min(z0, z1) <= height < max(z0, z1)
    ]


def _ellipse(x0: float, x1: float, low: float, high: float) -> str:
    middle, rx, ry = number((low + high) / 2), number((x1 - x0) / 2), number(abs(high - low) / 2)
    arc = f"A{rx} {ry} 0 1 0"
    return f"M{number(x0)} {middle}{arc} {number(x1)} {middle}{arc} {number(x0)} {middle}z"

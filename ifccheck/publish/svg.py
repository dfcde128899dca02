"""The few pieces of SVG that every drawing is made of."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from html import escape
from itertools import pairwise

from ifccheck.publish.words import plain

Place = tuple[float, float]


def number(value: float) -> str:
    """Return a coordinate with one decimal at most.

    >>> number(12.04), number(-0.02), number(3.25)
    ('12', '0', '3.2')
    """
    text = f"{value:.1f}".removesuffix(".0")
    return "0" if text == "-0" else text


def points(places: Iterable[Place]) -> str:
    """Return places as the data of a path, without its first letter."""
    return "L".join(f"{number(x)} {number(y)}" for x, y in places)


def line_path(places: Iterable[Place]) -> str:
    """Return the data of an open path; empty where there is nothing to draw."""
    data = points(places)
    return f"M{data}" if data else ""


def closed_path(places: Iterable[Place]) -> str:
    """Return the data of a closed path."""
    return f"{line_path(places)}z"


def path(data: str, kind: str) -> str:
    """Return a path of one class; nothing where there is no data."""
    return f'<path class="{kind}" d="{data}"/>' if data else ""


def segment(x0: float, y0: float, x1: float, y1: float) -> str:
    """Return the data of a straight line."""
    return f"M{number(x0)} {number(y0)}L{number(x1)} {number(y1)}"


def circle(x: float, y: float, radius: float, kind: str) -> str:
    """Return a circle of one class."""
    return f'<circle class="{kind}" cx="{number(x)}" cy="{number(y)}" r="{number(radius)}"/>'


def label(x: float, y: float, text: str, kind: str = "", turn: float = 0.0) -> str:
    """Return a text of one class, turned about its own place by degrees clockwise."""
    turned = f' transform="rotate({number(turn)} {number(x)} {number(y)})"' if turn else ""
    named = f' class="{kind}"' if kind else ""
    shown = escape(plain(text))
    return f'<text{named} x="{number(x)}" y="{number(y)}"{turned}>{shown}</text>'


def drawing(width: float, height: float, kind: str, title: str, parts: Sequence[str]) -> str:
    """Return a whole drawing that scales with the page and has a name for screen readers."""
    name = escape(plain(title), quote=True)
    return (
        f'<svg class="{kind}" viewBox="0 0 {number(width)} {number(height)}" role="img"'
        f' aria-label="{name}">{"".join(parts)}</svg>'
    )


def thinned(places: Sequence[Place], tolerance: float = 0.06) -> list[Place]:
    """Return a line without the places that lie on the straight between their neighbours.

    >>> thinned([(0, 0), (1, 1), (2, 2), (2, 5)])
    [(0, 0), (2, 2), (2, 5)]
    """
    kept = list(places[:1])
    for before, here in pairwise(places[1:]):
        if not _on_the_straight(kept[-1], before, here, tolerance):
            kept.append(before)
    return kept + list(places[1:][-1:])


def _on_the_straight(first: Place, middle: Place, last: Place, tolerance: float) -> bool:
    width, height = last[0] - first[0], last[1] - first[1]
    across = abs(width * (middle[1] - first[1]) - height * (middle[0] - first[0]))
    forward = width * (middle[0] - first[0]) + height * (middle[1] - first[1])
    length = math.hypot(width, height)
    return across <= tolerance * length and 0.0 <= forward <= length * length

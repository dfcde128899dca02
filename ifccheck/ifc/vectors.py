"""Vectors in space as triples: for a few numbers, several times faster than arrays."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from ifccheck.ifc.entity import UnreadableError

Triple = tuple[float, float, float]


def dot(first: Sequence[float], second: Sequence[float]) -> float:
    """Return the scalar product."""
    return first[0] * second[0] + first[1] * second[1] + first[2] * second[2]


def cross(first: Sequence[float], second: Sequence[float]) -> Triple:
    """Return the vector square to two others."""
    return (
        first[1] * second[2] - first[2] * second[1],
        first[2] * second[0] - first[0] * second[2],
        first[0] * second[1] - first[1] * second[0],
    )


def size(vector: Sequence[float]) -> float:
    """Return the length of a vector."""
    return math.sqrt(dot(vector, vector))


def scaled(vector: Sequence[float], factor: float) -> Triple:
    """Return a vector times a number."""
    return vector[0] * factor, vector[1] * factor, vector[2] * factor


def added(first: Sequence[float], second: Sequence[float]) -> Triple:
    """Return the sum of two vectors."""
    return first[0] + second[0], first[1] + second[1], first[2] + second[2]


def combined(axes: Sequence[Sequence[float]], shares: Sequence[float]) -> Triple:
    """Return the sum of axes times shares, as many of them as there are shares."""
    x = y = z = 0.0
    for axis, share in zip(axes, shares, strict=False):
        x += axis[0] * share
        y += axis[1] * share
        z += axis[2] * share
    return x, y, z


def unit(ratios: Any) -> Triple:
    """Return a direction of two or three ratios as a unit vector."""
    x, y, z = ratios if len(ratios) == 3 else (*ratios, 0.0)
    length = math.sqrt(x * x + y * y + z * z)
    if not math.isfinite(length) or length == 0.0:
        raise UnreadableError("a direction of no length")
    return x / length, y / length, z / length


def rounded(vector: Sequence[float]) -> Triple:
    """Return a vector without the noise of its last digits."""
    x, y, z = vector
    return _rounded(x), _rounded(y), _rounded(z)


def _rounded(value: float) -> float:
    # Most coordinates of directions are whole, and rounding takes ten times as long as asking.
    return value if value % 1.0 == 0.0 else round(value, 9)

"""Quantities of the brief and of its tables: within what is plausible, and positions."""

from __future__ import annotations

import math
import re
from typing import NamedTuple

from ifccheck.brief.model import Position
from ifccheck.units import Kind, QuantityError, clipped, parse_quantity

LEAST_LENGTH = 1.0
"""A line load shorter than this [mm] is taken for a mistake."""


class Range(NamedTuple):
    """A kind of quantity with the least and greatest value that is read, as text."""

    kind: Kind
    least: str
    greatest: str


CONCRETE_STRENGTH = Range("stress", "5 MPa", "200 MPa")
YIELD = Range("stress", "100 MPa", "1500 MPa")
COVER = Range("length", "0 mm", "500 mm")
DENSITY = Range("density", "1000 kg/m3", "4000 kg/m3")


class Written(NamedTuple):
    """A quantity in N, mm, MPa with the text that the engineer wrote."""

    value: float
    text: str


def read_written(text: object, kind: Kind) -> Written:
    """Return a quantity together with its text."""
    return Written(parse_quantity(text, kind), " ".join(str(text).split()))


def read_within(text: object, limits: Range) -> float:
    """Return a quantity in N, mm, MPa; raise QuantityError where it is implausible."""
    value = parse_quantity(text, limits.kind)
    least, greatest = (parse_quantity(limit, limits.kind) for limit in limits[1:])
    if not least <= value <= greatest:
        raise QuantityError(
            f"{clipped(text)} is not plausible: {limits.least} to {limits.greatest} is read"
        )
    return value


_SHARE = re.compile(
    r"(?P<times>\d{1,4}(?:\.\d{1,6})?)?\s*L\s*(?:/\s*(?P<parts>\d{1,4}))?"
    r"\s*(?:(?P<sign>[+-])\s*(?P<length>.+))?"
)
"""A share of the length as drawings have it: L/4, 3L/4, 0.4 L, L - 1.5 m."""


def read_position(text: object) -> Position:
    """Return a place along a beam.

    A length such as ``2.1 m``, or a share such as ``35 %`` or ``L/3``, which may have a length
    added or taken off: ``L - 1.5 m`` is 1.5 m before the end.
    """
    if not isinstance(text, str):
        return Position(parse_quantity(text, "length"), False, str(text))
    if found := _SHARE.fullmatch(text.strip()):
        return _share_of_length(found, text)
    relative = text.rstrip().endswith("%")
    value = parse_quantity(text, "ratio" if relative else "length")
    if value < 0.0:
        raise QuantityError(f"{clipped(text)} is negative: positions count from the beam's start")
    if relative and value > 1.0:
        raise QuantityError(f"{clipped(text)} is beyond the end of the beam")
    return Position(value, relative, text.strip())


def _share_of_length(found: re.Match[str], text: str) -> Position:
    parts = int(found["parts"] or 1)
    share = float(found["times"] or 1) / parts if parts else math.inf
    offset = 0.0
    if found["length"]:
        length = parse_quantity(found["length"], "length")
        offset = -length if found["sign"] == "-" else length
    if share > 1.0 or (share == 1.0 and offset > 0.0):
        raise QuantityError(f"{clipped(text)} is beyond the end of the beam")
    if offset < 0.0 and share == 0.0:
        raise QuantityError(f"{clipped(text)} is before the start of the beam")
    return Position(share, True, " ".join(text.split()), offset)

"""Marks of beams as they are written in a list: one by one, with a wildcard, or as a range."""

from __future__ import annotations

import re

from ifccheck.units import clipped

GREATEST_RANGE = 1000
"""Marks that one range may stand for"""

_NUMBERED = re.compile(r"(?P<before>.*?)(?P<number>[0-9]+)(?P<after>[^0-9]*)", re.DOTALL)
_HOW = "a range is written like B-201..B-204, from the lesser number to the greater"


def expanded(mark: str) -> tuple[str, ...]:
    """Return the marks that a text stands for; raise ValueError where a range makes no sense.

    The marks of a range differ in their last number alone. A number that begins with a zero
    keeps its digits.

    >>> expanded("B-8..B-10")
    ('B-8', 'B-9', 'B-10')
    >>> expanded("B-08N..B-10N")
    ('B-08N', 'B-09N', 'B-10N')
    """
    ends = [_NUMBERED.fullmatch(end.strip()) for end in mark.split("..", 1)]
    first, last = ends[0], ends[-1]
    if len(ends) == 1 or first is None or last is None or "*" in mark:
        return (mark,)
    if (first["before"], first["after"]) != (last["before"], last["after"]):
        raise ValueError(f"{clipped(mark)} differs in more than its last number: {_HOW}")
    digits = _digits(mark, first["number"], last["number"])
    low, high = int(first["number"]), int(last["number"])
    if high <= low:
        raise ValueError(f"{clipped(mark)} does not ascend: {_HOW}")
    if high - low >= GREATEST_RANGE:
        raise ValueError(f"{clipped(mark)} stands for more than {GREATEST_RANGE} marks")
    return tuple(f"{first['before']}{n:0{digits}d}{first['after']}" for n in range(low, high + 1))


def _digits(mark: str, first: str, last: str) -> int:
    """Digits that every number is filled up to with zeros; 0 where none begins with a zero."""
    if not first.startswith("0"):
        return 0
    if len(first) != len(last):
        raise ValueError(f"{clipped(mark)} has numbers of unequal length: {_HOW}")
    return len(first)


def is_exact(marks: tuple[str, ...] | None) -> bool:
    """Return whether it is one mark written out, not a wildcard or a range."""
    return marks is not None and len(marks) == 1 and "*" not in marks[0]

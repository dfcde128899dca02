"""Bars whose bond, or whose stuff, no formula here covers, by what the model says of them."""

from __future__ import annotations

import re
from collections.abc import Iterable

PLAIN = "has a plain surface: the bond of plain bars is not covered"
COATED = "is coated with epoxy: it develops over a longer length, which is not covered"
PLASTIC = "is of reinforced plastic and not of steel: not covered"
_PLAIN_GRADE = re.compile(r"(?<![A-Za-z])(?:HPB|SR)[\s-]?[2-4][0-9]{2}(?![0-9])")
"""Round bars by their grade: GB/T 1499.1, JIS G 3112 (from memory)"""
_COATED = re.compile(r"(?<!non-)(?<!non )(?:epox|époxy)", re.IGNORECASE)
_PLASTIC = re.compile(
    r"(?<![A-Za-z])[ABCG]?FRP(?![A-Za-z])|fib(?:re|er).?glass|glass.?fib(?:re|er)", re.IGNORECASE
)


def not_covered(surface: str, texts: Iterable[str]) -> str:
    """Return why bars are not read; empty where they are covered.

    >>> not_covered("TEXTURED", ["400W"]), not_covered("", ["HPB300"]) == PLAIN
    ('', True)
    >>> not_covered("", ["GFRP 1000"]) == PLASTIC, not_covered("", ["Epoxy 400W"]) == COATED
    (True, True)
    """
    said = " | ".join(texts)
    if _PLASTIC.search(said):
        return PLASTIC
    if surface == "PLAIN" or _PLAIN_GRADE.search(said):
        return PLAIN
    return COATED if _COATED.search(said) else ""

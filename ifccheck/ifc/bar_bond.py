"""Bars whose bond, or whose stuff, no formula here covers, by what the model says of them."""

from __future__ import annotations

import re
from collections.abc import Iterable

PLAIN = "has a plain surface: the bond of plain bars is not covered"
DENIED = (
    "has a plain surface by {one} and a textured one by {other}: plain counts, whose bond is not"
    " covered; let both state what it is"
)
COATED = "is coated with epoxy: it develops over a longer length, which is not covered"
PLASTIC = "is of reinforced plastic and not of steel: not covered"
_PLAIN_GRADE = re.compile(r"(?<![A-Za-z])(?:HPB|SR)[\s-]?[2-4][0-9]{2}(?![0-9])")
"""Round bars by their grade: GB/T 1499.1, JIS G 3112 (from memory)"""
_COATED = re.compile(r"(?<!non-)(?<!non )(?:epox|époxy)", re.IGNORECASE)
_PLASTIC = re.compile(
    r"(?<![A-Za-z])[ABCG]?FRP(?![A-Za-z])|fib(?:re|er).?glass|glass.?fib(?:re|er)", re.IGNORECASE
)


def not_covered(surface: str, texts: Iterable[str], of_type: str = "") -> str:
    """Return why bars are not read; empty where they are covered.

    A type and its bar that state different surfaces leave the worse one.

    >>> not_covered("TEXTURED", ["400W"]), not_covered("", ["HPB300"]) == PLAIN
    ('', True)
    >>> not_covered("", ["GFRP 1000"]) == PLASTIC, not_covered("", ["Epoxy 400W"]) == COATED
    (True, True)
    >>> not_covered("TEXTURED", [], of_type="PLAIN").partition(":")[0]
    'has a plain surface by its type and a textured one by itself'
    """
    said = " | ".join(texts)
    if _PLASTIC.search(said):
        return PLASTIC
    if "PLAIN" in (surface, of_type):
        return _plain(surface, of_type)
    if _PLAIN_GRADE.search(said):
        return PLAIN
    return COATED if _COATED.search(said) else ""


def _plain(surface: str, of_type: str) -> str:
    """Why bars are not read of which at least one of both says that they are plain."""
    if surface == "TEXTURED":
        return DENIED.format(one="its type", other="itself")
    return DENIED.format(one="itself", other="its type") if of_type == "TEXTURED" else PLAIN

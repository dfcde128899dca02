"""Quantities of a rating as people read them: a figure and its unit apart, for columns."""

from __future__ import annotations

import math
import re

from ifccheck.units import ShownKind, show

_WHOLE: tuple[ShownKind, ...] = ("dimension", "stress", "area")
_RAISED = {"2": "²", "3": "³"}
_POWER = re.compile(r"(?<=\bm)[23]\b|(?<=mm)[23]\b")
_NO_DECIMALS = re.compile(r"\.0+(?= )")
SHORTEST_IN_METRES = 2000.0
"""Shorter lengths of a basis, such as a cover, read better in mm."""

KINDS: dict[str, ShownKind] = {
    "length": "dimension",
    "force": "force",
    "line_force": "line_load",
    "moment": "moment",
    "pressure": "stress",
    "area": "area",
}
"""How each measure of the domain is shown."""

UNIT_KINDS: dict[str, ShownKind] = {
    "N*mm": "moment", "N": "force", "mm": "dimension", "mm2": "area", "MPa": "stress",
    "N/mm": "line_load", "rad": "angle",
}  # fmt: skip
"""How a quantity in a unit of the inside is shown."""


def typographic(words: str) -> str:
    """Return units as they are printed: a raised dot in products, raised powers.

    >>> typographic("187.4 kN*m on 1500 mm2")
    '187.4 kN·m on 1500 mm²'
    """
    return _POWER.sub(lambda found: _RAISED[found[0]], words.replace("*", "·"))


def quantity_words(value: float, kind: ShownKind) -> str:
    """Return a quantity with its unit, with a raised dot in products.

    >>> quantity_words(40.0, "dimension"), quantity_words(1.5e8, "moment")
    ('40 mm', '150 kN·m')
    """
    words = typographic(show(value, kind))
    return _NO_DECIMALS.sub("", words) if kind in _WHOLE and value == round(value) else words


def number_and_unit(value: float, unit: str) -> tuple[str, str]:
    """Return a quantity given in a unit of the inside as figure and unit for people.

    >>> number_and_unit(187_400.0, "N"), number_and_unit(0.4, "")
    (('187', 'kN'), ('0.4', ''))
    """
    if not math.isfinite(value):
        return "–", ""
    kind = UNIT_KINDS.get(unit)
    if kind is None:
        return f"{value:.3g}", typographic(unit)
    number, _, shown = quantity_words(value, kind).partition(" ")
    return number, shown


def metres(length: float, unknown: str = "–") -> str:
    """Return a place along a beam in metres, for a column; nothing is never negative.

    >>> metres(2104.0), metres(-0.4), metres(math.nan)
    ('2.10', '0.00', '–')
    """
    return f"{length / 1000.0:z.2f}" if math.isfinite(length) else unknown


def measure_words(value: float | str | bool, measure: str) -> tuple[str, str | None]:
    """Return figure and unit of a thing that a rating rests on; no unit for a text."""
    if isinstance(value, str):
        return value, None
    if isinstance(value, bool) or measure == "logical":
        return ("yes" if value else "no"), None
    if not math.isfinite(value):
        return "not known", None
    kind = KINDS.get(measure)
    if kind is None:
        return f"{value:.4g}", ""
    if measure == "length" and abs(value) >= SHORTEST_IN_METRES:
        kind = "length"
    number, _, unit = quantity_words(value, kind).partition(" ")
    return number, unit

"""What property sets say of the yield strength of bars: a strength, or the name of a grade."""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple

from ifccheck.beam import Given
from ifccheck.ifc.bar_sizes import GREATEST_YIELD, LEAST_YIELD
from ifccheck.ifc.properties import PropertyValue, Sets

GRADE_PROPERTIES = frozenset({"grade", "steelgrade", "steel grade", "structuralgrade"})
YIELD_PROPERTIES = frozenset(
    {"yieldstress", "yield stress", "yieldstrength", "yield strength", "fy", "f_y", "fyk", "f_yk"}
)
"""Names of properties, in lower case, that tell the grade and the yield strength of a bar."""
Texts = tuple[tuple[str, str], ...]
"""Texts, each with the place that it was found in."""


class Yields(NamedTuple):
    """Texts that name a grade, and the least yield strength that is stated."""

    texts: Texts = ()
    stated: Given | None = None


NO_YIELDS = Yields()


def yields_of(sets: Sets, whose: str = "") -> Yields:
    """Return what property sets say of the yield strength of bars."""
    texts: list[tuple[str, str]] = []
    stated: list[Given] = []
    for set_name, values in sets.items():
        for name, value in values.items():
            if name.lower() not in GRADE_PROPERTIES | YIELD_PROPERTIES:
                continue
            source = f"{whose}{set_name}.{name}"
            number = value.number if value.kind == "pressure" else None
            if number is not None and LEAST_YIELD <= number <= GREATEST_YIELD:
                stated.append(Given(number, value.source(source)))
            elif text := _text(value):
                texts.append((source, text))
    return Yields(tuple(texts), least(stated))


def least(stated: Iterable[Given | None]) -> Given | None:
    """Return the least of several strengths; None where there is none."""
    known = [given for given in stated if given is not None]
    return min(known, key=lambda given: given.value, default=None)


def _text(value: PropertyValue) -> str:
    """What a property says as a text; a pressure that no bars have in MPa; nothing for zero."""
    if value.kind == "pressure":
        return f"{value.number:.4g} MPa" if value.number else ""
    given = value.value if isinstance(value.value, tuple) else (value.value,)
    words = (f"{each:g}" if isinstance(each, float) else str(each) for each in given if each)
    return ", ".join(words).strip()

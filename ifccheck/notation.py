"""Bar notation, the same everywhere: ``3-25M``, ``4#8``, ``3H20``; ``2 legs 10M @ 250``.

Three families of bar sizes are known: metric 10M to 55M, #3 to #18, and nominal millimetres.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterable
from dataclasses import dataclass
from difflib import get_close_matches
from functools import cache
from typing import Literal

from ifccheck.beam import BarGroup, Bars, StirrupGroup
from ifccheck.units import INCH, QuantityError, clipped, parse_quantity

Family = Literal["metric", "imperial", "nominal"]

GREATEST_COUNT = 200
GREATEST_LEGS = 24
LEAST_SPACING, GREATEST_SPACING = 25.0, 3000.0

_METRIC = {
    10: (11.3, 100.0),
    15: (16.0, 200.0),
    20: (19.5, 300.0),
    25: (25.2, 500.0),
    30: (29.9, 700.0),
    35: (35.7, 1000.0),
    45: (43.7, 1500.0),
    55: (56.4, 2500.0),
}
"""Diameter [mm] and area [mm2] of CSA G30.18 bars, 10M to 55M."""

_IMPERIAL = {
    3: (0.375, 0.11),
    4: (0.500, 0.20),
    5: (0.625, 0.31),
    6: (0.750, 0.44),
    7: (0.875, 0.60),
    8: (1.000, 0.79),
    9: (1.128, 1.00),
    10: (1.270, 1.27),
    11: (1.410, 1.56),
    14: (1.693, 2.25),
    18: (2.257, 4.00),
}
"""Diameter [in] and area [in2] of ASTM A615 bars, #3 to #18."""

_NOMINAL = (6, 8, 10, 12, 14, 16, 18, 20, 22, 24, 25, 26, 28, 30, 32, 34, 36, 40, 50)
"""Nominal diameters [mm] of bars named by their diameter; the area is that of the circle."""

_DIAMETER_SIGNS = "Øø⌀φΦ∅"
_SIZE = re.compile(
    rf"(?P<metric>[0-9]{{1,3}})M|#\s?(?P<imperial>[0-9]{{1,3}})"
    rf"|(?P<mark>[HTB]|[{_DIAMETER_SIGNS}]\s?)(?P<nominal>[0-9]{{1,3}})(?:\s*mm)?"
)
_PLAIN_SIZE = re.compile(r"([0-9]{1,3})(?:\s*mm)?")
_TERM = re.compile(
    r"(?P<count>[+-]?[0-9]{1,9})\s*"
    r"(?:(?P<times>[x×*])\s*(?P<any>\S.*)|-\s*(?P<dashed>[0-9#A-ZØø⌀φΦ∅].*)"
    r"|(?<=\s)(?P<spaced>[0-9].*)|(?P<joined>(?!M\b)[#A-Za-zØø⌀φΦ∅].*))"
)
_LEGS = r"(?P<{name}>[+-]?[0-9]{{1,9}})\s*-?\s*legs?"
_STIRRUPS = re.compile(
    rf"(?:{_LEGS.format(name='before')}\s+)?(?P<size>[^@]+?)\s*@\s*(?P<spacing>[^@]+?)"
    rf"(?:\s*(?:c/c|o\.c\.|oc))?(?:[\s,]+{_LEGS.format(name='after')})?"
)
_NONE = frozenset({"none", "-", "0", "–", "—"})


class NotationError(ValueError):
    """A text is not bar notation; the message is one line."""


@dataclass(frozen=True, slots=True)
class BarSize:
    """A standard bar: designation, nominal diameter [mm] and area [mm2]."""

    designation: str
    diameter: float
    area: float
    family: Family


@cache
def nominal_sizes() -> tuple[BarSize, ...]:
    """Return every standard bar that the notation knows, family by family, small to large."""
    inch = float(INCH)
    return (
        *(BarSize(f"{n}M", d, a, "metric") for n, (d, a) in _METRIC.items()),
        *(BarSize(f"#{n}", d * inch, a * inch**2, "imperial") for n, (d, a) in _IMPERIAL.items()),
        *(BarSize(f"Ø{d}", float(d), math.pi * d**2 / 4.0, "nominal") for d in _NOMINAL),
    )


@cache
def _sizes() -> dict[str, BarSize]:
    return {size.designation: size for size in nominal_sizes()}


def bar(designation: str) -> BarSize:
    """Return the standard bar of a designation: ``25M``, ``#8``, ``H20``, ``Ø20``, ``20 mm``.

    >>> bar("25M").area, round(bar("#8").diameter, 1), bar("H20").designation
    (500.0, 25.4, 'H20')
    """
    text = designation.strip()
    if plain := _PLAIN_SIZE.fullmatch(text):
        return _known(f"Ø{int(plain[1])}", text)
    found = _SIZE.fullmatch(text)
    if not found:
        raise NotationError(f"{clipped(text)} is not a bar size: {_advice(text)}")
    if found["metric"]:
        return _known(f"{int(found['metric'])}M", text)
    if found["imperial"]:
        return _known(f"#{int(found['imperial'])}", text)
    size = _known(f"Ø{int(found['nominal'])}", text)
    letter = found["mark"] if found["mark"] in "HTB" else "Ø"
    return BarSize(f"{letter}{size.diameter:g}", size.diameter, size.area, size.family)


def _known(designation: str, text: str) -> BarSize:
    size = _sizes().get(designation)
    if size is None:
        family = [n for n in _sizes() if n.strip("0123456789") == designation.strip("0123456789")]
        raise NotationError(f"{clipped(text)} is no standard bar: sizes are {', '.join(family)}")
    return size


def _advice(text: str) -> str:
    if re.fullmatch(r"R\s?[0-9]+", text):
        return "plain round bars are not read"
    near = get_close_matches(text.upper().replace(" ", ""), _sizes(), n=1, cutoff=0.6)
    return f"did you mean {near[0]}?" if near else "write it like 25M, #8, H20 or Ø20"


def parse_bars(text: str) -> tuple[BarGroup, ...]:
    """Return the groups of longitudinal bars that a notation names.

    An empty tuple where the text states that there are none: ``none``, ``-`` or ``0``.

    >>> [(group.count, group.designation) for group in parse_bars("2-20M + 2-15M")]
    [(2, '20M'), (2, '15M')]
    """
    if _states_none(text):
        return ()
    return tuple(_bar_group(term.strip(), text) for term in text.split("+"))


def _states_none(text: str) -> bool:
    if not text.strip():
        raise NotationError("is empty: write it in bar notation, or none")
    return text.strip().lower() in _NONE


def _bar_group(term: str, text: str) -> BarGroup:
    found = _TERM.fullmatch(term)
    if not found:
        raise NotationError(f"{_quoted(term, text)} is not bar notation: {_term_advice(term)}")
    count = int(found["count"])
    if not 1 <= count <= GREATEST_COUNT:
        raise NotationError(
            f"{_quoted(term, text)} has {count} bars: a number from 1 to {GREATEST_COUNT} is needed"
        )
    size_text = found["any"] or found["dashed"] or found["spaced"] or found["joined"]
    if not found["any"] and _PLAIN_SIZE.fullmatch(size_text.strip()):
        raise NotationError(
            f"{_quoted(term, text)} can be read in several ways: write 4x20 for four bars of 20 mm"
        )
    size = bar(size_text)
    return BarGroup(count, size.designation, size.diameter, size.area)


def _quoted(term: str, text: str) -> str:
    return clipped(term) if term == text.strip() else f"{clipped(term)} in {clipped(text)}"


def _term_advice(term: str) -> str:
    if "@" in term:
        return "a spacing belongs to stirrups, bars are given by number like 3-25M"
    if not term or _SIZE.fullmatch(term):
        return "write how many bars of what size, like 3-25M, and + between groups"
    return "write it like 3-25M, 4#8, 3H20 or 4x20, and + between groups"


def parse_stirrups(text: str) -> StirrupGroup | None:
    """Return the stirrups that a notation names, or None where it states that there are none.

    A bare spacing is in mm, but after a # size it needs its unit. ``legs`` is None where the
    text does not say.

    >>> stirrups = parse_stirrups("2 legs H10 @ 150")
    >>> stirrups.designation, stirrups.spacing, stirrups.legs
    ('H10', 150.0, 2)
    """
    if _states_none(text):
        return None
    found = _STIRRUPS.fullmatch(text.strip())
    if not found:
        raise NotationError(
            f"{clipped(text)} is not stirrup notation: write it like 2 legs 10M @ 250 or #4 @ 6 in"
        )
    size = _stirrup_size(found["size"], text)
    legs = _legs(found["before"], found["after"], text)
    spacing = _spacing(found["spacing"], size, text)
    return StirrupGroup(size.designation, size.diameter, size.area, spacing, legs)


def _stirrup_size(size_text: str, text: str) -> BarSize:
    if _TERM.fullmatch(size_text) and not _PLAIN_SIZE.fullmatch(size_text):
        raise NotationError(
            f"{clipped(text)} has a number before the size: write the legs like 2 legs 10M @ 250"
        )
    return bar(size_text)


def _legs(before: str | None, after: str | None, text: str) -> int | None:
    if before and after:
        raise NotationError(f"{clipped(text)} gives the legs twice")
    stated = before or after
    if stated is None:
        return None
    if not 1 <= int(stated) <= GREATEST_LEGS:
        raise NotationError(
            f"{clipped(text)} has {int(stated)} legs: a number from 1 to {GREATEST_LEGS} is needed"
        )
    return int(stated)


def _spacing(stated: str, size: BarSize, text: str) -> float:
    bare = re.fullmatch(r"[+-]?[0-9]+(\.[0-9]+)?", stated)
    if bare and size.family == "imperial":
        raise NotationError(f"{clipped(text)} has a spacing without unit: write it like #4 @ 6 in")
    try:
        spacing = parse_quantity(f"{stated} mm" if bare else stated, "length")
    except QuantityError as error:
        raise NotationError(f"{clipped(text)}: the spacing {error}") from None
    if not LEAST_SPACING <= spacing <= GREATEST_SPACING:
        raise NotationError(
            f"{clipped(text)} has a spacing of {spacing:g} mm (a bare number is mm):"
            f" {LEAST_SPACING:g} to {GREATEST_SPACING:g} mm is read"
        )
    return spacing


def show_bars(groups: tuple[BarGroup, ...]) -> str:
    """Return groups of bars in notation: ``3-25M + 2-20M``; ``none`` for no bars."""
    return " + ".join(f"{group.count}-{group.designation}" for group in groups) or "none"


def show_stirrups(stirrups: StirrupGroup) -> str:
    """Return stirrups in notation: ``2 legs 10M @ 250 mm``."""
    legs = "" if stirrups.legs is None else f"{stirrups.legs} legs "
    return f"{legs}{stirrups.designation} @ {stirrups.spacing:g} mm"


_SAME_PLACE = 1e-6
_STEEPEST_BEND = 0.5
"""Rise of a face for each mm beyond which bars do not follow it in pieces"""


def bars_in_a_row(bars: Iterable[Bars]) -> list[tuple[Bars, ...]]:
    """Bars, each with the pieces of it that go on at another height along a taper."""
    rows: list[list[Bars]] = []
    for bar in bars:
        before = next((row for row in rows if _goes_on(row[-1], bar)), None)
        if before is None:
            rows.append([bar])
        else:
            before.append(bar)
    return [tuple(row) for row in rows]


def _goes_on(before: Bars, bar: Bars) -> bool:
    """Whether a bar is the next piece of another."""
    rise = abs(bar.z - before.z)
    return (
        abs(before.end - bar.start) < _SAME_PLACE
        and 0.0 < rise <= _STEEPEST_BEND * min(bar.end - bar.start, before.end - before.start)
        and (bar.designation, bar.diameter, bar.count, bar.origin)
        == (before.designation, before.diameter, before.count, before.origin)
    )

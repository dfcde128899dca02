"""Concrete strength in the texts by which people name concretes.

The strength read is the specified cylinder strength [MPa]. A name that can mean a cylinder or
a cube is read both ways and the lower counts.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import lru_cache

from ifccheck.ifc.vocabulary import CONCRETE, REBAR, STEEL, families_of_material

CUBE_TO_CYLINDER = 0.8
"""Cylinder strength over cube strength of normal concrete, the usual lower value."""
MPA_PER_PSI = 6.894757293168361e-3
LEAST, MOST = 5.0, 150.0
"""Strengths outside these are misread units [MPa]."""
AGREE = 0.01
"""Relative difference below which two sources agree."""

_NUMBER = r"\d+(?:[.,]\d+)*"
_UNIT = (
    r"k\.?s\.?i|p\.?s\.?i|mpa|kpa|mn\s*/\s*m|n\s*/\s*mm|kgf?\s*/\s*cm|ksc|lbf?\s*/\s*in|n(?![a-z/])"
)
_APART = r"\s*(?:[-–—/&]|\.\.|,\s|to|or|and)\s*"
_PRIME = "['’`′´]"
_AGE = r"(?:[\s,(_@]*\d+(?:\s*-?\s*d(?:ays?)?(?![a-z])|(?=\s*\)?\s*[=:]))[\s)]*)?"
"""After f'c: the age of the specimens, "56d" or "28 =", not their strength."""
_NO_AGE = r"(?!\d|[.,]\d|\s*-?\s*d(?:ays?)?(?![a-z]))"
_VALUES = rf"{_AGE}[\s=:)]*({_NUMBER}(?:(?:{_APART}|\s+){_NUMBER}){{0,20}}){_NO_AGE}\s*({_UNIT})?"
"""One number or several; a first one without a word may be an age: all are looked at."""
CUBE = re.compile(rf"(?<![a-z])(?:fcu|rck|f{_PRIME}?[ck]{{1,2}},? ?cube){_VALUES}", re.I)
CYLINDER = re.compile(rf"(?<![a-z])f{_PRIME}?c{_PRIME}?k?{_VALUES}", re.I)
TWO_STRENGTHS = re.compile(r"(?<![\d.,])(\d{2,3}) ?/ ?(\d{2,3})(?![\d.])")
WITH_UNIT = re.compile(
    rf"(?<![a-z\d.,])({_NUMBER}(?:{_APART}{_NUMBER}){{0,20}})[\s-]*({_UNIT})", re.I
)
SPANISH = re.compile(r"(?<![a-z])h[aplm]-? ?(\d{2,3})(?!\d)", re.I)
AMBIGUOUS = re.compile(
    rf"(?<![a-z])(?<!{_PRIME})(?:[bckm]|lc|rcc?|gr(?:ade)?\.?)[ _]?-?(\d{{2}})"
    r"(?![\d/]|[.,]\d|\s*[x×])",
    re.I,
)
BARE = re.compile(r"\s*(\d{2,3}(?:\.\d+)?)\s*$")
THOUSANDS = re.compile(r"\d{1,3}(?:,\d{3})+(?:\.\d+)?")

NUMBER_WITH_UNIT = re.compile(rf"\d\s*(?:{_UNIT})", re.I)
SPEAKS_OF_STRENGTH = re.compile(
    rf"(?<![a-z])f{_PRIME}c|(?<![a-z])(?:fcu|rck|fck?\s*[=:])|\d{{4}}\s*#(?!\s*\d)"
    r"|(?<!fire )(?<!exposure )(?:strength|grade|class)[^\d]{0,12}\d{2}"
    r"|(?<![a-z])[bckmhns]-?\d{2,3}(?![\da-z/]|[.,]\d|\s*[x×])"
    r"|(?<![a-z])l?c[\W_]{0,2}\d{2,3}\s*/\s*\d{2,3}"
    r"|(?:concrete|beton|béton|hormig[oó]n|concreto)\W{0,3}(?:[1-9]\d|[2-9]\d{3})(?![\d/.,]|\s*[a-z×%])",
    re.I,
)
"""Words of a strength, whether or not it can be read."""
SPEAKS_OF_BARS = re.compile(
    r"rebar|steel|stahl|acero|acier|(?<![a-z])(?:bars?|fy|stirrups?)(?![a-z])", re.I
)
SPEAKS_OF_CUBES = re.compile(r"cub(?:es?|ic|os?|a|ica)(?![a-z])|w(?:ü|ue)rfel", re.I)
UNSET = frozenset(
    {
        "",
        "-",
        "none",
        "n/a",
        "na",
        "null",
        "unset",
        "unknown",
        "undefined",
        "notdefined",
        "notknown",
        "userdefined",
        "other",
        "by others",
        "<none>",
    }
)
"""What exporters write where nobody stated a class, folded."""

Range = tuple[float, float]
"""The lowest and the highest strength that a piece of text can mean [MPa]."""
MISREAD_UNITS = (1e-6, 1e-3, 1e3, 1e6, MPA_PER_PSI, 1e3 * MPA_PER_PSI)
"""What a number may have to be multiplied by, where its unit is wrong."""


@dataclass(frozen=True, slots=True)
class Reading:
    """A strength that one source gives: the lowest and the highest that it can mean [MPa]."""

    low: float
    high: float
    source: str
    others: tuple[float, ...] = ()
    """Other strengths that the same text gives [MPa]; the lowest counts."""

    @property
    def doubtful(self) -> bool:
        """Tell whether it can be read two ways."""
        return _doubtful((self.low, self.high))

    def admits(self, value: float) -> bool:
        """Tell whether it can mean a value."""
        return _admits((self.low, self.high), value)


@dataclass(frozen=True, slots=True)
class Unread:
    """A source that speaks of a strength which cannot be read from it."""

    source: str
    value: float = math.nan
    """The number that it gives [MPa], where it gives one that no concrete has."""

    def at_least(self, strength: float) -> bool:
        """Tell whether the number is no lower than a strength, whatever unit was meant."""
        meant = [self.value * factor for factor in MISREAD_UNITS]
        return not math.isnan(self.value) and all(
            each >= strength * (1.0 - AGREE) for each in meant if is_credible((each, each))
        )


@lru_cache(maxsize=4096)
def read_strength_text(text: str, source: str, bare: bool = False) -> Reading | Unread | None:
    """Return the cylinder strength that a text names, None where it speaks of none.

    ``bare``: the text is a strength class, so that a number alone counts too, and that what is
    not understood is a strength that cannot be read.
    """
    if text.strip().casefold() in UNSET or (not bare and is_only_steel(text)):
        return None
    found, rest = _ranges(text)
    if not found and bare and (match := BARE.match(text)):
        found = [_cube_or_cylinder(float(match[1]))]
    if any(math.isnan(low) for low, _ in found) or NUMBER_WITH_UNIT.search(rest):
        return Unread(source)
    credible = [each for each in found if is_credible(each)]
    if not credible and not found:
        return Unread(source) if bare or SPEAKS_OF_STRENGTH.search(text) else None
    if not credible:
        return Unread(source, found[0][0] or math.nan if len(found) == 1 else math.nan)
    if all(map(_doubtful, credible)) and SPEAKS_OF_BARS.search(text):
        return Unread(source)  # a grade of the bars, perhaps
    low, high = lowest_of(credible)
    return Reading(
        low, high, source, tuple(dict.fromkeys(a for a, b in found if not _admits((a, b), low)))
    )


def is_only_steel(text: str) -> bool:
    """Tell whether a text names steel and not concrete."""
    families = families_of_material(text)
    return bool(families & {REBAR, STEEL}) and CONCRETE not in families


def _ranges(text: str) -> tuple[list[Range], str]:
    """Every strength in a text, and what they leave of it; nan where a number is none."""
    found: list[Range] = []
    for pattern, read in READERS:
        for match in pattern.finditer(text):
            ranges = read(match)
            found += ranges
            if ranges:
                text = text[: match.start()] + " " * len(match[0]) + text[match.end() :]
    return found, text


def _cubes(match: re.Match[str]) -> list[Range]:
    return [(CUBE_TO_CYLINDER * low, CUBE_TO_CYLINDER * high) for low, high in _cylinders(match)]


def _cylinders(match: re.Match[str]) -> list[Range]:
    """Strengths named as such: nothing else in the text makes up for one that cannot be."""
    values = _values(match)
    credible = all(is_credible((value, value)) for value in values)
    return [(value, value) if credible else (math.nan, math.nan) for value in values]


def _values(match: re.Match[str]) -> list[float]:
    """The numbers of a match in its unit [MPa]."""
    return [_in_mpa(number, match[2]) for number in re.findall(_NUMBER, match[1])]


def _classes(match: re.Match[str]) -> list[Range]:
    """A strength class of cylinder and cube, and not, say, two sides of a section."""
    cylinder, cube = float(match[1]), float(match[2])
    is_class = 0.0 < cylinder <= MOST and 1.05 <= cube / cylinder <= 1.4
    return [(cylinder, cylinder)] if is_class else []


def _with_unit(match: re.Match[str]) -> list[Range]:
    """One number with its unit, or several: "25-30 MPa"; those in N may be of cubes."""
    if match[2].lower() == "n" or _speaks_of_cubes(match.string):
        return [_cube_or_cylinder(value) for value in _values(match)]
    return [(value, value) for value in _values(match)]


@lru_cache(maxsize=1)
def _speaks_of_cubes(text: str) -> bool:
    return SPEAKS_OF_CUBES.search(text) is not None


def _in_name(match: re.Match[str]) -> list[Range]:
    return [(float(match[1]),) * 2]


def _either(match: re.Match[str]) -> list[Range]:
    return [_cube_or_cylinder(float(match[1]))]


def _cube_or_cylinder(value: float) -> Range:
    return CUBE_TO_CYLINDER * value, value


READERS: tuple[tuple[re.Pattern[str], Callable[[re.Match[str]], list[Range]]], ...] = (
    (CUBE, _cubes),
    (CYLINDER, _cylinders),
    (TWO_STRENGTHS, _classes),
    (WITH_UNIT, _with_unit),
    (SPANISH, _in_name),
    (AMBIGUOUS, _either),
)
"""How strengths are written, in the order in which they are looked for."""


def _in_mpa(number: str, unit: str | None) -> float:
    """A strength [MPa]; nan where the number is not written as one with a decimal point."""
    if "," in number and not THOUSANDS.fullmatch(number):
        return math.nan
    if number.count(".") > 1:
        return math.nan
    value = float(number.replace(",", ""))
    folded = re.sub(r"[\s.]", "", unit or "").lower()
    if not folded:
        return value * (MPA_PER_PSI if value >= 1000.0 else 1.0)
    return value * UNITS[folded]


UNITS = {
    "ksi": 1e3 * MPA_PER_PSI,
    "psi": MPA_PER_PSI,
    "lb/in": MPA_PER_PSI,
    "lbf/in": MPA_PER_PSI,
    "mpa": 1.0,
    "kpa": 1e-3,
    "mn/m": 1.0,
    "n/mm": 1.0,
    "n": 1.0,
    "kg/cm": 0.0980665,
    "kgf/cm": 0.0980665,
    "ksc": 0.0980665,
}
"""MPa in each unit as it is written in names, folded; exponents left out."""


def is_credible(one: Range) -> bool:
    """Tell whether it is a strength that concrete has."""
    return one[0] >= LEAST and one[1] <= MOST


def _doubtful(one: Range) -> bool:
    return one[1] > one[0] * (1.0 + AGREE)


def _admits(one: Range, value: float) -> bool:
    return one[0] * (1.0 - AGREE) <= value <= one[1] * (1.0 + AGREE)


def lowest_of(ranges: Sequence[Range]) -> Range:
    """The lowest strength; what can be read two ways is read as the surest of the others."""
    chosen = min([each for each in ranges if not _doubtful(each)] or ranges)
    return min(each for each in ranges if each == chosen or not _admits(each, chosen[0]))

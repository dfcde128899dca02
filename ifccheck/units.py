"""Quantities at the rim: text with a unit in, text for people out.

Inside the program lengths are mm, forces N, stresses MPa, moments N*mm and angles rad.
Only the units of the closed table below are read, and case counts.
"""

from __future__ import annotations

import math
import re
from difflib import get_close_matches
from fractions import Fraction
from functools import lru_cache
from typing import Literal, NamedTuple, get_args

from ifccheck.errors import BriefError

Kind = Literal[
    "length", "force", "line_load", "area_load", "stress", "moment", "unit_weight", "density",
    "angle", "ratio",
]  # fmt: skip
ShownKind = Kind | Literal["dimension", "area"]
Rounding = Literal["nearest", "down", "up"]

FOOT, INCH = Fraction("304.8"), Fraction("25.4")
KILOGRAM_FORCE = Fraction("9.80665")
POUND = Fraction("0.45359237")
POUND_FORCE = POUND * KILOGRAM_FORCE

_METRIC_LENGTHS = {"m": Fraction(1000), "cm": Fraction(10), "mm": Fraction(1)}
_METRIC_FORCES = {
    "N": Fraction(1),
    "kN": Fraction(1000),
    "kgf": KILOGRAM_FORCE,
    "tf": 1000 * KILOGRAM_FORCE,
}
_US_LENGTHS = {"ft": FOOT, "in": INCH}
_US_FORCES = {"lbf": POUND_FORCE, "kip": 1000 * POUND_FORCE}
_FAMILIES = ((_METRIC_FORCES, _METRIC_LENGTHS), (_US_FORCES, _US_LENGTHS))


def _per_length(power: int) -> dict[str, Fraction]:
    mark = "" if power == 1 else str(power)
    return {
        f"{force}/{length}{mark}": newtons / millimetres**power
        for forces, lengths in _FAMILIES
        for force, newtons in forces.items()
        for length, millimetres in lengths.items()
    }


_PRESSURES = {
    **_per_length(2),
    "kPa": Fraction(1, 1000),
    "MPa": Fraction(1),
    "psf": POUND_FORCE / FOOT**2,
    "ksf": 1000 * POUND_FORCE / FOOT**2,
    "psi": POUND_FORCE / INCH**2,
    "ksi": 1000 * POUND_FORCE / INCH**2,
}

UNITS: dict[Kind, dict[str, Fraction]] = {
    "length": {**_METRIC_LENGTHS, **_US_LENGTHS},
    "force": {**_METRIC_FORCES, **_US_FORCES},
    "line_load": {
        **_per_length(1),
        "plf": POUND_FORCE / FOOT,
        "klf": 1000 * POUND_FORCE / FOOT,
    },
    "area_load": _PRESSURES,
    "stress": _PRESSURES,
    "moment": {
        f"{force}*{length}": newtons * millimetres
        for forces, lengths in _FAMILIES
        for force, newtons in forces.items()
        for length, millimetres in lengths.items()
    },
    "unit_weight": {
        **{f"{force}/m3": newtons / 10**9 for force, newtons in _METRIC_FORCES.items()},
        **{f"{force}/ft3": newtons / FOOT**3 for force, newtons in _US_FORCES.items()},
        "pcf": POUND_FORCE / FOOT**3,
    },
    "density": {
        "kg/m3": Fraction(1),
        "lb/ft3": POUND / (FOOT / 1000) ** 3,
        "pcf": POUND / (FOOT / 1000) ** 3,
    },
    "angle": {"deg": Fraction(math.pi) / 180, "rad": Fraction(1)},
    "ratio": {"%": Fraction(1, 100)},
}
"""Factor to N, mm, MPa (density kg/m3, angle rad) of every unit that is read; exact, so that
2.01 m is 2010 mm and not the next number below it."""


class _Display(NamedTuple):
    name: str
    example: str
    limit: str
    """The greatest size that is read, as text with its unit."""
    unit: str
    factor: float


_DISPLAY: dict[ShownKind, _Display] = {
    "length": _Display("a length", "2.1 m", "1000 m", "m", 1e3),
    "force": _Display("a force", "60 kN", "1000000 kN", "kN", 1e3),
    "line_load": _Display("a load per length", "3.2 kN/m", "100000 kN/m", "kN/m", 1.0),
    "area_load": _Display("a load per area", "1.5 kN/m2", "10000 kN/m2", "kN/m2", 1e-3),
    "stress": _Display("a stress", "30 MPa", "10000 MPa", "MPa", 1.0),
    "moment": _Display("a moment", "12 kN*m", "10000000 kN*m", "kN*m", 1e6),
    "unit_weight": _Display("a unit weight", "23.5 kN/m3", "100 kN/m3", "kN/m3", 1e-6),
    "density": _Display("a density", "2400 kg/m3", "10000 kg/m3", "kg/m3", 1.0),
    "angle": _Display("an angle", "35 deg", "360 deg", "deg", math.pi / 180.0),
    "ratio": _Display("a share", "35 %", "1000 %", "%", 0.01),
    "dimension": _Display("a dimension", "400 mm", "", "mm", 1.0),
    "area": _Display("an area", "500 mm2", "", "mm2", 1.0),
}

TINY = 1e-3
"""What is smaller than this, in the unit that people read, is shown with a power of ten."""

_MASSES = {"kg": "kgf", "t": "tf", "tonne": "tf", "ton": "kip", "lb": "lbf", "lbs": "lbf"}
_NUMBER = r"(?:[0-9]{1,20}(?:\.[0-9]{1,30})?|\.[0-9]{1,30})(?:[eE][+-]?[0-9]{1,3})?"
_QUANTITY = re.compile(rf"\s*([+-]?{_NUMBER})\s*([A-Za-z%].*?)\s*")
_BARE = re.compile(rf"\s*[+-]?{_NUMBER}\s*")
_COMMA = re.compile(r"\s*[+-]?[0-9.]*[0-9],[0-9].*")
_NOT_FINITE = re.compile(r"\s*[+-]?(nan|inf|infinity)\b.*", re.IGNORECASE)
_FEET = r"\s*(?P<sign>[+-]?)(?P<feet>[0-9]{1,6})"
_INCHES = r"(?P<inches>[0-9]{1,2}(?:\.[0-9]{1,30})?)"
_FRACTION = r"(?:[ -](?P<upper>[0-9]{1,3})/(?P<lower>[0-9]{1,3}))?"
_FEET_AND_INCHES = (
    re.compile(rf"{_FEET}\s*ft\s+{_INCHES}{_FRACTION}\s*in\s*"),
    re.compile(rf"{_FEET}'\s*-?\s*{_INCHES}{_FRACTION}\s*\"\s*"),
)
_QUOTES = re.compile(rf"\s*([+-]?{_NUMBER})\s*(['\"])\s*")


class QuantityError(ValueError):
    """A text is not a quantity of the kind that is needed; the message is one line."""


def read_quantity(text: object, kind: Kind, where: str) -> float:
    """Return the quantity that a person wrote, in N, mm, MPa (density kg/m3, angle rad).

    ``where`` names the file and the key; a text that is not such a quantity raises BriefError.

    >>> read_quantity("3.2 kN/m", "line_load", "brief.toml: loads[0].line")
    3.2
    """
    try:
        return parse_quantity(text, kind)
    except QuantityError as error:
        raise BriefError(f"{where}: {error}") from None


def parse_quantity(text: object, kind: Kind) -> float:
    """Return the quantity in N, mm, MPa; raise QuantityError with what is wrong.

    >>> parse_quantity("12 ft 6 in", "length")
    3810.0
    """
    if not isinstance(text, str):
        raise QuantityError(_no_unit(text, kind))
    value = _feet_and_inches(text) if kind == "length" else None
    if value is None:
        value = _number_and_unit(text, kind)
    if abs(value) > _limit(kind):
        raise QuantityError(
            f"{clipped(text)} is beyond {_DISPLAY[kind].limit}, the greatest"
            f" {_DISPLAY[kind].name.split(' ', 1)[1]} that is read"
        )
    return float(value)


def clipped(text: object, length: int = 40) -> str:
    """Return a text in quotes on one line, cut to a length that a message can hold."""
    shown = repr(text)
    return shown if len(shown) <= length else f"{shown[: length - 4]}...'"


def _limit(kind: Kind) -> Fraction:
    number, unit = _DISPLAY[kind].limit.split()
    return Fraction(number) * UNITS[kind][unit]


def _number_and_unit(text: str, kind: Kind) -> Fraction:
    found = _QUANTITY.fullmatch(text)
    if not found:
        raise QuantityError(_malformed(text, kind))
    number, unit = Fraction(found[1]), found[2]
    factor = UNITS[kind].get(unit)
    if factor is None:
        raise QuantityError(_wrong_unit(text, unit, kind))
    return number * factor


def _feet_and_inches(text: str) -> Fraction | None:
    """Length of ``12 ft 6 in``, ``12'-6"``, ``12'`` or ``6"``; None for any other text."""
    if found := _QUOTES.fullmatch(text):
        return Fraction(found[1]) * (FOOT if found[2] == "'" else INCH)
    found = next(filter(None, (pattern.fullmatch(text) for pattern in _FEET_AND_INCHES)), None)
    if not found:
        return None
    inches = _inches(found["inches"], found["upper"], found["lower"])
    if inches >= 12:
        raise QuantityError(
            f"{clipped(text)} has {float(inches):g} inches after the feet: write 0 to 11"
        )
    length = int(found["feet"]) * FOOT + inches * INCH
    return -length if found["sign"] == "-" else length


def _inches(whole: str, upper: str | None, lower: str | None) -> Fraction:
    if not upper or not lower:
        return Fraction(whole)
    if int(lower) == 0 or int(upper) >= int(lower):
        raise QuantityError(f"'{whole} {upper}/{lower}' inches is not a proper fraction")
    return Fraction(whole) + Fraction(int(upper), int(lower))


def _no_unit(text: object, kind: Kind) -> str:
    shown = _DISPLAY[kind]
    if isinstance(text, bool) or not isinstance(text, int | float):
        return f'{clipped(text)} is not {shown.name}: write it like "{shown.example}"'
    if not math.isfinite(text):
        return f'{text} is not a finite number: write {shown.name} like "{shown.example}"'
    return f'{text} has no unit: write {shown.name} as text like "{shown.example}"'


def _malformed(text: str, kind: Kind) -> str:
    shown = _DISPLAY[kind]
    if not text.strip():
        return f'is empty: write {shown.name} like "{shown.example}"'
    if _BARE.fullmatch(text):
        return f'{clipped(text)} has no unit: write {shown.name} like "{shown.example}"'
    if _COMMA.fullmatch(text):
        return (
            f"{clipped(text)} has a comma: write the number with a decimal point and no"
            f' thousands separator, like "{shown.example}"'
        )
    if _NOT_FINITE.fullmatch(text):
        return f'{clipped(text)} is not a finite number: write {shown.name} like "{shown.example}"'
    return f'{clipped(text)} is not {shown.name}: write it like "{shown.example}"'


def _wrong_unit(text: str, unit: str, kind: Kind) -> str:
    if kind != "density" and (force := _force_for_mass(unit)):
        return f"{clipped(text)} is a mass where {_DISPLAY[kind].name} is needed: {force}"
    others = [other for other in get_args(Kind) if unit in UNITS[other]]
    if others:
        return (
            f"{clipped(text)} is {_DISPLAY[others[0]].name}, but {_DISPLAY[kind].name} is"
            f' needed: write it like "{_DISPLAY[kind].example}"'
        )
    return _not_a_unit(text, unit, kind)


def _not_a_unit(text: str, unit: str, kind: Kind) -> str:
    close = _meant(unit, kind)
    advice = f"did you mean {close}?" if close else f"use one of {', '.join(UNITS[kind])}"
    return f"{clipped(text)} has the unknown unit {clipped(unit)}: {advice}"


def _force_for_mass(unit: str) -> str | None:
    mass, separator, rest = re.fullmatch(r"([A-Za-z]*)([/*]?)(.*)", unit, re.DOTALL).groups()  # type: ignore[union-attr]
    if mass not in _MASSES:
        return None
    force = f"{_MASSES[mass]}{separator}{rest}"
    metric = f"kN{separator}{rest}"
    choices = [u for u in (force, metric) if any(u in table for table in UNITS.values())]
    return f"write a force, in {' or '.join(choices or [_MASSES[mass], 'kN'])}"


def _meant(unit: str, kind: Kind) -> str | None:
    """The unit of this kind that was probably meant: other case, other signs, plural."""
    known = {_plain(name): name for name in UNITS[kind]}
    if same := known.get(_plain(unit)) or known.get(_plain(unit).removesuffix("s")):
        return same
    near = get_close_matches(_plain(unit), known, n=1, cutoff=0.8)
    return known[near[0]] if near else None


def _plain(unit: str) -> str:
    return re.sub(r"[^a-z0-9/%]", "", unit.lower().replace("²", "2").replace("³", "3"))


@lru_cache(maxsize=8192)
def show(
    value: float, kind: ShownKind, digits: int | None = None, rounding: Rounding = "nearest"
) -> str:
    """Return a quantity for people, in kN, kN*m, m, mm, MPa.

    Three significant digits unless ``digits`` says otherwise, never fewer than the whole
    number has; lengths with two decimals. ``rounding="down"`` is for what must not be
    overstated, such as a safe load.

    >>> show(84_249.0, "force"), show(2100.0, "length"), show(1_234_567.0, "force")
    ('84.2 kN', '2.10 m', '1235 kN')
    """
    if math.isnan(value):
        return "not known"
    if math.isinf(value):
        return "infinite" if value > 0 else "-infinite"
    shown = _DISPLAY[kind]
    number = value / shown.factor
    decimals = 2 if kind == "length" and digits is None else _decimals(number, digits or 3)
    if rounding == "nearest" and 0.0 < abs(number) < TINY and kind != "length":
        return f"{number:.{(digits or 3) - 1}e} {shown.unit}"
    return f"{_rounded(number, decimals, rounding)} {shown.unit}"


def _decimals(number: float, digits: int) -> int:
    if number == 0.0:
        return 0
    return min(max(digits - 1 - math.floor(math.log10(abs(number))), 0), 6)


def _rounded(number: float, decimals: int, rounding: Rounding) -> str:
    scaled = number * 10**decimals
    if rounding != "nearest" and not math.isclose(scaled, round(scaled), rel_tol=1e-12):
        scaled = math.floor(scaled) if rounding == "down" else math.ceil(scaled)
        number = scaled / 10**decimals
    text = f"{number:.{decimals}f}"
    if number == 0.0:
        return "0"
    return text.removeprefix("-") if float(text) == 0.0 else text


def show_ratio(ratio: float) -> str:
    """Return a utilisation or rating factor for people, on the right side of 1 and of 0.

    Two decimals; three or four where fewer would round to 1; ``>1`` or ``<1`` beyond that. A
    positive ratio never reads as nothing.

    >>> show_ratio(0.836), show_ratio(1.0), show_ratio(1.0004), show_ratio(0.996)
    ('0.84', '1.00', '1.0004', '0.996')
    >>> show_ratio(1.0 + 1e-9), show_ratio(0.001)
    ('>1', '<0.01')
    """
    if math.isnan(ratio):
        return "not known"
    if math.isinf(ratio):
        return "infinite"
    if 0.0 < ratio < 0.005:
        return "<0.01"
    for decimals in (2, 3, 4):
        text = f"{ratio:.{decimals}f}"
        if float(text) != 1.0 or ratio == 1.0:
            return text
    return ">1" if ratio > 1.0 else "<1"

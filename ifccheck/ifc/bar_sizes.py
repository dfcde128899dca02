"""How thick a bar is and how strong its steel, from all that the model says of it."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable
from dataclasses import dataclass

from ifccheck.beam import Given
from ifccheck.notation import BarSize as StandardBar
from ifccheck.notation import nominal_sizes

AGREEMENT = 1.05
"""Ratio of areas up to which two sources say the same."""
LEAST_DIAMETER, GREATEST_DIAMETER = 4.0, 80.0
"""Reinforcing bars are as thick as this [mm]; anything else is a slip of units."""
SAME_DIAMETER = 0.06
"""Difference [mm] within which a diameter is that of a standard bar."""
NAMED_DIAMETER = 1.26
"""Ratio of diameters up to which a size in a name or a property may mean the bar."""
ROUNDED = 1.005
"""Ratio of diameters within which one is still that of a polygon's circle."""
LEAST_YIELD, GREATEST_YIELD = 200.0, 1000.0
"""Yield strengths of reinforcing bars [MPa] lie between these."""
KSI = 6.894757
"""MPa per ksi."""


@dataclass(frozen=True, slots=True)
class SizeSource:
    """One statement of a bar's thickness: a diameter [mm], an area [mm2] or a designation."""

    source: str
    diameter: float | None = None
    area: float | None = None
    designation: str = ""
    hint: bool = False
    """A number that may mean something else, such as one in a name."""
    most: float | None = None
    """Where a polygon stands for a bar: the diameter of the circle round it [mm]; ``diameter`` is
    that of the circle within it."""


@dataclass(frozen=True, slots=True)
class BarSize:
    """The size that a bar is taken as."""

    designation: str
    diameter: float
    area: float
    doubt: str = ""
    """What the sources say where they disagree."""


@dataclass(frozen=True, slots=True)
class _Statement:
    source: str
    diameter: float
    area: float
    text: str
    designation: str = ""
    by_area: bool = False
    hint: bool = False
    most: float | None = None


def settle_size(sources: Iterable[SizeSource]) -> BarSize | None:
    """Settle the size of a bar; the smallest of the credible statements where they disagree.

    The nominal diameter is given in models as that over the ribs too, and areas in other units
    than the model's: so an area that is exactly a hundred times too small (cm2) is not credible,
    nor is one of a bar that nobody makes. None where nothing credible is said.
    """
    said = [statement for source in sources if (statement := _statement(source)) is not None]
    said = _without_agreeing_polygons(said)
    credible = [s for s in said if LEAST_DIAMETER <= s.diameter <= GREATEST_DIAMETER]
    credible = [s for s in credible if not _is_in_square_centimetres(s, credible)]
    credible = [s for s in credible if not s.hint or _may_be_meant(s, credible)]
    if not credible:
        return None
    least = min(credible, key=lambda s: s.area)
    most = max(credible, key=lambda s: s.area)
    if most.area > AGREEMENT * least.area:
        return _smallest(least, said)
    return _agreed(credible, said)


def _without_agreeing_polygons(said: list[_Statement]) -> list[_Statement]:
    """The statements without polygons of whose circles another statement tells which is meant."""
    return [
        one
        for one in said
        if one.most is None
        or not any(
            one.diameter / ROUNDED <= other.diameter <= one.most * ROUNDED
            for other in said
            if other is not one
        )
    ]


def _statement(source: SizeSource) -> _Statement | None:
    if source.designation:
        standard = _by_designation(source.designation)
        text = f"{source.source} {source.designation}"
        return _Statement(
            source.source, standard.diameter, standard.area, text, source.designation, hint=True
        )
    if source.diameter is not None and source.diameter > 0.0 and math.isfinite(source.diameter):
        area = math.pi * source.diameter**2 / 4.0
        most = source.most if source.most is not None and source.most > source.diameter else None
        range_of = (
            f"{source.diameter:g}" if most is None else f"{source.diameter:.4g} to {most:.4g}"
        )
        text = f"{source.source} {range_of} mm"
        return _Statement(source.source, source.diameter, area, text, hint=source.hint, most=most)
    if source.area is not None and source.area > 0.0 and math.isfinite(source.area):
        diameter = math.sqrt(4.0 * source.area / math.pi)
        text = f"{source.source} {source.area:.4g} mm2"
        return _Statement(source.source, diameter, source.area, text, by_area=True)
    return None


def taken_as(size: BarSize) -> str:
    """What is to be said of a size on which the sources disagree; empty where they agree."""
    taken = f"taken as {size.designation} of {size.area:.4g} mm2"
    return f"sizes differ ({size.doubt}): {taken}" if size.doubt else ""


def is_area_of_bar(area: float) -> bool:
    """Whether a number can be the area of a bar [mm2]."""
    return LEAST_DIAMETER**2 <= 4.0 * area / math.pi <= GREATEST_DIAMETER**2


def _by_designation(designation: str) -> StandardBar:
    return next(size for size in nominal_sizes() if size.designation == designation)


def _is_in_square_centimetres(statement: _Statement, others: list[_Statement]) -> bool:
    meant = 100.0 * statement.area
    return statement.by_area and any(
        not other.by_area and 1.0 / AGREEMENT <= meant / other.area <= AGREEMENT for other in others
    )


def _may_be_meant(hint: _Statement, others: list[_Statement]) -> bool:
    """A number in a name is a size only where the bar has about that thickness."""
    ratios = [hint.diameter / other.diameter for other in others if not other.hint]
    return not ratios or any(1.0 / NAMED_DIAMETER <= ratio <= NAMED_DIAMETER for ratio in ratios)


def _smallest(least: _Statement, said: list[_Statement]) -> BarSize:
    doubt = "; ".join(dict.fromkeys(s.text for s in said))
    if least.designation:
        return BarSize(least.designation, least.diameter, least.area, doubt)
    near = [s for s in nominal_sizes() if abs(s.diameter - least.diameter) <= SAME_DIAMETER]
    near = near or [s for s in nominal_sizes() if _agree(s.area, least.area)]
    if not near:
        return BarSize(f"Ø{least.diameter:.3g}", least.diameter, least.area, doubt)
    standard = min(near, key=lambda s: abs(s.area - least.area))
    return BarSize(standard.designation, standard.diameter, standard.area, doubt)


def _agree(first: float, second: float) -> bool:
    return 1.0 / AGREEMENT <= first / second <= AGREEMENT


def _agreed(credible: list[_Statement], said: list[_Statement]) -> BarSize:
    """The size on which all credible statements agree, with its exact area where one is known."""
    refused = [s for s in said if s not in credible and not s.hint]
    doubt = "; ".join(dict.fromkeys(s.text for s in said)) if refused else ""
    named = next((s for s in credible if s.designation), None)
    if named is not None:
        return BarSize(named.designation, named.diameter, named.area, doubt)
    diameter = next((s.diameter for s in credible if not s.by_area), credible[0].diameter)
    near = [s for s in nominal_sizes() if abs(s.diameter - diameter) <= SAME_DIAMETER]
    stated = next((s.area for s in credible if s.by_area), None)
    designation = near[0].designation if len(near) == 1 else f"Ø{diameter:.3g}"
    areas = [s.area for s in near] if stated is None else [stated]
    return BarSize(designation, diameter, min(areas, default=credible[0].area), doubt)


_DESIGNATIONS = frozenset(size.designation for size in nominal_sizes())
_NAMED_SIZE = re.compile(
    r"(?<![0-9A-Za-z.])(?:(?P<metric>[0-9]{2}M)|#(?P<number>[0-9]{1,2}))(?![0-9A-Za-z.])"
)


def named_size(text: str) -> str:
    """Return the bar size that a name holds, ``15M`` or ``#5``; empty where it holds none."""
    for found in _NAMED_SIZE.finditer(text):
        if found[0] in _DESIGNATIONS:
            return found[0]
    return ""


_PSI_GRADES = (40, 50, 60, 75, 80, 100)
_GRADES = (
    (re.compile(r"(?<![0-9.])([2-9][0-9]{2})\s*(?:MPa|N/mm2|N/mm²)", re.IGNORECASE), 1.0),
    (re.compile(r"(?<![0-9.A-Za-z])([3-6][0-9]{2})\s?[RW](?![A-Za-z])"), 1.0),
    (
        re.compile(
            r"(?<![A-Za-z])(?:BSt|B|FeB|Fe|SD|HRB|HPB|RB|S|Grade|Gr\.?|G)[\s-]?"
            r"([2-6][0-9]{2})(?![0-9.])",
            re.IGNORECASE,
        ),
        1.0,
    ),
    (re.compile(r"(?<![A-Za-z])(?:Grade|Gr\.?|G)\s?([0-9]{2,3})(?![0-9.])", re.IGNORECASE), KSI),
    (re.compile(r"(?<![0-9.])([0-9]{2,3})\s*ksi", re.IGNORECASE), KSI),
)
"""Families of grades: R and W of CSA G30.18, MPa in the name, and ASTM grades in ksi."""
_TENSILE = re.compile(
    r"(?:UTS|(?<![A-Za-z])(?:Rm|f_?[ut]k?)|tensile(?:\s+strength)?|ultimate(?:\s+\w+)?)\W{0,4}$",
    re.IGNORECASE,
)
"""Words before a number that is the tensile strength, not that at which the steel yields"""


def yield_of_grade(text: str) -> float | None:
    """Return the yield strength [MPa] that the name of a grade of bars states.

    Of several readings the lowest counts; None where the text is no grade known here.

    >>> yield_of_grade("400W"), yield_of_grade("B500NC"), yield_of_grade("BSt 500 S")
    (400.0, 500.0, 500.0)
    >>> round(yield_of_grade("ASTM A615 Grade 60"), 1), yield_of_grade("Radial Gradient Fill")
    (413.7, None)
    """
    readings = [
        int(found[1]) * factor
        for pattern, factor in _GRADES
        for found in pattern.finditer(text)
        if (factor == 1.0 or int(found[1]) in _PSI_GRADES)
        and not _TENSILE.search(text[: found.start()])
    ]
    plain = re.fullmatch(r"\s*([2-9][0-9]{2})\s*", text)
    if plain:
        readings.append(float(plain[1]))
    readings = [value for value in readings if LEAST_YIELD <= value <= GREATEST_YIELD]
    return min(readings) if readings else None


_ALONE = re.compile(r"\s*[^\W\d_]{1,3}[\s-]?[2-6][0-9]{2}[^\W\d_]{0,2}\s*")


def _is_grade(source: str, text: str) -> bool:
    """Whether a text that is not understood must name a grade, as A240 does and STEEL does not.

    The name of a material must only where it is nothing but letters and such a number.
    """
    if source in ("material", "name"):
        return source == "material" and _ALONE.fullmatch(text) is not None
    return re.search(r"\d{2}", text) is not None


@dataclass(frozen=True, slots=True)
class Grade:
    """The steel of a bar."""

    strength: Given | None
    doubt: str = ""
    unread: str = ""
    """A grade that is stated and cannot be read: no default may fill it"""

    @property
    def given(self) -> Given | None:
        """The strength; nan where one is stated that cannot be read."""
        return Given(math.nan, self.unread) if self.unread else self.strength


def settle_grade(texts: Iterable[tuple[str, str]], stated: Given | None = None) -> Grade:
    """Settle the yield strength from texts (source, text) and a stated number.

    The lowest counts where they disagree.
    """
    given = [(source, text, yield_of_grade(text)) for source, text in texts if text]
    read = [
        Given(value, f"{source} {text!r}") for source, text, value in given if value is not None
    ]
    if stated is not None:
        read.append(stated)
    if not read:
        told = ", ".join(f"{source} {text!r}" for source, text, _ in given)
        grades = [f"{source} {text!r}" for source, text, _ in given if _is_grade(source, text)]
        doubt = f"no yield strength can be read from {told}" if told else ""
        return Grade(None, doubt, ", ".join(grades))
    least = min(read, key=lambda one: one.value)
    if max(one.value for one in read) <= least.value * 1.001:
        return Grade(read[0])
    told = ", ".join(f"{one.value:.0f} MPa from {one.source}" for one in read)
    return Grade(least, f"yield strengths differ: {told}; the lowest is used")

"""Number, size and grade of the bars that a section definition gives by number."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass

from ifccheck.beam import BarGroup
from ifccheck.ifc.bar_bond import not_covered
from ifccheck.ifc.bar_data import area_of_bar
from ifccheck.ifc.bar_sizes import (
    AGREEMENT,
    GREATEST_DIAMETER,
    LEAST_DIAMETER,
    SizeSource,
    settle_grade,
    settle_size,
    taken_as,
)
from ifccheck.ifc.entity import Entity, UnreadableError, get, text
from ifccheck.ifc.units import ModelUnits

MOST_BARS = 100
"""More bars than this in one row are a slip."""
UNEVEN = 0.25
"""Part of a bar by which area over the area of one bar may differ from a whole number"""


@dataclass(frozen=True, slots=True)
class SectionBars:
    """Bars of one IfcReinforcementBarProperties."""

    group: BarGroup
    yield_strength: float | None
    """nan where a grade is stated that cannot be read"""
    doubts: tuple[str, ...] = ()


def read_bars(entity: Entity, units: ModelUnits) -> SectionBars:
    """Settle number, size and grade from total area, diameter, number and the name of the grade.

    Diameter and area of a bar are held against each other as those of a bar that is modelled:
    the smallest credible standard area counts where they differ.

    Raises
    ------
    UnreadableError
        Where number and size do not follow from what is given.
    """
    total = number(entity, "TotalCrossSectionArea")
    diameter = number(entity, "NominalBarDiameter")
    diameter = None if diameter is None else diameter * units.length
    count = _count(entity)
    if count is None:
        count = _counted(total, diameter, units)
    each = None if total is None else area_of_bar(total / count, units)
    size = settle_size(
        [SizeSource("nominal diameter", diameter), SizeSource("total area / number", area=each)]
    )
    if size is None:
        raise UnreadableError(
            f"neither diameter nor area ({_shown(diameter, 'mm')}, {_shown(each, 'mm2')} for each"
            f" of {count} bars) is that of a bar"
        )
    named = text(entity, "SteelGrade")
    if uncovered := not_covered(str(get(entity, "BarSurface") or ""), [named]):
        raise UnreadableError(uncovered)
    grade = settle_grade([("grade", named)])
    doubts = [taken_as(size), *_of_area(total), grade.doubt]
    return SectionBars(
        BarGroup(count, size.designation, size.diameter, size.area),
        None if grade.given is None else grade.given.value,
        tuple(doubt for doubt in doubts if doubt),
    )


def number(entity: Entity, name: str) -> float | None:
    """Return a number, None where it is not given; raises UnreadableError where it is none."""
    value = get(entity, name)
    if value is None:
        return None
    if isinstance(value, bool) or not isinstance(value, int | float) or not math.isfinite(value):
        raise UnreadableError(f"its {name} is no number")
    return float(value)


def _count(entity: Entity) -> int | None:
    count = number(entity, "BarCount")
    if count is None:
        return None
    if count != int(count) or not 1 <= count <= MOST_BARS:
        raise UnreadableError(f"{count:g} is no number of bars")
    return int(count)


def _counted(total: float | None, diameter: float | None, units: ModelUnits) -> int:
    """The number of bars that total area and diameter give."""
    if total is None or total <= 0.0 or diameter is None:
        raise UnreadableError("the number of bars does not follow: it is not given, and not both"
                              " total area and diameter are")  # fmt: skip
    if LEAST_DIAMETER <= diameter <= GREATEST_DIAMETER:
        size = settle_size([SizeSource("nominal diameter", diameter)])
        one = diameter**2 * math.pi / 4.0 if size is None else size.area
        for area in (total * units.area, total * units.length**2):
            count = round(area / one)
            near = abs(area - count * one) <= min((AGREEMENT - 1.0) * area, UNEVEN * one)
            if 1 <= count <= MOST_BARS and near:
                return count
    raise UnreadableError(
        f"the number of bars does not follow: it is not given, and a total area of"
        f" {total * units.area:.4g} mm2 is not that of a whole number of bars of {diameter:.3g} mm"
    )


def _of_area(total: float | None) -> Iterator[str]:
    if total is None or total <= 0.0:
        given = "not given" if total is None else f"given as {total:g}"
        yield f"the total area is {given}: the area is that of the diameter"


def _shown(value: float | None, unit: str) -> str:
    return "not given" if value is None else f"{value:.3g} {unit}"

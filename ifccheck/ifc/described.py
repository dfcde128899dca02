"""Reinforcement that property sets describe: our own set, and a project's through a mapping."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any, Literal

from ifccheck.beam import BarGroup, DescribedZone, Reason, Reinforcement, Remark, StirrupGroup
from ifccheck.ifc.bar_findings import STAGE
from ifccheck.ifc.bar_sizes import (
    GREATEST_YIELD,
    LEAST_YIELD,
    BarSize,
    SizeSource,
    settle_size,
    yield_of_grade,
)
from ifccheck.ifc.context import BeamFrame, Context
from ifccheck.ifc.mapped import Places, Stated
from ifccheck.ifc.properties import Form, PropertyValue
from ifccheck.ifc.units import ModelUnits, UnitKind
from ifccheck.notation import NotationError, bar, parse_bars, parse_stirrups
from ifccheck.units import QuantityError, clipped, parse_quantity

OWN_SET = "BeamRating_Reinforcement"
OWN_PROPERTIES: Mapping[str, str] = {
    "top": "TopBars",
    "bottom": "BottomBars",
    "side": "SideBars",
    "stirrups": "Stirrups",
    "cover": "Cover",
    "bar_yield": "BarYield",
    "stirrup_yield": "StirrupYield",
}
PROPERTY_KINDS: Mapping[str, UnitKind] = {"length": "length", "stress": "pressure"}
"""The kind of unit that a model gives each quantity in."""
LIMITS: Mapping[str, tuple[float, float]] = {
    "cover": (0.0, 300.0),
    "bar_yield": (LEAST_YIELD, GREATEST_YIELD),
    "stirrup_yield": (LEAST_YIELD, GREATEST_YIELD),
    "stirrup_diameter": (4.0, 40.0),
    "stirrup_spacing": (25.0, 3000.0),
    "stirrup_legs": (1.0, 24.0),
}
"""Least and greatest credible value [mm], [MPa]."""
SAME = 0.05
"""Relative difference within which two properties state the same size or spacing."""
ADDED_UP = frozenset({"top", "bottom", "side"})
"""Fields of which a list gives bars that lie there together."""
REFUSED: Mapping[Form, str] = {
    "range": "it gives a range, not a value",
    "table": "it holds a table",
    "reference": "it refers to something else",
}


@dataclass(frozen=True, slots=True)
class Found:
    """A value of a field and the property that it was found in."""

    value: Any
    source: str
    text: str
    """What stands there"""


class CannotReadError(Exception):
    """A value cannot be read; the text says why."""


def read_described(
    context: Context, hosts: Mapping[int, BeamFrame], mapping: Mapping[str, str]
) -> dict[int, Reinforcement]:
    """Read what property sets tell of the reinforcement of beams, by STEP id.

    ``mapping`` gives the property of a field as "Set.Property", with ``*`` for any characters.
    """
    places = _places(mapping)
    found: dict[int, Reinforcement] = {}
    for beam, frame in hosts.items():
        stated = places.stated(context, beam)
        if stated:
            found[beam] = _described(stated, context.units, frame.guid)
    return found


def _places(mapping: Mapping[str, str]) -> Places:
    """Fields, each with the properties that may hold it."""
    own = [(name, f"{OWN_SET}.{key}") for name, key in OWN_PROPERTIES.items()]
    return Places([*own, *mapping.items()])


def sets_described(mapping: Mapping[str, str]) -> set[str]:
    """Return the names of the sets that may tell of the reinforcement, where they have no ``*``."""
    return _places(mapping).set_names()


def _described(stated: Sequence[Stated], units: ModelUnits, key: str) -> Reinforcement:
    found: dict[str, Found] = {}
    reasons: list[Reason] = []
    remarks: list[Remark] = []
    for name, place, value in stated:
        try:
            _add(found, name, Found(_read(name, value, units), place, clipped(value.value)))
        except CannotReadError as error:
            text = f"property {place} {clipped(value.value)} cannot be read: {error}"
            reasons.append(Reason(text))
        else:
            if _is_sum(name, value):
                text = f"property {place} {clipped(value.value)}: the bars of its list are added up"
                remarks.append(Remark(key, STAGE, text, "assumption"))
    return Reinforcement(
        source="properties",
        zones=(_zone(found, reasons),),
        reasons=tuple(reasons),
        remarks=tuple(remarks),
    )


def _zone(found: Mapping[str, Found], reasons: list[Reason]) -> DescribedZone:
    return DescribedZone(
        top=_get(found, "top"),
        bottom=_get(found, "bottom"),
        side=_get(found, "side"),
        stirrups=_stirrup_group(found, reasons),
        no_stirrups="stirrups" in found and found["stirrups"].value is None,
        cover=_get(found, "cover"),
        bar_yield=_get(found, "bar_yield"),
        stirrup_yield=_get(found, "stirrup_yield"),
        origin=", ".join(dict.fromkeys(one.source for one in found.values())),
    )


def _read(name: str, value: PropertyValue, units: ModelUnits) -> Any:
    """Read a property; of several values each, which must agree unless they add up."""
    if value.form in REFUSED:
        raise CannotReadError(REFUSED[value.form])
    if not isinstance(value.value, tuple):
        return READERS[name](value, units)
    each = [READERS[name](replace(value, value=one, form="single"), units) for one in value.value]
    if _is_sum(name, value):
        return _together([group for groups in each for group in groups])
    if any(one != each[0] for one in each):
        what = "several choices" if value.form == "choice" else "different values"
        raise CannotReadError(f"it holds {what}")
    return each[0]


def _is_sum(name: str, value: PropertyValue) -> bool:
    return name in ADDED_UP and value.form == "list"


def _together(groups: Sequence[BarGroup]) -> tuple[BarGroup, ...]:
    """Bars of a list, unless it gives a size twice: then it may go along the beam."""
    sizes = [group.designation for group in groups]
    twice = next((size for size in sizes if sizes.count(size) > 1), None)
    if twice is not None:
        raise CannotReadError(
            f"its list gives {twice} more than once, which may be layers or places along the beam"
        )
    return tuple(groups)


def _add(found: dict[str, Found], name: str, new: Found) -> None:
    known = found.setdefault(name, new)
    if known.value != new.value:
        raise CannotReadError(f"{known.source} says otherwise: {known.text}")


def _get(found: Mapping[str, Found], name: str) -> Any:
    return found[name].value if name in found else None


def _stirrup_group(found: Mapping[str, Found], reasons: list[Reason]) -> StirrupGroup | None:
    """The stirrups from their notation, or from diameter, spacing and legs."""
    legs = _get(found, "stirrup_legs")
    if "stirrups" in found:
        group: StirrupGroup | None = found["stirrups"].value
        if denied := _denied(found, group):
            reasons.append(Reason(f"properties differ on the stirrups: {denied}"))
            return None
        if group is None or legs is None or group.legs == legs:
            return group
        if group.legs is None:
            return replace(group, legs=legs)
        reasons.append(Reason(f"properties give stirrups of {group.legs} legs and of {legs}"))
        return None
    size, spacing = _get(found, "stirrup_diameter"), _get(found, "stirrup_spacing")
    if size is None and spacing is None:
        return None
    if size is None or spacing is None:
        missing = "diameter" if size is None else "spacing"
        reasons.append(Reason(f"properties give stirrups without their {missing}"))
        return None
    return StirrupGroup(size.designation, size.diameter, size.area, spacing, legs)


def _denied(found: Mapping[str, Found], group: StirrupGroup | None) -> str:
    """What a diameter or a spacing says against the notation of the stirrups; empty for nothing."""
    parts = {"stirrup_diameter": "diameter", "stirrup_spacing": "spacing"}
    for name, attribute in parts.items():
        stated = found.get(name)
        if stated is None:
            continue
        value = getattr(stated.value, "diameter", stated.value)
        noted = 0.0 if group is None else getattr(group, attribute)
        if abs(value - noted) > SAME * value:
            each = (found["stirrups"], stated)
            return " against ".join(f"{one.source} {one.text}" for one in each)
    return ""


def _bar_groups(value: PropertyValue, units: ModelUnits) -> tuple[BarGroup, ...]:
    try:
        return parse_bars(_text(value))
    except NotationError as error:
        raise CannotReadError(str(error)) from None


def _stirrup_notation(value: PropertyValue, units: ModelUnits) -> StirrupGroup | None:
    try:
        return parse_stirrups(_text(value))
    except NotationError as error:
        raise CannotReadError(str(error)) from None


def _text(value: PropertyValue) -> str:
    if not isinstance(value.value, str):
        raise CannotReadError("bar notation is a text like 3-25M")
    return value.value


def _quantity(value: PropertyValue, kind: Literal["length", "stress"], units: ModelUnits) -> float:
    """A length or stress; a number without a unit is in the model's unit."""
    number = value.value
    if isinstance(number, str):
        if not _is_number(number):
            try:
                return parse_quantity(number, kind)
            except QuantityError as error:
                raise CannotReadError(str(error)) from None
        number = float(number)
    elif value.kind is not None:
        if value.number is None or value.kind != PROPERTY_KINDS[kind]:
            raise CannotReadError(f"its unit is none of a {kind}")
        return value.number
    if isinstance(number, bool) or not isinstance(number, int | float):
        raise CannotReadError(f"a {kind} is needed")
    return number * units.factors[PROPERTY_KINDS[kind]]


def _is_number(text: str) -> bool:
    return re.fullmatch(r"\s*[+-]?[0-9]+(\.[0-9]*)?\s*", text) is not None


def _within(name: str, value: float) -> float:
    least, greatest = LIMITS[name]
    if not least <= value <= greatest:
        raise CannotReadError(f"{value:g} is not between {least:g} and {greatest:g}")
    return value


def _length_of(name: str) -> Reader:
    def read(value: PropertyValue, units: ModelUnits) -> float:
        return _within(name, _quantity(value, "length", units))

    return read


def _yield_of(name: str) -> Reader:
    def read(value: PropertyValue, units: ModelUnits) -> float:
        if isinstance(value.value, str) and not _is_number(value.value):
            graded = yield_of_grade(value.value)
            if graded is not None:
                return graded
        return _within(name, _quantity(value, "stress", units))

    return read


def _stirrup_size(value: PropertyValue, units: ModelUnits) -> BarSize:
    if isinstance(value.value, str) and not _is_number(value.value):
        try:
            named = bar(value.value)
            return BarSize(named.designation, named.diameter, named.area)
        except NotationError as error:
            raise CannotReadError(str(error)) from None
    diameter = _within("stirrup_diameter", _quantity(value, "length", units))
    size = settle_size((SizeSource("diameter", diameter),))
    if size is None:
        raise CannotReadError(f"{diameter:g} mm is no diameter of a bar")
    return size


def _legs(value: PropertyValue, units: ModelUnits) -> int:
    number = value.value
    if isinstance(number, str) and _is_number(number):
        number = float(number)
    if isinstance(number, bool) or not isinstance(number, int | float) or number != int(number):
        raise CannotReadError("a whole number is needed")
    return int(_within("stirrup_legs", number))


Reader = Callable[[PropertyValue, ModelUnits], Any]
READERS: Mapping[str, Reader] = {
    "top": _bar_groups,
    "bottom": _bar_groups,
    "side": _bar_groups,
    "stirrups": _stirrup_notation,
    "cover": _length_of("cover"),
    "bar_yield": _yield_of("bar_yield"),
    "stirrup_yield": _yield_of("stirrup_yield"),
    "stirrup_diameter": _stirrup_size,
    "stirrup_spacing": _length_of("stirrup_spacing"),
    "stirrup_legs": _legs,
}
FIELDS = tuple(READERS)
"""The fields that a mapping may give."""

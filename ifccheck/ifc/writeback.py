"""Writes results into a model: the source's own bytes with lines added."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Mapping, Sequence
from typing import Any

import numpy as np

import ifccheck
from ifccheck.ifc.archive import pack
from ifccheck.ifc.entity import GLOBAL_ID, text_at
from ifccheck.ifc.identity import RESULT_SET_NAMES, relation_guid, set_guid
from ifccheck.ifc.lexer import LARGEST_ID, Offsets
from ifccheck.ifc.marks import with_block
from ifccheck.ifc.opening import OpenedModel
from ifccheck.ifc.result_units import UnitEntity, result_units
from ifccheck.ifc.step_text import step_logical, step_real, step_string
from ifccheck.result_sets import Measure, ResultProperty, ResultSet

LONGEST_LABEL = 255

_MEASURE_TYPES: Mapping[Measure, str] = {
    "label": "IFCLABEL", "text": "IFCTEXT", "identifier": "IFCIDENTIFIER", "real": "IFCREAL",
    "logical": "IFCLOGICAL", "length": "IFCLENGTHMEASURE", "force": "IFCFORCEMEASURE",
    "line_force": "IFCLINEARFORCEMEASURE", "moment": "IFCTORQUEMEASURE",
    "pressure": "IFCPRESSUREMEASURE", "area": "IFCAREAMEASURE",
}  # fmt: skip


def rated_bytes(opened: OpenedModel, sets: Sequence[ResultSet]) -> bytes:
    """Return the model with result sets added; without any, its own bytes."""
    _require_sound(opened, sets)
    written = [(result, kept) for result in sets if (kept := _writable(result))]
    if not written:
        return opened.source
    lines = _Lines(fresh_ids(opened.scan.ids))
    measures = {item.measure for _, kept in written for item in kept}
    units = result_units(opened.file, measures, lines.add)
    owner = _owner_history(opened, lines.add)
    for result, kept in written:
        _add_set(lines, result, kept, units, owner)
    return with_block(opened.source, opened.scan, opened.sha256, lines.written)


def packed(opened: OpenedModel, data: bytes) -> bytes:
    """Return what goes into the output file: an archive where the source was one."""
    return data if opened.zipped_member is None else pack(opened.zipped_member, data)


def fresh_ids(used: Offsets) -> Iterator[int]:
    """Yield instance numbers that are not used: those after the greatest, then the gaps."""
    ordered = np.sort(used)
    greatest = int(ordered[-1]) if len(ordered) else 0
    yield from range(greatest + 1, LARGEST_ID + 1)
    before = np.concatenate(([0], ordered[:-1]))
    for gap in np.flatnonzero(ordered - before > 1):
        yield from range(int(before[gap]) + 1, int(ordered[gap]))
    raise ValueError("the model has no instance number left")


class _Lines:
    """Lines to be added, each under a fresh number."""

    def __init__(self, numbers: Iterator[int]) -> None:
        self._numbers = numbers
        self._values: dict[ResultProperty, int] = {}
        self.written: list[str] = []

    def add(self, instance: str) -> int:
        number = next(self._numbers)
        self.written.append(f"#{number}={instance};")
        return number

    def value(self, item: ResultProperty, units: Mapping[Measure, UnitEntity]) -> int:
        """Number of a property; beams that have the same one share it."""
        if item not in self._values:
            self._values[item] = self.add(_single_value(item, units))
        return self._values[item]


def _writable(result: ResultSet) -> tuple[ResultProperty, ...]:
    """Return the properties that have a value; nan and infinity are none."""
    return tuple(item for item in result.properties if _has_value(item))


def _has_value(item: ResultProperty) -> bool:
    if item.measure == "logical":
        return True
    if isinstance(item.value, str) or item.value is None:
        return item.value is not None
    return math.isfinite(item.value)


def _add_set(
    lines: _Lines,
    result: ResultSet,
    kept: Sequence[ResultProperty],
    units: Mapping[Measure, UnitEntity],
    owner: str,
) -> None:
    values = ",".join(f"#{lines.value(item, units)}" for item in kept)
    identity = (result.guid, result.ordinal, result.name)
    number = lines.add(
        f"IFCPROPERTYSET('{set_guid(*identity)}',{owner},{step_string(result.name)},$,({values}))"
    )
    lines.add(
        f"IFCRELDEFINESBYPROPERTIES('{relation_guid(*identity)}',{owner},$,$,"
        f"(#{result.step_id}),#{number})"
    )


def _single_value(item: ResultProperty, units: Mapping[Measure, UnitEntity]) -> str:
    unit = units.get(item.measure)
    spelled = _spelled(item, unit)
    reference = "$" if unit is None else f"#{unit.step_id}"
    name = step_string(item.name)
    return f"IFCPROPERTYSINGLEVALUE({name},$,{_MEASURE_TYPES[item.measure]}({spelled}),{reference})"


def _spelled(item: ResultProperty, unit: UnitEntity | None) -> str:
    value = item.value
    if item.measure == "logical":
        if value is None or isinstance(value, bool):
            return step_logical(value)
    elif item.measure in ("label", "text", "identifier"):
        if isinstance(value, str):
            return step_string(value)
    elif isinstance(value, int | float) and not isinstance(value, bool):
        return step_real(value / unit.worth if unit else value)
    raise TypeError(f"property {item.name}: {value!r} is not a {item.measure}")


def _require_sound(opened: OpenedModel, sets: Sequence[ResultSet]) -> None:
    """Refuse sets that would make the model unsound or could not be taken away again."""
    seen: set[tuple[str, int, str]] = set()
    for result in sets:
        identity = (result.guid, result.ordinal, result.name)
        if identity in seen:
            raise ValueError(f"{result.name} of {result.guid} is given twice")
        seen.add(identity)
        if result.name not in RESULT_SET_NAMES:
            raise ValueError(f"{result.name} is not a result set")
        _require_properties(result)
    for step_id, guid in {result.step_id: result.guid for result in sets}.items():
        if _guid_at(opened.file, step_id) != guid:
            raise ValueError(f"#{step_id} is not the beam {guid}")


def _guid_at(file: Any, step_id: int) -> str | None:
    try:
        return text_at(file.by_id(step_id), GLOBAL_ID)
    except RuntimeError:
        return None


def _require_properties(result: ResultSet) -> None:
    names = [item.name for item in result.properties]
    if len(set(names)) != len(names):
        raise ValueError(f"{result.name} of {result.guid} gives a property twice")
    for item in result.properties:
        texts = [item.name]
        if item.measure in ("label", "identifier") and isinstance(item.value, str):
            texts.append(item.value)
        if max(map(len, texts)) > LONGEST_LABEL:
            raise ValueError(
                f"{result.name}.{item.name[:40]} of {result.guid} is longer than "
                f"{LONGEST_LABEL} characters"
            )


def _owner_history(opened: OpenedModel, add: Callable[[str], int]) -> str:
    """Return the owner history that IFC2X3 asks for: one of the model's, or a complete one added.

    Only one that something else uses is shared, so that it is never taken for one of ours.
    """
    if opened.schema != "IFC2X3":
        return "$"
    owners = opened.file.by_type("IfcOwnerHistory")
    used = [owner.id() for owner in owners if opened.file.get_total_inverses(owner)]
    return f"#{min(used) if used else _added_owner_history(add)}"


def _added_owner_history(add: Callable[[str], int]) -> int:
    person = add("IFCPERSON($,'ifccheck',$,$,$,$,$,$)")
    organization = add("IFCORGANIZATION($,'ifccheck',$,$,$)")
    user = add(f"IFCPERSONANDORGANIZATION(#{person},#{organization},$)")
    version = step_string(ifccheck.__version__)
    application = add(f"IFCAPPLICATION(#{organization},{version},'ifccheck','ifccheck')")
    # The date is fixed: two runs on the same model give the same bytes.
    return add(f"IFCOWNERHISTORY(#{user},#{application},$,.ADDED.,$,$,$,0)")

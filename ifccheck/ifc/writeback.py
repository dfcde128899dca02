"""Writes results into a model: the source's own bytes with lines added."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence, Set
from itertools import chain
from operator import itemgetter
from typing import Any

import numpy as np

import ifccheck
from ifccheck.ifc.archive import pack
from ifccheck.ifc.entity import GLOBAL_ID, text_at
from ifccheck.ifc.identity import RESULT_SET_NAMES, set_and_relation_guids
from ifccheck.ifc.lexer import LARGEST_ID
from ifccheck.ifc.marks import with_block
from ifccheck.ifc.opening import OpenedModel
from ifccheck.ifc.result_units import UnitEntity, result_units
from ifccheck.ifc.step_bytes import Offsets
from ifccheck.ifc.step_text import step_logical, step_real, step_string
from ifccheck.result_sets import Measure, ResultProperty, ResultSet

LONGEST_LABEL = 255

_MEASURE_TYPES: Mapping[Measure, str] = {
    "label": "IFCLABEL", "text": "IFCTEXT", "identifier": "IFCIDENTIFIER", "real": "IFCREAL",
    "logical": "IFCLOGICAL", "length": "IFCLENGTHMEASURE", "force": "IFCFORCEMEASURE",
    "line_force": "IFCLINEARFORCEMEASURE", "moment": "IFCTORQUEMEASURE",
    "pressure": "IFCPRESSUREMEASURE", "area": "IFCAREAMEASURE",
}  # fmt: skip


Parts = tuple[bytes | memoryview, ...]


def rated_bytes(opened: OpenedModel, sets: Sequence[ResultSet]) -> bytes:
    """Return the model with result sets added; without any, its own bytes."""
    return b"".join(rated_parts(opened, sets))


def rated_parts(opened: OpenedModel, sets: Sequence[ResultSet]) -> Parts:
    """Return the same in parts, which share the bytes of the source."""
    distinct = dict.fromkeys(chain.from_iterable([result.properties for result in sets]))
    _require_sound(opened, sets, distinct)
    worthless = {item for item in distinct if not _has_value(item)}
    measures = {item.measure for item in distinct if item not in worthless}
    if not measures:
        return (opened.source,)
    lines = _Lines(fresh_ids(opened.scan.ids))
    units = result_units(opened.file, measures, lines.add)
    owner = _owner_history(opened, lines.add)
    references = _References(lines, units)
    guids = set_and_relation_guids([result.identity for result in sets])
    for result, of_set in zip(sets, guids, strict=True):
        kept = _without(worthless, result.properties)
        if kept:
            listed = ",".join(map(references.__getitem__, kept))
            _add_set(lines, result, of_set, listed, owner)
    return with_block(opened.source, opened.scan, opened.sha256, lines.written)


def _without(
    worthless: Set[ResultProperty], items: tuple[ResultProperty, ...]
) -> tuple[ResultProperty, ...]:
    if not worthless:
        return items
    return tuple(item for item in items if item not in worthless)


def packed(opened: OpenedModel, parts: Parts) -> Parts:
    """Return what goes into the output file: an archive where the source was one."""
    return parts if opened.zipped_member is None else (pack(opened.zipped_member, b"".join(parts)),)


def fresh_ids(used: Offsets) -> Iterator[int]:
    """Yield instance numbers that are not used: those after the greatest, then the gaps."""
    greatest = int(used.max()) if len(used) else 0
    yield from range(greatest + 1, LARGEST_ID + 1)
    ordered = np.sort(used)
    before = np.concatenate(([0], ordered[:-1]))
    for gap in np.flatnonzero(ordered - before > 1):
        yield from range(int(before[gap]) + 1, int(ordered[gap]))
    raise ValueError("the model has no instance number left")


class _Lines:
    """Lines to be added, each under a fresh number."""

    def __init__(self, numbers: Iterator[int]) -> None:
        self._numbers = numbers
        self.written: list[str] = []

    def add(self, instance: str) -> int:
        number = next(self._numbers)
        self.written.append(f"#{number}={instance};")
        return number


class _References(dict[ResultProperty, str]):
    """How sets refer to properties; those that are new are added, and shared from then on."""

    def __init__(self, lines: _Lines, units: Mapping[Measure, UnitEntity]) -> None:
        super().__init__()
        self._lines = lines
        self._units = units
        self._names: dict[str, str] = {}

    def __missing__(self, item: ResultProperty) -> str:
        self[item] = reference = f"#{self._lines.add(self._instance(item))}"
        return reference

    def _instance(self, item: ResultProperty) -> str:
        if item.name not in self._names:
            self._names[item.name] = step_string(item.name)
        unit = self._units.get(item.measure)
        value = f"{_MEASURE_TYPES[item.measure]}({_spelled(item, unit)})"
        reference = "$" if unit is None else f"#{unit.step_id}"
        return f"IFCPROPERTYSINGLEVALUE({self._names[item.name]},$,{value},{reference})"


def _has_value(item: ResultProperty) -> bool:
    """Whether a property has a value; nan and infinity are none."""
    if item.measure == "logical":
        return True
    if isinstance(item.value, str) or item.value is None:
        return item.value is not None
    return math.isfinite(item.value)


def _add_set(
    lines: _Lines, result: ResultSet, guids: tuple[str, str], references: str, owner: str
) -> None:
    of_set, of_relation = guids
    number = lines.add(f"IFCPROPERTYSET('{of_set}',{owner},'{result.name}',$,({references}))")
    lines.add(
        f"IFCRELDEFINESBYPROPERTIES('{of_relation}',{owner},$,$,(#{result.step_id}),#{number})"
    )


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


def _require_sound(
    opened: OpenedModel, sets: Sequence[ResultSet], distinct: Iterable[ResultProperty]
) -> None:
    """Refuse sets that would make the model unsound or could not be taken away again."""
    for (guid, _, name), count in Counter([result.identity for result in sets]).items():
        if count > 1:
            raise ValueError(f"{name} of {guid} is given twice")
    sound: set[tuple[str, ...]] = set()
    for result in sets:
        if result.name not in RESULT_SET_NAMES:
            raise ValueError(f"{result.name} is not a result set")
        names = tuple(map(_name_of, result.properties))
        if names not in sound:
            if len(set(names)) < len(names):
                raise ValueError(f"{result.name} of {result.guid} gives a property twice")
            sound.add(names)
    for item in distinct:
        _require_short(item)
    for step_id, guid in {result.step_id: result.guid for result in sets}.items():
        if _guid_at(opened.file, step_id) != guid:
            raise ValueError(f"#{step_id} is not the beam {guid}")


_name_of: Callable[[ResultProperty], str] = itemgetter(0)


def _guid_at(file: Any, step_id: int) -> str | None:
    try:
        return text_at(file.by_id(step_id), GLOBAL_ID)
    except RuntimeError:
        return None


def _require_short(item: ResultProperty) -> None:
    is_label = item.measure in ("label", "identifier") and isinstance(item.value, str)
    if max(len(item.name), len(str(item.value)) if is_label else 0) > LONGEST_LABEL:
        raise ValueError(f"the property {item.name[:40]} is longer than {LONGEST_LABEL} characters")


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

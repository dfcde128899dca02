"""Takes away earlier results of ours from a model that another program has saved since."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterable, Iterator
from typing import Any

import numpy as np

from ifccheck.ifc.entity import GLOBAL_ID, text_at
from ifccheck.ifc.identity import RESULT_SET_NAMES, set_guid
from ifccheck.ifc.lexer import Scan
from ifccheck.ifc.marks import break_after, mark_comments

_RESULT_NAME = re.compile(rb"'(?:" + "|".join(RESULT_SET_NAMES).encode() + rb")'")

_ONLY_OURS = (
    "IfcPropertySingleValue", "IfcSIUnit", "IfcDerivedUnit", "IfcDerivedUnitElement",
    "IfcOwnerHistory", "IfcPersonAndOrganization", "IfcPerson", "IfcOrganization",
    "IfcApplication",
)  # fmt: skip
"""What results bring with them; taken away where nothing else uses it."""


class InUseError(Exception):
    """An earlier result cannot be taken away: something else refers to it."""


def may_hold_results(data: bytes) -> bool:
    """Tell, without reading the model, whether it can hold result sets."""
    return _RESULT_NAME.search(data) is not None


def result_instances(file: Any) -> tuple[set[int], dict[str, list[int]]]:
    """Find every instance that earlier results brought, by number.

    Also returns, by name, the sets that bear a name of ours and whose GlobalId their beam did not
    give them: they are left alone.
    """
    guid_counts: Counter[str] = Counter()
    ours: dict[int, Any] = {}
    foreign: dict[str, list[int]] = {}
    for name, candidate in _named_sets(file):
        relations = _relations(file, candidate)
        if not guid_counts:
            guid_counts.update(
                text_at(element, GLOBAL_ID) for element in file.by_type("IfcElement")
            )
        if _is_derived(candidate.GlobalId, name, relations, guid_counts):
            ours[candidate.id()] = candidate
            ours.update((relation.id(), relation) for relation in relations)
        else:
            foreign.setdefault(name, []).append(candidate.id())
    _require_unused(file, ours)
    return _with_unused_parts(file, ours), foreign


def _named_sets(file: Any) -> Iterator[tuple[str, Any]]:
    for candidate in file.by_type("IfcPropertySet"):
        name = candidate.Name
        if name in RESULT_SET_NAMES:
            yield name, candidate


def _relations(file: Any, property_set: Any) -> list[Any]:
    return [
        user
        for user in file.get_inverse(property_set)
        if user.is_a("IfcRelDefinesByProperties")
        and user.RelatingPropertyDefinition == property_set
    ]


def _is_derived(guid: str, name: str, relations: Iterable[Any], counts: Counter[str]) -> bool:
    """Tell whether a set's GlobalId is the one that its beam gives it."""
    beams = {text_at(beam, GLOBAL_ID) for relation in relations for beam in relation.RelatedObjects}
    return any(
        guid == set_guid(beam, ordinal, name)
        for beam in beams
        for ordinal in range(max(counts[beam], 1))
    )


def _require_unused(file: Any, ours: dict[int, Any]) -> None:
    for entity in ours.values():
        for user in file.get_inverse(entity):
            if user.id() not in ours:
                raise InUseError(f"#{user.id()} {user.is_a()} uses #{entity.id()} {entity.is_a()}")


def _with_unused_parts(file: Any, ours: dict[int, Any]) -> set[int]:
    """Add the values, units and owner histories that only these instances use."""
    removed = dict(ours)
    parts = _parts(file, removed.values())
    while unused := {
        number: part
        for number, part in parts.items()
        if all(user.id() in removed for user in file.get_inverse(part))
    }:
        removed |= unused
        parts |= _parts(file, unused.values())
        parts = {number: part for number, part in parts.items() if number not in removed}
    return set(removed)


def _parts(file: Any, entities: Iterable[Any]) -> dict[int, Any]:
    """Find what entities refer to and may have brought with them."""
    return {
        part.id(): part
        for entity in entities
        for part in file.traverse(entity, max_levels=1)[1:]
        if part.id() and part.is_a() in _ONLY_OURS
    }


def without_instances(data: bytes, scan: Scan, numbers: set[int]) -> bytes:
    """Cut instances and the marks of ours out of a file, with their lines where these empty."""
    chosen = np.flatnonzero(np.isin(scan.ids, np.fromiter(numbers, np.int64, len(numbers))))
    spans = list(zip(scan.starts[chosen].tolist(), scan.stops[chosen].tolist(), strict=True))
    spans += [(comment.start, comment.stop) for comment in mark_comments(data, scan)]
    pieces, at = [], 0
    for start, stop in sorted(spans):
        first, last = _whole_line(data, start, stop)
        pieces.append(data[at : max(first, at)])
        at = last
    return b"".join((*pieces, data[at:]))


def _whole_line(data: bytes, start: int, stop: int) -> tuple[int, int]:
    first, last = start, stop
    while data[first - 1] in b" \t":
        first -= 1
    while data[last] in b" \t":
        last += 1
    line_break = break_after(data, last)
    if data[first - 1] in b"\r\n" and line_break:
        return first, last + line_break
    return start, stop

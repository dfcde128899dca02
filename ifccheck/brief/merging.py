"""Entries that reach the same beam: the later one wins, field by field, and a remark says so."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from typing import Any, NamedTuple, TypeVar

from ifccheck.beam import Remark
from ifccheck.brief.model import BeamEntry, MaterialEntry, SupportEntry

EntryKind = TypeVar("EntryKind", bound=BeamEntry | MaterialEntry | SupportEntry)
Matches = Mapping[str, Sequence[str]]
"""Keys of the beams that each entry reaches, by the place of the entry."""


class Said(NamedTuple):
    """What an entry says of a field: the value, the value for people, and the entry's place."""

    value: Any
    text: str
    place: str


def merge(
    entries: Iterable[EntryKind],
    matches: Matches,
    say: Callable[[EntryKind], Mapping[str, Said]],
) -> tuple[dict[str, dict[str, Said]], dict[str, tuple[Remark, ...]]]:
    """Return what the entries say of each beam, by field, and the remarks, both by key."""
    merged: dict[str, dict[str, Said]] = {}
    remarks: dict[str, tuple[Remark, ...]] = {}
    for entry in entries:
        said = say(entry)
        for key in matches[entry.place]:
            earlier = merged.setdefault(key, {})
            remarks[key] = (*remarks.get(key, ()), *_overruled(key, earlier, said))
            earlier.update(said)
    return merged, remarks


def _overruled(key: str, earlier: Mapping[str, Said], said: Mapping[str, Said]) -> list[Remark]:
    return [
        Remark(
            key,
            "brief",
            f"{field.replace('_', ' ')}: {now.text} of {now.place} replaces"
            f" {earlier[field].text} of {earlier[field].place}",
            "note",
        )
        for field, now in said.items()
        if field in earlier and earlier[field].value != now.value
    ]

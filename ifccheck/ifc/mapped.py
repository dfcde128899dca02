"""Which properties of a beam hold the fields that a mapping names, ``*`` standing for anything."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import NamedTuple

from ifccheck.ifc.context import Context
from ifccheck.ifc.properties import PropertyValue


class Stated(NamedTuple):
    """A field and a property that holds it."""

    field: str
    place: str
    """Set and property, joined by a point."""
    value: PropertyValue


class Places:
    """Where fields may be found: field and "Set.Property", either name with wildcards or points."""

    def __init__(self, places: Iterable[tuple[str, str]]) -> None:
        self._cuts = [(field, *names) for field, place in places for names in _cuts(place)]
        self._of_set: dict[str, tuple[tuple[str, str], ...]] = {}

    def set_names(self) -> set[str]:
        """Return the names of sets that hold a field, of those that are named in full."""
        return {name for _, name, _ in self._cuts if "*" not in name}

    def stated(self, context: Context, beam: int) -> list[Stated]:
        """Return what the properties of a beam state, its own before those of its type."""
        own = list(self._in_sets_of(context, beam))
        type_id = context.relations.type_of(beam)
        if type_id is not None:
            known = {one.place for one in own}
            of_type = self._in_sets_of(context, type_id)
            own += [one for one in of_type if one.place not in known]
        return [one for one in own if _says_anything(one.value)]

    def fields_of(self, context: Context, owner: int) -> set[str]:
        """Return the fields of which an object, or a type, has a property itself, be it blank."""
        return {one.field for one in self._in_sets_of(context, owner)}

    def _in_sets_of(self, context: Context, owner: int) -> Iterator[Stated]:
        for set_name, set_id in context.properties.held(owner):
            wanted = self._wanted(set_name)
            if not wanted:
                continue
            for name, value in context.properties.values((set_id,)).items():
                for field, pattern in wanted:
                    if fits(pattern, name):
                        yield Stated(field, f"{set_name}.{name}", value)

    def _wanted(self, set_name: str) -> tuple[tuple[str, str], ...]:
        """Fields that a set may hold, and in which property."""
        if set_name not in self._of_set:
            self._of_set[set_name] = tuple(
                (field, name) for field, pattern, name in self._cuts if fits(pattern, set_name)
            )
        return self._of_set[set_name]


def fields_held(
    context: Context, beams: Iterable[int], mapping: Mapping[str, str]
) -> frozenset[str]:
    """Return the fields of a mapping of which some beam, or its type, has a property."""
    places, left, seen = Places(mapping.items()), set(mapping), set[int]()
    for beam in beams:
        if not left:
            break
        type_id = context.relations.type_of(beam)
        owners = {beam, beam if type_id is None else type_id} - seen
        seen |= owners
        left -= {field for owner in owners for field in places.fields_of(context, owner)}
    return frozenset(mapping) - left


def _cuts(place: str) -> Iterator[tuple[str, str]]:
    """All that "Set.Property" may mean, as either name may hold points itself."""
    parts = place.split(".")
    return ((".".join(parts[:cut]), ".".join(parts[cut:])) for cut in range(1, len(parts)))


def fits(pattern: str, name: str) -> bool:
    """Whether a name is as a pattern says, each ``*`` standing for any number of characters.

    >>> fits("Rebar*", "Rebar of beams"), fits("*Top*s", "TopBars"), fits("Top", "TopBars")
    (True, True, False)
    >>> fits("a*a", "a")
    False
    """
    first, *others = pattern.split("*")
    if not others:
        return pattern == name
    *between, last = others
    at, stop = len(first), len(name) - len(last)
    if at > stop or not name.startswith(first) or not name.endswith(last):
        return False
    for part in between:
        found = name.find(part, at, stop)
        if found < 0:
            return False
        at = found + len(part)
    return True


def _says_anything(value: PropertyValue) -> bool:
    """Whether a property states something: exporters write many that are blank."""
    if value.value is None:
        return value.form != "single"
    return str(value.value).strip() != ""

"""Loads as people write them."""

from __future__ import annotations

from collections.abc import Iterable

from ifccheck.beam import Load
from ifccheck.publish.quantities import typographic
from ifccheck.units import show


def load_words(load: Load) -> str:
    """Return a load as people write it."""
    if load.text:
        return typographic(load.text)
    if load.kind == "point":
        return f"{show(load.values[0], 'force')} at {show(load.start, 'length')}"
    if load.kind == "moment":
        return f"{show(load.values[0], 'moment')} at {show(load.start, 'length')}"
    first, last = (show(value, "line_load") for value in load.values)
    return first if first == last else f"{first} to {last}"


def named_load(load: Load) -> str:
    """Return a load with its case."""
    return f"{load.case}: {load_words(load)}"


def single_loads(loads: Iterable[Load]) -> list[tuple[Load, str]]:
    """Return point loads and moments, each with its words.

    What one beam gives another in several cases at one place is one, with the figure of each case.
    """
    groups: dict[tuple[str, str, float, bool], list[Load]] = {}
    for load in loads:
        key = (load.origin, load.kind, load.start, load.values[0] >= 0.0)
        groups.setdefault(key, []).append(load)
    return [each for group in groups.values() for each in _named(group)]


def _named(group: list[Load]) -> list[tuple[Load, str]]:
    if len({load.case for load in group}) < 2:
        return [(load, named_load(load)) for load in group]
    first = group[0]
    cases = ", ".join(f"{load.case} {show(load.values[0], 'force')}" for load in group)
    return [(first, f"{first.origin.rpartition(' (')[0] or first.origin}: {cases}")]

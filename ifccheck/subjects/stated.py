"""What the engineer stated of a beam that overrules a doubt."""

from __future__ import annotations

from collections.abc import Sequence

from ifccheck.beam import Load
from ifccheck.brief.statements import BeamStatement
from ifccheck.brief.supports import told_ignored
from ifccheck.subjects.findings import Sources


def stated_texts(
    key: str, sources: Sources, statement: BeamStatement, loads: Sequence[Load]
) -> tuple[str, ...]:
    """What the engineer stated that overrules a doubt: it must be seen."""
    found = []
    if statement.unloaded:
        found.append("unloaded = true: self weight alone is meant")
    if statement.loads_complete:
        found.append("loads_complete = true: what rests on the beam is in the loads given")
    if statement.slab_bars_from:
        found.append('slab_bars = "anchored": bars of slabs in its flange are anchored')
    if key in sources.ignored:
        found += told_ignored(sources.ignored[key])
    if sources.upward:
        found += _stated_upward(sources, loads)
    return tuple(found)


def _stated_upward(sources: Sources, loads: Sequence[Load]) -> tuple[str, ...]:
    meant = dict.fromkeys(load.origin for load in loads if sources.upward.get(load.origin))
    return tuple(f"upward = true: {place} acts upward" for place in meant)

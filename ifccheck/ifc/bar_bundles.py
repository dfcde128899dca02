"""Bars in contact: more than a bundle may have are a reason."""

from __future__ import annotations

from collections import defaultdict

import numpy as np

from ifccheck.ifc.bar_clashes import near_pairs
from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.bars import Runs
from ifccheck.ifc.measured import Measured

IN_CONTACT = 1.1
"""Bars touch whose centres are no further apart than this part of their mean diameter."""
MOST = 4
"""Bars of a bundle (CSA A23.3-14, 7.4.2, from memory)"""
TOO_MANY = f"more than {MOST} bars lie in contact, more than a bundle may have"


def judge_bundles(model: Measured, runs: Runs, beam: Ints, counted: Bools) -> None:
    """Say where more bars lie in contact than a bundle may have."""
    diameter = model.lines.diameter[runs.row]
    pairs = near_pairs(runs, beam, diameter, IN_CONTACT)
    linked: dict[int, set[int]] = defaultdict(set)
    for one, other in pairs:
        if counted[one] and counted[other]:
            linked[one].add(other)
            linked[other].add(one)
    known: set[int] = set()
    for run in sorted(linked):
        if run not in known:
            bundle = _reached(linked, run)
            known |= bundle
            if len(bundle) > MOST and _at_once(runs, bundle) > MOST:
                model.reason(runs.row[sorted(bundle)], TOO_MANY)


def _reached(linked: dict[int, set[int]], run: int) -> set[int]:
    """A run and all that lie in contact with it, or with one another beside it."""
    found, left = {run}, [run]
    while left:
        more = linked[left.pop()] - found
        found |= more
        left += more
    return found


def _at_once(runs: Runs, bundle: set[int]) -> int:
    """The most of some runs that any section holds."""
    at = np.array(sorted(bundle), dtype=np.intp)
    start, end = runs.start[at], runs.end[at]
    return int(((start[:, None] >= start) & (start[:, None] < end)).sum(axis=1).max())

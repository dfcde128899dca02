"""Bars that are drawn through one another: the same steel modelled twice, counted once."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bars import LEAST_RUN, Runs, group
from ifccheck.ifc.measured import USUAL_YIELD, Measured

TOUCHING = 0.9
"""The centres of two bars are no nearer than this part of their mean diameter: bars of a bundle
touch at 1.0."""
CLASH = 2.0
"""Bars are nearer to one another over no more than this many diameters where they only cross."""
LAP = 200.0
"""Bars lapped on one axis count together over this length [mm]: no more than any development
length, in tension or compression, so that both give no more than one (CSA A23.3-14, 12.3.1, from
memory)."""
LEAN = 10.0
"""Step [mm] by which bars that lean across the beam are told from those that do not."""
TWICE = "lie in one another, as if modelled twice: counted once"
LAPPED = f"lap on one axis, drawn in one another: counted together over {LAP:.0f} mm only"


GUEST = (
    "lie in one another, and one runs on into it from another beam: that one is not counted here"
)


@dataclass
class _Counted:
    """What is counted of runs that are drawn through others; one row each (M)."""

    start: Floats
    end: Floats
    start_hook: Bools
    end_hook: Bools
    counted: Bools
    guest: Bools
    """The bar runs on into the beam from another one."""
    diameter: Floats
    lean: Floats
    force: Floats

    def gives(self, run: int) -> tuple[float, float, int, float]:
        """What a run gives, in the order of what matters: force, lean, hooks, length."""
        hooks = int(self.start_hook[run]) + int(self.end_hook[run])
        return float(self.force[run]), float(self.lean[run]), hooks, self.length(run)

    def length(self, run: int) -> float:
        """Length of a run [mm]."""
        return float(self.end[run] - self.start[run])

    def leave_out(self, one: int, other: int) -> int:
        """Leave out that of two runs which gives more, or leans; of equal bars that stop at quite
        other places the shorter one."""
        long = LEAST_RUN * max(self.diameter[one], self.diameter[other])
        differ = abs(self.length(one) - self.length(other))
        if self.force[one] == self.force[other] and differ > long:
            out = one if self.length(one) < self.length(other) else other
        else:
            out = one if self.gives(one) > self.gives(other) else other
        self.counted[out] = False
        return out

    def is_lap(self, one: int, other: int) -> bool:
        """Whether the first run goes on well before the other, and the other well beyond it."""
        before, beyond = self.start[other] - self.start[one], self.end[other] - self.end[one]
        return bool(min(before, beyond) > LEAST_RUN * max(self.diameter[[one, other]]))

    def cut_lap(self, first: int, second: int) -> None:
        """Let two runs that lap on one axis overlap by ``LAP`` at most, with straight ends."""
        self.end_hook[first] = self.start_hook[second] = False
        if self.force[first] > self.force[second]:
            self.end[first] = min(self.end[first], self.start[second] + LAP)
        else:
            self.start[second] = max(self.start[second], self.end[first] - LAP)


def without_clashes(model: Measured, runs: Runs, beam: Ints) -> tuple[Runs, Bools]:
    """Count steel once where runs are drawn through one another.

    Returns the runs, some shortened, and which of them count (M).
    """
    diameter = model.lines.diameter[runs.row]
    held = _Counted(
        runs.start.copy(),
        runs.end.copy(),
        runs.start_hook.copy(),
        runs.end_hook.copy(),
        np.ones(len(runs.row), dtype=bool),
        model.places.are_guests(model.rows)[runs.row],
        diameter,
        np.rint(np.abs(np.diff(runs.line[:, :, 1:], axis=1)).max(axis=(1, 2)) / LEAN),
        np.zeros(len(diameter)),
    )
    pairs = list(near_pairs(runs, beam, diameter, TOUCHING))
    if not pairs:
        return runs, held.counted
    for run in {run for pair in pairs for run in pair}:
        held.force[run] = force_of(model, int(runs.row[run]))
    for one, other in pairs:
        _settle(model, runs, held, one, other)
    cut = replace(
        runs,
        start=held.start,
        end=held.end,
        start_hook=held.start_hook,
        end_hook=held.end_hook,
        start_beyond=np.where(held.start == runs.start, runs.start_beyond, 0.0),
        end_beyond=np.where(held.end == runs.end, runs.end_beyond, 0.0),
    )
    return cut, held.counted


def _settle(model: Measured, runs: Runs, held: _Counted, one: int, other: int) -> None:
    """Count the steel of two runs that clash once."""
    common = min(held.end[[one, other]]) - max(held.start[[one, other]])
    least = CLASH * min(held.diameter[[one, other]])
    if not held.counted[[one, other]].all() or common <= least:
        return
    text = LAPPED
    if held.guest[one] != held.guest[other]:
        text = GUEST
        held.counted[one if held.guest[one] else other] = False
    elif held.is_lap(one, other):
        held.cut_lap(one, other)
    elif held.is_lap(other, one):
        held.cut_lap(other, one)
    else:
        text = TWICE
        held.leave_out(one, other)
    names = [model.label(int(runs.row[run])) for run in (one, other)]
    model.findings.remark(int(model.rows.beam[runs.row[one]]), text, names)


def force_of(model: Measured, row: int) -> float:
    """Area by yield strength of the bar of a row [N]."""
    strength = model.strength(row)
    return model.size(row).area * (strength.value if strength else USUAL_YIELD)


def near_pairs(runs: Runs, beam: Ints, diameter: Floats, part: float) -> Iterator[tuple[int, int]]:
    """Pairs of runs whose centres are nearer than a part of their mean diameter, over more than a
    crossing."""
    if len(beam) < 2:
        return
    middle, lean = runs.line.mean(axis=1), np.abs(np.diff(runs.line, axis=1)).max(axis=0)[0]
    reach = part * float(diameter.max())
    cluster = group(beam, middle[:, 1], reach + lean[1])
    cluster = group(cluster, middle[:, 2], reach + lean[2])
    order = np.argsort(cluster, kind="stable")
    first = np.arange(len(order))
    for step in range(1, len(order)):
        first = first[first + step < len(order)]
        first = first[cluster[order[first]] == cluster[order[first + step]]]
        if not first.size:
            return
        one, other = order[first], order[first + step]
        near = _near_one_another(runs, diameter, part, one, other)
        yield from zip(one[near].tolist(), other[near].tolist(), strict=True)


def _near_one_another(runs: Runs, diameter: Floats, part: float, one: Ints, other: Ints) -> Bools:
    """Whether the centre lines of pairs of runs are near over more than a crossing."""
    a, b = runs.line[one], runs.line[other]
    start, end = np.maximum(a[:, 0, 0], b[:, 0, 0]), np.minimum(a[:, 1, 0], b[:, 1, 0])
    at_start = _section_place(a, start) - _section_place(b, start)
    change = _section_place(a, end) - _section_place(b, end) - at_start
    reach = part * (diameter[one] + diameter[other]) / 2.0
    near = _share_within(at_start, change, reach) * np.maximum(end - start, 0.0)
    return np.asarray(near > CLASH * np.minimum(diameter[one], diameter[other]))


def _section_place(line: Floats, x: Floats) -> Floats:
    """y and z of straight lines at places along the beam (N, 2)."""
    part = (x - line[:, 0, 0]) / (line[:, 1, 0] - line[:, 0, 0])
    return np.asarray(line[:, 0, 1:] + part[:, None] * (line[:, 1, 1:] - line[:, 0, 1:]))


def _share_within(apart: Floats, change: Floats, reach: Floats) -> Floats:
    """Part of a stretch on which |apart + t change| < reach, t from 0 to 1."""
    square = (change**2).sum(axis=1)
    still: Bools = square < 1e-9
    safe = np.where(still, 1.0, square)
    nearest = -(apart * change).sum(axis=1) / safe
    beside = (apart**2).sum(axis=1) - np.where(still, 0.0, nearest**2 * safe)
    half = np.sqrt(np.maximum(reach**2 - beside, 0.0) / safe)
    part = np.clip(nearest + half, 0.0, 1.0) - np.clip(nearest - half, 0.0, 1.0)
    return np.asarray(np.where(still, beside < reach**2, part))

"""Bars that are modelled as bodies, reduced to longitudinal bars and stirrups of their beams."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.beam import Bars, Stirrups
from ifccheck.ifc.bar_findings import Findings
from ifccheck.ifc.bar_groups import longitudinal_bars
from ifccheck.ifc.bar_levels import leaning_with_tapers
from ifccheck.ifc.bar_outlines import (
    FIT_TOLERANCE,
    bends_outside,
    legs_outside,
    runs_outside,
    without_hooks,
)
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, count_by_row
from ifccheck.ifc.bar_rows import BarPlaces, Rows
from ifccheck.ifc.bar_sizes import taken_as
from ifccheck.ifc.bars import ALONG, LEAST_RUN, LONGEST_CHORD, Runs, find_runs
from ifccheck.ifc.equal_rows import renumbered, used
from ifccheck.ifc.measured import Measured, measure
from ifccheck.ifc.stirrup_legs import Legs
from ifccheck.ifc.stirrup_sets import Ties, find_ties, lies_square
from ifccheck.ifc.stirrup_zones import stirrups_by_zone

SKEWED = 0.966
"""Cosine of the angle (15 degrees) within which a bar may be meant to run along the beam."""
END_TOLERANCE = 5.0
"""A stirrup may lie beyond the end of its beam by this [mm]."""
OUTSIDE = "lies outside the concrete of the beam"
BEYOND = "lies beyond the end of the beam, not counted"
NO_LEG = "no leg crosses the height that a hook or a bend holds at both ends: not counted in shear"
BENT_UP = "inclined parts are not counted, neither along the beam nor in shear"
MAIN_ROLES, TIE_ROLES = frozenset({"MAIN", "EDGE"}), frozenset({"LIGATURE", "RING"})


@dataclass(frozen=True, slots=True)
class Physical:
    """The bars of all beams, by row of the beam."""

    bars: Mapping[int, tuple[Bars, ...]]
    stirrups: Mapping[int, tuple[Stirrups, ...]]


@dataclass(frozen=True, slots=True)
class Tied:
    """Rows that lie square to their beams (T)."""

    rows: Rows
    stands_for: Ints
    """Row, of all, that each differs from by its place along the beam alone."""
    shift: Floats
    """How far beyond that it lies [mm]."""


def reduce_bars(places: BarPlaces, rows: Rows, findings: Findings) -> Physical:
    """Reduce strands to longitudinal bars and stirrups; what is left out goes to the findings."""
    if not len(rows.strand):
        return Physical({}, {})
    alike = _Alike(places, rows)
    square = alike.square
    along = np.flatnonzero(~square)
    bars = _along(measure(places, rows.take(along), alike.lines(along), findings))
    tied = Tied(rows.take(square), alike.stands_for[square], alike.shift[square])
    shapes, shape = renumbered(tied.stands_for, len(rows.strand))
    model = measure(places, rows.take(shapes), alike.lines(shapes), findings)
    return Physical(bars, _across(model, tied, shape, bars))


class _Alike:
    """Rows of which only those are measured that differ by more than a place along a beam."""

    def __init__(self, places: BarPlaces, rows: Rows) -> None:
        self._places, self._rows = places, rows
        self.stands_for, self.shift = places.alike(rows)
        self._known = used(self.stands_for, len(rows.strand))
        self._lines = places.centre_lines(rows.take(self._known))
        square = np.zeros(len(rows.strand), dtype=bool)
        square[self._known] = lies_square(self._lines)
        self.square: Bools = square[self.stands_for]
        """Whether each lies square to its beam."""

    def lines(self, wanted: Ints) -> CentreLines:
        """Centre lines of some of the rows, in order."""
        more = np.setdiff1d(wanted, self._known, assume_unique=True)
        known = np.concatenate((self._known, more))
        lines = self._lines
        if len(more):
            lines = lines.with_more(self._places.centre_lines(self._rows.take(more)))
        place = np.zeros(len(self._rows.strand), dtype=np.intp)
        place[known] = np.arange(len(known))
        return lines.take(place[wanted])


def _along(model: Measured) -> dict[int, tuple[Bars, ...]]:
    """Bars that do not lie square to their beams."""
    if not model.lines.count:
        return {}
    beam = model.rows.beam[model.pieces.row]
    leaning = leaning_with_tapers(model.places.frames, beam, model.pieces)
    runs = _within_concrete(model, find_runs(model.lines, model.pieces, leaning))
    is_main = np.zeros(model.lines.count, dtype=bool)
    is_main[runs.row] = True
    _judge_others(model, is_main, leaning)
    _judge_roles(model, is_main, TIE_ROLES, "a stirrup by its role, but runs along the beam")
    model.reason(np.flatnonzero(_run_outside(model, runs)), OUTSIDE)
    model.remark(np.flatnonzero(is_main & ~_reaching(model, runs)), BEYOND)
    judge_data(model, is_main)
    return longitudinal_bars(model, runs)


def _across(
    model: Measured, tied: Tied, shape: Ints, bars: Mapping[int, tuple[Bars, ...]]
) -> dict[int, tuple[Stirrups, ...]]:
    """Bars that lie square to their beams; the shapes were measured, and each has one of them."""
    if not len(shape):
        return {}
    places = model.places
    of_shapes, legs = _find_ties(model)
    outside = _outside(model, anywhere=True)
    outside |= legs_outside(places.frames, model.rows.beam, of_shapes.x, legs, model.lines.diameter)
    outside = outside[shape]
    ties = replace(of_shapes.take(shape), row=np.arange(len(shape)))
    ties = replace(ties, x=ties.x + tied.shift)
    model = replace(model, rows=tied.rows, bar=places.table.bar[tied.rows.strand])
    counted = _judge_legs(model, ties)
    model.reason(np.flatnonzero(outside & counted), OUTSIDE)
    judge_data(model, counted)
    return stirrups_by_zone(model, ties.take(counted), legs, bars)


def _judge_legs(model: Measured, ties: Ties) -> Bools:
    """Tell of bars that lie square but are no stirrups of the beam; which are (T)."""
    length = model.places.frames.length[model.rows.beam]
    beyond = (ties.x < -END_TOLERANCE) | (ties.x > length + END_TOLERANCE)
    counted = (ties.legs[:, 1] > 0) & ~beyond
    model.remark(np.flatnonzero(beyond), BEYOND)
    flat = ~beyond & ~counted
    model.remark(np.flatnonzero(flat), NO_LEG)
    _judge_roles(model, counted, MAIN_ROLES, "a main bar by its role, but lies square to the beam")
    return np.asarray(counted)


def _find_ties(model: Measured) -> tuple[Ties, Legs]:
    middle = (model.lines.lowest()[:, 0] + model.lines.highest()[:, 0]) / 2.0
    bounds = model.places.frames.bounds_at(model.rows.beam, middle)
    height = bounds[:, 3] - bounds[:, 2]
    return find_ties(model.lines, model.pieces, bounds[:, 2], height)


def _judge_others(model: Measured, is_main: Bools, leaning: Bools) -> None:
    """Tell of bars, and parts of bars, that are neither along nor square to the beam."""
    pieces, rows = model.pieces, model.lines.count
    thick = model.lines.diameter[pieces.row]
    slope = np.abs(pieces.direction[:, 0])
    long = pieces.straight & (pieces.length > LONGEST_CHORD * thick)
    inclined = long & (slope < ALONG) & (slope > np.sqrt(1.0 - ALONG**2))
    bent_up = count_by_row(pieces.row, inclined & ~leaning & is_main[pieces.row], rows) > 0
    model.remark(np.flatnonzero(bent_up), BENT_UP)
    other = ~is_main
    lengths = np.bincount(pieces.row, pieces.length, rows)
    short = other & (lengths <= LEAST_RUN * model.lines.diameter)
    skewed = long & (slope >= SKEWED) & (pieces.length > LEAST_RUN * thick)
    straight = count_by_row(pieces.row, long, rows) > 0
    unread = other & ~short & ((count_by_row(pieces.row, skewed, rows) > 0) | ~straight)
    model.remark(np.flatnonzero(short), "too short to count along the beam")
    model.reason(np.flatnonzero(unread), "runs neither along the beam nor square to it: not read")
    left = other & ~short & ~unread
    model.remark(np.flatnonzero(left), "inclined, not counted")


def _judge_roles(model: Measured, mask: Bools, roles: frozenset[str], text: str) -> None:
    """Shape decides over role; where they contradict each other it is told."""
    table = model.places.table
    contrary = np.array([role in roles for role in table.roles], dtype=bool)
    rows = np.flatnonzero(mask)
    model.remark(rows[contrary[table.role[model.bar[rows]]]], f"{text}: taken by its shape")


def _within_concrete(model: Measured, runs: Runs) -> Runs:
    """Take ends whose hooks leave the concrete as straight; what else leaves it is a reason."""
    is_main = np.zeros(model.lines.count, dtype=bool)
    is_main[runs.row] = True
    leaving = bends_outside(model.places.frames, model.rows.beam, model.lines, is_main)
    runs, unhooked, left = without_hooks(model.lines, runs, leaving)
    model.remark(unhooked, "its hook leaves the concrete of the beam: taken as a straight end")
    model.reason(left, OUTSIDE)
    return runs


def _reaching(model: Measured, runs: Runs) -> Bools:
    """Whether each bar runs along its beam anywhere between the beam's ends."""
    length = model.places.frames.length[model.rows.beam[runs.row]]
    reaching = np.zeros(model.lines.count, dtype=bool)
    reaching[runs.row[(runs.end > 0.0) & (runs.start < length)]] = True
    return reaching


def _run_outside(model: Measured, runs: Runs) -> Bools:
    """Whether each bar that runs along its beam leaves its section between the beam's ends."""
    is_main = np.zeros(model.lines.count, dtype=bool)
    is_main[runs.row] = True
    outside = is_main & _outside(model)
    diameter = model.lines.diameter[runs.row]
    beyond = runs_outside(model.places.frames, model.rows.beam[runs.row], runs, diameter)
    outside[runs.row[beyond]] = True
    return outside


def _outside(model: Measured, anywhere: bool = False) -> Bools:
    """Whether each bar leaves the box round its section between the ends, or ``anywhere``."""
    lines, beam = model.lines, model.rows.beam[model.lines.row]
    x = lines.points[:, 0]
    bounds = model.places.frames.bounds_at(beam, x)
    reach = lines.diameter[lines.row] / 2.0 - FIT_TOLERANCE
    y, z = lines.points[:, 1], lines.points[:, 2]
    outside = (y - reach < bounds[:, 0]) | (y + reach > bounds[:, 1])
    outside |= (z - reach < bounds[:, 2]) | (z + reach > bounds[:, 3])
    outside &= anywhere | ((x >= 0.0) & (x <= model.places.frames.length[beam]))
    return count_by_row(lines.row, outside, lines.count) > 0


def judge_data(model: Measured, used: Bools) -> None:
    """Tell where the sources of size and grade disagree or could not be read."""
    table, strand, rows = model.places.table, model.rows.strand, np.flatnonzero(used)
    sizes, grades = model.places.size[strand[rows]], model.places.grade[strand[rows]]
    model.remark_each(rows, sizes, [taken_as(size) for size in table.sizes])
    model.remark_each(rows, grades, [grade.doubt for grade in table.grades])

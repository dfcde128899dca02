"""Bars that are modelled as bodies, reduced to longitudinal bars and stirrups of their beams."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from ifccheck.beam import Anchor, Bars, Given, Stirrups
from ifccheck.ifc.bar_findings import LISTED, Findings, name_bars
from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.bar_pieces import CentreLines, Pieces, count_by_row, cut_into_pieces
from ifccheck.ifc.bar_rows import BarPlaces, Rows
from ifccheck.ifc.bars import (
    ALONG,
    LEAST_RUN,
    LONGEST_CHORD,
    Runs,
    apart,
    equal_bars,
    find_runs,
    settle_heights,
)
from ifccheck.ifc.stirrup_sets import (
    Place,
    Ties,
    Zone,
    find_ties,
    gather_places,
    lies_square,
    zones_of_one_spacing,
)

FIT_TOLERANCE = 1.0
"""Steel may lie outside the box round its section by this [mm]."""
SKEWED = 0.966
"""Cosine of the angle (15 degrees) within which a bar may be meant to run along the beam."""
SLOPING = 10.0
"""A bar that rises by more than this [mm] is remarked on."""
END_TOLERANCE = 5.0
"""A stirrup may lie beyond the end of its beam by this [mm]."""
OUTSIDE = "lies outside the concrete of the beam"
MAIN_ROLES, TIE_ROLES = frozenset({"MAIN", "EDGE"}), frozenset({"LIGATURE", "RING"})


@dataclass(frozen=True, slots=True)
class Physical:
    """The bars of all beams, by row of the beam."""

    bars: Mapping[int, tuple[Bars, ...]]
    stirrups: Mapping[int, tuple[Stirrups, ...]]


@dataclass(frozen=True, slots=True)
class Measured:
    """Strands in the axes of their beams with all that is known of each (R)."""

    places: BarPlaces
    rows: Rows
    lines: CentreLines
    pieces: Pieces
    findings: Findings
    bar: Ints
    """Bar of each row."""

    def label(self, row: int) -> str:
        """What people call the bar of a row."""
        return self.places.table.bars[int(self.bar[row])].label

    def names(self, rows: Sequence[int]) -> str:
        """What people call the bars of rows."""
        bars = list(dict.fromkeys(self.bar[rows].tolist()))
        return name_bars([self.places.table.bars[bar].label for bar in bars[:LISTED]], len(bars))

    def grade(self, row: int) -> Given | None:
        """Yield strength of the bar of a row."""
        table = self.places.table
        return table.grades[table.bars[int(self.bar[row])].grade].strength

    def remark(self, rows: Iterable[int], text: str) -> None:
        """Say something of the bars of rows."""
        for row in rows:
            self.findings.remark(int(self.rows.beam[row]), text, (self.label(row),))

    def reason(self, rows: Iterable[int], text: str) -> None:
        """Say why the bars of rows keep their beams from being rated."""
        for row in rows:
            self.findings.reason(int(self.rows.beam[row]), text, (self.label(row),))


def reduce_bars(places: BarPlaces, rows: Rows, findings: Findings) -> Physical:
    """Reduce strands to longitudinal bars and stirrups; what is left out goes to the findings."""
    if not len(rows.strand):
        return Physical({}, {})
    stands_for, shift = places.alike(rows)
    shapes = np.unique(stands_for)
    square = np.zeros(len(rows.strand), dtype=bool)
    square[shapes] = lies_square(places.centre_lines(rows.take(shapes)))
    square = square[stands_for]
    bars = _along(_measured(places, rows.take(~square), findings))
    stirrups = _across(places, rows.take(square), stands_for[square], shift[square], rows, findings)
    return Physical(bars, stirrups)


def _measured(places: BarPlaces, rows: Rows, findings: Findings) -> Measured:
    lines = places.centre_lines(rows)
    bar = places.table.bar[rows.strand]
    return Measured(places, rows, lines, cut_into_pieces(lines), findings, bar)


def _along(model: Measured) -> dict[int, tuple[Bars, ...]]:
    """Bars that do not lie square to their beams."""
    if not model.lines.count:
        return {}
    runs = find_runs(model.lines, model.pieces)
    is_main = np.zeros(model.lines.count, dtype=bool)
    is_main[runs.row] = True
    _judge_others(model, is_main)
    _judge_roles(model, is_main, TIE_ROLES, "a stirrup by its role, but runs along the beam")
    model.reason(np.flatnonzero(_outside(model) & is_main).tolist(), OUTSIDE)
    _judge_data(model, is_main)
    return _longitudinal(model, runs)


def _across(
    places: BarPlaces, tied: Rows, stands_for: Ints, shift: Floats, rows: Rows, findings: Findings
) -> dict[int, tuple[Stirrups, ...]]:
    """Bars that lie square to their beams; of those alike only one is measured."""
    if not len(tied.strand):
        return {}
    shapes, shape = np.unique(stands_for, return_inverse=True)
    model = _measured(places, rows.take(shapes), findings)
    of_shapes = _find_ties(model)
    outside = _outside(model, anywhere=True)[shape]
    ties = replace(of_shapes.take(shape), row=np.arange(len(shape)))
    ties = replace(ties, x=ties.x + shift)
    model = replace(model, rows=tied, bar=places.table.bar[tied.strand])
    length = places.frames.length[tied.beam]
    beyond = (ties.x < -END_TOLERANCE) | (ties.x > length + END_TOLERANCE)
    counted = (ties.legs[:, 1] > 0) & ~beyond
    model.remark(np.flatnonzero(beyond).tolist(), "lies beyond the end of the beam, not counted")
    flat = ~beyond & ~counted
    model.remark(np.flatnonzero(flat).tolist(), "no leg crosses the height, not counted in shear")
    _judge_roles(model, counted, MAIN_ROLES, "a main bar by its role, but lies square to the beam")
    model.reason(np.flatnonzero(outside & counted).tolist(), OUTSIDE)
    _judge_data(model, counted)
    return _stirrups(model, ties.take(counted))


def _find_ties(model: Measured) -> Ties:
    middle = (model.lines.lowest()[:, 0] + model.lines.highest()[:, 0]) / 2.0
    bounds = model.places.frames.bounds_at(model.rows.beam, middle)
    height = bounds[:, 3] - bounds[:, 2]
    return find_ties(model.lines, model.pieces, bounds[:, 2], height)


def _judge_others(model: Measured, is_main: Bools) -> None:
    """Tell of bars, and parts of bars, that are neither along nor square to the beam."""
    pieces, rows = model.pieces, model.lines.count
    thick = model.lines.diameter[pieces.row]
    slope = np.abs(pieces.direction[:, 0])
    long = pieces.straight & (pieces.length > LONGEST_CHORD * thick)
    inclined = long & (slope < ALONG) & (slope > np.sqrt(1.0 - ALONG**2))
    bent_up = count_by_row(pieces.row, inclined & is_main[pieces.row], rows) > 0
    model.remark(np.flatnonzero(bent_up).tolist(), "inclined parts are not counted")
    other = ~is_main
    lengths = np.bincount(pieces.row, pieces.length, rows)
    short = other & (lengths <= LEAST_RUN * model.lines.diameter)
    skewed = long & (slope >= SKEWED) & (pieces.length > LEAST_RUN * thick)
    straight = count_by_row(pieces.row, long, rows) > 0
    unread = other & ~short & ((count_by_row(pieces.row, skewed, rows) > 0) | ~straight)
    model.remark(np.flatnonzero(short).tolist(), "too short to count along the beam")
    model.reason(
        np.flatnonzero(unread).tolist(), "runs neither along the beam nor square to it: not read"
    )
    left = other & ~short & ~unread
    model.remark(np.flatnonzero(left).tolist(), "inclined, not counted")


def _judge_roles(model: Measured, mask: Bools, roles: frozenset[str], text: str) -> None:
    """Shape decides over role; where they contradict each other it is told."""
    contradicted = [bar.role in roles for bar in model.places.table.bars]
    contrary = np.array(contradicted, dtype=bool)[model.bar] & mask
    model.remark(np.flatnonzero(contrary).tolist(), f"{text}: taken by its shape")


def _outside(model: Measured, anywhere: bool = False) -> Bools:
    """Whether each bar leaves its section between the beam's ends, or ``anywhere``."""
    lines, beam = model.lines, model.rows.beam[model.lines.row]
    x = lines.points[:, 0]
    bounds = model.places.frames.bounds_at(beam, x)
    reach = lines.diameter[lines.row] / 2.0 - FIT_TOLERANCE
    y, z = lines.points[:, 1], lines.points[:, 2]
    outside = (y - reach < bounds[:, 0]) | (y + reach > bounds[:, 1])
    outside |= (z - reach < bounds[:, 2]) | (z + reach > bounds[:, 3])
    outside &= anywhere | ((x >= 0.0) & (x <= model.places.frames.length[beam]))
    return count_by_row(lines.row, outside, lines.count) > 0


def _judge_data(model: Measured, used: Bools) -> None:
    """Tell where the sources of size and grade disagree or could not be read."""
    table = model.places.table
    doubts = [(table.sizes[bar.size].doubt, table.grades[bar.grade].doubt) for bar in table.bars]
    doubtful = np.array([bool(size or grade) for size, grade in doubts], dtype=bool)[model.bar]
    for row in np.flatnonzero(doubtful & used).tolist():
        bar = table.bars[int(model.bar[row])]
        size, (size_doubt, grade_doubt) = table.sizes[bar.size], doubts[int(model.bar[row])]
        if size_doubt:
            taken = f"taken as {size.designation} of {size.area:.4g} mm2"
            model.remark((row,), f"sizes differ ({size_doubt}): {taken}")
        if grade_doubt:
            model.remark((row,), grade_doubt)


def _longitudinal(model: Measured, runs: Runs) -> dict[int, tuple[Bars, ...]]:
    beam = model.rows.beam[runs.row]
    centre = np.clip((runs.start + runs.end) / 2.0, 0.0, model.places.frames.length[beam])
    bounds = model.places.frames.bounds_at(beam, centre)
    height, steep = settle_heights(runs, (bounds[:, 2] + bounds[:, 3]) / 2.0)
    model.remark(runs.row[steep].tolist(), "crosses the middle of the section, not counted")
    sloping = ~steep & (runs.highest - runs.lowest > SLOPING)
    model.remark(
        runs.row[sloping].tolist(), "slopes: taken at its height nearest to the section's middle"
    )
    bent = runs.row[runs.poor_bend]
    model.remark(bent.tolist(), "ends in a bend short of a standard hook: taken as straight")
    table, bar = model.places.table, model.bar[runs.row]
    sizes = np.array([one.size for one in table.bars], dtype=np.intp)[bar]
    grades = np.array([one.grade for one in table.bars], dtype=np.intp)[bar]
    keys = np.stack([steep, beam, sizes, grades, runs.start_hook, runs.end_hook], axis=1)
    labels = np.unique(keys, axis=0, return_inverse=True)[1].reshape(-1)
    found: dict[int, list[Bars]] = {}
    for members in equal_bars(labels, runs, height):
        if not steep[members[0]]:
            kept = members[apart(runs.y[members])]
            if len(kept) < len(members):
                model.remark(runs.row[members].tolist(), "modelled twice, counted once")
            found.setdefault(int(beam[members[0]]), []).append(_bars(model, runs, height, kept))
    return {key: tuple(sorted(one, key=lambda b: (b.z, b.start))) for key, one in found.items()}


def _bars(model: Measured, runs: Runs, height: Floats, members: Ints) -> Bars:
    first = int(members[0])
    row = int(runs.row[first])
    size = model.places.table.sizes[model.places.table.bars[int(model.bar[row])].size]
    return Bars(
        count=len(members),
        diameter=size.diameter,
        area=size.area,
        start=float(runs.start[members].max()),
        end=float(runs.end[members].min()),
        z=float(height[members].mean()),
        ys=tuple(runs.y[members].tolist()),
        yield_strength=model.grade(row),
        start_anchor=Anchor.HOOK if runs.start_hook[first] else Anchor.STRAIGHT,
        end_anchor=Anchor.HOOK if runs.end_hook[first] else Anchor.STRAIGHT,
        designation=size.designation,
        origin=model.names(runs.row[members].tolist()),
    )


def _stirrups(model: Measured, legged: Ties) -> dict[int, tuple[Stirrups, ...]]:
    table, bar = model.places.table, model.bar[legged.row]
    areas = np.array([size.area for size in table.sizes], dtype=float)
    sizes = np.array([one.size for one in table.bars], dtype=np.intp)[bar]
    grades = np.array([one.grade for one in table.bars], dtype=np.intp)[bar]
    beam = model.rows.beam[legged.row]
    thick = model.places.diameter[model.rows.strand[legged.row]]
    found, twice = gather_places(legged, beam, thick, areas[sizes], grades)
    model.remark(legged.row[twice].tolist(), "modelled twice, counted once")
    return {key: tuple(_beam_stirrups(model, key, places)) for key, places in found.items()}


def _beam_stirrups(model: Measured, beam: int, places: Sequence[Place]) -> Iterator[Stirrups]:
    partial = [row for place in places if place.legs == 0 for row in place.rows.tolist()]
    model.remark(partial, "its legs do not run through the height of the section: not counted")
    whole = [place for place in places if place.legs > 0]
    zones = zones_of_one_spacing(whole, float(model.places.frames.length[beam]))
    if len(whole) == 1:
        model.remark(whole[0].rows.tolist(), "the only stirrup: not counted")
    for zone in zones:
        yield _zone_stirrups(model, beam, zone)


def _zone_stirrups(model: Measured, beam: int, zone: Zone) -> Stirrups:
    least = zone.least
    bar = model.places.table.bars[int(model.bar[least.rows[0]])]
    return Stirrups(
        start=zone.start,
        end=zone.end,
        spacing=zone.spacing,
        diameter=least.diameter,
        leg_area=least.area / least.legs,
        legs=least.legs,
        closed=all(place.closed for place in zone.places),
        yield_strength=_stirrup_yield(model, beam, zone),
        bottom=min(place.bottom for place in zone.places),
        top=max(place.top for place in zone.places),
        half_width=max(place.half_width for place in zone.places),
        designation=model.places.table.sizes[bar.size].designation,
        origin=model.names([row for place in zone.places for row in place.rows.tolist()]),
    )


def _stirrup_yield(model: Measured, beam: int, zone: Zone) -> Given | None:
    """The lowest yield strength of a zone's stirrups."""
    if zone.least.grade >= 0:
        return model.grade(int(zone.least.rows[0]))
    grades = [model.grade(row) for place in zone.places for row in place.rows.tolist()]
    known = [grade for grade in grades if grade is not None]
    if known and len(known) < len(grades):
        model.findings.reason(
            beam, "the steel of some of its stirrups is known and of others not", blocking=False
        )
        return None
    return min(known, key=lambda grade: grade.value, default=None)

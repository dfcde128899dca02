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
    SAME_BAR,
    Runs,
    equal_bars,
    find_runs,
    settle_heights,
)
from ifccheck.ifc.stirrup_sets import (
    Places,
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
PARTIAL = "its legs do not run through the height of the section: not counted"
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
        grade = int(self.places.grade[self.rows.strand[row]])
        return self.places.table.grades[grade].strength

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
    bars = model.places.table.bars
    of_bars = model.bar.tolist()
    contrary = [row for row in np.flatnonzero(mask).tolist() if bars[of_bars[row]].role in roles]
    model.remark(contrary, f"{text}: taken by its shape")


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
    table, strand = model.places.table, model.rows.strand
    size_doubts = np.array([bool(size.doubt) for size in table.sizes], dtype=bool)
    grade_doubts = np.array([bool(grade.doubt) for grade in table.grades], dtype=bool)
    sizes, grades = model.places.size[strand], model.places.grade[strand]
    for row in np.flatnonzero(used & size_doubts[sizes]).tolist():
        size = table.sizes[int(sizes[row])]
        taken = f"taken as {size.designation} of {size.area:.4g} mm2"
        model.remark((row,), f"sizes differ ({size.doubt}): {taken}")
    for row in np.flatnonzero(used & grade_doubts[grades]).tolist():
        model.remark((row,), table.grades[int(grades[row])].doubt)


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
    labels = _labels(model, runs, beam, steep)
    found: dict[int, list[Bars]] = {}
    for members, bars in _equal(model, runs, labels, height):
        if not steep[members[0]]:
            found.setdefault(int(beam[members[0]]), []).append(bars)
    return {
        key: tuple(sorted(one, key=lambda b: (b.z, b.start, b.end))) for key, one in found.items()
    }


def _labels(model: Measured, runs: Runs, beam: Ints, steep: Bools) -> Ints:
    """Number the runs so that only those of one beam, size, grade and anchors have one number."""
    table, strand = model.places.table, model.rows.strand[runs.row]
    sizes, grades = model.places.size[strand], model.places.grade[strand]
    label = beam * len(table.sizes) + sizes
    label = label * len(table.grades) + grades
    return ((label * 2 + runs.start_hook) * 2 + runs.end_hook) * 2 + steep


def _equal(
    model: Measured, runs: Runs, labels: Ints, height: Floats
) -> Iterator[tuple[Ints, Bars]]:
    """Groups of equal bars, each with the runs that it is made of."""
    order, first = equal_bars(labels, runs, height)
    if not len(order):
        return
    apart = np.ones(len(order), dtype=bool)
    apart[1:] = np.diff(runs.y[order]) >= SAME_BAR
    apart[first] = True
    model.remark(runs.row[order[~apart]].tolist(), "modelled twice, counted once")
    order, first = order[apart], first - np.cumsum(~apart)[first]
    count = np.diff(first, append=len(order))
    columns = (
        np.maximum.reduceat(runs.start[order], first),
        np.minimum.reduceat(runs.end[order], first),
        np.add.reduceat(height[order], first) / count,
    )
    for members, start, end, z in zip(
        np.split(order, first[1:]), *(column.tolist() for column in columns), strict=True
    ):
        yield members, _bars(model, runs, members, start, end, z)


def _bars(model: Measured, runs: Runs, members: Ints, start: float, end: float, z: float) -> Bars:
    first = int(members[0])
    rows = runs.row[members].tolist()
    size = model.places.table.sizes[model.places.table.bars[int(model.bar[rows[0]])].size]
    return Bars(
        count=len(rows),
        diameter=size.diameter,
        area=size.area,
        start=start,
        end=end,
        z=z,
        ys=tuple(runs.y[members].tolist()),
        yield_strength=model.grade(rows[0]),
        start_anchor=Anchor.HOOK if runs.start_hook[first] else Anchor.STRAIGHT,
        end_anchor=Anchor.HOOK if runs.end_hook[first] else Anchor.STRAIGHT,
        designation=size.designation,
        origin=model.names(rows),
    )


def _stirrups(model: Measured, legged: Ties) -> dict[int, tuple[Stirrups, ...]]:
    if not len(legged.row):
        return {}
    strand, beam = model.rows.strand[legged.row], model.rows.beam[legged.row]
    areas = np.array([size.area for size in model.places.table.sizes], dtype=float)
    thick, area = model.places.diameter[strand], areas[model.places.size[strand]]
    places, twice = gather_places(legged, beam, thick, area, model.places.grade[strand])
    model.remark(legged.row[twice].tolist(), "modelled twice, counted once")
    return {key: tuple(zones) for key, zones in _zones(model, places)}


def _zones(model: Measured, places: Places) -> Iterator[tuple[int, list[Stirrups]]]:
    """The stirrups of each beam, zone by zone."""
    lengths = model.places.frames.length
    steel = places.steel()
    for members in np.split(np.arange(len(places.x)), np.flatnonzero(np.diff(places.beam)) + 1):
        whole = members[places.legs[members] > 0]
        for place in members[places.legs[members] == 0].tolist():
            model.remark(places.ties_of(place, place), PARTIAL)
        if len(whole) == 1:
            model.remark(places.ties_of(whole[0], whole[0]), "the only stirrup: not counted")
        beam = int(places.beam[members[0]])
        zones = zones_of_one_spacing(
            places.x[whole].tolist(),
            places.area[whole].tolist(),
            steel[whole].tolist(),
            float(lengths[beam]),
        )
        yield beam, [_zone_stirrups(model, places, whole, beam, zone) for zone in zones]


def _zone_stirrups(model: Measured, places: Places, whole: Ints, beam: int, zone: Zone) -> Stirrups:
    held = whole[zone.first : zone.last + 1]
    least = int(held[places.area[held].argmin()])
    ties = places.ties_among(held)
    legs = int(places.legs[least])
    bar = model.places.table.bars[int(model.bar[places.ties_of(least, least)[0]])]
    return Stirrups(
        start=zone.start,
        end=zone.end,
        spacing=zone.spacing,
        diameter=float(places.diameter[least]),
        leg_area=float(places.area[least]) / legs,
        legs=legs,
        closed=bool(places.closed[held].all()),
        yield_strength=_stirrup_yield(model, beam, places.grade[held], ties),
        bottom=float(places.bottom[held].min()),
        top=float(places.top[held].max()),
        half_width=float(places.half_width[held].max()),
        designation=model.places.table.sizes[bar.size].designation,
        origin=model.names(ties),
    )


def _stirrup_yield(model: Measured, beam: int, grades: Ints, ties: Sequence[int]) -> Given | None:
    """The lowest yield strength of a zone's stirrups."""
    if grades[0] >= 0 and (grades == grades[0]).all():
        return model.places.table.grades[int(grades[0])].strength
    strengths = [model.grade(tie) for tie in ties]
    known = [strength for strength in strengths if strength is not None]
    if known and len(known) < len(strengths):
        model.findings.reason(
            beam, "the steel of some of its stirrups is known and of others not", blocking=False
        )
        return None
    return min(known, key=lambda strength: strength.value, default=None)

"""Stretches of beams along which something holds: stirrups, openings, what lies beside steps."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ifccheck.analysis.stations import SAME_PLACE
from ifccheck.mechanics.arrays import Bools, Floats, Ints
from ifccheck.rating.disturbed import disturbed
from ifccheck.rating.subject import Subject


@dataclass(frozen=True, slots=True)
class StirrupTable:
    """The stirrup zones of all beams, one row each (Z)."""

    beam: Ints
    start: Floats
    end: Floats
    spacing: Floats
    area: Floats
    """All legs [mm2]; nan where the legs are not stated"""
    yield_strength: Floats


@dataclass(frozen=True, slots=True)
class Stretches:
    """Stretches of beams, one row each (D), in any order."""

    beam: Ints
    start: Floats
    end: Floats

    def hold(self, beam: Ints, x: Floats) -> Bools:
        """Whether each place of a beam lies within one of its stretches (N)."""
        held = np.zeros(x.shape, dtype=np.bool_)
        for row, start, end in zip(self.beam, self.start, self.end, strict=True):
            held |= (beam == row) & (x > start + SAME_PLACE) & (x < end - SAME_PLACE)
        return held


def disturbed_stretches(subjects: Sequence[Subject]) -> Stretches:
    """The stretches beside steps of all beams."""
    rows = [
        (beam, stretch.start, stretch.end)
        for beam, subject in enumerate(subjects)
        if len(subject.beam.runs) > 1 or subject.beam.runs[0].outline_end is not None
        for stretch in disturbed(subject.beam.runs)
    ]
    beam, start, end = np.array(rows, dtype=np.float64).reshape(-1, 3).T
    return Stretches(beam.astype(np.intp), start, end)


@dataclass(frozen=True, slots=True)
class LossTable:
    """Where openings take away depth that carries shear, one row each (O)."""

    beam: Ints
    start: Floats
    end: Floats
    height: Floats
    """[mm]; nan where shear is not rated"""


def stirrup_table(subjects: Sequence[Subject]) -> StirrupTable:
    """The stirrup zones of all beams; a beam of which no source speaks has one of unknown area."""
    rows: list[tuple[float, ...]] = []
    for beam, subject in enumerate(subjects):
        if not subject.stirrups_known:
            rows.append((beam, -np.inf, np.inf, np.inf, np.nan, np.nan))
        for zone, strength in zip(subject.stirrups, subject.stirrup_yield, strict=True):
            area = np.nan if zone.legs is None else zone.legs * zone.leg_area
            rows.append((beam, zone.start, zone.end, zone.spacing, area, strength.value))
    columns = np.array(rows, dtype=np.float64).reshape(-1, 6).T
    return StirrupTable(columns[0].astype(np.intp), *columns[1:])


def loss_table(subjects: Sequence[Subject]) -> LossTable:
    """Where openings take away depth that carries shear, on all beams."""
    rows = [
        (beam, loss.start, loss.end, loss.height)
        for beam, subject in enumerate(subjects)
        for loss in (subject.body.losses if subject.body else ())
    ]
    columns = np.array(rows, dtype=np.float64).reshape(-1, 4).T
    return LossTable(columns[0].astype(np.intp), *columns[1:])


def losses_at(beam: Ints, x: Floats, side: Ints, losses: LossTable) -> Floats:
    """Depth that openings take away at each station [mm]: of all that hold it together."""
    lost = np.zeros(x.size)
    if losses.beam.size:
        station, row = _held(beam, x, side, losses, np.arange(losses.beam.size))
        np.add.at(lost, station, losses.height[row])
    return lost


def _held(
    beam: Ints, x: Floats, side: Ints, stretches: StirrupTable | LossTable, rows: Ints
) -> tuple[Ints, Ints]:
    """Every pair of a station and a stretch of its beam that holds it, in the order of the
    stretches' rows."""
    order = np.argsort(beam, kind="stable")
    first, last = (
        np.searchsorted(beam[order], stretches.beam[rows], side=end) for end in ("left", "right")
    )
    lengths = last - first
    station = order[
        np.repeat(first - np.cumsum(lengths) + lengths, lengths) + np.arange(lengths.sum())
    ]
    row = np.repeat(rows, lengths)
    place = x[station] + 1e-6 * side[station]
    held = (place >= stretches.start[row] - 1e-9) & (place <= stretches.end[row] + 1e-9)
    return station[held], row[held]


def stirrups_at(
    beam: Ints, x: Floats, side: Ints, zones: StirrupTable
) -> tuple[Floats, Floats, Floats]:
    """Area, spacing and yield strength at each station: the weakest of the zones that hold it."""
    area, spacing = np.zeros(x.size), np.full(x.size, np.inf)
    strength = np.full(x.size, 400.0)
    ratio = zones.area / zones.spacing
    strongest_first = np.argsort(np.where(np.isnan(ratio), -1.0, ratio), kind="stable")[::-1]
    station, zone = _held(beam, x, side, zones, strongest_first)
    area[station], spacing[station] = zones.area[zone], zones.spacing[zone]  # the last one stays
    strength[station] = zones.yield_strength[zone]
    return area, spacing, strength

"""Which strand is a bar of which beam: by relations, and by place where they leave it open."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_hosts import BarHosts, Tie
from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.bar_rows import NO_ROWS, BarPlaces, Rows
from ifccheck.ifc.bar_samples import offsets, spread
from ifccheck.ifc.bars_in_beams import Held, held_in, overlapping, sampled_inside

INSIDE_SHARE = 0.5
"""Part of its length from which on a bar lies in a beam."""
NOTICED_RUN, NOTICED_LENGTH = 20.0, 300.0
"""A bar that no relation ties is noticed in a beam from this many diameters and this length [mm]
along it, however far it goes on."""
RUNS_IN_LINE = 0.9
"""A bar along a beam that no relation ties is taken as one of it where this part of its length
lies within the box round the section, prolonged beyond both ends."""
SAME_PART = 0.5
"""Two beams hold the same part of a bar where this share of what lies in one lies in the other."""
MUCH_LESS = 0.5
"""The beam that holds less than this part of what another holds leaves the bar to that one."""
MOST_TOLD = 8
"""A bar that lies in none of the beams of its assembly is told to no more beams than this."""


@dataclass(frozen=True, slots=True)
class Found:
    """Strands by beam."""

    tied: Rows
    """Bars of the beam."""
    astray: Rows
    """Beside the beam in its assembly, but in none of the beams there."""
    loose: Rows
    """In the beam, but tied to nothing, and not counted."""
    by_place: Rows
    """Those of ``tied`` that no relation ties, but that lie in the beam."""
    guests: Rows
    """Those of ``tied`` of which another beam holds more."""
    contested: Rows
    """In the beam and in another alike, where no relation tells whose they are."""


def find_rows(places: BarPlaces, hosts: BarHosts) -> Found:
    """Find the beams of all strands; ``hosts`` of the bars of the table."""
    hosts = hosts.take(places.table.bar)
    tied = _candidates(places, hosts, "part")
    beside, astray, shared = _beside(places, hosts)
    by_place, loose, contested = _by_place(places, hosts)
    guests = _joined(*(_guests(places, rows) for rows in (beside, by_place)))
    return Found(
        tied=_joined(tied, beside, by_place),
        astray=astray,
        loose=loose,
        by_place=by_place,
        guests=guests,
        contested=_joined(shared, contested),
    )


def _guests(places: BarPlaces, rows: Rows) -> Rows:
    """Rows of strands of which another row holds more."""
    several = np.flatnonzero(_several(rows.strand))
    if not len(several):
        return NO_ROWS
    rows = rows.take(several)
    amount = sampled_inside(places, rows).sum(axis=1)
    order = np.lexsort((-amount, rows.strand))
    return rows.take(order[np.diff(rows.strand[order], prepend=-1) == 0])


def _joined(*rows: Rows) -> Rows:
    strands, beams = [one.strand for one in rows], [one.beam for one in rows]
    return Rows(np.concatenate(strands), np.concatenate(beams))


def _candidates(places: BarPlaces, hosts: BarHosts, tie: Tie, most: int | None = None) -> Rows:
    """Strands of one tie with each of their beams, those with more than ``most`` left out."""
    index = places.frames.index()
    count = np.array([len(host.beams) for host in hosts.hosts], dtype=np.intp)
    beams = np.array([index[beam] for host in hosts.hosts for beam in host.beams], dtype=np.intp)
    chosen = np.flatnonzero(hosts.tied(tie))
    if most is not None:
        chosen = chosen[count[hosts.number[chosen]] <= most]
    host = hosts.number[chosen]
    row, within = spread(count[host])
    return Rows(chosen[row], beams[offsets(count)[host[row]] + within])


def _beside(places: BarPlaces, hosts: BarHosts) -> tuple[Rows, Rows, Rows]:
    """Strands in beams beside them, strands in none of those, and strands in two alike.

    Where an assembly holds many beams, a strand in none of them is nothing to tell each of them.
    """
    strands = np.flatnonzero(hosts.tied("beside"))
    if not len(strands):
        return NO_ROWS, NO_ROWS, NO_ROWS
    index = places.frames.index()
    near = overlapping(places, strands)
    own = [
        beam in {index[one] for one in hosts.of(strand).beams}
        for strand, beam in zip(near.strand.tolist(), near.beam.tolist(), strict=True)
    ]
    near = near.take(np.array(own, dtype=bool))
    held = held_in(places, near)
    holds = np.flatnonzero((held.share >= INSIDE_SHARE) | _fits(places, near, held))
    taken, shared = _settled(places, near.take(holds), held.take(holds))
    listed = _candidates(places, hosts, "beside", MOST_TOLD)
    placed = np.concatenate((taken.strand, shared.strand))
    return taken, listed.take(~np.isin(listed.strand, placed)), shared


def _by_place(places: BarPlaces, hosts: BarHosts) -> tuple[Rows, Rows, Rows]:
    """Strands that no relation ties: those taken as bars of the beam that they lie in, those
    noticed in a beam, and those in two alike."""
    strands = np.flatnonzero(hosts.tied("loose", "unread"))
    if not len(strands):
        return NO_ROWS, NO_ROWS, NO_ROWS
    near = overlapping(places, strands)
    held = held_in(places, near)
    free = hosts.tied("loose")[near.strand]
    fitting = np.flatnonzero(free & _fits(places, near, held))
    taken, contested = _settled(places, near.take(fitting), held.take(fitting))
    noticed = (held.share >= INSIDE_SHARE) | (held.along >= _least_run(places, near))
    left = ~np.isin(near.strand, np.concatenate((taken.strand, contested.strand)))
    return taken, near.take(noticed & left), contested


def _least_run(places: BarPlaces, rows: Rows) -> Ints:
    return np.maximum(NOTICED_RUN * places.diameter[rows.strand], NOTICED_LENGTH)


def _fits(places: BarPlaces, rows: Rows, held: Held) -> Bools:
    """Whether strands lie in beams as their bars do: stirrups, or bars that run along them.

    What passes through a beam is none of its bars: bars of columns and of walls, hoops of columns
    that lie flat, bars of beams and of slabs that cross it.
    """
    stirrups = held.square & held.tie & (held.share >= INSIDE_SHARE)
    main = ~held.square & ~held.closed & (held.along >= _least_run(places, rows))
    main &= held.along >= INSIDE_SHARE * held.length * held.share
    main &= (held.in_line >= RUNS_IN_LINE) | (held.along >= INSIDE_SHARE * held.length)
    return np.asarray(stirrups | main)


def _settled(places: BarPlaces, rows: Rows, held: Held) -> tuple[Rows, Rows]:
    """Rows in which a strand is a bar of the beam, and rows of two beams that hold it alike.

    A bar may run on through several beams and is a bar of each. Where two hold the same part of
    it, the one that holds far more of it has it. A bar that lies by the greater part of its
    length in none of them is left out.
    """
    taken: list[int] = []
    contested: list[int] = []
    several = _several(rows.strand)
    alone = np.flatnonzero(~several & (held.share >= INSIDE_SHARE))
    crowd = np.flatnonzero(several)
    inside = sampled_inside(places, rows.take(crowd))
    for members in _by_strand(rows.strand[crowd]):
        if inside[members].any(axis=0).mean() >= INSIDE_SHARE:
            own, shared = _share_out(inside[members])
            taken += crowd[members[own]].tolist()
            contested += crowd[members[shared]].tolist()
    kept = np.sort(np.concatenate((alone, np.array(taken, dtype=np.intp))))
    return rows.take(kept), rows.take(np.array(contested, dtype=np.intp))


def _share_out(inside: Bools) -> tuple[Ints, Ints]:
    """Beams that hold parts of a strand of their own, and beams that hold the same part alike;
    which samples of the strand lie in each (K, S)."""
    amount = inside.sum(axis=1)
    own: list[int] = []
    shared: set[int] = set()
    for beam in np.argsort(-amount, kind="stable").tolist():
        rivals = [
            one
            for one in (*own, *shared)
            if (inside[one] & inside[beam]).sum() > SAME_PART * amount[beam]
        ]
        alike = [one for one in rivals if amount[beam] >= MUCH_LESS * amount[one]]
        if alike:
            shared |= {beam, *alike}
        elif not rivals and amount[beam]:
            own.append(beam)
    kept = [one for one in own if one not in shared]
    return np.array(kept, dtype=np.intp), np.array(sorted(shared), dtype=np.intp)


def _several(strand: Ints) -> Bools:
    """Whether each row's strand has more than one row."""
    _, number, count = np.unique(strand, return_inverse=True, return_counts=True)
    return np.asarray(count[number.reshape(-1)] > 1)


def _by_strand(strand: Ints) -> Iterator[Ints]:
    """Rows of each strand."""
    order = np.argsort(strand, kind="stable")
    yield from np.split(order, np.flatnonzero(np.diff(strand[order])) + 1) if len(order) else ()

"""The brief's trains laid on the beams that they are named for."""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from ifccheck.beam import Beam, Load
from ifccheck.brief.loads import place_on
from ifccheck.brief.merging import Matches
from ifccheck.brief.model import Brief, TrainEntry
from ifccheck.errors import BriefError
from ifccheck.units import show


def trains_on_beams(brief: Brief, matches: Matches, beams: Mapping[str, Beam]) -> tuple[Load, ...]:
    """Every train of the brief on every beam that is named for it, in the beam's own x; raises
    BriefError for a way that lies beyond a beam or has no room for the train."""
    return tuple(_trains(brief, matches, beams))


def _trains(brief: Brief, matches: Matches, beams: Mapping[str, Beam]) -> Iterator[Load]:
    for entry in brief.trains:
        for key in matches[entry.place]:
            yield _train(brief, entry, beams[key])


def _train(brief: Brief, entry: TrainEntry, beam: Beam) -> Load:
    start, end = 0.0, beam.length
    if entry.start is not None and entry.end is not None and beam.axis is not None:
        start = place_on(brief.where(entry, "from"), beam, entry.start)
        end = place_on(brief.where(entry, "to"), beam, entry.end)
        longest = max(train.length for train in entry.travel.trains)
        if end - start < (longest if entry.travel.stops else 1.0):
            raise BriefError(
                f"{brief.where(entry, 'to')}: on beam {beam.mark}, {show(beam.length, 'length')}"
                " long, the way has no room for the train"
            )
    total = entry.travel.dynamic * sum(sum(train.forces) for train in entry.travel.trains)
    return Load(
        beam.key, entry.case, "train", start, end, (total, total),
        origin=entry.place, text=entry.text, travel=entry.travel,
    )  # fmt: skip

"""A beam with everything that its rating rests on, gathered before any number is worked out."""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from ifccheck.analysis.parts import Parts
from ifccheck.beam import (
    SELF,
    Bars,
    Beam,
    Face,
    Given,
    Load,
    RatedBody,
    RatedSpan,
    Reason,
    Remark,
    Run,
    Stirrups,
)
from ifccheck.mechanics.arrays import Floats
from ifccheck.rating.runways import Runway


class Continuity(NamedTuple):
    """How the spans of a beam go on in a line of several."""

    places: tuple[int, ...]
    """Which span of its line each span of the beam is, from 0"""
    spans: int
    """Of the line"""
    parts: Parts
    """Of the cases, as the line was solved by them"""
    moments: Floats
    """At the start and the end of each span of the beam, of every part [N*mm] (P, spans, 2)"""
    beside: Floats
    """What the beams next to it in the line bring to the supports at its start and its end, of
    every part [N] (P, 2)"""
    cases: frozenset[str]
    """That bend it through its line, wherever on that they act"""

    def in_parts(self, of_parts: Floats, parts: Parts) -> Floats:
        """``moments`` or ``beside`` by other parts of the same cases, of lines at least as long
        and, where these have loads apart, with such."""
        found = np.zeros((parts.case.size, *of_parts.shape[1:]))
        for case in range(parts.first.size - 1):
            own, other = self.parts.rows(case), parts.rows(case)
            for apart in range(2 if own.size > self.parts.places else 1):
                few = min(self.spans, own.size)
                here = own[apart * self.parts.places :][:few]
                found[other[apart * parts.places :][:few]] = of_parts[here]
        return found


@dataclass(frozen=True, slots=True)
class Subject:
    """One beam of the run, ready to be rated.

    ``reasons`` that are not blocking leave the numbers computable, but the beam cannot be
    called adequate.
    """

    beam: Beam
    bars: tuple[Bars, ...]
    stirrups: tuple[Stirrups, ...]
    stirrups_known: bool
    """False where no source says whether there are stirrups"""
    silent: tuple[Face, ...]
    """Faces of whose bars no source speaks on some stretch: counted as none"""
    reinforcement_source: str
    spans: tuple[RatedSpan, ...]
    """That the beam makes, in their order along it"""
    span_source: str
    """Where they run from and to, or who states it"""
    side_loaded: bool
    """Whether other members frame into its side between the supports"""
    loads: tuple[Load, ...]
    """Without self weight"""
    statements: tuple[str, ...]
    """What the engineer stated of it that overrules a doubt"""
    concrete_strength: Given
    unit_weight: Given
    """Of the concrete with its steel, for self weight [N/mm3]"""
    density_factor: Given
    aggregate_size: Given
    bar_yield: tuple[Given, ...]
    """One for each entry of ``bars``"""
    stirrup_yield: tuple[Given, ...]
    """One for each entry of ``stirrups``"""
    reasons: tuple[Reason, ...]
    remarks: tuple[Remark, ...]
    slab_bars: tuple[Bars, ...] = ()
    """Bars of slabs that lie within its flange; where they count they are among ``bars`` too"""
    slab_bars_from: str = ""
    """Where the brief says that they are anchored; empty where they do not count"""
    continuity: Continuity | None = None
    """None where each of its spans stands alone"""
    runway: Runway | None = None
    """The line that trains run along; None where none runs on its line"""
    body: RatedBody | None = None
    """What is rated of the beam where that is not its body alone; None where it is"""

    @property
    def runs(self) -> tuple[Run, ...]:
        """The outlines to rate."""
        return self.body.runs if self.body else self.beam.runs

    @property
    def weighed(self) -> tuple[Run, ...]:
        """The outlines that self weight is that of."""
        return self.body.weighed if self.body else self.beam.runs

    @property
    def acting(self) -> frozenset[str]:
        """Cases that act on it, itself or through its line, besides self weight."""
        through = self.continuity.cases if self.continuity else frozenset[str]()
        return through.union([load.case for load in self.loads]) - {SELF}

    @property
    def ends(self) -> tuple[float, float]:
        """x of the start of its first span and of the end of its last [mm]."""
        return self.spans[0].span.start, self.spans[-1].span.end


@dataclass(frozen=True, slots=True)
class Unrated:
    """A beam of which no number can be worked out, and why."""

    beam: Beam
    reasons: tuple[Reason, ...]
    remarks: tuple[Remark, ...]

"""A beam with everything that its rating rests on, gathered before any number is worked out."""

from __future__ import annotations

from dataclasses import dataclass

from ifccheck.beam import (
    Bars,
    Beam,
    Face,
    Given,
    Line,
    Load,
    RatedBody,
    Reason,
    Remark,
    Run,
    Span,
    Stirrups,
)


@dataclass(frozen=True, slots=True)
class Subject:
    """One beam of the run, ready to be rated.

    ``reasons`` that are not blocking leave the numbers computable, but the beam cannot be
    called adequate.
    """

    beam: Beam
    line: Line
    bars: tuple[Bars, ...]
    stirrups: tuple[Stirrups, ...]
    stirrups_known: bool
    """False where no source says whether there are stirrups"""
    silent: tuple[Face, ...]
    """Faces of whose bars no source speaks on some stretch: counted as none"""
    reinforcement_source: str
    faces: tuple[float, float]
    """x of the faces of the two supports [mm]"""
    span_source: str
    """Where the span runs from and to, or who states it"""
    direct: tuple[bool, bool]
    """Whether the reaction compresses the start and the end: a bearing from below or a column,
    not the side of another beam"""
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
    def span(self) -> Span:
        """The span that the beam makes."""
        return self.line.spans[0]


@dataclass(frozen=True, slots=True)
class Unrated:
    """A beam of which no number can be worked out, and why."""

    beam: Beam
    reasons: tuple[Reason, ...]
    remarks: tuple[Remark, ...]

"""All that the outputs are made from: the run, gathered once for every publisher."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from itertools import combinations

from ifccheck.beam import Beam, Combination, Model, Nature, RatedSpan, Remark, Verdict
from ifccheck.framed import Framed
from ifccheck.rating import Rating
from ifccheck.sheet import Sheet


@dataclass(frozen=True, slots=True)
class CaseSummary:
    """What a rated case may grow to over the whole model."""

    case: str
    nature: Nature
    factor: float
    """Least factor over all beams that the case reaches; inf where it never governs, nan
    where one of those beams is not rated"""
    governing_beam: str | None
    """Key of the beam that gives the factor"""
    text: str
    """For people, on what stands behind the factor: "B-204 falls short first in shear" """
    beams_reached: int
    unrated_in_path: tuple[str, ...] = ()
    """Keys of the beams which the case reaches and of which something is not settled"""


@dataclass(frozen=True, slots=True)
class Assumption:
    """One assumption of the run, with the keys of the beams that it was made for."""

    text: str
    beams: tuple[str, ...] = ()
    """Empty where it holds for the whole run"""


@dataclass(frozen=True, slots=True)
class Counts:
    """How many beams have each verdict, and how many are out of scope."""

    adequate: int
    falls_short: int
    not_rated: int
    out_of_scope: int

    @property
    def in_scope(self) -> int:
        """Number of beams that were to be rated."""
        return self.adequate + self.falls_short + self.not_rated


@dataclass(frozen=True)
class Report:
    """The whole answer for one model, in N, mm, MPa.

    Nothing in it depends on when or where the run was made. ``ratings`` holds one rating for
    every beam of the model; ``sheet`` makes the sheet of a beam when it is asked for.
    """

    version: str
    standard_id: str
    standard_title: str
    standard_edition: str
    actions: str
    """Document that the combinations come from"""
    shear_method: str
    brief_name: str
    """File name of the brief"""
    brief_sha256: str
    model: Model
    ratings: Mapping[str, Rating]
    """By key of the beam"""
    sheet: Callable[[str], Sheet]
    """Called once per beam while rendering"""
    spans: Mapping[str, tuple[RatedSpan, ...]] = field(default_factory=dict)
    """Of every beam of which is known how it stands, by key"""
    cases: tuple[CaseSummary, ...] = ()
    """One for each rated case, in the brief's order"""
    combinations: tuple[Combination, ...] = ()
    remarks: tuple[Remark, ...] = ()
    """Remarks on the run as a whole; those on a beam are in its rating"""
    assumptions: tuple[Assumption, ...] = ()
    framed: Framed | None = None
    """How beams were stood on what the model shows; None where the brief states it"""

    @property
    def standard_name(self) -> str:
        """Title and edition of the standard, for people."""
        return f"{self.standard_title} ({self.standard_edition})"

    @cached_property
    def labels(self) -> tuple[tuple[str, ...], ...]:
        """The other names by which ratings call each combination: on a beam a combination goes
        without what does not act there."""
        ratings = self.ratings.values()
        used = {state.combination for rating in ratings for state in rating.limit_states}
        used |= {safe.combination for rating in ratings for safe in rating.safe_loads}
        return tuple(
            tuple(label for label in _labels(each) if label in used - {each.name, ""})
            for each in self.combinations
        )

    @cached_property
    def counts(self) -> Counts:
        """Number of beams by verdict."""
        verdicts = Counter(rating.verdict for rating in self.ratings.values())
        return Counts(
            adequate=verdicts[Verdict.ADEQUATE],
            falls_short=verdicts[Verdict.FALLS_SHORT],
            not_rated=verdicts[Verdict.NOT_RATED],
            out_of_scope=len(self.model.out_of_scope),
        )

    def beam(self, key: str) -> Beam:
        """Return the beam with this key."""
        return self._beams[key]

    @cached_property
    def _beams(self) -> dict[str, Beam]:
        return {beam.key: beam for beam in self.model.beams}


def _labels(combination: Combination) -> Iterator[str]:
    """Every name that a combination may go by, by the natures that act."""
    natures = [nature for nature, _ in combination.terms]
    for count in range(len(natures) + 1):
        yield from map(combination.label, combinations(natures, count))


def ratings_in_order(ratings: Iterable[Rating]) -> list[Rating]:
    """Return ratings with the worst first: short of resistance, not rated, most used."""
    return sorted(ratings, key=_badness)


def _badness(rating: Rating) -> tuple[int, float]:
    order = {"falls short": 0, "not rated": 1, "adequate": 2}[rating.verdict]
    return order, -rating.utilisation if math.isfinite(rating.utilisation) else -math.inf

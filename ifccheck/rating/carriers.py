"""What is told of beams whose carriers cannot take as much as they can themselves."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace

from ifccheck.beam import Remark, Verdict
from ifccheck.rating.results import Rating, SafeLoad
from ifccheck.units import show_ratio

_WORDS = {Verdict.FALLS_SHORT: "falls short", Verdict.NOT_RATED: "is not rated"}


def told_of_carriers(
    ratings: Mapping[str, Rating],
    carriers: Mapping[str, Mapping[str, str]],
) -> dict[str, Rating]:
    """The answers, with doubts on beams of which a carrier is not adequate, or allows less.

    Parameters
    ----------
    ratings
        By the key of the beam.
    carriers
        Marks of the beams that carry each, and that carry those, down to the ground, by key.
    """
    answers = dict(ratings)
    for key, below in carriers.items():
        told = tuple(_told(ratings[key], [(ratings[each], below[each]) for each in below]))
        if told:
            answers[key] = replace(ratings[key], remarks=(*ratings[key].remarks, *told))
    return answers


def _told(rating: Rating, below: Sequence[tuple[Rating, str]]) -> Iterator[Remark]:
    if rating.verdict is Verdict.ADEQUATE:
        failing = [f"{mark}, which {_WORDS[r.verdict]}" for r, mark in below
                   if r.verdict in _WORDS]  # fmt: skip
        if failing:
            yield _doubt(rating, f"it is carried by {'; '.join(failing)}")
    for safe in rating.safe_loads:
        least = min(
            ((factor, mark) for r, mark in below for factor in _factors(r, safe.case)),
            default=(math.inf, ""),
        )
        if least[0] < safe.factor:
            yield _doubt(rating, _less(safe, *least))


def _factors(rating: Rating, case: str) -> Iterator[float]:
    return (s.factor for s in rating.safe_loads if s.case == case and math.isfinite(s.factor))


def _less(safe: SafeLoad, factor: float, mark: str) -> str:
    return (
        f"{safe.case}: {mark}, which carries it, allows {show_ratio(factor)} x assigned; the safe"
        " load here is that of this beam alone"
    )


def _doubt(rating: Rating, text: str) -> Remark:
    return Remark(rating.beam, "rating", text, "doubt")

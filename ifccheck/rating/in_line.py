"""Answers of beams in one line, of which none counts on another that is not adequate."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import replace

from ifccheck.beam import Reason, Remark, Verdict
from ifccheck.rating.results import Rating
from ifccheck.rating.verdict import not_known

NOT_HELD = "goes on into a beam that is not adequate"
"""The moment that it passes on must be carried there, or it bends as if it stood by itself"""

_WORDS = {Verdict.FALLS_SHORT: "falls short", Verdict.NOT_RATED: "is not rated"}


def held_by_lines(
    ratings: Mapping[str, Rating], lines: Iterable[Mapping[str, str]]
) -> dict[str, Rating]:
    """The answers, without any that counts on a beam of its line which is not adequate.

    ``lines`` hold the marks of their beams by key. What falls short stays so; what another that
    is not rated may carry of it is not known.
    """
    answers = dict(ratings)
    for marks in lines:
        failing = {key: _WORDS[w] for key in marks if (w := ratings[key].verdict) in _WORDS}
        for key in marks:
            others = [f"{marks[o]}, which {failing[o]}" for o in failing if o != key]
            if others:
                reason = Reason(f"{NOT_HELD}: {'; '.join(others)}", blocking=False)
                answers[key] = _not_held(ratings[key], reason, unsettled=_unsettled(failing, key))
    return answers


def _unsettled(failing: Mapping[str, str], key: str) -> bool:
    return any(failing[o] == _WORDS[Verdict.NOT_RATED] for o in failing if o != key)


def _not_held(rating: Rating, reason: Reason, *, unsettled: bool) -> Rating:
    unknown = tuple(not_known(safe) for safe in rating.safe_loads)
    if rating.verdict is Verdict.NOT_RATED:
        return rating
    if rating.verdict is Verdict.ADEQUATE:
        return replace(
            rating,
            verdict=Verdict.NOT_RATED,
            utilisation=math.nan,
            governing=None,
            safe_loads=unknown,
            reasons=(reason,),
        )
    told = Remark(rating.beam, "rating", f"also unsettled: {reason.text}", "doubt")
    return replace(
        rating,
        safe_loads=unknown if unsettled else rating.safe_loads,
        remarks=(*rating.remarks, told),
    )

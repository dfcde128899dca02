"""How a demand arises, as rows of words: the part of each case, and the reactions."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from ifccheck.beam import RatedSpan, Span
from ifccheck.publish.framed_words import acting_words
from ifccheck.publish.quantities import quantity_words
from ifccheck.sheet import CaseReaction, CaseShare, Sheet
from ifccheck.units import show


@dataclass(frozen=True, slots=True)
class ShareRow:
    """The part of one case in moment [kN·m] and shear [kN] at a place."""

    case: str
    nature: str
    factor: str
    moment: str
    shear: str
    factored_moment: str
    factored_shear: str
    acting: str = ""
    """On which spans of its line it acts, where it does so span by span"""


@dataclass(frozen=True, slots=True)
class ReactionRow:
    """What one case, unfactored, asks of the supports: forces [kN] and moments [kN·m]."""

    case: str
    forces: tuple[str, ...]
    """Of every support, from the start of the beam to its end"""
    start_moment: str
    end_moment: str


def span_words(sheet: Sheet) -> str:
    """Return the spans, from where to where they reach, and what says so."""
    if not sheet.spans:
        return ""
    source = next((item.source for item in sheet.rating.basis if item.name[:4] == "Span"), "")
    words = "; ".join(_one_span(each.span) for each in sheet.spans)
    return words + (f" ({source})" if source else "")


def _one_span(span: Span) -> str:
    length = quantity_words(span.end - span.start, "length")
    ends = " to ".join(quantity_words(place, "length") for place in (span.start, span.end))
    return f"{length}, x = {ends}"


def support_words(spans: Sequence[RatedSpan]) -> str:
    """Return how the beam is held from its start to its end, and what says so."""
    if not spans:
        return ""
    supports = [spans[0].span.start_support, *(each.span.end_support for each in spans)]
    sources = dict.fromkeys(support.source for support in supports)
    if len(sources) == 1:
        return f"{' – '.join(support.kind for support in supports)} ({supports[0].source})"
    return " – ".join(f"{support.kind} ({support.source})" for support in supports)


def support_names(sheet: Sheet) -> list[str]:
    """Return what the supports are called in a table of reactions, from start to end."""
    inner = [f"x = {show(each.span.end, 'length')}" for each in sheet.spans[:-1]]
    return ["start", *inner, "end"]


def share_rows(shares: Sequence[CaseShare]) -> list[ShareRow]:
    """Return a row for each case, and their sum as the last row."""
    if not shares:
        return []
    moment = sum(_factored(share.factor, share.moment) for share in shares)
    shear = sum(_factored(share.factor, share.shear) for share in shares)
    total = ShareRow("together", "", "", "", "", _moment(moment), _force(shear))
    return [*map(_share_row, shares), total]


def _share_row(share: CaseShare) -> ShareRow:
    return ShareRow(
        case=share.case + _standing(share.wheels),
        nature=share.nature,
        factor="–" if math.isnan(share.factor) else f"{share.factor:.4g}",
        moment=_moment(share.moment),
        shear=_force(share.shear),
        factored_moment=_moment(_factored(share.factor, share.moment)),
        factored_shear=_force(_factored(share.factor, share.shear)),
        acting=acting_words(share),
    )


def _standing(wheels: Sequence[float]) -> str:
    """Where the wheels of a train stand."""
    if not wheels:
        return ""
    places = ", ".join(f"{x / 1000.0:.2f}" for x in wheels)
    return f", wheel{'s' if len(wheels) > 1 else ''} at x = {places} m"


def _factored(factor: float, effect: float) -> float:
    """A case that has no effect at the place has no factor there."""
    return 0.0 if math.isnan(factor) else factor * effect


def reaction_rows(reactions: Sequence[CaseReaction]) -> list[ReactionRow]:
    """Return a row for each case; moments only where a support holds one."""
    held = [
        any(abs(getattr(each, side)) >= 1.0 for each in reactions)
        for side in ("start_moment", "end_moment")
    ]
    return [
        ReactionRow(
            each.case,
            tuple(map(_force, each.forces)),
            _moment(each.start_moment) if held[0] else "",
            _moment(each.end_moment) if held[1] else "",
        )
        for each in reactions
    ]


def _moment(value: float) -> str:
    return show(_clean(value), "moment").partition(" ")[0]


def _force(value: float) -> str:
    return show(_clean(value), "force").partition(" ")[0]


def _clean(value: float) -> float:
    """Nothing but what rounding leaves (below 1 N or 1 N*mm) is nothing."""
    return 0.0 if abs(value) < 1.0 else value

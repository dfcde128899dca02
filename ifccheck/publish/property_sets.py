"""The results as property sets for the model, in N, mm, MPa."""

from __future__ import annotations

import hashlib
import math
from collections import Counter
from collections.abc import Iterable
from functools import cache, lru_cache
from itertools import chain
from operator import attrgetter
from typing import cast, get_args

from ifccheck.beam import Verdict
from ifccheck.publish.report import Report
from ifccheck.rating import BasisItem, LimitStateRating, Rating, SafeLoad
from ifccheck.result_sets import Measure, ResultProperty, ResultSet

LONGEST_LABEL = 255
"""Characters that a label or an identifier may have; longer ones are cut with an ellipsis and
given whole in a text property."""

ADEQUATE = {Verdict.ADEQUATE: True, Verdict.FALLS_SHORT: False, Verdict.NOT_RATED: None}

Properties = tuple[ResultProperty, ...]
_MEASURES = frozenset(get_args(Measure))


def result_sets(report: Report) -> tuple[ResultSet, ...]:
    """Return the result sets of every beam in scope, those that are not rated included.

    A set without any property is left out.
    """
    of_run = (
        *_text("Standard", "label", report.standard_name),
        *_text("Actions", "label", report.actions),
        *_text("Basis", "identifier", basis_identifier(report)),
    )
    return tuple(
        ResultSet(beam.step_id, beam.guid, beam.ordinal, name, properties)
        for beam in report.model.beams
        for name, properties in _sets(report.ratings[beam.key], of_run)
        if properties
    )


def basis_identifier(report: Report) -> str:
    """Return what names the brief, the standard and the version that a result rests on."""
    parts = (
        report.brief_sha256,
        report.standard_id,
        report.standard_edition,
        report.shear_method,
        report.version,
    )
    return hashlib.sha256("\n".join(parts).encode()).hexdigest()


def _sets(rating: Rating, of_run: Properties) -> tuple[tuple[str, Properties], ...]:
    return (
        ("BeamRating_Result", _result(rating, of_run)),
        ("BeamRating_LimitStates", _limit_states(rating)),
        ("BeamRating_SafeLoads", _safe_loads(rating.safe_loads)),
        ("BeamRating_Basis", _basis(rating.basis)),
    )


def _number(name: str, measure: Measure, value: float) -> Properties:
    """The property of a value that is finite; else none."""
    return (ResultProperty(name, measure, float(value)),) if math.isfinite(value) else ()


def _text(name: str, measure: Measure, text: str) -> Properties:
    """The property of a text that is not empty, a long label in two; else none."""
    if len(text) > LONGEST_LABEL and measure != "text":
        return (
            ResultProperty(name, measure, f"{text[: LONGEST_LABEL - 1]}…"),
            ResultProperty(f"{name}Text", "text", text),
        )
    return (ResultProperty(name, measure, text),) if text else ()


def _result(rating: Rating, of_run: Properties) -> Properties:
    least = _least(rating.safe_loads)
    return (
        *_verdict(rating.verdict),
        *_number("Utilisation", "real", rating.utilisation),
        *(_NO_RESISTANCE if math.isinf(rating.utilisation) else ()),
        *(_governing(rating.governing) if rating.governing else ()),
        *(_number("LeastRatingFactor", "real", least.factor) if least else ()),
        *(_text("LeastRatedCase", "label", least.case) if least else ()),
        *_covered(rating.checked, rating.not_checked),
        *_text("Reason", "text", "; ".join([reason.text for reason in rating.reasons])),
        *_text("Doubts", "text", "; ".join([r.text for r in rating.remarks if r.kind == "doubt"])),
        *of_run,
    )


_NO_RESISTANCE = _text("UtilisationState", "label", "no resistance where some is demanded")


@cache
def _verdict(word: Verdict) -> Properties:
    adequate = ResultProperty("Adequate", "logical", ADEQUATE[word])
    return *_text("Verdict", "label", str(word)), adequate


def _governing(worst: LimitStateRating) -> Properties:
    return (
        *_text("GoverningLimitState", "label", worst.title),
        *_text("GoverningClause", "label", worst.clause),
        *_text("GoverningCombination", "label", worst.combination),
        *_number("GoverningPosition", "length", worst.position),
    )


@lru_cache(maxsize=64)
def _covered(checked: tuple[str, ...], not_checked: tuple[str, ...]) -> Properties:
    return (
        *_text("LimitStatesChecked", "text", ", ".join(checked)),
        *_text("LimitStatesNotChecked", "text", ", ".join(not_checked)),
    )


def _least(safe_loads: tuple[SafeLoad, ...]) -> SafeLoad | None:
    """The case with the least factor; none where a case is not rated or none is limited."""
    if not safe_loads or any(math.isnan(safe.factor) for safe in safe_loads):
        return None
    least = min(safe_loads, key=_factor)
    return least if math.isfinite(least.factor) else None


_factor, _name = attrgetter("factor"), attrgetter("name")


def _limit_states(rating: Rating) -> Properties:
    return tuple(
        [
            ResultProperty(state.name, "real", state.utilisation)
            for state in rating.limit_states
            if math.isfinite(state.utilisation)
        ]
    )


def _safe_loads(safe_loads: tuple[SafeLoad, ...]) -> Properties:
    found: list[ResultProperty] = []
    for safe in safe_loads:
        found += _number(f"{safe.case} factor", "real", safe.factor)
        name = f"{safe.case} safe load"
        if math.isfinite(safe.single_value) and safe.single_kind:
            measure: Measure = "force" if safe.single_kind == "point" else "line_force"
            found += _number(name, measure, safe.single_value)
        else:
            found += _text(name, "text", safe.text)
    return tuple(found)


def _basis(items: tuple[BasisItem, ...]) -> Properties:
    if len(set(map(_name, items))) < len(items):
        items = _told_apart(items)
    return tuple(chain.from_iterable(map(_of_item, items)))


def _told_apart(items: Iterable[BasisItem]) -> tuple[BasisItem, ...]:
    """Items of which those of a name that was used before are counted from 2."""
    used: Counter[str] = Counter()
    found = []
    for item in items:
        used[item.name] += 1
        count = used[item.name]
        found.append(item if count == 1 else item._replace(name=f"{item.name}{count}"))
    return tuple(found)


@lru_cache(maxsize=16384)
def _of_item(item: BasisItem) -> Properties:
    """Value and source of an item; beams that have the same one share them."""
    source = f"assumed: {item.source}" if item.assumed else item.source
    value, measure = item.value, _measure(item)
    own = (
        _text(item.name, measure, value)
        if isinstance(value, str)
        else _number(item.name, measure, value)
    )
    return *own, *_text(f"{item.name}Source", "label", source)


def _measure(item: BasisItem) -> Measure:
    if item.measure not in _MEASURES:
        raise ValueError(f"{item.name}: {item.measure!r} is not a measure")
    return cast(Measure, item.measure)

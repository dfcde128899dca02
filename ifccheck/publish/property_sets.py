"""The results as property sets for the model, in N, mm, MPa."""

from __future__ import annotations

import hashlib
import math
from collections.abc import Iterable, Iterator
from typing import cast, get_args

from ifccheck.beam import Verdict
from ifccheck.publish.report import Report
from ifccheck.rating import BasisItem, Rating, SafeLoad
from ifccheck.result_sets import Measure, ResultProperty, ResultSet

LONGEST_LABEL = 255
"""Characters that a label or an identifier may have; longer ones are cut with an ellipsis and
given whole in a text property."""

ADEQUATE = {Verdict.ADEQUATE: True, Verdict.FALLS_SHORT: False, Verdict.NOT_RATED: None}

Value = str | float | bool | None
_MEASURES = frozenset(get_args(Measure))


def result_sets(report: Report) -> tuple[ResultSet, ...]:
    """Return the result sets of every beam in scope, those that are not rated included.

    A set without any property is left out.
    """
    identifier = basis_identifier(report)
    return tuple(
        ResultSet(beam.step_id, beam.guid, beam.ordinal, name, found)
        for beam in report.model.beams
        for name, properties in _sets(report.ratings[beam.key], report, identifier)
        if (found := tuple(properties))
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


def _sets(
    rating: Rating, report: Report, identifier: str
) -> tuple[tuple[str, Iterable[ResultProperty]], ...]:
    return (
        ("BeamRating_Result", _result(rating, report, identifier)),
        ("BeamRating_LimitStates", _limit_states(rating)),
        ("BeamRating_SafeLoads", _safe_loads(rating.safe_loads)),
        ("BeamRating_Basis", _basis(rating.basis)),
    )


def _given(name: str, measure: Measure, value: Value) -> Iterator[ResultProperty]:
    """The property, unless its value is not finite or an empty text; long labels in two."""
    if isinstance(value, str):
        yield from _words(name, measure, value)
    elif isinstance(value, bool) or value is None:
        yield ResultProperty(name, measure, value)
    elif math.isfinite(value):
        yield ResultProperty(name, measure, float(value))


def _words(name: str, measure: Measure, text: str) -> Iterator[ResultProperty]:
    if not text:
        return
    if measure == "text" or len(text) <= LONGEST_LABEL:
        yield ResultProperty(name, measure, text)
        return
    yield ResultProperty(name, measure, f"{text[: LONGEST_LABEL - 1]}…")
    yield ResultProperty(f"{name}Text", "text", text)


def _result(rating: Rating, report: Report, identifier: str) -> Iterator[ResultProperty]:
    yield from _given("Verdict", "label", str(rating.verdict))
    yield from _given("Adequate", "logical", ADEQUATE[rating.verdict])
    yield from _given("Utilisation", "real", rating.utilisation)
    if math.isinf(rating.utilisation):
        yield from _given("UtilisationState", "label", "no resistance where some is demanded")
    if worst := rating.governing:
        yield from _given("GoverningLimitState", "label", worst.title)
        yield from _given("GoverningClause", "label", worst.clause)
        yield from _given("GoverningCombination", "label", worst.combination)
        yield from _given("GoverningPosition", "length", worst.position)
    if least := _least(rating.safe_loads):
        yield from _given("LeastRatingFactor", "real", least.factor)
        yield from _given("LeastRatedCase", "label", least.case)
    yield from _given("LimitStatesChecked", "text", ", ".join(rating.checked))
    yield from _given("LimitStatesNotChecked", "text", ", ".join(rating.not_checked))
    yield from _given("Reason", "text", "; ".join(reason.text for reason in rating.reasons))
    yield from _given("Standard", "label", report.standard_name)
    yield from _given("Basis", "identifier", identifier)


def _least(safe_loads: tuple[SafeLoad, ...]) -> SafeLoad | None:
    """The case with the least factor; none where a case is not rated or none is limited."""
    if not safe_loads or any(math.isnan(safe.factor) for safe in safe_loads):
        return None
    least = min(safe_loads, key=lambda safe: safe.factor)
    return least if math.isfinite(least.factor) else None


def _limit_states(rating: Rating) -> Iterator[ResultProperty]:
    for state in rating.limit_states:
        yield from _given(state.name, "real", state.utilisation)


def _safe_loads(safe_loads: tuple[SafeLoad, ...]) -> Iterator[ResultProperty]:
    for safe in safe_loads:
        yield from _given(f"{safe.case} factor", "real", safe.factor)
        if math.isfinite(safe.single_value) and safe.single_kind:
            measure: Measure = "force" if safe.single_kind == "point" else "line_force"
            yield from _given(f"{safe.case} safe load", measure, safe.single_value)
        else:
            yield from _given(f"{safe.case} safe load", "text", safe.text)


def _basis(items: tuple[BasisItem, ...]) -> Iterator[ResultProperty]:
    used: dict[str, int] = {}
    for item in items:
        used[item.name] = used.get(item.name, 0) + 1
        name = item.name if used[item.name] == 1 else f"{item.name}{used[item.name]}"
        source = f"assumed: {item.source}" if item.assumed else item.source
        yield from _given(name, _measure(item), item.value)
        yield from _given(f"{name}Source", "label", source)


def _measure(item: BasisItem) -> Measure:
    if item.measure not in _MEASURES:
        raise ValueError(f"{item.name}: {item.measure!r} is not a measure")
    return cast(Measure, item.measure)

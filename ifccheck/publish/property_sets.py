"""The results as property sets for the model, in N, mm, MPa."""

from __future__ import annotations

import hashlib
import math
from collections.abc import Iterable
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
        ResultSet(beam.step_id, beam.guid, beam.ordinal, name, tuple(properties))
        for beam in report.model.beams
        for name, properties in _sets(report.ratings[beam.key], report, identifier)
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


def _sets(
    rating: Rating, report: Report, identifier: str
) -> tuple[tuple[str, list[ResultProperty]], ...]:
    return (
        ("BeamRating_Result", _result(rating, report, identifier)),
        ("BeamRating_LimitStates", _limit_states(rating)),
        ("BeamRating_SafeLoads", _safe_loads(rating.safe_loads)),
        ("BeamRating_Basis", _basis(rating.basis)),
    )


def _given(rows: Iterable[tuple[str, Measure, Value]]) -> list[ResultProperty]:
    """The properties whose value is finite and no empty text; long labels in two."""
    given: list[ResultProperty] = []
    for name, measure, value in rows:
        if isinstance(value, str):
            if len(value) > LONGEST_LABEL and measure != "text":
                given += _cut(name, measure, value)
            elif value:
                given.append(ResultProperty(name, measure, value))
        elif isinstance(value, bool) or value is None:
            given.append(ResultProperty(name, measure, value))
        elif math.isfinite(value):
            given.append(ResultProperty(name, measure, float(value)))
    return given


def _cut(name: str, measure: Measure, text: str) -> tuple[ResultProperty, ResultProperty]:
    return (
        ResultProperty(name, measure, f"{text[: LONGEST_LABEL - 1]}…"),
        ResultProperty(f"{name}Text", "text", text),
    )


def _result(rating: Rating, report: Report, identifier: str) -> list[ResultProperty]:
    rows: list[tuple[str, Measure, Value]] = [
        ("Verdict", "label", str(rating.verdict)),
        ("Adequate", "logical", ADEQUATE[rating.verdict]),
        ("Utilisation", "real", rating.utilisation),
    ]
    if math.isinf(rating.utilisation):
        rows += [("UtilisationState", "label", "no resistance where some is demanded")]
    if worst := rating.governing:
        rows += [
            ("GoverningLimitState", "label", worst.title),
            ("GoverningClause", "label", worst.clause),
            ("GoverningCombination", "label", worst.combination),
            ("GoverningPosition", "length", worst.position),
        ]
    if least := _least(rating.safe_loads):
        rows += [
            ("LeastRatingFactor", "real", least.factor),
            ("LeastRatedCase", "label", least.case),
        ]
    rows += [
        ("LimitStatesChecked", "text", ", ".join(rating.checked)),
        ("LimitStatesNotChecked", "text", ", ".join(rating.not_checked)),
        ("Reason", "text", "; ".join(reason.text for reason in rating.reasons)),
        ("Standard", "label", report.standard_name),
        ("Actions", "label", report.actions),
        ("Basis", "identifier", identifier),
    ]
    return _given(rows)


def _least(safe_loads: tuple[SafeLoad, ...]) -> SafeLoad | None:
    """The case with the least factor; none where a case is not rated or none is limited."""
    if not safe_loads or any(math.isnan(safe.factor) for safe in safe_loads):
        return None
    least = min(safe_loads, key=lambda safe: safe.factor)
    return least if math.isfinite(least.factor) else None


def _limit_states(rating: Rating) -> list[ResultProperty]:
    return _given([(state.name, "real", state.utilisation) for state in rating.limit_states])


def _safe_loads(safe_loads: tuple[SafeLoad, ...]) -> list[ResultProperty]:
    rows: list[tuple[str, Measure, Value]] = []
    for safe in safe_loads:
        rows.append((f"{safe.case} factor", "real", safe.factor))
        name = f"{safe.case} safe load"
        if math.isfinite(safe.single_value) and safe.single_kind:
            measure: Measure = "force" if safe.single_kind == "point" else "line_force"
            rows.append((name, measure, safe.single_value))
        else:
            rows.append((name, "text", safe.text))
    return _given(rows)


def _basis(items: tuple[BasisItem, ...]) -> list[ResultProperty]:
    used: dict[str, int] = {}
    rows: list[tuple[str, Measure, Value]] = []
    for item in items:
        used[item.name] = count = used.get(item.name, 0) + 1
        name = item.name if count == 1 else f"{item.name}{count}"
        source = f"assumed: {item.source}" if item.assumed else item.source
        rows.append((name, _measure(item), item.value))
        rows.append((f"{name}Source", "label", source))
    return _given(rows)


def _measure(item: BasisItem) -> Measure:
    if item.measure not in _MEASURES:
        raise ValueError(f"{item.name}: {item.measure!r} is not a measure")
    return cast(Measure, item.measure)

"""The results as pandas tables: the only maker of DataFrames.

Lengths are in m and stresses in MPa, demand and resistance in kN or kN*m, as the names of the
columns or the column beside them tell. A utilisation is inf where something is demanded of
nothing, a rating factor inf where the case never governs; nan is not known.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import TYPE_CHECKING

from ifccheck.beam import Beam, Model, Outline, OutOfScope, RatedSpan, Verdict
from ifccheck.findings import Survey
from ifccheck.rating import LimitStateRating, Rating, SafeLoad

if TYPE_CHECKING:
    import pandas as pd

Cell = str | float | bool | None

_FOR_PEOPLE = {"N*mm": (1e6, "kN*m"), "N": (1e3, "kN"), "N/mm": (1.0, "kN/m")}
_SINGLE_UNITS = {"point": (1e3, "kN"), "line": (1.0, "kN/m")}

_NO_LOAD = SafeLoad("", math.nan, "", math.nan, "", "", "", math.nan, "")


def ratings_frame(
    beams: Sequence[Beam],
    ratings: Mapping[str, Rating],
    spans: Mapping[str, tuple[RatedSpan, ...]] | None = None,
    cases: Sequence[str] = (),
) -> pd.DataFrame:
    """Return one row per beam: the beam, its verdict, what governs, and every rated case.

    ``cases`` names rated cases that have columns even where they reach no beam.
    """
    import pandas as pd

    return pd.DataFrame(ratings_columns(beams, ratings, spans or {}, cases))


def ratings_columns(
    beams: Sequence[Beam],
    ratings: Mapping[str, Rating],
    spans: Mapping[str, tuple[RatedSpan, ...]],
    cases: Sequence[str],
) -> dict[str, list[Cell]]:
    """Return the columns of ``ratings_frame``, for what needs no table; none without beams."""
    if not beams:
        return {}
    own = [ratings[beam.key] for beam in beams]
    states = _names(state.name for r in ratings.values() for state in r.limit_states)
    named = _names((*cases, *(safe.case for r in ratings.values() for safe in r.safe_loads)))
    return {
        **_columns(_BEAM, (_beam_cells(beam, spans.get(beam.key, ())) for beam in beams)),
        **_columns(_RATING, map(_rating_cells, own)),
        **_columns([f"utilisation_{name}" for name in states], _state_cells(own, states)),
        **_columns([f"{c}_{name}" for c in named for name in _CASE], _case_cells(own, named)),
    }


def _columns(names: Sequence[str], rows: Iterable[Sequence[Cell]]) -> dict[str, list[Cell]]:
    return dict(zip(names, map(list, zip(*rows, strict=True)), strict=True))


def run_frame(
    models: Iterable[tuple[Model, Mapping[str, Rating], Mapping[str, tuple[RatedSpan, ...]]]],
    cases: Sequence[str],
) -> pd.DataFrame:
    """Return the ratings of several models as one table, with the name of each beam's model."""
    import pandas as pd

    frames = [
        ratings_frame(model.beams, ratings, spans, cases).assign(model=model.file_name)
        for model, ratings, spans in models
    ]
    return pd.concat(frames, ignore_index=True)


def _sections(beam: Beam) -> str:
    """The names of its sections; where they vary and have none, their width and depth [mm]."""
    outlines = [end for run in beam.runs for end in (run.outline, run.outline_end) if end]
    if len(outlines) < 2:
        return outlines[0].name if outlines else ""
    return " to ".join(dict.fromkeys(outline.name or _size(outline) for outline in outlines))


def _size(outline: Outline) -> str:
    ys, zs = zip(*outline.rings[0], strict=True)
    return f"{max(ys) - min(ys):.0f} x {max(zs) - min(zs):.0f}"


def survey_frame(surveys: Iterable[Survey]) -> pd.DataFrame:
    """Return one row per beam: what the model says of it, and what a rating would lack."""
    return _frame(
        {**_surveyed_cells(survey, beam), "model": survey.model.file_name}
        for survey in surveys
        for beam in survey.model.beams
    )


def _surveyed_cells(survey: Survey, beam: Beam) -> dict[str, Cell]:
    strength, finding = beam.concrete_strength, survey.of(beam)
    return {
        "mark": beam.mark,
        "key": beam.key,
        "storey": beam.storey,
        "section": _sections(beam),
        "length_m": _metres(beam.length),
        "material": beam.material,
        "concrete_strength_MPa": strength.value if strength else math.nan,
        "reinforcement": ", ".join(each.source for each in beam.reinforcement),
        "state": str(finding.state),
        "missing": "; ".join(finding.lacks),
        "brief_must_state": "; ".join(finding.to_state),
        "doubts": "; ".join(finding.doubts),
        "requirement_unmet": "; ".join(finding.unmet),
    }


def limit_states_frame(beams: Sequence[Beam], ratings: Mapping[str, Rating]) -> pd.DataFrame:
    """Return one row per beam and limit state."""
    return _frame(
        {"mark": beam.mark, "key": beam.key, **_limit_state_cells(state)}
        for beam in beams
        for state in ratings[beam.key].limit_states
    )


def safe_loads_frame(beams: Sequence[Beam], ratings: Mapping[str, Rating]) -> pd.DataFrame:
    """Return one row per beam and rated case that reaches it."""
    return _frame(
        {
            "mark": beam.mark,
            "key": beam.key,
            "case": safe.case,
            **dict(zip(_CASE, _safe_load_cells(safe), strict=True)),
        }
        for beam in beams
        for safe in ratings[beam.key].safe_loads
    )


def basis_frame(beams: Sequence[Beam], ratings: Mapping[str, Rating]) -> pd.DataFrame:
    """Return one row per beam and thing that its rating rests on, in N, mm, MPa."""
    return _frame(
        {
            "mark": beam.mark,
            "key": beam.key,
            "name": item.name,
            "label": item.label,
            "value": item.value,
            "measure": item.measure,
            "source": item.source,
            "assumed": item.assumed,
        }
        for beam in beams
        for item in ratings[beam.key].basis
    )


def remarks_frame(beams: Sequence[Beam], ratings: Mapping[str, Rating]) -> pd.DataFrame:
    """Return one row per beam and remark or reason for which it is not rated."""
    return _frame(
        {"mark": beam.mark, "key": beam.key, "kind": kind, "stage": stage, "text": text}
        for beam in beams
        for kind, stage, text in (
            *(("reason", "", reason.text) for reason in ratings[beam.key].reasons),
            *((remark.kind, remark.stage, remark.text) for remark in ratings[beam.key].remarks),
        )
    )


def out_of_scope_frame(members: Iterable[OutOfScope]) -> pd.DataFrame:
    """Return one row per beam that was left out, with the evidence."""
    return _frame(
        {
            "name": member.name,
            "global_id": member.guid,
            "storey": member.storey,
            "reason": member.reason,
            "evidence": member.evidence,
        }
        for member in members
    )


def _frame(rows: Iterable[Mapping[str, Cell]]) -> pd.DataFrame:
    import pandas as pd

    return pd.DataFrame(list(rows))


def _names(names: Iterable[str]) -> list[str]:
    """Names in the order in which they first come, each once."""
    return list(dict.fromkeys(names))


_BEAM = (
    "model", "mark", "name", "tag", "global_id", "key", "storey", "type", "section", "material",
    "concrete_strength_MPa", "length_m", "span_m",
)  # fmt: skip


def _beam_cells(beam: Beam, spans: Sequence[RatedSpan]) -> tuple[Cell, ...]:
    strength = beam.concrete_strength
    return (
        beam.model,
        beam.mark,
        beam.name,
        beam.tag,
        beam.guid,
        beam.key,
        beam.storey,
        beam.type_name,
        _sections(beam),
        beam.material,
        strength.value if strength else math.nan,
        _metres(beam.length) if beam.axis else math.nan,
        _metres(max(each.length for each in spans)) if spans else math.nan,
    )


_RATING = (
    "verdict", "checked", "not_checked", "reasons", "doubts", "utilisation", "utilisation_state",
    "governing", "governing_position_m", "governing_combination", "governing_clause",
    "governing_demand", "governing_resistance", "governing_unit",
)  # fmt: skip


def _rating_cells(rating: Rating) -> tuple[Cell, ...]:
    return (
        str(rating.verdict),
        ", ".join(rating.checked),
        ", ".join(rating.not_checked),
        "; ".join([reason.text for reason in rating.reasons]),
        "; ".join([remark.text for remark in rating.remarks if remark.kind == "doubt"]),
        rating.utilisation,
        utilisation_state(rating.utilisation),
        *_governing_cells(rating.governing),
    )


def _governing_cells(state: LimitStateRating | None) -> tuple[Cell, ...]:
    if state is None:
        return "", math.nan, "", "", math.nan, math.nan, ""
    factor, unit = _unit(state)
    return (
        state.title,
        _metres(state.position),
        state.combination,
        state.clause,
        state.demand / factor,
        state.resistance / factor,
        unit,
    )


def _unit(state: LimitStateRating) -> tuple[float, str]:
    return _FOR_PEOPLE.get(state.demand_unit, (1.0, state.demand_unit))


def _limit_state_cells(state: LimitStateRating) -> dict[str, Cell]:
    factor, unit = _unit(state)
    return {
        "limit_state": state.name,
        "title": state.title,
        "utilisation": state.utilisation,
        "utilisation_state": utilisation_state(state.utilisation),
        "position_m": _metres(state.position),
        "combination": state.combination,
        "demand": state.demand / factor,
        "resistance": state.resistance / factor,
        "unit": unit,
        "clause": state.clause,
        "counted": state.counted,
        "why_not": state.why_not,
    }


def _state_cells(ratings: Iterable[Rating], names: Sequence[str]) -> Iterator[list[Cell]]:
    for rating in ratings:
        used = {state.name: state.utilisation for state in rating.limit_states}
        yield [used.get(name, math.nan) for name in names]


def _case_cells(ratings: Iterable[Rating], cases: Sequence[str]) -> Iterator[list[Cell]]:
    blank = _safe_load_cells(_NO_LOAD)
    for rating in ratings:
        found = {safe.case: _safe_load_cells(safe) for safe in rating.safe_loads}
        rated = rating.verdict is not Verdict.NOT_RATED
        without = (blank[0], "no load of this case", *blank[2:]) if rated else blank
        yield [cell for case in cases for cell in found.get(case, without)]


_CASE = (
    "factor", "factor_state", "assigned", "safe_load", "single_load", "single_unit",
    "limited_by", "limited_at_m",
)  # fmt: skip


def _safe_load_cells(safe: SafeLoad) -> tuple[Cell, ...]:
    factor, unit = _SINGLE_UNITS.get(safe.single_kind, (1.0, ""))
    return (
        safe.factor,
        factor_state(safe.factor),
        safe.assigned,
        safe.text,
        safe.single_value / factor,
        unit if math.isfinite(safe.single_value) else "",
        safe.governing,
        _metres(safe.position),
    )


def utilisation_state(utilisation: float) -> str:
    """Return in words whether a utilisation is known."""
    if math.isnan(utilisation):
        return "not known"
    return "no resistance" if math.isinf(utilisation) else "known"


def factor_state(factor: float) -> str:
    """Return in words whether a rating factor is a number, and if not, why."""
    if math.isnan(factor):
        return "not rated"
    return "not limited" if math.isinf(factor) else "rated"


def _metres(length: float) -> float:
    return round(length / 1000.0, 6) + 0.0  # never -0.0

"""Load cases of the models' structural analysis models that cases of the brief take."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator, Mapping, Sequence

from ifccheck.beam import ActionDoubt, Beam, LaidAction, Load, ModelCase, ModelLoads, Remark
from ifccheck.brief.model import Brief, TakenCase
from ifccheck.brief.places import did_you_mean
from ifccheck.errors import BriefError
from ifccheck.units import clipped

STAGE = "loads"
UNTAKEN = "no case of the brief takes it by from_model"
OF_NO_CASE = "give what acts under [[loads]], or assign them to a load case in the model"


def taken_loads(
    brief: Brief,
    found: ModelLoads,
    beams: Mapping[str, Beam],
    spans: Mapping[str, tuple[float, float]],
) -> tuple[Load, ...]:
    """Return the loads of the model's cases that the brief takes, cut to each beam's length, or
    to its span where that is longer.

    What is laid on a beam and lies wholly beyond its end, if by little, stands at that end.
    """
    return tuple(
        _load(action, taken, beams[action.beam], spans.get(action.beam))
        for action in found.laid
        if (taken := brief.from_model.get(action.case)) is not None
    )


def origin_of(action: LaidAction, taken: TakenCase) -> str:
    """Where a load comes from: the case of the brief, and the action of the model."""
    return f"cases.{taken.case}, {action.origin}"


def upward_of(brief: Brief, found: ModelLoads) -> dict[str, bool]:
    """Loads of the model that act upward, by origin, and whether the brief says so."""
    return {
        origin_of(action, taken): taken.upward
        for action in found.laid
        if action.acts_upward and (taken := brief.from_model.get(action.case))
    }


def _load(
    action: LaidAction, taken: TakenCase, beam: Beam, span: tuple[float, float] | None
) -> Load:
    first, last = span or (0.0, beam.length)
    low, high = min(0.0, first), max(beam.length, last)
    start, end = (min(max(x, low), high) for x in (action.start, action.end))
    kind, values = action.kind, action.values
    if kind == "line" and end <= start:
        whole = (values[0] + values[1]) / 2.0 * (action.end - action.start)
        kind, values = "point", (whole, whole)
    elif kind == "line":
        slope = (values[1] - values[0]) / (action.end - action.start)
        values = tuple(values[0] + slope * (x - action.start) for x in (start, end))  # type: ignore[assignment]
    return Load(
        beam=beam.key,
        case=taken.case,
        kind=kind,
        start=start,
        end=end,
        values=values,
        origin=origin_of(action, taken),
        text=action.text,
    )


def doubts_by_beam(brief: Brief, found: ModelLoads) -> dict[str, list[ActionDoubt]]:
    """What of the actions that the brief takes is not laid on each beam, or not surely."""
    doubts: defaultdict[str, list[ActionDoubt]] = defaultdict(list)
    for doubt in found.doubts:
        if taken := brief.from_model.get(doubt.case):
            doubts[doubt.beam].append(doubt._replace(text=f"cases.{taken.case}: {doubt.text}"))
    return dict(doubts)


def uncarried(brief: Brief, found: ModelLoads) -> tuple[str, ...]:
    """Actions of the cases that the brief takes which may act on any beam."""
    return tuple(
        f"load case {clipped(case.name)} of the model: {text}"
        for case in found.cases
        if case.name in brief.from_model
        for text in case.uncarried
    )


def untaken_by_beam(brief: Brief, found: ModelLoads) -> dict[str, list[str]]:
    """Names of the cases that load each beam and that the brief does not take."""
    names: defaultdict[str, dict[str, None]] = defaultdict(dict)
    acting = {(one.beam, one.case): None for one in found.laid}
    doubtful = {(one.beam, one.case): None for one in found.doubts if not one.only_near}
    for beam, case in {**acting, **doubtful}:
        if case not in brief.from_model:
            names[beam][case] = None
    return {key: list(cases) for key, cases in names.items()}


def case_remarks(brief: Brief, found: ModelLoads) -> tuple[Remark, ...]:
    """Say of every load case of the model whether the brief takes it, and what is lost of it."""
    return tuple(
        Remark(None, STAGE, f"{_called(case)}: {text}", "doubt")
        for case in found.cases
        for text in _told(brief, case)
    )


def _called(case: ModelCase) -> str:
    if not case.name:
        return "actions of the model that belong to no load case"
    return f"load case {clipped(case.name)} of the model"


def _told(brief: Brief, case: ModelCase) -> Iterator[str]:
    taken = brief.from_model.get(case.name)
    if taken is None:
        count = "1 action counts" if case.actions == 1 else f"{case.actions} actions count"
        yield f"{count} nowhere: {UNTAKEN if case.name else OF_NO_CASE}"
        return
    yield from case.notes
    yield from case.lost
    for text in case.uncarried:
        yield f"{text}; beams that carry it are not rated unless loads_complete says so"
    natures = {one.name: one.nature for one in brief.cases}
    if case.permanent is not None and case.permanent != (natures[taken.case] == "permanent"):
        word = "permanent" if case.permanent else "not permanent"
        yield f"the model calls it {word}, and cases.{taken.case} is {natures[taken.case]}"


def check_model_cases(brief: Brief, models: Sequence[ModelLoads]) -> None:
    """Raise BriefError for a case that no model of the run has: its loads would be lost."""
    known = list(dict.fromkeys(c.name for found in models for c in found.cases if c.name))
    for name, taken in brief.from_model.items():
        if name not in known:
            raise BriefError(
                f"{brief.at(f'cases.{taken.case}.from_model')}: no model has the load case"
                f" {clipped(name)}: {did_you_mean(name, known)}"
            )

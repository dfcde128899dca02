"""The brief's own load combinations: every case has its factor, by name or by nature."""

from __future__ import annotations

from collections.abc import Sequence
from typing import get_args

from ifccheck.beam import SELF, Case, Nature
from ifccheck.brief import schema
from ifccheck.brief.cases import SELF_WEIGHT, factors_of
from ifccheck.brief.faults import FaultError
from ifccheck.brief.model import CombinationEntry
from ifccheck.brief.places import Path, did_you_mean, shown


def combination_entries(
    tables: Sequence[schema.CombinationTable], cases: Sequence[Case]
) -> tuple[CombinationEntry, ...]:
    """Return the entries of ``[[combinations]]``; raise FaultError where one leaves a case out."""
    _check_names(tables)
    entries = tuple(_entry(i, table, cases) for i, table in enumerate(tables))
    _check_none_idle(entries, cases)
    return entries


def _check_names(tables: Sequence[schema.CombinationTable]) -> None:
    seen: dict[str, int] = {}
    for index, table in enumerate(tables):
        if table.name in seen:
            raise FaultError(
                ("combinations", index, "name"),
                f"'{table.name}' is the name of {shown(('combinations', seen[table.name]))} too",
            )
        seen[table.name] = index


def _entry(index: int, table: schema.CombinationTable, cases: Sequence[Case]) -> CombinationEntry:
    path: Path = ("combinations", index)
    known = [SELF, *(case.name for case in cases), *get_args(Nature)]
    for name, factor in table.factors.items():
        if name not in known:
            raise FaultError(
                (*path, "factors", name), f"unknown case or nature: {did_you_mean(name, known)}"
            )
        _check_factor((*path, "factors", name), name, factor, cases)
    for case in (SELF_WEIGHT, *cases):
        if case.name not in table.factors and case.nature not in table.factors:
            raise FaultError(
                (*path, "factors"),
                f"has no factor for case '{case.name}':"
                f" give one for it or for {case.nature}, 0 included",
            )
    return CombinationEntry(shown(path), table.name, table.kind, dict(table.factors))


def _check_factor(
    path: Path, name: str, factor: tuple[float, float | None], cases: Sequence[Case]
) -> None:
    unfavourable, favourable = factor
    if favourable is None:
        return
    if favourable > unfavourable:
        raise FaultError(path, "must be [unfavourable, favourable], the greater one first")
    natures = {case.name: case.nature for case in (SELF_WEIGHT, *cases)}
    if natures.get(name, name) != "permanent" and favourable != 0.0:
        raise FaultError(path, "is not permanent and may never relieve: its favourable factor is 0")


def _check_none_idle(entries: Sequence[CombinationEntry], cases: Sequence[Case]) -> None:
    """A case that is factored by zero throughout would be a load that is dropped."""
    strength = [entry for entry in entries if entry.kind == "strength"]
    for case in (SELF_WEIGHT, *cases):
        if strength and all(factors_of(entry, case)[0] == 0.0 for entry in strength):
            raise FaultError(
                ("combinations",),
                f"case '{case.name}' counts in no strength combination: its factor is 0 in each",
            )

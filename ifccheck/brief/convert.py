"""From the validated TOML tables to the brief: what keys mean together."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import cast, get_args

from ifccheck.beam import SELF, Case, Nature, SourceName
from ifccheck.brief import schema
from ifccheck.brief.combination_entries import combination_entries
from ifccheck.brief.entries import beam_entry, material_entry, support_entry
from ifccheck.brief.faults import FaultError, Source
from ifccheck.brief.floor_entries import floor_entry
from ifccheck.brief.load_entries import load_entry
from ifccheck.brief.model import (
    Basis,
    Brief,
    Defaults,
    FrameOptions,
    LoadTableFile,
    ReinforcementField,
    Scope,
    TakenCase,
)
from ifccheck.brief.places import did_you_mean, shown
from ifccheck.brief.train_entries import check_own_cases, train_entries

DEFAULT_SOURCES: tuple[SourceName, ...] = ("schedule", "bars", "sections", "properties")
RESERVED = (SELF, *get_args(Nature))


def to_brief(table: schema.BriefTable, path: Path, source: Source) -> Brief:
    """Return the brief of a validated file; raise FaultError at a contradiction."""
    cases = _cases(table.cases)
    brief = Brief(
        path=path,
        file_name=path.name,
        sha256="",
        basis=Basis(**dict(table.basis)),
        defaults=_defaults(table.defaults),
        sources=_sources(table.reinforcement),
        schedule=_schedule(table.reinforcement, path),
        mapping_optional=_optional(table.reinforcement),
        property_mapping=_mapping(table.reinforcement.properties),
        lines={shown(key): line for key, line in source.lines.items()},
        cases=cases,
        loads=tuple(load_entry(i, t, cases) for i, t in enumerate(table.loads)),
        floors=tuple(floor_entry(i, t, cases) for i, t in enumerate(table.floors)),
        trains=train_entries(table.trains, cases),
        supports=tuple(support_entry(i, t) for i, t in enumerate(table.supports)),
        beams=tuple(beam_entry(i, t) for i, t in enumerate(table.beams)),
        materials=tuple(material_entry(i, t) for i, t in enumerate(table.materials)),
        combinations=combination_entries(table.combinations, cases),
        scope=_scope(table.scope),
        from_model=_from_model(table.cases),
        load_tables=_load_tables(table.load_tables, path),
        frame=_frame(table),
    )
    _check_slab_bars(brief)
    check_own_cases(brief)
    return brief


def _check_slab_bars(brief: Brief) -> None:
    for index, entry in enumerate(brief.beams):
        if entry.slab_bars and not brief.asks_for_slabs:
            raise FaultError(
                ("beams", index, "slab_bars"),
                "counts only where slab counts as a flange: write slab_flange = true here, or"
                " slab_flanges = true under [defaults]",
            )


def _frame(table: schema.BriefTable) -> FrameOptions | None:
    if table.frame is None:
        return None
    if table.defaults.supports is not None:
        raise FaultError(
            ("frame",),
            "takes supports from the model, and defaults.supports states them: leave one out",
        )
    return FrameOptions(
        table.frame.restraint, table.frame.continuity, tuple(table.frame.load_bearing)
    )


def _scope(table: schema.ScopeTable) -> Scope:
    for key, queries in (("also", table.also), ("leave_out", table.leave_out)):
        for query in queries:
            if not query.strip():
                raise FaultError(("scope", key), "holds an empty query")
    return Scope(
        also={f"scope.also[{n}]": query for n, query in enumerate(table.also, 1)},
        leave_out={f"scope.leave_out[{n}]": query for n, query in enumerate(table.leave_out, 1)},
        optional=table.optional,
    )


def _cases(tables: Mapping[str, schema.CaseTable]) -> tuple[Case, ...]:
    for name, table in tables.items():
        _check_case(name, table, list(tables))
    return tuple(
        Case(
            name,
            table.nature,
            table.category,
            table.rated,
            tuple(table.excludes),
            table.removable,
            table.whole,
        )
        for name, table in tables.items()
    )


def _check_case(name: str, table: schema.CaseTable, names: list[str]) -> None:
    path = ("cases", name)
    if name in RESERVED:
        raise FaultError(path, f"'{name}' is a reserved name: name the case otherwise")
    if name != name.strip():
        raise FaultError(path, "the name of a case may not begin or end with a space")
    if table.removable and table.nature != "permanent":
        raise FaultError(
            (*path, "removable"),
            f"only a permanent case needs it, {table.nature} may be absent anyway",
        )
    if table.whole and table.nature == "permanent":
        raise FaultError((*path, "whole"), "a permanent case acts as a whole anyway")
    for other in table.excludes:
        if other == name or other not in names:
            known = [known for known in names if known != name]
            raise FaultError(
                (*path, "excludes"), f"unknown case '{other}': {did_you_mean(other, known)}"
            )


def _from_model(tables: Mapping[str, schema.CaseTable]) -> Mapping[str, TakenCase]:
    """The load cases of the model that cases take, each taken once."""
    found: dict[str, TakenCase] = {}
    for case, table in tables.items():
        if table.upward and not table.from_model:
            raise FaultError(
                ("cases", case, "upward"),
                "is for loads of the model, and the case has no from_model: write it at the load",
            )
        for name in table.from_model:
            if name in found:
                raise FaultError(
                    ("cases", case, "from_model"),
                    f"'{name}' is taken by cases.{found[name].case} already: it would count twice",
                )
            found[name] = TakenCase(case, table.upward)
    return found


def _defaults(table: schema.DefaultsTable) -> Defaults:
    values = dict(table)
    supports = values.pop("supports")
    if supports is not None and "free" in supports:
        raise FaultError(
            ("defaults", "supports"),
            "a free end is never a default: state it under [[supports]] for its beams",
        )
    return Defaults(**values, supports=None if supports is None else tuple(supports))


def _sources(table: schema.ReinforcementTable) -> tuple[SourceName, ...]:
    path = ("reinforcement", "sources")
    if table.sources is None:
        return DEFAULT_SOURCES
    if len(set(table.sources)) != len(table.sources):
        raise FaultError(path, "names a source twice")
    if "schedule" in table.sources and table.schedule is None:
        raise FaultError(path, "names the schedule, but reinforcement.schedule gives no file")
    if table.schedule is not None and "schedule" not in table.sources:
        raise FaultError(path, "leaves out the schedule, but reinforcement.schedule gives a file")
    return tuple(table.sources)


def _schedule(table: schema.ReinforcementTable, path: Path) -> Path | None:
    if table.schedule is None:
        return None
    return _beside(("reinforcement", "schedule"), table.schedule, path)


def _load_tables(tables: Sequence[schema.LoadFileTable], path: Path) -> tuple[LoadTableFile, ...]:
    known: set[Path] = set()
    found = []
    for index, table in enumerate(tables):
        key = ("load_tables", index, "file")
        file = _beside(key, table.file, path)
        if file.resolve() in known:
            raise FaultError(key, f"'{table.file}' is given twice: its loads would count twice")
        known.add(file.resolve())
        found.append(LoadTableFile(table.file, file))
    return tuple(found)


def _beside(key: tuple[str | int, ...], name: str, path: Path) -> Path:
    """A table that stands beside the brief."""
    file = path.parent / name
    if file.suffix.lower() not in (".csv", ".xlsx"):
        raise FaultError(key, f"'{name}' is neither .csv nor .xlsx")
    if not file.is_file():
        raise FaultError(key, f"there is no file '{name}' beside the brief")
    return file


def _optional(table: schema.ReinforcementTable) -> bool:
    if table.optional and not table.properties.model_fields_set:
        raise FaultError(
            ("reinforcement", "optional"),
            "is for a mapping of properties, and none is given",
        )
    return table.optional


def _mapping(table: schema.PropertiesTable) -> Mapping[ReinforcementField, str]:
    mapping: dict[ReinforcementField, str] = {}
    for field, target in dict(table).items():
        if target is None:
            continue
        set_name, _, property_name = target.partition(".")
        if not set_name.strip() or not property_name.strip():
            raise FaultError(
                ("reinforcement", "properties", field), f"'{target}' must be written Set.Property"
            )
        mapping[cast(ReinforcementField, field)] = target
    return mapping

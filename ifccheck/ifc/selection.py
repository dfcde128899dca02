"""Answers the selections of a brief with the keys of beams."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from typing import Any, Protocol

from ifccheck.beam import Beam
from ifccheck.errors import BriefError


class Opened(Protocol):
    """What a selection needs of an opened model."""

    @property
    def file(self) -> Any:
        """The ifcopenshell file."""


def select(
    opened: Opened, beams: Sequence[Beam], patterns: Sequence[str] | None, where: str | None
) -> tuple[str, ...]:
    """Keys of the beams that marks or an element query reach, in the order of ``beams``.

    A mark is an exact GlobalId (or key), else a Tag, else a Name; in it ``*`` stands for
    anything and case counts. A query is ifcopenshell's, asked of these beams alone.
    """
    if where is not None:
        return _queried(opened, beams, where)
    reached = {key for pattern in patterns or () for key in _marked(beams, pattern)}
    return tuple(beam.key for beam in beams if beam.key in reached)


def _marked(beams: Sequence[Beam], pattern: str) -> tuple[str, ...]:
    """Keys by the first kind of mark that the pattern fits."""
    fits = re.compile(".*".join(map(re.escape, pattern.split("*"))), re.DOTALL).fullmatch
    kinds: tuple[Callable[[Beam], bool], ...] = (
        lambda beam: pattern in (beam.guid, beam.key),
        lambda beam: bool(beam.tag and fits(beam.tag)),
        lambda beam: bool(beam.name and fits(beam.name)),
    )
    found = (tuple(beam.key for beam in beams if is_marked(beam)) for is_marked in kinds)
    return next(filter(None, found), ())


def _queried(opened: Opened, beams: Sequence[Beam], where: str) -> tuple[str, ...]:
    import ifcopenshell.util.selector as selector

    candidates = {opened.file.by_id(beam.step_id) for beam in beams}
    _require_known_classes(opened, where)
    try:
        found = selector.filter_elements(opened.file, where, elements=candidates)
    except Exception as error:  # the query language raises what its parser happens to raise
        reason = str(error).strip().splitlines()[0] if str(error).strip() else "not understood"
        raise BriefError(f"where = '{where}': {reason}") from error
    ids = {entity.id() for entity in found}
    return tuple(beam.key for beam in beams if beam.step_id in ids)


def _require_known_classes(opened: Opened, where: str) -> None:
    """Refuse a class that the schema does not have: the query would reach nothing in silence."""
    schema = ifcopenshell_schema(opened)
    for name in re.findall(r"(?:^|[,+]\s*)!?(Ifc\w+)", where):
        try:
            schema.declaration_by_name(name)
        except RuntimeError as error:
            raise BriefError(f"where = '{where}': {name} is no class of the schema") from error


def ifcopenshell_schema(opened: Opened) -> Any:
    """The schema of an opened file."""
    import ifcopenshell

    return ifcopenshell.schema_by_name(opened.file.schema_identifier)

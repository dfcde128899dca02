"""Answers a selection of the brief with the keys of beams."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Iterator, Sequence
from typing import Any, Protocol

from ifccheck.errors import BriefError
from ifccheck.ifc.opening import OpenedModel
from ifccheck.units import clipped


class Marked(Protocol):
    """What marks and queries may reach."""

    @property
    def step_id(self) -> int:
        """Its instance in the file."""

    @property
    def key(self) -> str:
        """What results are told by."""

    @property
    def guid(self) -> str:
        """GlobalId."""

    @property
    def ifc_class(self) -> str:
        """Its class."""

    @property
    def name(self) -> str:
        """Name."""

    @property
    def tag(self) -> str:
        """Tag."""


Field = Callable[[Marked], str]

ONE_CLASS = re.compile(r"Ifc[A-Za-z0-9_]+")
"""A query that is no more than the name of a class."""
BLANKS = " \t\f\r\n"
"""What a query may hold anywhere without a meaning."""


def select(
    opened: OpenedModel,
    beams: Sequence[Marked],
    patterns: Sequence[str] | None,
    where: str | None,
) -> tuple[str, ...]:
    """Return the keys of the beams that the patterns or the query reach, in model order.

    A pattern is tried as a GlobalId, then on Tags, then on Names; ``*`` stands for any text.
    ``where`` is an element query of ifcopenshell. Raises BriefError where a pattern fits the
    Tags of some beams and the Names of others, where the query cannot be understood, or where it
    names a class that the model's schema has not.
    """
    if where is not None:
        chosen = _answer(opened, beams, where)
    else:
        chosen = {key for pattern in patterns or () for key in _matched(beams, pattern)}
    return tuple(beam.key for beam in beams if beam.key in chosen)


def _matched(beams: Sequence[Marked], pattern: str) -> list[str]:
    """Keys of the beams that a pattern reaches, by the first field that it matches any in.

    A pattern with ``*`` is no GlobalId: those are random, and "2*" would reach some by chance.
    """
    if pattern.strip("*") == "" and pattern:
        return [beam.key for beam in beams]
    matches = _matcher(pattern)
    for identifier in () if "*" in pattern else IDENTIFIERS:
        if found := [beam for beam in beams if matches(identifier(beam))]:
            return [beam.key for beam in found]
    tagged = [beam for beam in beams if matches(beam.tag)]
    named = [beam for beam in beams if matches(beam.name)]
    _require_one_kind(pattern, tagged, named)
    return [beam.key for beam in tagged or named]


def _require_one_kind(pattern: str, tagged: Sequence[Marked], named: Sequence[Marked]) -> None:
    """Refuse a pattern that fits the Name of a beam that its Tags would leave out."""
    keys = {beam.key for beam in tagged}
    others = [beam for beam in named if beam.key not in keys]
    if tagged and others:
        one, other = tagged[0], others[0]
        raise BriefError(
            f"{clipped(pattern)} fits the Tag of one beam ({clipped(one.tag)}, GlobalId {one.guid})"
            f" and the Name of another ({clipped(other.name)}, GlobalId {other.guid}): give the"
            " GlobalId of each that is meant, or a query of one kind, where = 'IfcBeam, Tag=...'"
        )


IDENTIFIERS: tuple[Field, ...] = (lambda beam: beam.guid, lambda beam: beam.key)
"""A key is a GlobalId, or one of several beams that share it: ``GlobalId~2``."""


def _matcher(pattern: str) -> Callable[[str], bool]:
    if "*" not in pattern:
        return lambda text: text == pattern and text != ""
    expression = re.compile(
        ".*".join(re.escape(part) for part in pattern.split("*")), flags=re.DOTALL
    )
    return lambda text: text != "" and expression.fullmatch(text) is not None


def _answer(opened: OpenedModel, beams: Sequence[Marked], query: str) -> set[str]:
    """Keys of the beams that an element query finds among the candidates."""
    place = f'where = "{query}"'
    if not query.strip():
        raise BriefError("where is empty: give an element query such as IfcBeam, or beams")
    name = query.strip(BLANKS)
    if ONE_CLASS.fullmatch(name):
        _require_known_classes(opened, (name,), place)
        return _of_class(opened, beams, name)
    return _selected(opened, beams, query, place)


def _of_class(opened: OpenedModel, beams: Sequence[Marked], name: str) -> set[str]:
    """Keys of the beams of a class or of one under it, as ifcopenshell answers that query.

    Its selector, which builds several grammars when it is loaded, is left alone.
    """
    samples = {beam.ifc_class: beam.step_id for beam in beams}
    within = {one for one, step_id in samples.items() if opened.file.by_id(step_id).is_a(name)}
    return {beam.key for beam in beams if beam.ifc_class in within}


def _selected(opened: OpenedModel, beams: Sequence[Marked], query: str, place: str) -> set[str]:
    if not beams:
        _require_understood(opened, query, place)
        return set()  # without candidates ifcopenshell would search the whole model
    keys = {beam.step_id: beam.key for beam in beams}
    candidates = {opened.file.by_id(step_id) for step_id in keys}
    found = elements_of(opened, query, place, candidates)
    return {keys[entity.id()] for entity in found if entity.id() in keys}


def elements_of(
    opened: OpenedModel, query: str, place: str, candidates: set[Any] | None = None
) -> list[Any]:
    """Return what an element query finds among the candidates, or in the whole model.

    Raises BriefError, naming the place, where it cannot be understood or answered.
    """
    from ifcopenshell.util import selector
    from lark.exceptions import LarkError

    _require_understood(opened, query, place)
    try:
        found = selector.filter_elements(opened.file, query, elements=candidates)
    except (LarkError, re.error) as error:
        detail = str(error.__context__ or error).splitlines()[0]
        raise BriefError(
            f"{place} cannot be answered in {opened.file_name} ({detail}): correct it"
        ) from error
    return sorted(found, key=lambda entity: entity.id())


def _require_understood(opened: OpenedModel, query: str, place: str) -> None:
    from ifcopenshell.util import selector
    from lark.exceptions import LarkError

    try:
        tree = selector.filter_elements_grammar.parse(query)
    except LarkError as error:
        at = getattr(error, "column", None)
        spot = f" at character {at}" if isinstance(at, int) and at > 0 else ""
        raise BriefError(
            f"{place} cannot be understood{spot}: write an element query of ifcopenshell, such as"
            ' IfcBeam, location="Level 1"'
        ) from error
    _require_known_classes(opened, _classes(tree), place)


def _require_known_classes(opened: OpenedModel, names: Iterable[str], place: str) -> None:
    import ifcopenshell

    schema = ifcopenshell.schema_by_name(opened.file.schema_identifier)
    for name in names:
        try:
            schema.declaration_by_name(name)
        except RuntimeError as error:
            raise BriefError(
                f"{place} names the class {name}, which {opened.file.schema} does not have: write"
                " IfcBeam, or another class of that schema"
            ) from error


def _classes(tree: Any) -> Iterator[str]:
    for branch in tree.iter_subtrees():
        if branch.data == "ifc_class":
            yield str(branch.children[0])

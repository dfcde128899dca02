"""What section definitions state of a beam's reinforcement, row by row, as the model has it."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, field
from functools import partial
from typing import TypeVar

from ifccheck.beam import Face, Reason
from ifccheck.ifc.context import Context
from ifccheck.ifc.entity import ILL_TYPED, Entity, UnreadableError, get, label, text
from ifccheck.ifc.physical import MAIN_ROLES, TIE_ROLES
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.section_bars import SectionBars, number, read_bars

T = TypeVar("T")
SHEAR_ROLES = TIE_ROLES | {"SHEAR", "STUD", "PUNCHING"}
FACE_WORDS: dict[Face, frozenset[str]] = {
    "top": frozenset(
        {"top", "upper", "hogging", "oben", "obere", "oberseite", "boven", "supérieur", "superior"}
    ),
    "bottom": frozenset(
        {"bottom", "lower", "soffit", "sagging", "unten", "untere", "unterseite", "onder",
         "inférieur", "inferior"}
    ),
}  # fmt: skip
"""Words in the name, description or kind of a definition that tell where its bars lie"""
PLACE_WORDS = frozenset(
    {"floor", "storey", "story", "level", "roof", "slab", "deck", "geschoss", "etage", "verdieping"}
)
"""Words beside which an upper or a lower one may be that of the building"""
_WORDS = re.compile(r"[^\W\d_]+")
_HUMP = re.compile(r"(?<=[^\W\d_A-Z])(?=[A-Z])")


@dataclass(frozen=True, slots=True)
class Row:
    """Bars of one size at one depth, from one place to another."""

    name: str
    """What its bars are called."""
    start: float
    end: float
    """Lengths along an axis of the beam's placement [mm]"""
    depth: float
    """Of the bar centres [mm]"""
    said: Face | None
    """The face that the words of its definition name"""
    heights: tuple[tuple[float, float], ...]
    """Both extents of each profile that the section is said to have [mm]"""
    transverse: float
    bars: SectionBars


@dataclass(slots=True)
class Stated:
    """All that the definitions of a beam state, and what cannot be read of them."""

    rows: list[Row] = field(default_factory=list)
    reasons: list[Reason] = field(default_factory=list)


class RowReader:
    """Reads definitions; each is read once, as a type's may hold for many beams."""

    def __init__(self, context: Context) -> None:
        self._context = context
        self._profiles = Profiles(context.placements)
        self._read: dict[int, Stated] = {}

    def of(self, step_ids: Sequence[int]) -> Stated:
        """Return what several definitions state."""
        stated = Stated()
        for step_id in dict.fromkeys(step_ids):
            if step_id not in self._read:
                self._read[step_id] = self._stated(self._context.file.by_id(step_id))
            stated.rows += self._read[step_id].rows
            stated.reasons += self._read[step_id].reasons
        return stated

    def _stated(self, definition: Entity) -> Stated:
        stated = Stated()
        said = _face_in(" ".join(text(definition, name) for name in _NAMING))
        sections = _guarded(
            definition,
            stated,
            partial(_listed, definition, "ReinforcementSectionDefinitions"),
            label,
        )
        for section in sections or ():
            _guarded(section, stated, partial(self._add, section, said, stated), _section)
        if not stated.rows and not stated.reasons:
            stated.reasons.append(Reason(f"{label(definition)} holds no section"))
        return stated

    def _add(self, section: Entity, said: Face | None, stated: Stated) -> None:
        role = str(get(section, "ReinforcementRole") or "NOTDEFINED")
        if role in SHEAR_ROLES:
            stated.reasons.append(
                Reason(
                    f"{_section(section)}: by its role ({role}) reinforcement against shear, of"
                    " which a section states neither spacing nor legs: not counted",
                    blocking=False,
                )
            )
            return
        if role not in MAIN_ROLES:
            raise UnreadableError(f"its role ({role}) does not tell whether its bars run along")
        bars = _listed(section, "CrossSectionReinforcementDefinitions")
        if not bars:
            raise UnreadableError("it holds no bars")
        for one in bars:
            row = _guarded(one, stated, partial(self._row, section, one, said), _bars)
            if row is not None:
                stated.rows.append(row)

    def _row(self, section: Entity, bars: Entity, said: Face | None) -> Row:
        millimetres = self._context.units.length
        depth = _needed(bars, "EffectiveDepth", "so nobody can tell where its bars lie")
        start, end = (
            _needed(section, name, "so nobody can tell how far its bars reach") * millimetres
            for name in ("LongitudinalStartPosition", "LongitudinalEndPosition")
        )
        return Row(
            name=_bars(bars),
            start=start,
            end=end,
            depth=depth * millimetres,
            said=said,
            heights=tuple(self._extents(get(section, "SectionDefinition"))),
            transverse=(number(section, "TransversePosition") or 0.0) * millimetres,
            bars=read_bars(bars, self._context.units),
        )

    def _extents(self, section: Entity | None) -> Iterator[tuple[float, float]]:
        """Both extents of the profiles of a section; what cannot be drawn says nothing."""
        if section is None:
            return
        for name in ("StartProfile", "EndProfile"):
            profile = get(section, name)
            try:
                rings = None if profile is None else self._profiles.of(profile).rings
            except UnreadableError:
                continue  # the body is what is rated; the profile is only held against it
            if rings:
                across, upwards = zip(*rings[0], strict=True)
                yield max(across) - min(across), max(upwards) - min(upwards)


_NAMING = ("Name", "Description", "DefinitionType")


def _guarded(
    entity: Entity, stated: Stated, read: Callable[[], T], name: Callable[[Entity], str]
) -> T | None:
    """What is read of an entity; why it cannot be read becomes a reason."""
    try:
        return read()
    except UnreadableError as error:
        stated.reasons.append(Reason(f"{name(entity)}: {error}"))
    except ILL_TYPED as error:
        stated.reasons.append(
            Reason(f"{name(entity)}: does not hold what its class asks ({error})")
        )
    return None


def _bars(entity: Entity) -> str:
    return f"bars #{entity.id()}"


def _section(entity: Entity) -> str:
    return f"bars of section #{entity.id()}"


def _listed(entity: Entity, name: str) -> tuple[Entity, ...]:
    """The entities of a list, empty where it is not given."""
    held = get(entity, name) or ()
    if not isinstance(held, tuple) or not all(hasattr(one, "is_a") for one in held):
        raise UnreadableError(f"its {name} does not hold what its class asks")
    return held


def _needed(entity: Entity, name: str, why: str) -> float:
    value = number(entity, name)
    if value is None:
        raise UnreadableError(f"it has no {name}, {why}")
    return value


def _face_in(words: str) -> Face | None:
    """The one face that words name; None where they name none, or both, or may mean a storey."""
    found = {word.lower() for word in _WORDS.findall(_HUMP.sub(" ", words))}
    if found & PLACE_WORDS:
        return None
    named: list[Face] = [face for face, known in FACE_WORDS.items() if found & known]
    return named[0] if len(named) == 1 else None

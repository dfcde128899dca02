"""Which beams are concrete: left out only on positive evidence, doubtful ones kept and told."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache

from ifccheck.ifc.materials import MaterialDefinition
from ifccheck.ifc.vocabulary import (
    BEAM_WORDS,
    CONCRETE,
    LIKELY_STEEL_SECTIONS,
    REBAR,
    STEEL,
    STEEL_SECTIONS,
    families_named,
    families_of_material,
)

Evidence = tuple[str, str]
"""A material or use, and where it is read."""

BUILT_IN = ("anchor", "sleeve", "pad")
"""Uses of what is built into a building and spans nothing"""
USES = ("footing", "bearing", "wall", *BUILT_IN)


@dataclass(frozen=True, slots=True)
class Clues:
    """What a model says of what a beam is."""

    definition: MaterialDefinition
    names: tuple[str, ...]
    """Its own name, object type, type name and profile name."""
    hosts_bars: bool
    concrete_class: bool
    """A concrete strength class is stated for the beam itself."""
    properties: tuple[tuple[str, str], ...] = ()
    """Values of properties that may name its material, each with the property's name."""


@dataclass(frozen=True, slots=True)
class Scope:
    """Whether a beam is rated: left out, or kept, surely or with a doubt."""

    left_out: Evidence | None = None
    doubt: str | None = None
    unknown: bool = False
    """Nothing tells what it is made of."""


def judge(clues: Clues) -> Scope:
    """Decide what a beam is from all that the model says of it."""
    telling = tuple(name for name in clues.names if _tells(name))
    return _judged(
        clues.definition, telling, clues.hosts_bars, clues.concrete_class, clues.properties
    )


@lru_cache(maxsize=8192)
def _tells(name: str) -> bool:
    """Whether a name speaks of what a beam is: most are marks that are given once."""
    return bool(_name_evidence(name, concrete=False)) or BEAM_WORDS.search(name) is not None


@lru_cache(maxsize=8192)
def _judged(
    definition: MaterialDefinition,
    names: tuple[str, ...],
    hosts_bars: bool,
    concrete_class: bool,
    properties: tuple[tuple[str, str], ...],
) -> Scope:
    stated = list(_material_evidence(definition))
    if hosts_bars:
        stated.append((CONCRETE, "it hosts reinforcing bars"))
    if concrete_class:
        stated.append((CONCRETE, "it states a concrete strength class"))
    stated += _property_evidence(properties)
    concrete = any(family == CONCRETE for family, _ in stated)
    named = [piece for name in names for piece in _name_evidence(name, concrete)]
    used = _use(named + stated, names, concrete)
    if used is not None:
        return used
    found = _by_material(
        [one for one in stated if one[0] not in USES],
        [one for one in named if one[0] not in USES],
        definition,
    )
    if found.left_out is not None:
        return found
    return _other_use(named, names, concrete) or found


def _use(evidence: Iterable[Evidence], names: Iterable[str], concrete: bool) -> Scope | None:
    """Footings and bearings, whatever they are made of."""
    for use, where in evidence:
        if use == "footing":
            if any(BEAM_WORDS.search(name) for name in names):
                return Scope(doubt=f"named both a footing and a beam: {where}")
            return Scope(left_out=(use, where))
        if use == "bearing" and not BEAM_WORDS.search(where):
            if concrete:
                return Scope(doubt=f"of concrete, yet named a bearing: {where}")
            return Scope(left_out=(use, where))
    return None


def _other_use(evidence: Iterable[Evidence], names: Iterable[str], concrete: bool) -> Scope | None:
    """What is named a wall, or something that is built into a building, and no beam.

    A wall beam is a beam, and a beam may be named after the wall that it lies on.
    """
    if any(BEAM_WORDS.search(name) for name in names):
        return None
    for use, where in evidence:
        if use in BUILT_IN and concrete:
            article = "an" if use == "anchor" else "a"
            return Scope(doubt=f"of concrete, yet named {article} {use}: {where}")
        if use == "wall" or use in BUILT_IN:
            return Scope(left_out=(use, where))
    return None


def _by_material(
    stated: list[Evidence], named: list[Evidence], definition: MaterialDefinition
) -> Scope:
    evidence = stated + named
    for_concrete = [one for one in evidence if one[0] == CONCRETE]
    against = [one for one in evidence if one[0] != CONCRETE]
    if for_concrete:
        # reinforcing steel beside concrete is its reinforcement
        against = [one for one in against if one[0] != REBAR]
        if against:
            (material, where), (other, elsewhere) = for_concrete[0], against[0]
            return Scope(
                doubt=f"material contradictory: {material} ({where}), yet {other} ({elsewhere})"
            )
        return Scope()
    if against:
        family, where = against[0]
        return Scope(left_out=(STEEL if family == REBAR else family, where))
    title = f'"{definition.title}"' if definition.title else "none given"
    return Scope(doubt=f"material unknown: {title}", unknown=True)


def _material_evidence(definition: MaterialDefinition) -> Iterable[Evidence]:
    for material in definition.materials:
        for name in (material.name, material.category):
            for family in sorted(families_of_material(name)):
                yield family, f'material "{name}"'
    for name in definition.set_names:
        for family in sorted(families_named(name)):
            yield family, f'material set "{name}"'
    for name in definition.profile_names:
        yield from _name_evidence(name, concrete=True)


def _property_evidence(properties: Iterable[tuple[str, str]]) -> Iterable[Evidence]:
    for source, value in properties:
        for family in sorted(families_of_material(value)):
            yield family, f'{source} "{value}"'


@lru_cache(maxsize=8192)
def _name_evidence(name: str, concrete: bool) -> tuple[Evidence, ...]:
    """What a name tells; ``concrete``: a likely steel section may be the size of a concrete one."""
    found = [(family, f'name "{name}"') for family in sorted(families_named(name))]
    section = STEEL_SECTIONS.search(name)
    if section is None and not concrete:
        section = LIKELY_STEEL_SECTIONS.search(name)
    if section:
        found.append((STEEL, f'steel section "{section.group().strip()}" in "{name}"'))
    return tuple(found)

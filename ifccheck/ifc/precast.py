"""Whether a model says that a member is precast."""

from __future__ import annotations

import re
from functools import lru_cache
from typing import TYPE_CHECKING

from ifccheck.ifc.entity import get
from ifccheck.ifc.properties import Sets
from ifccheck.ifc.scope import Clues
from ifccheck.ifc.strength import GENERAL

if TYPE_CHECKING:
    from ifccheck.ifc.context import Context

PRECAST = re.compile(
    r"pre[-_ ]?cast|pre[-_ ]?fab|fertigteil|filigran|elementdecke|hohldiele|préfabriqu|prefabrik"
    r"|pr[eé]-?dalle|alv[eé]olair|alveolar|pr[eé]-?moldad|hollow[-_ ]?core|\bHCS\b|double[-_ ]?tee"
    r"|kanaalplaat|breedplaat",
    re.IGNORECASE,
)
MADE_ELSEWHERE = re.compile(r"factory|shop|off-?site|plant", re.IGNORECASE)
HOW_MADE = ("ConstructionMethod", "CastingMethod")
"""Properties of Pset_ConcreteElementGeneral that tell how a member is made."""
PRECAST_SETS = ("Pset_PrecastConcreteElementGeneral", "Pset_PrecastConcreteElementFabrication")


@lru_cache(maxsize=8192)
def _speaks_of_precast(name: str) -> bool:
    return PRECAST.search(name) is not None


@lru_cache(maxsize=1024)
def _says_made_elsewhere(said: str) -> bool:
    """Whether what is said of how a member is made means that it is not made in its place."""
    return PRECAST.search(said) is not None or MADE_ELSEWHERE.search(said) is not None


def told_precast(context: Context, step_id: int, clues: Clues, sets: Sets) -> str:
    """Return what tells that a member is precast; empty where nothing does."""
    for name in (*clues.definition.names, *clues.names):
        if _speaks_of_precast(name):
            return f'name "{name}"'
    for set_name in PRECAST_SETS:
        if set_name in sets:
            return set_name
    general = sets.get(GENERAL, {})
    for name in HOW_MADE:
        if (value := general.get(name)) is None:
            continue
        said = str(value.value)
        if _says_made_elsewhere(said):
            return f"{GENERAL}.{name} {said}"
    for whole in map(context.file.by_id, context.relations.ancestors(step_id)):
        if get(whole, "AssemblyPlace") == "FACTORY":
            return f"#{whole.id()} {whole.is_a()} of the factory"
    return ""

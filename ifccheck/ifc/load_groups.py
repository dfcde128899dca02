"""Load cases and load groups of a model: which case an action belongs to, and by what factor."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterator
from typing import Any, NamedTuple

from ifccheck.ifc.entity import Entity, get, several, text

CASE, COMBINATIONS = "LOAD_CASE", ("LOAD_COMBINATION", "LOAD_COMBINATION_GROUP")


class Share(NamedTuple):
    """That an action acts in a case."""

    case: Entity
    factor: float
    by_name: bool
    """It is reached only through a group that is called as the case is."""


class LoadGroups:
    """The load groups of a model, and what is assigned to them."""

    def __init__(self, file: Any) -> None:
        self._groups: defaultdict[int, list[tuple[Entity, float]]] = defaultdict(list)
        self._models: dict[int, Entity] = {}
        for relation in file.by_type("IfcRelAssignsToGroup"):
            self._add(relation)
        self._loaded: dict[int, Entity] = {
            group.id(): model
            for model in file.by_type("IfcStructuralAnalysisModel")
            for group in several(model, "LoadedBy")
        }
        self._cases: defaultdict[str, list[Entity]] = defaultdict(list)
        for group in file.by_type("IfcStructuralLoadGroup"):
            if text(group, "PredefinedType") == CASE and text(group, "Name"):
                self._cases[text(group, "Name")].append(group)

    def _add(self, relation: Entity) -> None:
        group = get(relation, "RelatingGroup")
        if group is None:
            return
        if group.is_a("IfcStructuralAnalysisModel"):
            for item in several(relation, "RelatedObjects"):
                self._models.setdefault(item.id(), group)
        elif group.is_a("IfcStructuralLoadGroup"):
            factor = get(relation, "Factor")
            for member in several(relation, "RelatedObjects"):
                share = (group, 1.0 if factor is None else float(factor))
                self._groups[member.id()].append(share)

    def model_of(self, item: Entity) -> Entity | None:
        """The analysis model that an item or an action is assigned to, or that it loads."""
        if (found := self._models.get(item.id())) is not None:
            return found
        groups = [group for group, _ in self._groups[item.id()]]
        groups += [share.case for share in self.shares(item)]
        return next((self._loaded[g.id()] for g in groups if g.id() in self._loaded), None)

    def shares(self, action: Entity) -> list[Share]:
        """The cases that an action acts in, the factors of several ways to one added up."""
        found: dict[int, Share] = {}
        for share in self._above(action, 1.0, frozenset()):
            known = found.get(share.case.id())
            if known is not None:
                share = Share(share.case, known.factor + share.factor, known.by_name)
            found[share.case.id()] = share
        return list(found.values())

    def _above(self, member: Entity, factor: float, seen: frozenset[int]) -> Iterator[Share]:
        for group, times in self._groups[member.id()]:
            if group.id() not in seen and text(group, "PredefinedType") not in COMBINATIONS:
                yield from self._through(group, factor * times, seen | {group.id()})

    def _through(self, group: Entity, factor: float, seen: frozenset[int]) -> Iterator[Share]:
        """Where a group that holds an action leads to."""
        coefficient = get(group, "Coefficient")
        factor *= 1.0 if coefficient is None else float(coefficient)
        if text(group, "PredefinedType") == CASE:
            yield Share(group, factor, by_name=False)
            return
        above = list(self._above(group, factor, seen))
        if above:
            yield from above
            return
        alike = [one for one in self._cases[text(group, "Name")] if text(group, "Name")]
        if len(alike) == 1:
            yield Share(alike[0], factor * _coefficient(alike[0]), by_name=True)
        else:
            yield Share(group, factor, by_name=False)


def _coefficient(group: Entity) -> float:
    coefficient = get(group, "Coefficient")
    return 1.0 if coefficient is None else float(coefficient)

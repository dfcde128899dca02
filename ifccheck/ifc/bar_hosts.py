"""Which beam a bar belongs to, by the model's relations."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import chain
from typing import Any, Literal

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.equal_rows import first_of_each_number
from ifccheck.ifc.relations import Relations

Tie = Literal["part", "beside", "elsewhere", "unread", "loose"]
"""Part of the beam, beside it in an assembly, part of something else, part of a beam that is out of
scope or whose body is not read, or tied to nothing."""

ASSEMBLY, BEAM = "IfcElementAssembly", "IfcBeam"


@dataclass(frozen=True, slots=True)
class Host:
    """How a bar is tied, and the beams that it may belong to."""

    tie: Tie
    beams: tuple[int, ...] = ()


@dataclass(frozen=True, slots=True)
class BarHosts:
    """How many bars are tied: distinct hosts, and which of them each bar has (N)."""

    hosts: Sequence[Host]
    number: Ints

    def take(self, kept: Ints | Bools) -> BarHosts:
        """Those of some of the bars."""
        return BarHosts(self.hosts, self.number[kept])

    def tied(self, *ties: Tie) -> Bools:
        """Whether each bar is tied in one of some ways."""
        of_hosts = np.array([host.tie in ties for host in self.hosts], dtype=bool)
        return np.asarray(of_hosts[self.number])

    def of(self, bar: int) -> Host:
        """How a bar is tied."""
        return self.hosts[int(self.number[bar])]


LOOSE = Host("loose")
ELSEWHERE = Host("elsewhere")
UNREAD = Host("unread")


class Hosts:
    """Finds the beams that bars may belong to."""

    def __init__(self, file: Any, relations: Relations, beams: Collection[int]) -> None:
        self._file = file
        self._relations = relations
        self._beams = frozenset(beams)
        self._known: dict[int, Host] = {}

    @cached_property
    def _wholes(self) -> Mapping[int, Sequence[int]]:
        return _all_wholes(self._relations.parts)

    def of(self, step_id: int) -> Host:
        """Return how an element is tied to the beams."""
        wholes = self._wholes.get(step_id)
        if not wholes:
            return LOOSE
        if len(wholes) == 1:
            return self._through(wholes[0], frozenset((step_id,)))
        return _strongest([self._through(whole, frozenset((step_id,))) for whole in wholes])

    def of_all(self, step_ids: Ints) -> BarHosts:
        """Return the same of many elements, most of which are parts of one whole."""
        count, whole = self._only_wholes(step_ids)
        hosts = [LOOSE]
        number = np.zeros(len(step_ids), dtype=np.intp)
        single = np.flatnonzero(count == 1)
        first, inverse = first_of_each_number(whole[single])
        number[single] = len(hosts) + inverse
        first = single[first]
        for at, part in zip(whole[first].tolist(), step_ids[first].tolist(), strict=True):
            hosts.append(self._through(at, frozenset((part,))))
        for row in np.flatnonzero(count > 1).tolist():
            number[row] = len(hosts)
            hosts.append(self.of(int(step_ids[row])))
        return BarHosts(hosts, number)

    def _only_wholes(self, step_ids: Ints) -> tuple[Ints, Ints]:
        """How often each element is named as a part, and the whole that names it first."""
        parts = self._relations.parts
        part = np.fromiter(chain.from_iterable(parts.values()), dtype=np.intp)
        counts = [len(members) for members in parts.values()]
        whole = np.repeat(np.fromiter(parts, dtype=np.intp, count=len(parts)), counts)
        order = np.argsort(part, kind="stable")
        first, last = (np.searchsorted(part[order], step_ids, side) for side in ("left", "right"))
        known = np.append(whole[order], 0)
        return last - first, known[first]

    def _through(self, whole: int, seen: frozenset[int]) -> Host:
        if whole in seen:
            return LOOSE
        if whole not in self._known:
            self._known[whole] = self._find(whole, seen | {whole})
        return self._known[whole]

    def _find(self, whole: int, seen: frozenset[int]) -> Host:
        if whole in self._beams:
            return Host("part", (whole,))
        above = _strongest([self._through(one, seen) for one in self._wholes.get(whole, ())])
        if above.tie == "part":
            return above
        entity = self._file.by_id(whole)
        if entity.is_a(BEAM):
            return UNREAD
        if not entity.is_a(ASSEMBLY):
            return ELSEWHERE if entity.is_a("IfcElement") else LOOSE
        beside = sorted(self._beams.intersection(self._relations.descendants(whole)))
        return Host("beside", tuple(beside)) if beside else above


def _strongest(hosts: Sequence[Host]) -> Host:
    for tie in ("part", "beside", "elsewhere", "unread"):
        found = [host for host in hosts if host.tie == tie]
        if found:
            beams = dict.fromkeys(beam for host in found for beam in host.beams)
            return Host(found[0].tie, tuple(beams))
    return LOOSE


def _all_wholes(parts: Mapping[int, Sequence[int]]) -> Mapping[int, Sequence[int]]:
    """Every whole of a part; a part may be named by several relations."""
    wholes: dict[int, list[int]] = defaultdict(list)
    for whole, members in parts.items():
        for part in members:
            if whole not in wholes[part]:
                wholes[part].append(whole)
    return wholes

"""What plainly written statements of bars say, as texts: to tell which of them say the same."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.step_cursors import Bytes, Cursors
from ifccheck.ifc.step_table import StepTable

ARGUMENTS = 14
NAME, OBJECT_TYPE, PLACEMENT, SHAPE, TAG, GRADE, AREA, ROLE = 2, 4, 5, 6, 7, 8, 10, 12
"""Places of the arguments of a bar, the same in all schemas."""
_VALUE = rb"(?:'[();]*'|\(\))?"
_PLAIN = re.compile(_VALUE + rb"(?:," + _VALUE + rb"){%d}\);" % (ARGUMENTS - 1))
_NOT_STRUCTURE = bytes(byte for byte in range(256) if byte not in b"'(),;")


@dataclass(frozen=True, slots=True)
class BarTexts:
    """The arguments of the bars that are written plainly (P)."""

    place: Ints
    """Which of the bars asked for each is."""
    name: Sequence[bytes]
    tag: Sequence[bytes]
    data: Sequence[tuple[bytes, ...]]
    """All that tells size, grade and role."""
    placement: Ints
    """STEP id; 0 for none."""
    shape: Ints

    def take(self, kept: Ints) -> BarTexts:
        """Some of the bars."""
        if len(kept) == len(self.place):
            return self
        name, tag, data = (
            [c[at] for at in kept.tolist()] for c in (self.name, self.tag, self.data)
        )
        return BarTexts(self.place[kept], name, tag, data, self.placement[kept], self.shape[kept])


def read_bar_texts(table: StepTable, bars: Ints) -> BarTexts:
    """Split the statements of bars by their STEP ids; those with commas in texts are left out."""
    cursors = table.cursors(bars, "IFCREINFORCINGBAR")
    rests = table.rest(cursors, bars)
    plain: Bools = np.array(
        [_is_plain(rest.translate(None, _NOT_STRUCTURE)) for rest in rests], dtype=bool
    )
    place = np.flatnonzero(plain)
    text = b"".join(rests if len(place) == len(rests) else [rests[at] for at in place.tolist()])
    data = np.frombuffer(text, np.uint8)
    commas = np.flatnonzero(data == ord(",")).reshape(-1, ARGUMENTS - 1)
    said, role = _between(text, commas, GRADE, AREA), _between(text, commas, ROLE, ROLE)
    return BarTexts(
        place=place,
        name=_between(text, commas, NAME, NAME),
        tag=_between(text, commas, TAG, TAG),
        data=list(zip(_between(text, commas, OBJECT_TYPE, OBJECT_TYPE), said, role, strict=True)),
        placement=_references(data, commas, PLACEMENT),
        shape=_references(data, commas, SHAPE),
    )


def _between(text: bytes, commas: Ints, first: int, last: int) -> list[bytes]:
    """The text of each bar from one of its arguments to another."""
    bounds = zip((commas[:, first - 1] + 1).tolist(), commas[:, last].tolist(), strict=True)
    return [text[start:stop] for start, stop in bounds]


def _references(data: Bytes, commas: Ints, place: int) -> Ints:
    """The reference that an argument of each bar is, 0 for anything else."""
    cursors = Cursors(data, commas[:, place - 1] + 1, np.ones(len(commas), dtype=bool))
    references = cursors.reference()
    cursors.tokens(b",")
    return np.where(cursors.plain, references, 0)


@lru_cache(maxsize=4096)
def _is_plain(structure: bytes) -> bool:
    """Whether commas, brackets and apostrophes are those of a bar, with no comma in a text."""
    return _PLAIN.fullmatch(structure) is not None

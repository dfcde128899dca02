"""What plainly written statements of bars say, as texts: to tell which of them say the same."""

from __future__ import annotations

import re
from dataclasses import dataclass

import numpy as np

from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.step_cursors import Bytes, Cursors
from ifccheck.ifc.step_table import Rests, StepTable

ARGUMENTS = 14
NAME, OBJECT_TYPE, PLACEMENT, SHAPE, TAG, GRADE, AREA, ROLE = 2, 4, 5, 6, 7, 8, 10, 12
"""Places of the arguments of a bar, the same in all schemas."""
QUOTE, OPEN, CLOSE, COMMA, SEMICOLON = b"'(),;"
"""Signs that tell where an argument ends; the first three follow one another in ASCII."""
_VALUE = rb"(?:'[();]*'|\(\))?"
_PLAIN = re.compile(_VALUE + rb"(?:," + _VALUE + rb"){%d}\);" % (ARGUMENTS - 1))


@dataclass(frozen=True, slots=True)
class BarTexts:
    """The arguments of the bars that are written plainly (P)."""

    place: Ints
    """Which of the bars asked for each is."""
    name: Rests
    tag: Rests
    data: tuple[Rests, ...]
    """All that tells size, grade, role and surface."""
    placement: Ints
    """STEP id; 0 for none."""
    shape: Ints

    def take(self, kept: Ints) -> BarTexts:
        """Some of the bars."""
        if len(kept) == len(self.place):
            return self
        data = tuple(column.take(kept) for column in self.data)
        name, tag = self.name.take(kept), self.tag.take(kept)
        return BarTexts(self.place[kept], name, tag, data, self.placement[kept], self.shape[kept])


def read_bar_texts(table: StepTable, bars: Ints) -> BarTexts:
    """Split the statements of bars by their STEP ids; those with commas in texts are left out."""
    cursors = table.cursors(bars, "IFCREINFORCINGBAR")
    rests = table.rests(cursors, bars)
    place, commas = _commas(rests)

    def between(first: int, last: int) -> Rests:
        """From one argument to another."""
        return Rests(rests.data, commas[:, first - 1] + 1, commas[:, last])

    from_role = Rests(rests.data, commas[:, ROLE - 1] + 1, rests.stop[place])
    return BarTexts(
        place=place,
        name=between(NAME, NAME),
        tag=between(TAG, TAG),
        data=(between(OBJECT_TYPE, OBJECT_TYPE), between(GRADE, AREA), from_role),
        placement=_references(rests.data, commas, PLACEMENT),
        shape=_references(rests.data, commas, SHAPE),
    )


def _commas(rests: Rests) -> tuple[Ints, Ints]:
    """Which statements are plain, and where the commas between their arguments stand."""
    data = rests.data
    signs = np.flatnonzero((data - QUOTE <= 2) | (data == COMMA) | (data == SEMICOLON))
    structure = Rests(
        data[signs], np.searchsorted(signs, rests.start), np.searchsorted(signs, rests.stop)
    )
    first, number = structure.first_of_each()
    kinds = [_PLAIN.fullmatch(structure.of(row)) for row in first.tolist()]
    plain: Bools = np.array([kind is not None for kind in kinds], dtype=bool)
    place = np.flatnonzero(plain[number])
    commas = signs[structure.data == COMMA]
    before = np.searchsorted(commas, rests.start[place])
    return place, commas[before[:, None] + np.arange(ARGUMENTS - 1)]


def _references(data: Bytes, commas: Ints, place: int) -> Ints:
    """The reference that an argument of each bar is, 0 for anything else."""
    cursors = Cursors(data, commas[:, place - 1] + 1, np.ones(len(commas), dtype=bool))
    references = cursors.reference()
    cursors.tokens(b",")
    return np.where(cursors.plain, references, 0)

"""Rows and texts that say the same, found without comparing each with each."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from functools import cache

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.step_cursors import WORD, Bytes, words_at

Words = npt.NDArray[np.int64]
_LOW_BYTES = np.array([(1 << 8 * count) - 1 for count in range(WORD + 1)], dtype=np.uint64)
"""Words whose first bytes are set, by how many."""


def first_of_each(*columns: Words) -> tuple[Ints, Ints]:
    """First row of each distinct row of whole numbers, and which of them every row is."""
    mixed = columns[0] * _mixer(0)
    for place, column in enumerate(columns[1:], start=1):
        mixed += column * _mixer(place)  # wraps round: a hash that sorts a hundred times as fast
    head, run = _runs(mixed)
    _, first, number = np.unique(mixed[head], return_index=True, return_inverse=True)
    inverse = number.reshape(-1)
    if all(_is_settled(column, head, first[inverse]) for column in columns):
        return head[first], inverse[run]
    key = np.column_stack(columns)
    _, first, number = np.unique(key, axis=0, return_index=True, return_inverse=True)
    return first, number.reshape(-1)


def _is_settled(column: Words, head: Ints, first: Ints) -> bool:
    """Whether numbers are the same all along runs, and those of runs that are taken for the
    same."""
    other = column[1:] != column[:-1]
    other[head[1:] - 1] = False
    heads = column[head]
    return not other.any() and bool((heads == heads[first]).all())


@cache
def _mixer(place: int) -> int:
    return int(np.random.default_rng(place).integers(1, 2**62)) * 2 + 1


def first_of_each_number(values: Words) -> tuple[Ints, Ints]:
    """The same of numbers."""
    head, run = _runs(values)
    _, first, inverse = np.unique(values[head], return_index=True, return_inverse=True)
    return head[first], inverse.reshape(-1)[run]


def _runs(values: Words) -> tuple[Ints, Ints]:
    """First of each run of equal values, as many follow others that are the same, and the run
    that each is in."""
    begins = np.ones(len(values), dtype=bool)
    begins[1:] = values[1:] != values[:-1]
    return np.flatnonzero(begins), np.cumsum(begins) - 1


def first_of_each_text(data: Bytes, start: Ints, stop: Ints) -> tuple[Ints, Ints]:
    """First row of each distinct text, and which of them every row is; texts of bytes that lie
    between offsets."""
    found, number = [], np.zeros(len(start), dtype=np.intp)
    count = 0
    for rows, words in of_like_width(stop - start):
        first, inverse = first_of_each(*_as_words(data, start[rows], (stop - start)[rows], words))
        found.append(rows[first])
        number[rows] = count + inverse
        count += len(first)
    return np.concatenate((*found, np.zeros(0, dtype=np.intp))), number


def of_like_width(width: Ints) -> Iterable[tuple[Ints, int]]:
    """Rows whose texts take up to a number of words, twice as many each time."""
    left = np.arange(len(width))
    words = 1
    while len(left):
        fits = width[left] <= words * WORD
        if fits.any():
            yield left[fits], words
        left, words = left[~fits], words * 2


def _as_words(data: Bytes, start: Ints, width: Ints, words: int) -> Iterator[Words]:
    """Texts word by word, nothing after their ends, and their width behind them."""
    least = int(width.min())
    for place, text in enumerate(words_at(data, start, words)):
        if least < (place + 1) * WORD:
            text &= _LOW_BYTES[np.clip(width - place * WORD, 0, WORD)]
        yield text.view(np.int64)
    yield width


def renumbered(number: Ints, count: int) -> tuple[Ints, Ints]:
    """Those of several entries that are used, and the number of each row among them."""
    found = used(number, count)
    place = np.zeros(count, dtype=np.intp)
    place[found] = np.arange(len(found))
    return found, place[number]


def used(number: Ints, count: int) -> Ints:
    """Which of several numbers from 0 on occur."""
    found: Bools = np.zeros(count, dtype=bool)
    found[number] = True
    return np.flatnonzero(found)

"""Rows and texts that say the same, found without comparing each with each."""

from __future__ import annotations

from collections.abc import Iterable
from functools import cache

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_paths import Bools, Ints
from ifccheck.ifc.step_cursors import WORD, Bytes, words_at

Words = npt.NDArray[np.int64]
_LOW_BYTES = np.array([(1 << 8 * count) - 1 for count in range(WORD + 1)], dtype=np.uint64)
"""Words whose first bytes are set, by how many."""


def first_of_each(key: Words) -> tuple[Ints, Ints]:
    """First row of each distinct row of integers, and which of them every row is."""
    # the product wraps round: a hash that sorts a hundred times as fast
    head, run = _runs(key @ _mixers(key.shape[1]))
    heads = key[head]
    _, first, number = np.unique(
        heads @ _mixers(key.shape[1]), return_index=True, return_inverse=True
    )
    inverse = number.reshape(-1)
    if (heads == heads[first[inverse]]).all() and _are_alike_in_runs(key, head):
        return head[first], inverse[run]
    _, first, number = np.unique(key, axis=0, return_index=True, return_inverse=True)
    return first, number.reshape(-1)


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


def _are_alike_in_runs(key: Words, head: Ints) -> bool:
    """Whether each row that begins no run is the same as the row before."""
    other = np.ones(len(key), dtype=bool)
    other[head] = False
    same = key[1:] == key[:-1]
    return bool(same[other[1:]].all())


@cache
def _mixers(count: int) -> Words:
    return np.random.default_rng(1).integers(1, 2**62, count) * 2 + 1


def first_of_each_text(data: Bytes, start: Ints, stop: Ints) -> tuple[Ints, Ints]:
    """First row of each distinct text, and which of them every row is; texts of bytes that lie
    between offsets."""
    found, number = [], np.zeros(len(start), dtype=np.intp)
    count = 0
    for rows, words in of_like_width(stop - start):
        first, inverse = first_of_each(_as_words(data, start[rows], (stop - start)[rows], words))
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


def _as_words(data: Bytes, start: Ints, width: Ints, words: int) -> Words:
    """Texts as words, nothing after their ends, and their width beside them."""
    found = np.empty((len(start), words + 1), dtype=np.uint64)
    least = int(width.min())
    for place, text in enumerate(words_at(data, start, words)):
        if least < (place + 1) * WORD:
            text &= _LOW_BYTES[np.clip(width - place * WORD, 0, WORD)]
        found[:, place] = text
    found[:, words] = width
    return found.view(np.int64)


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

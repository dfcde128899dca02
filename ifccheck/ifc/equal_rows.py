"""Rows and texts that say the same, found without comparing each with each."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_paths import Bools, Ints

Words = npt.NDArray[np.int64]
_WORD = 8
"""Bytes of a word."""
_LOW_BYTES = np.array([(1 << 8 * count) - 1 for count in range(_WORD + 1)], dtype=np.uint64)
"""Words whose first bytes are set, by how many."""


def first_of_each(key: Words) -> tuple[Ints, Ints]:
    """First row of each distinct row of integers, and which of them every row is."""
    mixer = np.random.default_rng(1).integers(1, 2**62, key.shape[1]) * 2 + 1
    # the product wraps round: a hash that sorts a hundred times as fast
    first, inverse = first_of_each_number(key @ mixer)
    if not (key == key[first[inverse]]).all():
        _, first, inverse = np.unique(key, axis=0, return_index=True, return_inverse=True)
    return first, inverse.reshape(-1)


def first_of_each_number(values: Words) -> tuple[Ints, Ints]:
    """The same of numbers, of which many follow others that are the same."""
    begins = np.ones(len(values), dtype=bool)
    begins[1:] = values[1:] != values[:-1]
    head = np.flatnonzero(begins)
    _, first, inverse = np.unique(values[head], return_index=True, return_inverse=True)
    return head[first], inverse.reshape(-1)[np.cumsum(begins) - 1]


def first_of_each_text(data: npt.NDArray[np.uint8], start: Ints, stop: Ints) -> tuple[Ints, Ints]:
    """First row of each distinct text, and which of them every row is; texts of bytes that lie
    between offsets."""
    found, number = [], np.zeros(len(start), dtype=np.intp)
    count = 0
    for rows, size in _of_like_width(stop - start):
        first, inverse = first_of_each(_as_words(data, start[rows], (stop - start)[rows], size))
        found.append(rows[first])
        number[rows] = count + inverse
        count += len(first)
    return np.concatenate((*found, np.zeros(0, dtype=np.intp))), number


def _of_like_width(width: Ints) -> Iterable[tuple[Ints, int]]:
    """Rows whose texts take up to a number of words, twice as many each time."""
    left = np.arange(len(width))
    words = 1
    while len(left):
        fits = width[left] <= words * _WORD
        if fits.any():
            yield left[fits], words
        left, words = left[~fits], words * 2


def _as_words(data: npt.NDArray[np.uint8], start: Ints, width: Ints, words: int) -> Words:
    """Texts as words, nothing after their ends, and their width beside them."""
    size = words * _WORD
    if int(start.max()) + size > len(data):
        data = np.append(data, np.zeros(size, dtype=np.uint8))
    windows = np.lib.stride_tricks.sliding_window_view(data, size)
    text = windows[start].view("<u8")
    begin = np.arange(words) * _WORD
    text &= _LOW_BYTES[np.clip(width[:, None] - begin, 0, _WORD)]
    return np.column_stack((text.view(np.int64), width))


def renumbered(number: Ints, count: int) -> tuple[Ints, Ints]:
    """Those of several entries that are used, and the number of each row among them."""
    used: Bools = np.zeros(count, dtype=bool)
    used[number] = True
    return np.flatnonzero(used), (np.cumsum(used) - 1)[number]

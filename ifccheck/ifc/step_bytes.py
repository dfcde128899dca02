"""Looks through the bytes of a file, and reads the whole numbers at many places of it at once."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Bytes = NDArray[np.uint8]
Offsets = NDArray[np.int64]
Words = NDArray[np.uint64]

PIECE = 2**18
"""Bytes that are looked at in one go: what comes of them stays in the processor's cache."""

_WORD = 8
_MOST_DIGITS = 20

_ZEROS, _LOW_BITS, _BEYOND_NINE, _HIGH_BITS = (
    np.uint64(0x0101010101010101 * byte) for byte in (0x30, 0x7F, 0x76, 0x80)
)
_EVERY_OTHER_PAIR = np.uint64(0x000000FF000000FF)
_OUTER_PAIRS, _INNER_PAIRS = np.uint64(100 + (10**6 << 32)), np.uint64(1 + (10**4 << 32))
_ONE, _TEN, _BYTE, _TWO_BYTES, _HALF_WORD, _SEVEN_BYTES = (
    np.uint64(value) for value in (1, 10, 8, 16, 32, 56)
)
_EXPONENT_AT, _EXPONENT_OF_SEVEN_BITS = np.uint64(52), np.uint64(1023 + 7)


def places(data: Bytes, byte: int) -> Offsets:
    """Return the offsets of a byte."""
    found = []
    for first in range(0, len(data), PIECE):
        here = np.flatnonzero(data[first : first + PIECE] == byte)
        here += first
        found.append(here)
    return np.concatenate(found) if found else np.zeros(0, np.int64)


def stretches(data: Bytes, at: Offsets, size: int) -> Bytes:
    """Return so many bytes from each offset on; zeros behind the end (N, size).

    They are copied as one thing each, wherever they lie, which is far quicker than byte by byte.
    """
    beyond = int(at.max(initial=0)) + size - len(data)
    if beyond > 0:
        data = np.append(data, np.zeros(beyond, np.uint8))
    things = np.ndarray((len(data) - size + 1,), f"V{size}", data.data, strides=(1,))
    return things[at].view(np.uint8).reshape(-1, size)


def whole_numbers(data: Bytes, at: Offsets, greatest: int) -> tuple[Offsets, Offsets]:
    """Return the numbers written at offsets, and where their digits end.

    Where no digit stands the number is 0 and ends where it began; after twenty digits no more
    are read. What is greater than ``greatest`` becomes one more than that.
    """
    numbers, lengths = _short_numbers(data, at)
    stops = at + lengths
    others = np.flatnonzero(lengths == 0)
    if len(others):
        numbers[others], stops[others] = _numbers_of_any_length(data, at[others], greatest)
    return np.minimum(numbers, greatest + 1), stops


def _short_numbers(data: Bytes, at: Offsets) -> tuple[Offsets, Offsets]:
    """Return numbers of one to seven digits with their lengths; zeros for all others."""
    numbers, lengths = np.zeros(len(at), np.int64), np.zeros(len(at), np.int64)
    if len(data) < _WORD:
        return numbers, lengths
    words = np.ndarray((len(data) - _WORD + 1,), "<u8", data.data, strides=(1,))
    for first in range(0, len(at), PIECE // _WORD):
        part = slice(first, first + PIECE // _WORD)
        numbers[part], lengths[part] = _leading_numbers(words[np.minimum(at[part], len(words) - 1)])
    lengths[at >= len(words)] = 0
    return numbers, lengths


def _leading_numbers(words: Words) -> tuple[Words, Words]:
    """Return the numbers that eight bytes each begin with, and the lengths of these.

    A byte that is no digit is the first whose high bit is set; what stands before it is shifted
    to the end of its word, and neighbours are joined into pairs, fours and eights.
    """
    digits = words ^ _ZEROS
    others = (((digits & _LOW_BITS) + _BEYOND_NINE) | digits) & _HIGH_BITS
    first = others & (~others + _ONE)
    bits = (first.astype(np.float64).view(np.uint64) >> _EXPONENT_AT) - _EXPONENT_OF_SEVEN_BITS
    bits *= others != 0
    digits = (digits << (_SEVEN_BYTES - bits)) << _BYTE
    pairs = digits * _TEN + (digits >> _BYTE)
    outer = (pairs & _EVERY_OTHER_PAIR) * _OUTER_PAIRS
    inner = ((pairs >> _TWO_BYTES) & _EVERY_OTHER_PAIR) * _INNER_PAIRS
    return (outer + inner) >> _HALF_WORD, bits >> np.uint64(3)


def _numbers_of_any_length(data: Bytes, at: Offsets, greatest: int) -> tuple[Offsets, Offsets]:
    numbers = np.zeros(len(at), np.int64)
    for _ in range(_MOST_DIGITS):
        digits = data.take(at, mode="clip").astype(np.int64) - ord("0")
        is_digit = (digits >= 0) & (digits <= 9) & (at < len(data))
        if not is_digit.any():
            break
        numbers = np.where(is_digit, np.minimum(numbers * 10 + digits, greatest + 1), numbers)
        at = at + is_digit
    return numbers, at

"""Reads many statements at once, token by token, straight from the bytes of the file.

What does not stand where a reader expects it makes the statement one that is not written plainly;
nothing is guessed of it. Blanks and line breaks between tokens are passed over.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_paths import Bools, Floats, Ints

Bytes = npt.NDArray[np.uint8]
Words = npt.NDArray[np.uint64]

_ZERO, _POINT, _MINUS, _PLUS, _EXPONENT, _HASH, _QUOTE, _NOTHING = b"0.-+E#'$"
BLANKS = b" \t\r\n"
IS_BLANK = np.isin(np.arange(256), np.frombuffer(BLANKS, np.uint8))
MOST_DIGITS, MOST_WHOLE_DIGITS = 30, 18
"""Longer rows of digits, and longer whole numbers, are left to a reader that takes its time."""
EXACT_DIGITS, EXACT_POWER = 15, 22
"""Whole numbers of so many digits, and powers of ten up to this, are exact as doubles."""
LONGEST_TEXT = 80
"""Longer texts are not passed over."""
_WORD = 8
"""Bytes of a word."""
_ONES = np.uint64(0x0101010101010101)
_HIGH_BITS, _QUOTES = _ONES * np.uint64(0x80), _ONES * np.uint64(_QUOTE)
_POWERS = 10.0 ** np.arange(EXACT_POWER + 1)


class Cursors:
    """One place in each of many statements."""

    def __init__(self, data: Bytes, at: Ints, plain: Bools) -> None:
        self._data = data
        self.at = at
        """Offset of the next byte of each."""
        self.plain = plain
        """Whether all that was asked of a statement so far stands there."""

    def tokens(self, *texts: bytes) -> None:
        """Pass over signs and words, each after any blanks.

        Most statements have none there, so that all is compared at once first.
        """
        together = b"".join(texts)
        found = self._begins_with(together) & self.plain
        left = np.flatnonzero(self.plain & ~found)
        self.at = self.at + len(together) * found
        if len(left):
            others = Cursors(self._data, self.at[left], np.ones(len(left), dtype=bool))
            for text in texts:
                others._pass(others._stands_here(text), len(text))
            self.at[left], found[left] = others.at, others.plain
            self.plain = found

    def blanks(self) -> None:
        """Pass over blanks, if there are any."""
        self._skip_blanks()

    def reference(self) -> Ints:
        """Read ``#12`` as 12."""
        self._pass(self._stands_here(b"#"), 1)
        number, stop, whole = read_whole_numbers(self._data, self.at)
        self._end_token(stop, whole)
        return np.where(self.plain, number, 0)

    def reference_or_nothing(self) -> Ints:
        """Read ``#12`` as 12 and ``$`` as 0."""
        nothing = self._stands_here(b"$")
        self._pass(nothing | self._stands_here(b"#"), 1)
        number, stop, whole = read_whole_numbers(self._data, self.at)
        self._end_token(np.where(nothing, self.at, stop), whole | nothing)
        return np.where(self.plain & ~nothing, number, 0)

    def number(self) -> Floats:
        """Read a number; nan where none stands."""
        self._skip_blanks()
        number, stop, sound = read_numbers(self._data, self.at)
        self._end_token(stop, sound)
        return np.where(self.plain, number, np.nan)

    def text_or_nothing(self) -> None:
        """Pass over a text without apostrophes, or ``$``."""
        nothing = self._stands_here(b"$")
        self._pass(nothing | self._stands_here(b"'"), 1)
        within = np.flatnonzero(self.plain & ~nothing)
        stop, ended = _next_quotes(self._data, self.at[within])
        self.at[within] = stop + ended
        self.plain[within] = ended

    def _skip_blanks(self) -> None:
        blank = IS_BLANK[self._data.take(self.at, mode="clip")] & self.plain
        while blank.any():
            self.at = self.at + blank
            blank &= IS_BLANK[self._data.take(self.at, mode="clip")]

    def _stands_here(self, text: bytes) -> Bools:
        found = self._begins_with(text)
        if (found >= self.plain).all():
            return found
        self._skip_blanks()
        return self._begins_with(text)

    def _begins_with(self, text: bytes) -> Bools:
        if len(text) == 1:
            return np.asarray(self._data.take(self.at, mode="clip") == text[0])
        found = np.ones(len(self.at), dtype=bool)
        wanted = [text[place : place + _WORD] for place in range(0, len(text), _WORD)]
        for part, words in zip(wanted, words_at(self._data, self.at, len(wanted)), strict=True):
            if len(part) < _WORD:
                words &= np.uint64((1 << 8 * len(part)) - 1)
            found &= words == np.uint64(int.from_bytes(part, "little"))
        return found

    def _pass(self, found: Bools, length: int) -> None:
        self.plain = self.plain & found
        self.at = self.at + length * self.plain

    def _end_token(self, stop: Ints, sound: Bools) -> None:
        self.plain = self.plain & sound
        self.at = np.where(self.plain, stop, self.at)


def words_at(data: Bytes, at: Ints, count: int) -> Iterator[Words]:
    """Words of eight bytes each from offsets on, the first byte lowest; zeros behind the end."""
    if int(at.max(initial=0)) + (count + 1) * _WORD > len(data):
        data = np.append(data, np.zeros((count + 1) * _WORD, dtype=np.uint8))
    aligned = data[: len(data) // _WORD * _WORD].view("<u8")
    index, shift = at // _WORD, (at % _WORD * 8).astype(np.uint64)
    words = aligned.take(index, mode="clip")
    for place in range(1, count + 1):
        following = aligned.take(index + place, mode="clip")
        yield (words >> shift) | (following << (np.uint64(64) - shift))  # by 64: none of it
        words = following


def _next_quotes(data: Bytes, at: Ints) -> tuple[Ints, Bools]:
    """Where the next apostrophe from each offset on stands, and whether one stands near."""
    stop, found = at.copy(), np.zeros(len(at), dtype=bool)
    left = np.arange(len(at))
    for _ in range(LONGEST_TEXT // _WORD):
        (words,) = words_at(data, stop[left], 1)
        other = words ^ _QUOTES
        is_quote = (other - _ONES) & ~other & _HIGH_BITS  # true of the first one at least
        lowest = is_quote & (np.uint64(0) - is_quote)
        before = ((((lowest - np.uint64(1)) & _HIGH_BITS) >> np.uint64(7)) * _ONES) >> np.uint64(56)
        stop[left] += before.astype(np.intp)
        found[left] = lowest > 0
        left = left[lowest == 0]
        if not len(left):
            break
    return stop, found


def read_whole_numbers(data: Bytes, at: Ints) -> tuple[Ints, Ints, Bools]:
    """Read digits at offsets: the numbers, where they end, and whether there are any."""
    number, stop = _digits(data, at, np.zeros(len(at), dtype=np.int64))
    return number, stop, (stop > at) & (stop <= at + MOST_WHOLE_DIGITS)


def _digits(data: Bytes, at: Ints, number: Ints) -> tuple[Ints, Ints]:
    """Append the digits at offsets to numbers; returns where the digits end, too."""
    is_digit: Bools = np.ones(len(at), dtype=bool)
    for _ in range(MOST_DIGITS):
        digit = data.take(at, mode="clip") - np.uint8(_ZERO)  # what is below wraps round
        is_digit &= digit <= 9
        if is_digit.all():
            number, at = number * 10 + digit, at + 1
            continue
        if not is_digit.any():
            break
        number = np.where(is_digit, number * 10 + digit, number)
        at = at + is_digit
    return number, at


def read_numbers(data: Bytes, at: Ints) -> tuple[Floats, Ints, Bools]:
    """Read numbers at offsets as doubles, rounded as ``float`` rounds them.

    Returns the numbers, where they end, and whether one is written there as STEP asks. A whole
    number below 2**53 and a power of ten up to 10**22 are exact, so that one division or product
    of both rounds once; what is longer is left to ``float``.
    """
    first = at
    negative = data.take(at, mode="clip") == _MINUS
    whole = at + negative
    mantissa, point = _digits(data, whole, np.zeros(len(at), dtype=np.int64))
    sound = point > whole
    is_point = data.take(point, mode="clip") == _POINT
    mantissa, stop = _digits(data, point + is_point, mantissa)
    power = point + is_point - stop
    digits = stop - whole - is_point
    sound &= digits < MOST_DIGITS
    marked = np.flatnonzero(sound & (data.take(stop, mode="clip") == _EXPONENT))
    if len(marked):
        exponent, stop[marked], sound[marked] = _exponents(data, stop[marked] + 1)
        power[marked] += exponent
    exact = (digits <= EXACT_DIGITS) & (np.abs(power) <= EXACT_POWER)
    shift = _POWERS[np.minimum(np.abs(power), EXACT_POWER)]
    number = np.where(power < 0, mantissa / shift, mantissa * shift)
    number = np.where(negative, -number, number)
    for row in np.flatnonzero(sound & ~exact).tolist():
        number[row] = float(data[first[row] : stop[row]].tobytes())
    return number, stop, sound


def _exponents(data: Bytes, at: Ints) -> tuple[Ints, Ints, Bools]:
    sign = data.take(at, mode="clip")
    negative = sign == _MINUS
    exponent, stop, sound = read_whole_numbers(data, at + (negative | (sign == _PLUS)))
    return np.where(negative, -exponent, exponent), stop, sound

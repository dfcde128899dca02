"""Reads many statements at once, token by token, straight from the bytes of the file.

What does not stand where a reader expects it makes the statement one that is not written plainly;
nothing is guessed of it. Blanks and line breaks between tokens are passed over.
"""

from __future__ import annotations

import string
from collections.abc import Callable, Iterator

import numpy as np
import numpy.typing as npt

from ifccheck.ifc.bar_paths import Bools, Floats, Ints
from ifccheck.ifc.step_bytes import stretches

Bytes = npt.NDArray[np.uint8]
Words = npt.NDArray[np.uint64]

_ZERO, _POINT, _MINUS, _PLUS, _EXPONENT, _HASH, _QUOTE, _NOTHING = b"0.-+E#'$"
BLANKS = b" \t\r\n"
IS_BLANK = np.isin(np.arange(256), np.frombuffer(BLANKS, np.uint8))
_LETTERS = (string.ascii_letters + string.digits + "_").encode()
_GOES_ON = np.isin(np.arange(256), np.frombuffer(_LETTERS, np.uint8))
"""Signs with which the name of a class may go on."""
MOST_DIGITS, MOST_WHOLE_DIGITS = 30, 18
"""Longer rows of digits, and longer whole numbers, are left to a reader that takes its time."""
EXACT_DIGITS, EXACT_POWER = 15, 22
"""Whole numbers of so many digits, and powers of ten up to this, are exact as doubles."""
MOST_TEXTS = 4
"""So many different texts of several tokens are compared as a whole."""
LONGEST_TEXT = 80
"""Longer texts are not passed over."""
WORD = 8
"""Bytes of a word."""
_ONES = np.uint64(0x0101010101010101)
_SMALL_LETTERS = _ONES * np.uint64(0x20)
"""What tells small letters from capitals."""
_HIGH_BITS, _QUOTES = _ONES * np.uint64(0x80), _ONES * np.uint64(_QUOTE)
_ZEROS, _NO_DIGIT = _ONES * np.uint64(_ZERO), _ONES * np.uint64(0x76)
"""Digits as they are written, and what carries bytes beyond 9 into their highest bit."""
_TWICE_AS_WIDE = tuple(
    (np.uint64(10**digits * 2**width + 1), np.uint64(width), np.uint64(kept))
    for digits, width, kept in (
        (1, 8, 0x00FF00FF00FF00FF),
        (2, 16, 0x0000FFFF0000FFFF),
        (4, 32, 0x00000000FFFFFFFF),
    )
)
"""Join neighbouring numbers of one, two and four digits in a word: the product with the first, the
shift and what is kept of it."""
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
        found = self._begins_with(together)
        if found.all():  # the usual way, without a word on those that are not plain any more
            self.at = self.at + len(together)
            return
        found &= self.plain
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

    def same_text(self, read: Callable[[Cursors], None]) -> None:
        """Pass over what ``read`` passes over, to the end of a token.

        It is the same text in most statements, so that it need not be read in all of them.
        """
        at, plain = self.at.copy(), np.zeros(len(self.at), dtype=bool)
        left = np.flatnonzero(self.plain)
        for _ in range(MOST_TEXTS):
            if not len(left):
                break
            begin = int(self.at[left[0]])
            first = Cursors(self._data, self.at[left[:1]], np.ones(1, dtype=bool))
            read(first)
            if not first.plain[0]:
                break
            text = self._data[begin : first.at[0]].tobytes()
            others = Cursors(self._data, self.at[left], np.ones(len(left), dtype=bool))
            same = others._begins_with(text)
            at[left[same]] += len(text)
            plain[left[same]] = True
            left = left[~same]
        others = Cursors(self._data, self.at[left], np.ones(len(left), dtype=bool))
        read(others)
        at[left], plain[left] = others.at, others.plain
        self.at, self.plain = at, plain

    def word_stands_here(self, word: bytes) -> Bools:
        """Whether the name of a class stands in each place, in small letters or capitals."""
        ends = ~_GOES_ON[self._data.take(self.at + len(word), mode="clip")]
        return ends & self._begins_with(word, letters=True)

    def reference(self) -> Ints:
        """Read ``#12`` as 12."""
        number, stop, sound = _references(self._data, self.at)
        others = np.flatnonzero(self.plain & ~sound)
        if len(others):
            left = Cursors(self._data, self.at[others], np.ones(len(others), dtype=bool))
            left.tokens(b"#")
            number[others], stop[others], whole = read_whole_numbers(self._data, left.at)
            sound[others] = left.plain & whole
        self._end_token(stop, sound)
        return np.where(self.plain, number, 0)

    def reference_or_nothing(self) -> Ints:
        """Read ``#12`` as 12 and ``$`` as 0."""
        nothing = self._stands_here(b"$") & self.plain
        others = Cursors(self._data, self.at, self.plain & ~nothing)
        number = others.reference()
        self.at = np.where(nothing, self.at + 1, others.at)
        self.plain = nothing | others.plain
        return number

    def number(self) -> Floats:
        """Read a number; nan where none stands."""
        self._skip_blanks()
        number, stop, sound = read_numbers(self._data, self.at)
        self._end_token(stop, sound)
        return np.where(self.plain, number, np.nan)

    def number_or_nothing(self) -> Floats:
        """Read a number; nan for ``$``."""
        nothing = self._stands_here(b"$") & self.plain
        others = Cursors(self._data, self.at, self.plain & ~nothing)
        number = others.number()
        self.at = np.where(nothing, self.at + 1, others.at)
        self.plain = nothing | others.plain
        return number

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

    def _begins_with(self, text: bytes, letters: bool = False) -> Bools:
        """Whether a text stands in each place; of letters it does not matter how large."""
        if len(text) == 1:
            return np.asarray(self._data.take(self.at, mode="clip") == text[0])
        found = np.ones(len(self.at), dtype=bool)
        wanted = [text[place : place + WORD] for place in range(0, len(text), WORD)]
        for part, words in zip(wanted, words_at(self._data, self.at, len(wanted)), strict=True):
            if len(part) < WORD:
                words &= np.uint64((1 << 8 * len(part)) - 1)
            other = words ^ np.uint64(int.from_bytes(part, "little"))
            found &= (other & ~_SMALL_LETTERS if letters else other) == 0
        return found

    def _pass(self, found: Bools, length: int) -> None:
        self.plain = self.plain & found
        self.at = self.at + length * self.plain

    def _end_token(self, stop: Ints, sound: Bools) -> None:
        self.plain = self.plain & sound
        self.at = np.where(self.plain, stop, self.at)


def words_at(data: Bytes, at: Ints, count: int) -> Iterator[Words]:
    """Words of eight bytes each from offsets on, the first byte lowest; zeros behind the end."""
    words = stretches(data, at, count * WORD).view("<u8")
    yield from (words[:, place] for place in range(count))


def _next_quotes(data: Bytes, at: Ints) -> tuple[Ints, Bools]:
    """Where the next apostrophe from each offset on stands, and whether one stands near."""
    stop, found = at.copy(), np.zeros(len(at), dtype=bool)
    left = np.arange(len(at))
    for _ in range(LONGEST_TEXT // WORD):
        (words,) = words_at(data, stop[left], 1)
        other = words ^ _QUOTES
        is_quote = (other - _ONES) & ~other & _HIGH_BITS  # true of the first one at least
        lowest = is_quote & (np.uint64(0) - is_quote)
        stop[left] += _bytes_below(lowest).astype(np.intp)
        found[left] = lowest > 0
        left = left[lowest == 0]
        if not len(left):
            break
    return stop, found


def _references(data: Bytes, at: Ints) -> tuple[Ints, Ints, Bools]:
    """Read ``#12`` at offsets: the numbers, where they end, and whether such a one, of no more
    than seven digits, stands there."""
    (words,) = words_at(data, at + 1, 1)
    digits = words ^ _ZEROS
    other = ((digits + _NO_DIGIT) | digits) & _HIGH_BITS  # true of the first that is no digit
    count = _bytes_below(other & (np.uint64(0) - other))
    sound = (data.take(at, mode="clip") == _HASH) & (count > 0) & (count < WORD)
    digits <<= np.uint64(64) - (count << np.uint64(3))  # the last digit highest, zeros before
    for pair, width, kept in _TWICE_AS_WIDE:
        digits = ((digits * pair) >> width) & kept
    return digits.astype(np.intp), at + 1 + count.astype(np.intp), sound


def _bytes_below(bit: Words) -> Words:
    """How many whole bytes of a word lie below the one in which its only bit stands."""
    return (((bit - np.uint64(1)) & _HIGH_BITS) >> np.uint64(7)) * _ONES >> np.uint64(56)


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

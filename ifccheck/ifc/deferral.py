"""Tells whether the instances of a file may be left unparsed until each is asked for.

ifcopenshell then opens a file in less than half the time, but finds what is wrong with an instance
late or never: a reference that leads nowhere, a token that is none, a number beyond all bounds.
So this looks through the whole file for anything of the kind. It tells only what is surely sound;
all that is written in an unusual way is left to a reader that parses every instance at once. What
is not told apart is an instance with more attributes than its class has: its values are read alike,
but what it refers to beyond them knows itself used only in a file that was left unparsed.
"""

from __future__ import annotations

import string
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ifccheck.ifc.lexer import LARGEST_ID, Scan
from ifccheck.ifc.step_bytes import PIECE, Bytes, Offsets, whole_numbers

Flags = NDArray[np.bool_]

_DIGITS, _POINT, _SIGNS, _BLANKS = b"0123456789", b".", b"+-", b" \t\r\n"
_LETTERS = string.ascii_letters.encode() + b"_"
_MARKS, _SEPARATORS, _HASH = b"$*#", b"(),;=", b"#"

# Two bytes that stand side by side outside a text ask for a closer look where the second follows
# what it must not follow in these ways. Each byte has a code of two halves: the ways in which it
# may be followed wrongly, and the ways in which it may follow wrongly.
_AFTER_NUMBER, _AFTER_WORD, _AFTER_SIGN, _AFTER_TOKEN = 1, 2, 4, 8
_EVER = _AFTER_NUMBER | _AFTER_WORD | _AFTER_SIGN | _AFTER_TOKEN
_CODE_OF = (
    (_DIGITS, _AFTER_NUMBER, 0),
    (_POINT, _AFTER_NUMBER, _AFTER_SIGN),
    (_LETTERS, _AFTER_WORD, _AFTER_NUMBER | _AFTER_SIGN),
    (b"_", _AFTER_WORD, _AFTER_NUMBER | _AFTER_SIGN | _AFTER_TOKEN),
    (_SIGNS, _AFTER_SIGN, _AFTER_NUMBER | _AFTER_SIGN),
    (_MARKS + _BLANKS, _AFTER_TOKEN, _AFTER_NUMBER | _AFTER_WORD | _AFTER_SIGN),
    (_SEPARATORS, _AFTER_TOKEN, _AFTER_WORD | _AFTER_SIGN),
    (b"('", _AFTER_TOKEN, _AFTER_SIGN),
)
_CODES = bytearray([_AFTER_TOKEN << 4 | _EVER]) * 256
for _bytes, _followed, _following in _CODE_OF:
    for _byte in _bytes:
        _CODES[_byte] = _followed << 4 | _following

_GREATEST_EXPONENT = 99
_MOST_DIGITS = 200
"""With fewer digits and no greater exponent every number is within the range of a double."""
_LONG_NUMBER = bytes(_CODES[_DIGITS[0] : _DIGITS[0] + 1]) * _MOST_DIGITS

_TABLED_IDS = 2**26
"""Numbers up to this are looked up in a table of them all."""


def _one_of(these: bytes) -> Flags:
    flags = np.zeros(256, np.bool_)
    flags[list(these)] = True
    return flags


_IS_LETTER, _IS_BLANK, _IS_SIGN = _one_of(_LETTERS), _one_of(_BLANKS), _one_of(_SIGNS)
_IN_NUMBER, _IS_SEPARATOR = _one_of(_DIGITS + _POINT), _one_of(_SEPARATORS)
_IS_EXPONENT_MARK, _ENDS_NUMBER = _one_of(b"Ee"), _one_of(b",)")
_BEFORE_TEXT = _one_of(b"(,'" + _BLANKS)


def may_be_deferred(data: bytes, scan: Scan) -> bool:
    """Tell whether nothing wrong will be found in an instance when it is parsed."""
    if scan.names.count("DATA") != 1 or scan.hides_apostrophes or b"\0" in data:
        return False
    (section,) = (section for section in scan.sections if section.name == "DATA")
    body, array, known = (
        slice(section.body, section.last),
        np.frombuffer(data, np.uint8),
        _Ids(scan),
    )
    around = (slice(0, body.start), slice(body.stop, len(data)))
    return all(
        _refers_to_its_own(piece, known)
        and _quotes_well(piece)
        and (part is not body or _holds_sound_tokens(piece, body.stop))
        for part in (*around, body)
        for piece in _pieces(array, scan.apostrophes, part)
    )


@dataclass(frozen=True, slots=True)
class _Piece:
    """A piece of the file: all is looked at in it while it is in the processor's cache."""

    file: Bytes
    """All of the file; offsets are those in it."""
    first: int
    stop: int
    apostrophes: Offsets
    """Those in the piece, and in as much behind it as the longest number may take."""
    before: int
    """How many apostrophes stand before the piece."""

    def in_text(self, at: Offsets) -> Flags:
        """Tell whether places of the piece are within texts."""
        found: Flags = (self.before + np.searchsorted(self.apostrophes, at)) % 2 == 1
        return found


def _pieces(file: Bytes, apostrophes: Offsets, part: slice) -> Iterator[_Piece]:
    for first in range(part.start, part.stop, PIECE):
        stop = min(first + PIECE, part.stop)
        before, after = np.searchsorted(apostrophes, (first, stop + _MOST_DIGITS)).tolist()
        yield _Piece(file, first, stop, apostrophes[before:after], before)


class _Ids:
    """The numbers of the instances of a file."""

    def __init__(self, scan: Scan) -> None:
        self._ids = scan.ids
        self._greatest = int(scan.ids.max(initial=0))
        self._table: Flags | None = None
        if self._greatest <= _TABLED_IDS:
            self._table = np.zeros(self._greatest + 2, np.bool_)
            self._table[scan.ids] = True

    def hold(self, numbers: Offsets) -> Flags:
        """Tell which numbers are among them."""
        if self._table is None:
            return np.isin(numbers, self._ids)
        return self._table[np.minimum(numbers, self._greatest + 1)]


def _refers_to_its_own(piece: _Piece, known: _Ids) -> bool:
    """Tell whether every reference leads to an instance of the file."""
    at = np.flatnonzero(piece.file[piece.first : piece.stop] == _HASH[0]) + piece.first
    numbers, _ = whole_numbers(piece.file, at + 1, LARGEST_ID)
    unknown = at[~known.hold(numbers)]
    return bool(piece.in_text(unknown).all())


def _quotes_well(piece: _Piece) -> bool:
    """Tell whether every text begins where one may."""
    opening = piece.apostrophes[piece.before % 2 :: 2]
    return bool(_BEFORE_TEXT[piece.file[opening - 1]].all())


def _holds_sound_tokens(piece: _Piece, end: int) -> bool:
    """Tell whether all tokens are sound; ``end``: where the last token of the file may end."""
    doubtful = _doubtful_places(piece, end)
    return doubtful is not None and _stand_well(piece.file, doubtful[~piece.in_text(doubtful)])


def _doubtful_places(piece: _Piece, end: int) -> Offsets | None:
    """Return where a byte cannot stand, or needs a closer look, unless it is part of a text.

    None where a number may be too long.
    """
    first, size = piece.first, piece.stop - piece.first
    text = piece.file[first : min(piece.stop + _MOST_DIGITS, end)].tobytes().translate(_CODES)
    if _LONG_NUMBER in text:
        return None
    codes = np.frombuffer(text, np.uint8)
    return np.concatenate((_wrongly_following(codes[: size + 1]), _second_points(codes))) + first


def _wrongly_following(codes: Bytes) -> Offsets:
    return np.flatnonzero((codes[:-1] >> 4) & codes[1:] != 0) + 1


def _second_points(codes: Bytes) -> Offsets:
    """Return where a point follows another with nothing but digits between them.

    With one bit for each byte, adding one to the first of a row of digits carries over to what
    stands behind the row, for all of them at once.
    """
    digits, points = (_as_bits(codes == _CODES[these[0]]) for these in (_DIGITS, _POINT))
    behind = points << 1
    second = ((digits + (behind & digits)) | behind) & points
    if not second:
        return np.zeros(0, np.int64)
    length = (len(codes) + 7) // 8
    bits = np.frombuffer(second.to_bytes(length, "little"), np.uint8)
    return np.flatnonzero(np.unpackbits(bits, bitorder="little"))


def _as_bits(flags: Flags) -> int:
    return int.from_bytes(np.packbits(flags, bitorder="little").tobytes(), "little")


def _stand_well(array: Bytes, at: Offsets) -> bool:
    """Tell whether what stands at places that need a closer look is right all the same."""
    is_blank, is_letter = _IS_BLANK[array[at]], _IS_LETTER[array[at]]
    return (
        bool((is_blank | is_letter).all())
        and bool(_IS_SEPARATOR[array[at[is_blank] + 1]].all())
        and _belong_there(array, at[is_letter])
    )


def _belong_there(array: Bytes, letters: Offsets) -> bool:
    """Tell whether letters after a digit or a point are those of a word or of an exponent."""
    before = letters - 1
    pending = np.arange(len(letters))
    while len(pending := pending[_IN_NUMBER[array[before[pending]]]]):
        before[pending] -= 1
    in_word = _IS_LETTER[array[before]] | (array[before + 1] == _POINT[0])
    marks = letters[~in_word]
    first = marks + 1
    first += _IS_SIGN[array[first]]
    exponents, stops = whole_numbers(array, first, _GREATEST_EXPONENT)
    is_sound = (
        _IS_EXPONENT_MARK[array[marks]]
        & (exponents <= _GREATEST_EXPONENT)
        & _ENDS_NUMBER[array[stops]]
    )
    return bool(is_sound.all())

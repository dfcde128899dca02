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

import numpy as np
from numpy.typing import NDArray

from ifccheck.ifc.lexer import LARGEST_ID, Scan
from ifccheck.ifc.step_bytes import PIECE, Bytes, Offsets, places, whole_numbers

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
    array = np.frombuffer(data, np.uint8)
    return _refers_to_its_own(array, scan) and _holds_sound_tokens(data, array, scan)


def _body(scan: Scan) -> slice:
    (section,) = (section for section in scan.sections if section.name == "DATA")
    return slice(section.body, section.last)


def _in_text(scan: Scan, at: Offsets) -> Flags:
    found: Flags = np.searchsorted(scan.apostrophes, at) % 2 == 1
    return found


def _refers_to_its_own(array: Bytes, scan: Scan) -> bool:
    """Tell whether every reference leads to an instance of the file."""
    at = places(array, _HASH[0])
    numbers, _ = whole_numbers(array, at + 1, LARGEST_ID)
    unknown = at[~_are_ids(numbers, scan.ids)]
    return bool(_in_text(scan, unknown).all())


def _are_ids(numbers: Offsets, ids: Offsets) -> Flags:
    greatest = int(ids.max(initial=0))
    if greatest > _TABLED_IDS:
        return np.isin(numbers, ids)
    is_id = np.zeros(greatest + 2, np.bool_)
    is_id[ids] = True
    return is_id[np.minimum(numbers, greatest + 1)]


def _holds_sound_tokens(data: bytes, array: Bytes, scan: Scan) -> bool:
    doubtful = _doubtful_places(data, _body(scan))
    return (
        doubtful is not None
        and _stand_well(array, doubtful[~_in_text(scan, doubtful)])
        and bool(_BEFORE_TEXT[array[scan.apostrophes[::2] - 1]].all())
    )


def _doubtful_places(data: bytes, body: slice) -> Offsets | None:
    """Return where a byte cannot stand, or needs a closer look, unless it is part of a text.

    None where a number may be too long.
    """
    found = [np.zeros(0, np.int64)]
    for first in range(body.start, body.stop, PIECE):
        piece = data[first : min(first + PIECE + _MOST_DIGITS, body.stop)].translate(_CODES)
        if _LONG_NUMBER in piece:
            return None
        codes = np.frombuffer(piece, np.uint8)
        found += [_wrongly_following(codes[: PIECE + 1]) + first, _second_points(codes) + first]
    return np.concatenate(found)


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

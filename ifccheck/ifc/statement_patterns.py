"""Patterns of plainly written statements, from what follows their number to their semicolon.

They allow blanks and line breaks between tokens, and nothing else that STEP allows besides: what
is written otherwise does not match, and is read through its entity.
"""

from __future__ import annotations

import re

import numpy as np

BLANKS = rb"[ \t\r\n]*+"
TEXT = rb"'[^']*'(?:'[^']*')*+"
"""Any text; an apostrophe in it is written twice."""
TEXT_OR_NOTHING = rb"(?:" + TEXT + rb"|\$)"
REFERENCE_OR_NOTHING = rb"(?:#\d+|\$)"
REFERENCE = rb"#(\d+)"
"""One reference; its number is a group."""
LONG = 60
"""Longer lists of numbers are read faster by numpy."""
CLASS = rb"[A-Z][A-Z0-9_]*+"


def statement(word: bytes, *arguments: bytes) -> re.Pattern[bytes]:
    """Return the pattern of an instance of a class with these arguments."""
    inner = (BLANKS + b"," + BLANKS).join(arguments)
    tokens = (b"=", word, rb"\(", inner, rb"\)", b";")
    return re.compile(BLANKS + BLANKS.join(tokens))


def references(name: bytes = b"") -> bytes:
    """Return the pattern of a list of references; what stands between its brackets is a group."""
    more = rb"(?:" + BLANKS + b"," + BLANKS + rb"#\d++)*+"
    return rb"\(" + BLANKS + rb"(" + name + rb"#\d++" + more + rb")" + BLANKS + rb"\)"


def numbers_of(references: bytes) -> list[int]:
    """Return the numbers of the references in a list."""
    if b"," not in references:
        return [int(references[1:])]
    numbers = references.replace(b"#", b"")
    if len(numbers) < LONG:
        return list(map(int, numbers.split(b",")))
    found: list[int] = np.fromstring(numbers.decode("ascii"), dtype=np.int64, sep=",").tolist()
    return found

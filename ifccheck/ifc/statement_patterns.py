"""Patterns of plainly written statements, from what follows their number to their semicolon.

They allow blanks and line breaks between tokens, and nothing else that STEP allows besides: what
is written otherwise does not match, and is read through its entity.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from itertools import accumulate

import numpy as np

BLANKS = rb"[ \t\r\n]*+"
TEXT = rb"'[^']*'(?:'[^']*')*+"
"""Any text; an apostrophe in it is written twice."""
TEXT_OR_NOTHING = rb"(?:" + TEXT + rb"|\$)"
REFERENCE_OR_NOTHING = rb"(?:#\d+|\$)"
REFERENCE = rb"#(\d+)"
"""One reference; its number is a group."""
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
    return list(map(int, references.replace(b"#", b"").split(b",")))


def numbers_of_each(lists: Sequence[bytes]) -> list[list[int]]:
    """Return the numbers of the references in each of many lists."""
    joined = b",".join(lists).replace(b"#", b"").decode("ascii")
    flat: list[int] = np.fromstring(joined, dtype=np.int64, sep=",").tolist() if lists else []
    stops = list(accumulate(one.count(b",") + 1 for one in lists))
    return [flat[start:stop] for start, stop in zip([0, *stops], stops, strict=False)]

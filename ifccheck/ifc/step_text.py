"""Writes values the way a STEP file spells them."""

from __future__ import annotations

import re
from functools import lru_cache

_SPECIAL = re.compile(r"['\\]|[^ -~]+")


@lru_cache(maxsize=4096)
def step_string(text: str) -> str:
    r"""Return a text in apostrophes, with everything outside plain ASCII escaped.

    >>> print(step_string("it's"))
    'it''s'
    >>> print(step_string("Ø16"))
    '\X2\00D8\X0\16'
    """
    return f"'{_SPECIAL.sub(_escape, text)}'"


def _escape(match: re.Match[str]) -> str:
    found = match[0]
    if found in "'\\":
        return found * 2
    return "".join(_hexadecimal(character) for character in found).replace("\\X0\\\\X2\\", "")


def _hexadecimal(character: str) -> str:
    code = ord(character)
    if 0xD800 <= code <= 0xDFFF:
        code = 0xFFFD  # half a character, which no file may hold
    return f"\\X2\\{code:04X}\\X0\\" if code <= 0xFFFF else f"\\X4\\{code:08X}\\X0\\"


def step_real(value: float) -> str:
    """Return a finite number with the decimal point that STEP asks for.

    >>> step_real(0.85), step_real(2100.0), step_real(1e-7)
    ('0.85', '2100.', '1.E-07')
    """
    mantissa, exponent_mark, exponent = repr(float(value)).partition("e")
    if "." not in mantissa:
        mantissa += "."
    return (mantissa.removesuffix("0") if mantissa.endswith(".0") else mantissa) + (
        f"E{exponent}" if exponent_mark else ""
    )


def step_logical(value: bool | None) -> str:
    """Return true, false or unknown."""
    return ".U." if value is None else ".T." if value else ".F."

"""Writes values the way a STEP file spells them."""

from __future__ import annotations

import re

_SPECIAL = re.compile(r"['\\]|[^ -~]+")
_NEVER_WRITTEN = re.compile("[\0\ud800-\udfff]")
"""Readers end a text at a zero, and half a character no file may hold."""


def step_string(text: str) -> str:
    r"""Return a text in apostrophes, with everything outside plain ASCII escaped.

    >>> print(step_string("it's"))
    'it''s'
    >>> print(step_string("Ø16"))
    '\X2\00D8\X0\16'
    """
    if text.isascii() and text.isprintable() and "'" not in text and "\\" not in text:
        return f"'{text}'"
    return f"'{_SPECIAL.sub(_escape, text)}'"


def _escape(match: re.Match[str]) -> str:
    found = match[0]
    return found * 2 if found in "'\\" else escaped(found)


def escaped(text: str) -> str:
    r"""Return a text in hexadecimal, four digits a character or eight where one needs them.

    >>> print(escaped("≥"))
    \X2\2265\X0\
    """
    text = _NEVER_WRITTEN.sub("\ufffd", text)
    if max(text) <= "\uffff":
        return f"\\X2\\{text.encode('utf-16-be').hex().upper()}\\X0\\"
    return f"\\X4\\{text.encode('utf-32-be').hex().upper()}\\X0\\"


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

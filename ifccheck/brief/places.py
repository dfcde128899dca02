"""Where a key stands in a TOML text: its path and its line, for messages."""

from __future__ import annotations

import re
from collections.abc import Iterator
from difflib import get_close_matches

from ifccheck.units import clipped

Path = tuple[str | int, ...]

_PART = r"(?:[A-Za-z0-9_-]+|\"[^\"\n]*\"|'[^'\n]*')"
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_KEY = rf"{_PART}(?:\s*\.\s*{_PART})*"
_ARRAY_TABLE = re.compile(rf"\s*\[\[\s*({_KEY})\s*\]\]")
_TABLE = re.compile(rf"\s*\[\s*({_KEY})\s*\]")
_ASSIGNMENT = re.compile(rf"\s*({_KEY})\s*=")
_STRINGS = re.compile(
    r'"""(?:\\.|[^\\])*?"""|\'\'\'.*?\'\'\'|"(?:\\.|[^"\\\n])*"|\'[^\'\n]*\'|#[^\n]*', re.DOTALL
)


def lines_of(text: str) -> dict[Path, int]:
    """Return the line of every table and key of a TOML text, as well as it can be told.

    Indices of arrays of tables count from 0, as in the parsed data.
    """
    lines: dict[Path, int] = {}
    counts: dict[Path, int] = {}
    table: Path = ()
    for number, line in _statements(text):
        if found := _ARRAY_TABLE.match(line):
            name = _parts(found[1])
            counts[name] = counts.get(name, -1) + 1
            table = (*name, counts[name])
            lines.setdefault(name, number)
            lines.setdefault(table, number)
        elif found := _TABLE.match(line):
            table = _parts(found[1])
            lines.setdefault(table, number)
        elif found := _ASSIGNMENT.match(line):
            lines.setdefault((*table, *_parts(found[1])), number)
    return lines


def _statements(text: str) -> Iterator[tuple[int, str]]:
    """Lines that begin a statement: not inside a string, nor inside a value over many lines."""
    inside = _inside_strings(text)
    blanked = _STRINGS.sub(_blank, text).split("\n")
    depth = 0
    for number, (line, original) in enumerate(zip(blanked, text.split("\n"), strict=True), 1):
        begins = depth == 0 and number not in inside
        if begins:
            yield number, original
        if not begins or "=" in line:
            value = line.split("=", 1)[1] if begins else line
            depth += sum(map(value.count, "[{")) - sum(map(value.count, "]}"))


def _inside_strings(text: str) -> set[int]:
    """Numbers of the lines at whose beginning a string is open."""
    numbers: set[int] = set()
    for found in _STRINGS.finditer(text):
        if "\n" in found[0]:
            first = text.count("\n", 0, found.start()) + 1
            numbers.update(range(first + 1, first + found[0].count("\n") + 1))
    return numbers


def _blank(found: re.Match[str]) -> str:
    return "\n".join("_" * len(line) for line in found[0].split("\n"))


def _parts(key: str) -> Path:
    return tuple(part.strip("\"'") for part in re.findall(_PART, key))


def line_of(lines: dict[Path, int], path: Path) -> int | None:
    """Return the line of a key, or of the nearest table that holds it."""
    for length in range(len(path), 0, -1):
        if path[:length] in lines:
            return lines[path[:length]]
    return None


def shown(path: Path) -> str:
    """Return a path for people, entries counted from 1: ``loads[3].at``.

    >>> shown(("loads", 2, "at"))
    'loads[3].at'
    """
    text = ""
    for part in path:
        if isinstance(part, int):
            text += f"[{part + 1}]"
        else:
            key = part if _BARE_KEY.fullmatch(part) else clipped(part)
            text += f".{key}" if text else key
    return text


MOST_LISTED = 30
"""Known words that are listed where none is near"""


def did_you_mean(word: str, known: list[str], prefix: str = "") -> str:
    """Return advice for an unknown word: the nearest known one, else all of them.

    ``prefix`` goes before each that is named.
    """
    lowered = {name.lower(): name for name in known}
    near = get_close_matches(word.lower(), lowered, n=1, cutoff=0.6)
    if near:
        return f"did you mean {prefix}{lowered[near[0]]}?"
    more = [f"{len(known) - MOST_LISTED} more"] if len(known) > MOST_LISTED else []
    listed = ", ".join([*(f"{prefix}{name}" for name in known[:MOST_LISTED]), *more])
    return f"known are {listed}" if known else "none is known here"

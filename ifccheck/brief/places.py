"""Where a key stands in a TOML text: its path and its line, for messages."""

from __future__ import annotations

import re
from collections.abc import Iterator
from difflib import get_close_matches

Path = tuple[str | int, ...]

_PART = r"(?:[A-Za-z0-9_-]+|\"[^\"\n]*\"|'[^'\n]*')"
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
            lines.setdefault(table, number)
        elif found := _TABLE.match(line):
            table = _parts(found[1])
            lines.setdefault(table, number)
        elif found := _ASSIGNMENT.match(line):
            lines.setdefault((*table, *_parts(found[1])), number)
    return lines


def _statements(text: str) -> Iterator[tuple[int, str]]:
    """Lines that begin a statement: not inside a string, nor inside a value over many lines."""
    blanked = _STRINGS.sub(_blank, text)
    depth = 0
    originals = text.split("\n")
    for number, (line, original) in enumerate(zip(blanked.split("\n"), originals, strict=True), 1):
        if depth == 0:
            yield number, original
        if depth or "=" in line:
            value = line if depth else line.split("=", 1)[1]
            depth += sum(map(value.count, "[{")) - sum(map(value.count, "]}"))


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
            text += f".{part}" if text else part
    return text


def did_you_mean(word: str, known: list[str]) -> str:
    """Return advice for an unknown word: the nearest known one, else all of them."""
    lowered = {name.lower(): name for name in known}
    near = get_close_matches(word.lower(), lowered, n=1, cutoff=0.6)
    if near:
        return f"did you mean {lowered[near[0]]}?"
    return f"known are {', '.join(known)}" if known else "none is known here"

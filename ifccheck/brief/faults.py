"""What is wrong with a brief: at which key, in words; and how it is told in one line."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from ifccheck.brief.places import Path, did_you_mean, line_of, shown
from ifccheck.errors import BriefError
from ifccheck.units import clipped


class FaultError(ValueError):
    """A fault at a key of the brief, before it is known in which file and line."""

    def __init__(self, path: Path, text: str) -> None:
        super().__init__(text)
        self.path = path
        self.text = text


@dataclass(frozen=True, slots=True)
class Source:
    """The file that a fault is told of, and the lines of its keys."""

    file_name: str
    lines: Mapping[Path, int]

    def line(self, path: Path) -> int | None:
        """Line of a key or of what holds it."""
        return line_of(dict(self.lines), path)

    def error(self, path: Path, text: str) -> BriefError:
        """The error to raise for a fault."""
        line = self.line(path)
        place = f" {shown(path)}" if path else ""
        at = "" if line is None else f" (line {line})"
        return BriefError(f"{self.file_name}:{place}{at}: {text}")


def first_fault(errors: Sequence[Any], known_keys: Any, source: Source) -> BriefError:
    """The error for what pydantic found: unknown keys first, then by line."""
    ranked = sorted(errors, key=lambda error: _rank(error, source))
    first = ranked[0]
    path = _path(first)
    text = _words(first, path, known_keys)
    more = len(ranked) - 1
    if more:
        text += f" (and {more} more {'fault' if more == 1 else 'faults'})"
    return source.error(path, text)


def _rank(error: Any, source: Source) -> tuple[bool, int]:
    return error["type"] != "extra_forbidden", source.line(_path(error)) or 0


def _path(error: Any) -> Path:
    return tuple(part for part in error["loc"] if part != "[key]")


_PLAIN_WORDS = {"missing": "is missing", "string_too_short": "is empty"}
_TYPE_WORDS = {
    "bool_type": "must be true or false",
    "string_type": "must be text in quotes",
    "list_type": "must be a list",
    "dict_type": "must be a table",
    "model_type": "must be a table",
    "string_too_long": "is too long",
    "string_pattern_mismatch": "must be text on one line",
}


def _words(error: Any, path: Path, known_keys: Any) -> str:
    kind, given = error["type"], error["input"]
    if kind == "extra_forbidden":
        key = str(path[-1])
        return f"unknown key {clipped(key)}: {did_you_mean(key, known_keys(path[:-1]))}"
    if kind in _PLAIN_WORDS:
        return _PLAIN_WORDS[kind]
    if kind == "value_error":
        return str(error["ctx"]["error"])
    if kind == "literal_error":
        known = [
            word.strip(" '") for word in error["ctx"]["expected"].replace(" or ", ",").split(",")
        ]
        return f"{clipped(given)} is not known: use {', '.join(known[:-1])} or {known[-1]}"
    if kind in ("too_short", "too_long"):
        return f"has {len(given)} items where {_needed(error)} are needed"
    return f"{clipped(given)} {_TYPE_WORDS.get(kind, error['msg'])}"


def _needed(error: Any) -> str:
    context = error["ctx"]
    return (
        f"at least {context['min_length']}"
        if "min_length" in context
        else str(context["max_length"])
    )

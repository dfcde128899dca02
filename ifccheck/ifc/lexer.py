"""Finds the statements of a STEP file: which instances it holds and where lines may be added.

Comments, and the apostrophes that ``\\S\\'`` hides in a text, are blanked; after that a semicolon
ends a statement exactly where an even number of apostrophes stands before it. Offsets are those of
the bytes given.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ifccheck.ifc.step_bytes import Bytes, Offsets, places, whole_numbers

LARGEST_ID = 2**31 - 1
BYTE_ORDER_MARK = b"\xef\xbb\xbf"
START_WORD = b"ISO-10303-21"
END_WORD = b"END-ISO-10303-21"

EXPORT_AGAIN = "export the model again from the program that made it"

NOT_STEP = "is not an IFC file (it does not begin with ISO-10303-21); give a .ifc file"

_HASH, _EQUALS, _QUOTE, _SEMICOLON, _SLASH, _STAR = b"#=';/*"

_COMMENT = re.compile(rb"/\*")
_COMMENT_OR_HIDDEN_QUOTE = re.compile(rb"/\*|\\S\\'")
_LINE_BREAK = re.compile(rb"\r\n|\n|\r")
_STEP_TEXT = re.compile(rb"'((?:[^']|'')*)'")


class StepError(Exception):
    """A file is not sound STEP; the text says what is wrong and what to do."""


@dataclass(frozen=True, slots=True)
class Section:
    """A section of the file, from its first byte to the byte after its ``ENDSEC;``."""

    name: str
    start: int
    body: int
    """Where its content begins."""
    last: int
    """Where its ENDSEC begins."""
    stop: int


@dataclass(frozen=True, slots=True)
class Comment:
    """A comment, from its slash to the byte after its last slash."""

    start: int
    stop: int


@dataclass(frozen=True, slots=True)
class Scan:
    """What the lexer found in a file."""

    ids: Offsets
    """Instance numbers in the order of the file."""
    starts: Offsets
    """Offset of each instance's ``#``."""
    bodies: Offsets
    """Offset after each instance's number."""
    stops: Offsets
    """Offset after each instance's ``;``."""
    schemas: tuple[str, ...]
    sections: tuple[Section, ...]
    comments: tuple[Comment, ...]
    apostrophes: Offsets
    """Offsets of the apostrophes around texts; two stand where a text holds one."""
    hides_apostrophes: bool
    """Whether a text holds one in another way, so that ``apostrophes`` leave it out."""
    insertion: int
    """Offset at which lines may be added: the end of the last DATA section."""
    on_own_line: bool
    """Whether nothing but spaces stands before ``insertion`` on its line."""
    newline: bytes

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the sections, in the order of the file."""
        return tuple(section.name for section in self.sections)


def scan(data: bytes) -> Scan:
    """Find instances, sections and comments; raise StepError where the file is not sound."""
    _require_step(data)
    plain, comments, hides = _blank_hidden(data)
    array = np.frombuffer(plain, np.uint8)
    apostrophes = places(array, _QUOTE)
    starts, stops = _statements(array, apostrophes, len(BYTE_ORDER_MARK) if _has_mark(data) else 0)
    is_instance = array[starts] == _HASH
    words = _Words(plain, starts[~is_instance], stops[~is_instance])
    schemas, sections = _read_sections(words)
    starts, stops = starts[is_instance], stops[is_instance]
    _require_inside(starts, sections, plain)
    ids, bodies = _instance_ids(array, starts)
    _require_unique(ids)
    insertion, on_own_line = _insertion(data, sections)
    newline = _newline(data, insertion if on_own_line else 0)
    return Scan(
        ids=ids,
        starts=starts,
        bodies=bodies,
        stops=stops,
        schemas=schemas,
        sections=sections,
        comments=comments,
        apostrophes=apostrophes,
        hides_apostrophes=hides,
        insertion=insertion,
        on_own_line=on_own_line,
        newline=newline,
    )


def _has_mark(data: bytes) -> bool:
    return data.startswith(BYTE_ORDER_MARK)


def _require_step(data: bytes) -> None:
    head = data[:4096].removeprefix(BYTE_ORDER_MARK).lstrip()
    if not head and len(data) <= 4096:
        raise StepError(f"is empty; {EXPORT_AGAIN}")
    if head.startswith(b"<"):
        raise StepError("is XML, not STEP; export the model as .ifc")
    if head.startswith(b"PK\x03\x04"):
        raise StepError("is a zip archive; give it the ending .ifczip")
    if not head.startswith((START_WORD, b"/*")):
        raise StepError(NOT_STEP)


def _blank_hidden(data: bytes) -> tuple[bytes, tuple[Comment, ...], bool]:
    """Blank comments and hidden apostrophes, at the same length; tell whether any was hidden."""
    # One byte is found ten times as fast as several; many files have hardly a backslash or star.
    hidden = b"\\" in data and b"\\S\\'" in data
    if not hidden and not _may_hold_comments(data):
        return data, (), False
    pattern = _COMMENT_OR_HIDDEN_QUOTE if hidden else _COMMENT
    blanked = bytearray()
    comments = []
    hides = in_text = False
    at = 0
    for match in pattern.finditer(data):
        start = match.start()
        if start < at:
            continue  # inside the comment before it
        in_text ^= bool(data.count(b"'", at, start) % 2)
        at = start
        blanked = blanked or bytearray(data)
        if match[0] == b"/*" and not in_text:
            at = _comment_end(data, start)
            comments.append(Comment(start, at))
            blanked[start:at] = b" " * (at - start)
        elif match[0] != b"/*" and in_text and not _is_escaped(data, start):
            at = match.end()
            blanked[at - 1] = _HASH
            hides = True
    return bytes(blanked) or data, tuple(comments), hides


def _may_hold_comments(data: bytes) -> bool:
    array = np.frombuffer(data, np.uint8)
    return bool((array[places(array, _STAR) - 1] == _SLASH).any())


def _comment_end(data: bytes, start: int) -> int:
    stop = data.find(b"*/", start + 2)
    if stop < 0:
        raise StepError(f"has a comment that is not closed at byte {start}; {EXPORT_AGAIN}")
    return stop + 2


def _is_escaped(data: bytes, at: int) -> bool:
    """Tell whether an odd number of backslashes stands before a place."""
    first = at
    while data[first - 1 : first] == b"\\":
        first -= 1
    return (at - first) % 2 == 1


def _statements(array: Bytes, apostrophes: Offsets, first: int) -> tuple[Offsets, Offsets]:
    """Return where each statement begins and ends; what follows the last must be blank."""
    if len(apostrophes) % 2:
        raise StepError(f"ends inside a text: it is cut short; {EXPORT_AGAIN}")
    semicolons = places(array, _SEMICOLON)
    stops = semicolons[np.searchsorted(apostrophes, semicolons) % 2 == 0] + 1
    if not len(stops):
        raise StepError(f"is cut short: it holds no whole statement; {EXPORT_AGAIN}")
    rest = array[stops[-1] :].tobytes().strip(b" \t\r\n\v\f\0\x1a")
    if rest:
        raise StepError(f"goes on after its last statement or is cut short; {EXPORT_AGAIN}")
    starts = np.concatenate(([first], stops[:-1]))
    return _past_blanks(array, starts), stops


def _past_blanks(array: Bytes, offsets: Offsets) -> Offsets:
    """Move each offset to the first byte that is not white space.

    Most statements follow one line break; the few that follow more are moved one by one.
    """
    blank = _is_blank(array[offsets])
    if not blank.any():
        return offsets
    offsets = offsets + blank
    pending = np.flatnonzero(_is_blank(array[offsets]))
    for _ in range(2):
        offsets[pending] += 1
        pending = pending[_is_blank(array[offsets[pending]])]
    for index in pending:
        offsets[index] = _next_visible(array, int(offsets[index]))
    return offsets


def _next_visible(array: Bytes, offset: int) -> int:
    width = 64
    while True:
        visible = np.flatnonzero(~_is_blank(array[offset : offset + width]))
        if len(visible):
            return offset + int(visible[0])
        offset, width = offset + width, 2 * width


def _is_blank(values: Bytes) -> NDArray[np.bool_]:
    blank: NDArray[np.bool_] = (values == 32) | ((values >= 9) & (values <= 13))
    return blank


def _instance_ids(array: Bytes, starts: Offsets) -> tuple[Offsets, Offsets]:
    """Read the number after each ``#``, and require an equals sign after it; returns also where
    each number ends."""
    at = _past_blanks(array, starts + 1)
    ids, stops = whole_numbers(array, at, LARGEST_ID)
    has_equals = array[_past_blanks(array, stops)] == _EQUALS
    for bad in np.flatnonzero((ids == 0) | ~has_equals | (ids > LARGEST_ID))[:1]:
        instance = shown(array[starts[bad] :][:40].tobytes())
        raise StepError(
            f"has an instance that cannot be read at byte {starts[bad]}: {instance} "
            f"(numbers run from 1 to {LARGEST_ID}); {EXPORT_AGAIN}"
        )
    return ids, stops


def shown(text: bytes) -> str:
    """Return the beginning of a statement for a message: one line, printable."""
    printable = (
        character if character.isprintable() else " " for character in text[:60].decode("latin-1")
    )
    return " ".join("".join(printable).split())


def _require_unique(ids: Offsets) -> None:
    if np.all(ids[1:] > ids[:-1]):
        return
    ordered = np.sort(ids)
    for repeated in ordered[1:][ordered[1:] == ordered[:-1]][:1]:
        raise StepError(f"has more than one instance numbered #{repeated}; {EXPORT_AGAIN}")


@dataclass(frozen=True, slots=True)
class _Words:
    """The statements that are no instances, one by one."""

    plain: bytes
    starts: Offsets
    stops: Offsets

    def __iter__(self) -> Iterator[tuple[bytes, int, int]]:
        for start, stop in zip(self.starts.tolist(), self.stops.tolist(), strict=True):
            yield self.plain[start : stop - 1].rstrip(), start, stop


def _read_sections(words: _Words) -> tuple[tuple[str, ...], tuple[Section, ...]]:
    """Follow the order of sections that a STEP file must have."""
    statements = iter(words)
    word, _, _ = next(statements, (b"", 0, 0))
    if word != START_WORD:
        raise StepError(NOT_STEP)
    schemas: tuple[str, ...] = ()
    sections: list[Section] = []
    ended = False
    for word, start, stop in statements:
        if word == END_WORD and not ended:
            ended = True
            continue
        if ended and not word.startswith(b"SIGNATURE"):
            raise StepError(f"goes on after its end with '{shown(word)}'; {EXPORT_AGAIN}")
        name = _section_name(word)
        if name == "SIGNATURE" and word.endswith(b"ENDSEC"):
            sections.append(Section(name, start, start, stop, stop))
            continue
        section, found = _read_section(name, start, stop, statements)
        schemas = schemas or found
        sections.append(section)
    _require_whole(sections, ended)
    return schemas, tuple(sections)


def _section_name(word: bytes) -> str:
    """Name the section that a statement opens; refuse what a model must not hold."""
    found = re.match(rb"(HEADER|DATA|SIGNATURE)(?![A-Z0-9_])", word)
    if found:
        return found[1].decode()
    for name in ("ANCHOR", "REFERENCE"):
        if word == name.encode():
            raise StepError(
                f"has the section {name}, which links it to other files and hides its instances "
                "from readers; export it without external references"
            )
    raise StepError(f"has '{shown(word)}' where a section should begin; {EXPORT_AGAIN}")


def _read_section(
    name: str, start: int, body: int, statements: Iterator[tuple[bytes, int, int]]
) -> tuple[Section, tuple[str, ...]]:
    """Read on to the section's end; of a header, return the schema names too."""
    schemas: tuple[str, ...] = ()
    for word, at, stop in statements:
        if word == b"ENDSEC" or (name == "SIGNATURE" and word.endswith(b"ENDSEC")):
            return Section(name, start, body, at, stop), schemas
        if name == "DATA":
            raise StepError(f"has '{shown(word)}' among its instances; {EXPORT_AGAIN}")
        if name == "HEADER" and word.startswith(b"FILE_SCHEMA"):
            schemas = tuple(shown(text) for text in _STEP_TEXT.findall(word))
    raise StepError(f"is cut short in its section {name}; {EXPORT_AGAIN}")


def _require_whole(sections: Sequence[Section], ended: bool) -> None:
    names = [section.name for section in sections]
    if not ended:
        raise StepError(f"is cut short: END-ISO-10303-21 is missing; {EXPORT_AGAIN}")
    if names[:1] != ["HEADER"] or names.count("HEADER") != 1:
        raise StepError(f"must have one header, at its beginning; {EXPORT_AGAIN}")
    if "DATA" not in names:
        raise StepError(f"holds no model: it has no DATA section; {EXPORT_AGAIN}")


def _require_inside(starts: Offsets, sections: Sequence[Section], plain: bytes) -> None:
    """Require that every instance stands in a DATA section."""
    inside = np.zeros(len(starts), np.bool_)
    for section in sections:
        if section.name == "DATA":
            first, last = np.searchsorted(starts, (section.body, section.last))
            inside[first:last] = True
    for outside in np.flatnonzero(~inside)[:1]:
        instance = shown(plain[starts[outside] :][:40])
        raise StepError(f"has the instance '{instance}' outside its DATA sections; {EXPORT_AGAIN}")


def _insertion(data: bytes, sections: Sequence[Section]) -> tuple[int, bool]:
    last = max(section.last for section in sections if section.name == "DATA")
    indent = last
    while data[indent - 1] in b" \t":
        indent -= 1
    on_own_line = data[indent - 1] in b"\r\n"
    return (indent if on_own_line else last), on_own_line


def _newline(data: bytes, after: int) -> bytes:
    """Return the line break that stands before ``after``, or else the file's first."""
    if after:
        before = data[after - 2 : after]
        return before if before == b"\r\n" else before[-1:]
    found = _LINE_BREAK.search(data)
    return found[0] if found else b"\n"

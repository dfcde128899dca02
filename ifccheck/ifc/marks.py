"""The two comment lines between which results stand in a model, and how they come and go."""

from __future__ import annotations

import hashlib
import re
from collections.abc import Sequence
from dataclasses import dataclass

from ifccheck.ifc.lexer import Comment, Scan

_BEGIN = "/* Results of ifccheck begin{how}. Source sha256 {sha256}. */"
_END = "/* Results of ifccheck end. */"
_BREAK_ADDED = ", with the line break before this line"
_BEGIN_PATTERN = re.compile(
    rb"/\* Results of ifccheck begin(?P<how>[^.]*)\. Source sha256 (?P<sha256>[0-9a-f]{64})\. \*/"
)


@dataclass(frozen=True, slots=True)
class _Block:
    """Where the added lines stand, and the hash of the file without them."""

    start: int
    stop: int
    sha256: str


def with_block(
    source: bytes, scan: Scan, sha256: str, lines: Sequence[str]
) -> tuple[bytes | memoryview, ...]:
    """Add lines, between their marks, at the end of the last DATA section.

    What comes of it is given in parts, as a copy of a large source would cost as much as all else.
    """
    how = "" if scan.on_own_line else _BREAK_ADDED
    begin = _BEGIN.format(how=how, sha256=sha256)
    lead = b"" if scan.on_own_line else scan.newline
    block = scan.newline.decode().join((begin, *lines, _END, "")).encode("ascii")
    whole = memoryview(source)
    return whole[: scan.insertion], lead, block, whole[scan.insertion :]


def without_intact_block(data: bytes, scan: Scan) -> bytes | None:
    """Take the added lines away; None unless what remains is, by its hash, the source."""
    block = _find(data, scan)
    if block is None:
        return None
    rest = data[: block.start] + data[block.stop :]
    return rest if hashlib.sha256(rest).hexdigest() == block.sha256 else None


def mark_comments(data: bytes, scan: Scan) -> list[Comment]:
    """Return the comments that are marks of ours."""
    return [
        comment
        for comment in scan.comments
        if data.startswith(b"/* Results of ifccheck ", comment.start)
    ]


def _find(data: bytes, scan: Scan) -> _Block | None:
    marks = mark_comments(data, scan)
    if len(marks) < 2:
        return None
    first, last = marks[-2:]
    begin = _BEGIN_PATTERN.fullmatch(data, first.start, first.stop)
    if begin is None or data[last.start : last.stop] != _END.encode():
        return None
    break_added = begin["how"].decode() == _BREAK_ADDED
    start = first.start - (_break_before(data, first.start) if break_added else 0)
    stop = last.stop + break_after(data, last.stop)
    return _Block(start, stop, begin["sha256"].decode())


def _break_before(data: bytes, offset: int) -> int:
    before = data[max(offset - 2, 0) : offset]
    return 2 if before == b"\r\n" else int(before[-1:] in (b"\r", b"\n"))


def break_after(data: bytes, offset: int) -> int:
    """Return the length of the line break at a place, 0 where there is none."""
    after = data[offset : offset + 2]
    return 2 if after == b"\r\n" else int(after[:1] in (b"\r", b"\n"))

"""Files of the engineer's: bytes and UTF-8 text, or one line that says why not."""

from __future__ import annotations

from pathlib import Path

from ifccheck.errors import BriefError

GREATEST_SIZE = 16 * 1024 * 1024
"""Bytes of a brief or a table that are read."""


def read_bytes(path: Path, where: str) -> bytes:
    """Return the bytes of a file of the engineer's; raise BriefError where it cannot be read."""
    try:
        if path.stat().st_size > GREATEST_SIZE:
            raise BriefError(
                f"{where}: larger than {GREATEST_SIZE // 1024**2} MiB, is it the right file?"
            )
        return path.read_bytes()
    except FileNotFoundError:
        raise BriefError(f"{where}: there is no file {path}; check the path") from None
    except IsADirectoryError:
        raise BriefError(f"{where}: {path} is a folder; give the file in it") from None
    except OSError as error:
        raise BriefError(
            f"{where}: cannot be read ({error.strerror}); check its permissions"
        ) from None


def decoded(content: bytes, file_name: str) -> str:
    """Return UTF-8 text, a byte-order mark left out; say where it is not UTF-8."""
    try:
        return content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        before = content[: error.start]
        line = before.count(b"\n") + 1
        column = error.start - (before.rfind(b"\n") + 1) + 1
        raise BriefError(
            f"{file_name}: not UTF-8 at line {line}, column {column}: save it as UTF-8 text"
        ) from None


def read_text(path: Path) -> str:
    """Return the text of a UTF-8 file."""
    return decoded(read_bytes(path, path.name), path.name)

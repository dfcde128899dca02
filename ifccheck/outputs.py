"""Puts output files in place: whole, and all of them or none."""

from __future__ import annotations

import os
import secrets
import shutil
from collections.abc import Iterable, Mapping
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

from ifccheck.errors import OutputError, UsageError

Content = bytes | Iterable[bytes | memoryview]
"""What goes into a file: whole, or in parts that may be made while they are written"""

_BUFFER = 2**20
"""Bytes of small parts that are written in one go"""


@dataclass(slots=True)
class _Output:
    """A file on its way: what was written beside it, and what stood in its place before."""

    target: Path
    staged: Path
    earlier: Path
    had_earlier: bool = False
    in_place: bool = False


def write_all(files: Mapping[Path, Content], elsewhere: str = "another folder with --out") -> None:
    """Write files whole; where one cannot be written, leave everything as it was."""
    outputs = [_output(target) for target in files]
    made_folders: list[Path] = []
    current = next(iter(files), Path())
    try:
        for output, content in zip(outputs, files.values(), strict=True):
            current = output.target
            made_folders += _make_folder(output.target.parent)
            _stage(output, content)
        for output in outputs:
            current = output.target
            _keep_earlier(output)
        for output in outputs:
            current = output.target
            os.replace(output.staged, output.target)
            output.in_place = True
        _settle({output.target.parent for output in outputs})
    except BaseException as error:
        _put_back(outputs, made_folders)
        if isinstance(error, OSError):
            raise OutputError(
                f"{current}: cannot be written ({error.strerror or error}); nothing was changed: "
                f"free the place or give {elsewhere}"
            ) from error
        raise
    finally:
        _clear(outputs)


def write_new(target: Path, data: bytes) -> None:
    """Write a file whole where none stands yet; refuse where one does."""
    refuse_existing(target)
    write_all({target: data}, "another file")


def refuse_existing(target: Path) -> None:
    """Raise UsageError where something stands in a file's place already."""
    if os.path.lexists(target):
        raise UsageError(f"{target}: exists already and is left as it is: name another file")


def _output(target: Path) -> _Output:
    mark = secrets.token_hex(6)
    return _Output(
        target,
        staged=target.with_name(f".ifccheck-{mark}.new"),
        earlier=target.with_name(f".ifccheck-{mark}.old"),
    )


def _make_folder(folder: Path) -> list[Path]:
    """Make a folder and those above it; return those that were made, the deepest first."""
    missing = [place for place in (folder, *folder.parents) if not place.exists()]
    folder.mkdir(parents=True, exist_ok=True)
    return missing


def _stage(output: _Output, content: Content) -> None:
    if output.target.is_dir():
        raise IsADirectoryError(f"{output.target} is a folder")
    with output.staged.open("xb", buffering=_BUFFER) as stream:
        stream.writelines([content] if isinstance(content, bytes) else content)
        stream.flush()
        os.fsync(stream.fileno())


def _keep_earlier(output: _Output) -> None:
    """Keep what stands in the file's place, without moving it from there."""
    if not os.path.lexists(output.target):
        return
    try:
        os.link(output.target, output.earlier, follow_symlinks=False)
    except OSError:  # a file system without links
        shutil.copy2(output.target, output.earlier, follow_symlinks=False)
    output.had_earlier = True


def _settle(folders: set[Path]) -> None:
    """Make sure that the names, too, are on the disk, where the system can."""
    if not hasattr(os, "O_DIRECTORY"):
        return
    for folder in folders:
        descriptor = os.open(folder, os.O_RDONLY | os.O_DIRECTORY)
        try:
            os.fsync(descriptor)
        finally:
            os.close(descriptor)


def _put_back(outputs: list[_Output], made_folders: list[Path]) -> None:
    for output in outputs:
        if output.in_place and output.had_earlier:
            os.replace(output.earlier, output.target)
        elif output.in_place:
            output.target.unlink(missing_ok=True)
    _clear(outputs)
    for folder in sorted(set(made_folders), key=lambda place: len(place.parts), reverse=True):
        with suppress(OSError):  # another program may have put something there meanwhile
            folder.rmdir()


def _clear(outputs: list[_Output]) -> None:
    for output in outputs:
        for place in (output.staged, output.earlier):
            with suppress(OSError):
                place.unlink(missing_ok=True)

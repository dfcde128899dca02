"""Output files appear whole, all of them or none, and nothing else is left behind."""

from __future__ import annotations

import errno
import os
import stat
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from ifccheck import outputs
from ifccheck.errors import OutputError
from ifccheck.outputs import write_all


def contents(folder: Path) -> dict[str, bytes]:
    return {path.name: path.read_bytes() for path in sorted(folder.iterdir())}


def failing(real: Callable[..., Any], at: int, error: BaseException) -> Callable[..., Any]:
    """Make a function fail at its n-th call, once, and work at the others."""
    calls = 0

    def call(*arguments: Any, **keywords: Any) -> Any:
        nonlocal calls
        calls += 1
        if calls == at:
            raise error
        return real(*arguments, **keywords)

    return call


DISK_FULL = OSError(errno.ENOSPC, "No space left on device")


def test_writes_every_file(tmp_path: Path) -> None:
    files = {tmp_path / "a.ifc": b"a" * 10**6, tmp_path / "b.json": b"", tmp_path / "c": b"c"}
    write_all(files)
    assert contents(tmp_path) == {path.name: data for path, data in files.items()}
    write_all({})


def test_replaces_earlier_files(tmp_path: Path) -> None:
    (tmp_path / "a").write_bytes(b"earlier")
    (tmp_path / "kept").write_bytes(b"kept")
    write_all({tmp_path / "a": b"new", tmp_path / "b": b"b"})
    assert contents(tmp_path) == {"a": b"new", "b": b"b", "kept": b"kept"}


def test_makes_the_folder(tmp_path: Path) -> None:
    write_all({tmp_path / "x" / "y" / "a": b"a"})
    assert (tmp_path / "x" / "y" / "a").read_bytes() == b"a"


def test_mode_follows_the_umask(tmp_path: Path) -> None:
    before = os.umask(0o027)
    try:
        write_all({tmp_path / "a": b"a"})
    finally:
        os.umask(before)
    assert stat.S_IMODE((tmp_path / "a").stat().st_mode) == 0o640


@pytest.mark.parametrize("earlier", [True, False])
@pytest.mark.parametrize(
    ("function", "at"), [("fsync", 1), ("fsync", 2), ("fsync", 3), ("replace", 1), ("replace", 2)]
)
def test_failure_leaves_everything_as_it_was(
    function: str, at: int, earlier: bool, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The disk fills up, or the system refuses, at every step in turn."""
    before = {"a": b"earlier a", "b": b"earlier b"} if earlier else {}
    for name, data in before.items():
        (tmp_path / name).write_bytes(data)
    monkeypatch.setattr(outputs.os, function, failing(getattr(os, function), at, DISK_FULL))
    with pytest.raises(OutputError) as caught:
        write_all({tmp_path / "a": b"new a", tmp_path / "b": b"new b"})
    monkeypatch.undo()
    assert contents(tmp_path) == before
    message = str(caught.value)
    assert message.startswith(str(tmp_path))
    assert "No space left on device" in message
    assert "nothing was changed" in message
    assert "\n" not in message
    assert caught.value.exit_status == 1


def test_failure_while_writing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """The disk fills up in the middle of the second file."""

    def full(path: Path, *arguments: Any, **options: Any) -> Any:
        stream = real_open(path, *arguments, **options)
        if path.suffix == ".new" and len(list(tmp_path.glob(".*.new"))) == 2:
            stream.close()
            raise DISK_FULL
        return stream

    real_open = Path.open
    (tmp_path / "a").write_bytes(b"earlier")
    monkeypatch.setattr(Path, "open", full)
    with pytest.raises(OutputError, match=r"b: cannot be written \(No space left"):
        write_all({tmp_path / "a": b"new a", tmp_path / "b": b"new b"})
    monkeypatch.undo()
    assert contents(tmp_path) == {"a": b"earlier"}


def test_interruption_leaves_everything_as_it_was(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (tmp_path / "a").write_bytes(b"earlier")
    monkeypatch.setattr(outputs.os, "replace", failing(os.replace, 2, KeyboardInterrupt()))
    with pytest.raises(KeyboardInterrupt):
        write_all({tmp_path / "a": b"new", tmp_path / "b": b"new"})
    monkeypatch.undo()
    assert contents(tmp_path) == {"a": b"earlier"}


def test_contents_may_come_in_parts(tmp_path: Path) -> None:
    write_all({tmp_path / "a": (part for part in (b"one ", memoryview(b"two"), b" three"))})
    assert contents(tmp_path) == {"a": b"one two three"}


def test_a_part_that_cannot_be_made_leaves_everything_as_it_was(tmp_path: Path) -> None:
    def parts() -> Iterator[bytes]:
        yield b"new"
        raise ValueError("not a figure")

    (tmp_path / "a").write_bytes(b"earlier")
    with pytest.raises(ValueError, match="not a figure"):
        write_all({tmp_path / "a": b"newer", tmp_path / "x" / "b": parts()})
    assert contents(tmp_path) == {"a": b"earlier"}


def test_folders_that_were_made_go_again(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(outputs.os, "fsync", failing(os.fsync, 2, DISK_FULL))
    with pytest.raises(OutputError):
        write_all({tmp_path / "x" / "y" / "a": b"a", tmp_path / "x" / "b": b"b"})
    assert contents(tmp_path) == {}


def test_file_system_without_links(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def none(*_: Any, **__: Any) -> None:
        raise OSError(errno.EPERM, "Operation not permitted")

    (tmp_path / "a").write_bytes(b"earlier")
    monkeypatch.setattr(outputs.os, "link", none)
    write_all({tmp_path / "a": b"new"})
    assert contents(tmp_path) == {"a": b"new"}
    monkeypatch.setattr(outputs.os, "replace", failing(os.replace, 2, DISK_FULL))
    with pytest.raises(OutputError):
        write_all({tmp_path / "a": b"newer", tmp_path / "b": b"b"})
    assert contents(tmp_path) == {"a": b"new"}


def test_folder_in_the_place_of_a_file(tmp_path: Path) -> None:
    (tmp_path / "b").mkdir()
    with pytest.raises(OutputError, match="b: cannot be written"):
        write_all({tmp_path / "a": b"a", tmp_path / "b": b"b"})
    assert [path.name for path in tmp_path.iterdir()] == ["b"]


def test_file_in_the_place_of_the_folder(tmp_path: Path) -> None:
    (tmp_path / "out").write_bytes(b"a file")
    with pytest.raises(OutputError, match="cannot be written"):
        write_all({tmp_path / "out" / "a": b"a"})
    assert contents(tmp_path) == {"out": b"a file"}


@pytest.mark.skipif(os.name != "posix", reason="folders have no permissions here")
def test_unwritable_folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Refused by the system where it can be, and by a stand-in where the tester may do all."""
    folder = tmp_path / "locked"
    folder.mkdir(mode=0o500)
    if os.access(folder, os.W_OK):
        denied = PermissionError(errno.EACCES, "Permission denied")
        monkeypatch.setattr(Path, "open", failing(Path.open, 1, denied))
    with pytest.raises(OutputError, match=r"a: cannot be written \(Permission denied\)"):
        write_all({folder / "a": b"a"})
    assert contents(folder) == {}


def test_link_is_replaced_and_not_followed(tmp_path: Path) -> None:
    """A link that leads to the source must not lead the result into it."""
    source, link = tmp_path / "source", tmp_path / "a"
    source.write_bytes(b"source")
    link.symlink_to(source)
    write_all({link: b"new"})
    assert source.read_bytes() == b"source"
    assert link.read_bytes() == b"new"
    assert not link.is_symlink()

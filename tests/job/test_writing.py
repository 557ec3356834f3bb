"""A set of files is written whole or not at all."""

from __future__ import annotations

import errno
import os
from collections.abc import Callable
from pathlib import Path

import pytest

from develop.errors import WriteError
from develop.job.writing import write_all

FILES = {"A1.svg": b"new svg", "A1.pdf": b"new pdf", "A1.json": b"new json"}


def contents(folder: Path) -> dict[str, bytes]:
    return {each.name: each.read_bytes() for each in folder.iterdir() if each.is_file()}


def test_files_are_written_and_older_ones_replaced(tmp_path: Path) -> None:
    folder = tmp_path / "made" / "deep"
    write_all(str(folder), {"A1.svg": b"old", "A2.svg": b"other"})
    write_all(str(folder), FILES)
    assert contents(folder) == FILES | {"A2.svg": b"other"}


def test_an_open_older_file_keeps_its_bytes(tmp_path: Path) -> None:
    (tmp_path / "A1.svg").write_bytes(b"old")
    with (tmp_path / "A1.svg").open("rb") as reader:
        write_all(str(tmp_path), FILES)
        assert reader.read() == b"old"


def test_a_link_is_replaced_and_what_it_pointed_at_is_not(tmp_path: Path) -> None:
    (tmp_path / "elsewhere").write_bytes(b"old")
    (tmp_path / "A1.svg").symlink_to(tmp_path / "elsewhere")
    write_all(str(tmp_path), FILES)
    assert contents(tmp_path) == FILES | {"elsewhere": b"old"}
    assert not (tmp_path / "A1.svg").is_symlink()


def test_a_file_in_place_of_the_folder(tmp_path: Path) -> None:
    (tmp_path / "out").write_bytes(b"in the way")
    for folder in (tmp_path / "out", tmp_path / "out" / "deeper"):
        with pytest.raises(
            WriteError, match=r"out.*: cannot be written: .*; a file .*: give another folder, or move"
        ):
            write_all(str(folder), FILES)
    assert contents(tmp_path) == {"out": b"in the way"}


def test_a_folder_where_nothing_can_be_made() -> None:
    with pytest.raises(WriteError, match=r"^/proc/develop: cannot be written: .*; give "):
        write_all("/proc/develop", FILES)
    with pytest.raises(WriteError, match=r"^/proc/A1.svg: cannot be written: "):
        write_all("/proc", FILES)


def test_a_folder_of_a_files_name_leaves_all_as_it_was(tmp_path: Path) -> None:
    (tmp_path / "A1.svg").write_bytes(b"old")
    (tmp_path / "A1.json").mkdir()
    with pytest.raises(WriteError, match=r"A1.json: cannot be written: a folder of that name is in the way"):
        write_all(str(tmp_path), FILES)
    assert contents(tmp_path) == {"A1.svg": b"old"}


def failing(call: Callable[..., None], at: int, error: BaseException) -> Callable[..., None]:
    """The call, failing when it is made for the n-th time."""
    count = 0

    def called(*args: object, **kwargs: object) -> None:
        nonlocal count
        count += 1
        if count == at:
            raise error
        call(*args, **kwargs)

    return called


@pytest.mark.parametrize("at", [1, 2, 3])
@pytest.mark.parametrize("old", [{}, {"A1.pdf": b"old pdf"}, dict.fromkeys(FILES, b"old")])
@pytest.mark.parametrize("error", [OSError(errno.EIO, "Input/output error"), KeyboardInterrupt()])
def test_when_a_file_cannot_be_put_in_place_all_are_as_they_were(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, at: int, old: dict[str, bytes], error: BaseException
) -> None:
    for name, data in old.items():
        (tmp_path / name).write_bytes(data)
    expected = WriteError if isinstance(error, OSError) else KeyboardInterrupt
    monkeypatch.setattr(os, "replace", failing(os.replace, at, error))
    with pytest.raises(expected):
        write_all(str(tmp_path), FILES)
    assert contents(tmp_path) == old


@pytest.mark.parametrize("links", [True, False])
def test_when_the_disk_is_full_all_are_as_they_were(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, links: bool
) -> None:
    def no_link(*_: object, **__: object) -> None:
        raise OSError(errno.EPERM, "Operation not permitted")

    (tmp_path / "A1.json").write_bytes(b"old")
    if not links:
        monkeypatch.setattr(os, "link", no_link)
    # A file of this many bytes cannot be: the limit of the process stands for the disk's.
    import resource
    import signal

    limits = resource.getrlimit(resource.RLIMIT_FSIZE)
    before = signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
    resource.setrlimit(resource.RLIMIT_FSIZE, (1000, limits[1]))
    try:
        with pytest.raises(WriteError, match=r"A1\.pdf: cannot be written: File too large"):
            write_all(str(tmp_path), {"A1.svg": b"small", "A1.pdf": b"x" * 2000, "A1.json": b"small"})
    finally:
        resource.setrlimit(resource.RLIMIT_FSIZE, limits)
        signal.signal(signal.SIGXFSZ, before)
    assert contents(tmp_path) == {"A1.json": b"old"}


def test_where_files_cannot_have_two_names_older_ones_are_copied(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def no_link(*_: object, **__: object) -> None:
        raise OSError(errno.EPERM, "Operation not permitted")

    (tmp_path / "A1.pdf").write_bytes(b"old")
    monkeypatch.setattr(os, "link", no_link)
    monkeypatch.setattr(os, "replace", failing(os.replace, 3, OSError(errno.EIO, "Input/output error")))
    with pytest.raises(WriteError):
        write_all(str(tmp_path), FILES)
    assert contents(tmp_path) == {"A1.pdf": b"old"}
    monkeypatch.undo()
    monkeypatch.setattr(os, "link", no_link)
    write_all(str(tmp_path), FILES)
    assert contents(tmp_path) == FILES

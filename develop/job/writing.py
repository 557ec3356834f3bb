"""A set of files written together: all of them, or none changed."""

from __future__ import annotations

import os
from collections.abc import Mapping
from contextlib import suppress
from os.path import isdir, join, lexists

from develop.errors import WriteError

__all__ = ["file_key", "write_all"]

_ELSEWHERE = "give another folder"
_REMEDIES: dict[type[Exception], str] = {
    FileExistsError: "a file is in its place: give another folder, or move the file away",
    NotADirectoryError: "a file is where a folder should be: give another folder, or move the file away",
    IsADirectoryError: "move that folder away, or give another folder or mark",
    PermissionError: "give a folder that you may write in",
}


def file_key(name: str) -> str:
    """One key for the names that some file systems do not tell apart: by capitals, or letters and accents."""
    from unicodedata import normalize

    return normalize("NFC", name).casefold()


def write_all(folder: str, files: Mapping[str, bytes]) -> None:
    """Write files by name into a folder, which is made if it is not there.

    Each is written beside its place and then put into it whole. Raises WriteError; then, and when
    the program is stopped on the way, every file is as it was.
    """
    try:
        os.makedirs(folder, exist_ok=True)
    except (OSError, ValueError) as error:
        raise _failed(folder, error) from None
    new = {name: join(folder, f".{name}.{os.getpid()}.new") for name in files}
    old = {name: join(folder, f".{name}.{os.getpid()}.old") for name in files}
    kept: dict[str, str] = {}
    placed: list[str] = []
    name = ""
    try:
        for name, data in files.items():
            if isdir(join(folder, name)):
                raise IsADirectoryError(21, "a folder of that name is in the way")
            with open(new[name], "xb") as file:
                file.write(data)
        for name in files:
            if lexists(join(folder, name)):
                _copy(join(folder, name), old[name])
                kept[name] = old[name]
        for name in files:
            placed.append(name)
            os.replace(new[name], join(folder, name))
    except BaseException as error:
        for each in placed:
            with suppress(OSError):
                if each in kept:
                    os.replace(kept[each], join(folder, each))
                elif not lexists(new[each]):
                    os.unlink(join(folder, each))
        if isinstance(error, OSError | UnicodeError):
            raise _failed(join(folder, name), error) from None
        raise
    finally:
        for each in (*new.values(), *old.values()):
            with suppress(OSError, UnicodeError):
                os.unlink(each)


def _copy(source: str, target: str) -> None:
    """A second name for a file where the file system has that, else a copy."""
    try:
        os.link(source, target, follow_symlinks=False)
    except OSError:
        from shutil import copyfile

        copyfile(source, target)


def _failed(place: str, error: Exception) -> WriteError:
    reason = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
    remedy = next((words for kind, words in _REMEDIES.items() if isinstance(error, kind)), _ELSEWHERE)
    return WriteError(f"{place}: cannot be written: {reason}; {remedy}")

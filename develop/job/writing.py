"""A set of files written together: all of them, or none changed."""

from __future__ import annotations

import os
from collections.abc import Mapping
from contextlib import suppress
from os.path import dirname, isdir, join, lexists

from develop.errors import WriteError

__all__ = ["Writing", "file_key", "write_all"]

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


class Writing:
    """Files written beside their places in a folder, and put into them all together or not at all.

    As a context: what was not placed when it ends is taken away again, with the folders that were made
    for it. Every method raises WriteError.
    """

    def __init__(self, folder: str) -> None:
        self.folder = folder
        self._new: dict[str, str] = {}
        self._made: list[str] = []

    def __enter__(self) -> Writing:
        return self

    def __exit__(self, *_: object) -> None:
        for each in self._new.values():
            with suppress(OSError, UnicodeError):
                os.unlink(each)
        for each in self._made:
            with suppress(OSError):
                os.rmdir(each)

    def add(self, files: Mapping[str, bytes]) -> None:
        """Write files by name, each beside its place; the folder is made if it is not there."""
        try:
            if not isdir(self.folder):
                self._made += _missing(self.folder)
            os.makedirs(self.folder, exist_ok=True)
        except (OSError, ValueError) as error:
            raise _failed(self.folder, error) from None
        name = ""
        try:
            for name, data in files.items():
                if isdir(join(self.folder, name)):
                    raise IsADirectoryError(21, "a folder of that name is in the way")
                new = join(self.folder, f".{name}.{os.getpid()}.new")
                with open(new, "xb") as file:
                    self._new[name] = new
                    file.write(data)
        except (OSError, UnicodeError) as error:
            raise _failed(join(self.folder, name), error) from None

    def place(self) -> None:
        """Put all into their places. Where that fails, or is stopped, every file is as it was."""
        places = {name: join(self.folder, name) for name in self._new}
        old = {name: join(self.folder, f".{name}.{os.getpid()}.old") for name in self._new}
        kept: dict[str, str] = {}
        placed: list[str] = []
        name = ""
        try:
            for name, at in places.items():
                if lexists(at):
                    _copy(at, old[name])
                    kept[name] = old[name]
            for name, at in places.items():
                placed.append(name)
                os.replace(self._new[name], at)
        except BaseException as error:
            for each in placed:
                with suppress(OSError):
                    if each in kept:
                        os.replace(kept[each], places[each])
                    elif not lexists(self._new[each]):
                        os.unlink(places[each])
            if isinstance(error, OSError | UnicodeError):
                raise _failed(places.get(name, self.folder), error) from None
            raise
        finally:
            for each in old.values():
                with suppress(OSError, UnicodeError):
                    os.unlink(each)
        self._new, self._made = {}, []


def write_all(folder: str, files: Mapping[str, bytes]) -> None:
    """Write files by name into a folder, which is made if it is not there.

    Raises WriteError; then, and when the program is stopped on the way, every file is as it was.
    """
    with Writing(folder) as writing:
        writing.add(files)
        writing.place()


def _missing(folder: str) -> list[str]:
    """The folder and those above it that are not there, the deepest first."""
    found = []
    while folder and not lexists(folder):
        found.append(folder)
        folder = dirname(folder)
    return found


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

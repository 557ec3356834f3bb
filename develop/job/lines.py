"""On which line of a TOML text each key stands.

The reader of the standard library gives values without their places. This scan walks a text that
the reader has already found good, so it only needs to know where keys begin and values end.
"""

from __future__ import annotations

from bisect import bisect_left

__all__ = ["Path", "lines_of"]

# Keys and indices from the top, such as ("piece", 0, "length").
Path = tuple[str | int, ...]


def lines_of(text: str) -> dict[Path, int]:
    """Line of every key, table and item of an array, counted from 1. text: good TOML, lines ending in \\n.

    >>> lines_of("[[piece]]\\nlength = 3\\n")[("piece", 0, "length")]
    2
    """
    scan = _Scan(text)
    scan.document()
    return scan.lines


class _Scan:
    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.ends = [at for at, each in enumerate(text) if each == "\n"]
        self.lines: dict[Path, int] = {}
        self.counts: dict[Path, int] = {}

    def document(self) -> None:
        table: Path = ()
        while self._skip_to_next():
            start = self.at
            if self.text.startswith("[[", self.at):
                self.at += 2
                *parents, last = self._keys()
                path = (*self._reach(tuple(parents)), last)
                index = self.counts.get(path, 0)
                self.counts[path] = index + 1
                table = (*path, index)
                self.at = self.text.index("]]", self.at) + 2
            elif self.text[self.at] == "[":
                self.at += 1
                table = self._reach(self._keys())
                self.at = self.text.index("]", self.at) + 1
            else:
                self._pair(table)
                continue
            self._note(table, self._line(start))

    def _note(self, path: Path, line: int) -> None:
        """The line of a path, and of what holds it where that has none of its own."""
        for size in range(1, len(path) + 1):
            self.lines.setdefault(path[:size], line)

    def _line(self, at: int) -> int:
        return bisect_left(self.ends, at) + 1

    def _reach(self, keys: tuple[str, ...]) -> Path:
        """The path that a table's name means: in an array of tables, its last table."""
        path: Path = ()
        for key in keys:
            path = (*path, key)
            if path in self.counts:
                path = (*path, self.counts[path] - 1)
        return path

    def _skip_to_next(self) -> bool:
        """Over blanks, line ends and comments; False at the end of the text."""
        while self.at < len(self.text):
            if self.text[self.at] == "#":
                end = self.text.find("\n", self.at)
                self.at = len(self.text) if end < 0 else end
            elif self.text[self.at] in " \t\n":
                self.at += 1
            else:
                return True
        return False

    def _keys(self) -> tuple[str, ...]:
        """A key, dotted or not, up to the sign after it."""
        keys = []
        while True:
            self._skip_to_next()
            start = self.at
            if self.text[self.at] in "\"'":
                self._string()
                keys.append(_unquoted(self.text[start : self.at]))
            else:
                while self.text[self.at] not in " \t.=]":
                    self.at += 1
                keys.append(self.text[start : self.at])
            self._skip_to_next()
            if self.text[self.at] != ".":
                return tuple(keys)
            self.at += 1

    def _pair(self, table: Path) -> None:
        """key = value."""
        line = self._line(self.at)
        path = (*table, *self._keys())
        self._note(path, line)
        self.at += 1  # the equals sign
        self._value(path)

    def _value(self, path: Path) -> None:
        self._skip_to_next()
        first = self.text[self.at]
        if first in "\"'":
            self._string()
        elif first == "[":
            self._items("]", path)
        elif first == "{":
            self._items("}", path)
        else:
            while self.at < len(self.text) and self.text[self.at] not in ",]}\n#":
                self.at += 1

    def _items(self, close: str, path: Path) -> None:
        """An array or an inline table."""
        self.at += 1
        index = 0
        while self._skip_to_next() and self.text[self.at] != close:
            if self.text[self.at] == ",":
                self.at += 1
            elif close == "}":
                self._pair(path)
            else:
                item = (*path, index)
                self.lines[item] = self._line(self.at)
                self._value(item)
                index += 1
        self.at += 1

    def _string(self) -> None:
        quote = self.text[self.at]
        long = self.text.startswith(quote * 3, self.at)
        mark = quote * 3 if long else quote
        self.at += len(mark)
        while not self.text.startswith(mark, self.at):
            self.at += 2 if quote == '"' and self.text[self.at] == "\\" else 1
        self.at += len(mark)
        # A long string may end in one or two quotes of its own before the closing three.
        while long and self.text.startswith(quote, self.at):
            self.at += 1


def _unquoted(key: str) -> str:
    import tomllib

    (name,) = tomllib.loads(f"{key} = 0")
    return name

"""How a message repeats what was given and names what is allowed."""

from __future__ import annotations

from collections.abc import Iterable

__all__ = ["listed", "near_miss", "nearest", "shown"]

_LONGEST = 60


def shown(given: object) -> str:
    """What was given, short enough for one line: text in quotes, other values as a job file has them.

    >>> shown("abc"), shown(True), shown([0, 50]), shown("two\\nlines")
    ('"abc"', 'true', '[0, 50]', '"two\\\\nlines"')
    """
    if isinstance(given, str):
        cut = given if len(given) <= _LONGEST else given[: _LONGEST - 3] + "..."
        plain = (each if each.isprintable() else _escaped(each) for each in cut)
        return '"' + "".join(plain) + '"'
    if isinstance(given, bool):
        return "true" if given else "false"
    if isinstance(given, list):
        text = "[" + ", ".join(shown(each) for each in given[:8]) + "]"
    elif isinstance(given, dict):
        text = "{ " + ", ".join(f"{key} = {shown(each)}" for key, each in list(given.items())[:8]) + " }"
    elif isinstance(given, int) and abs(given) >= 10**_LONGEST:
        text = "a number of over 60 digits"
    else:
        text = str(given)
    return text if len(text) <= 2 * _LONGEST else text[: 2 * _LONGEST - 3] + "..."


def _escaped(character: str) -> str:
    return character.encode("unicode_escape", "surrogatepass").decode("ascii")


def listed(words: Iterable[str]) -> str:
    """Words as a list to read: `a, b or c`."""
    *first, last = tuple(words)
    return f"{', '.join(first)} or {last}" if first else last


def nearest(word: str, words: Iterable[str]) -> str:
    """The allowed word nearest to a wrong one; empty when none is near."""
    from difflib import get_close_matches

    # The dashes of options are alike and say nothing.
    known = {each.lower().lstrip("-"): each for each in words}
    found = get_close_matches(word.lower().lstrip("-")[:_LONGEST], known, n=1, cutoff=0.6)
    return known[found[0]] if found else ""


def near_miss(word: str, words: Iterable[str]) -> str:
    """`; did you mean "length"?` to go behind a message, or nothing."""
    found = nearest(word, words) if word else ""
    return f'; did you mean "{found}"?' if found else ""

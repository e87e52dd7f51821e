"""Words of messages: how a user's text is quoted, and the nearest name that may have been meant."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import get_close_matches

_LONGEST_QUOTE = 48

_SUPERSCRIPTS = str.maketrans("0123456789", "⁰¹²³⁴⁵⁶⁷⁸⁹")


def quoted(text: str) -> str:
    """Give the text in quotes, on one line and short enough for a message."""
    shown = text if len(text) <= _LONGEST_QUOTE else text[: _LONGEST_QUOTE - 1] + "…"
    safe = "".join(letter if letter.isprintable() else "�" for letter in shown)
    return f'"{safe}"'


def nearest(word: str, known: Iterable[str]) -> str | None:
    """Give the known name that is nearest in spelling, or None where none is near."""
    names = sorted(set(known) - {word})
    by_case = [name for name in names if name.casefold() == word.casefold()]
    if by_case:
        return by_case[0]
    close = get_close_matches(word[:80], names, n=1, cutoff=0.6)
    return close[0] if close else None


def did_you_mean(word: str, known: Iterable[str], otherwise: str) -> str:
    """Give the cure for a name that is not known: a near one, or else the other advice."""
    near = nearest(word, known)
    return f'did you mean "{near}"?' if near else otherwise


def rounded_count(count: int) -> str:
    """Write a count: whole up to a million, beyond as 2.4·10¹⁸."""
    if count < 1_000_000:
        return f"{count:,}"
    digits, _, power = f"{count:.1e}".partition("e+")
    return f"{digits}·10{str(int(power)).translate(_SUPERSCRIPTS)}"


def listed(names: Iterable[str], word: str = "and") -> str:
    """Give the names in one line of English: "a", "a and b", "a, b and c"."""
    all_names = list(names)
    if len(all_names) < 2:
        return "".join(all_names)
    return f"{', '.join(all_names[:-1])} {word} {all_names[-1]}"

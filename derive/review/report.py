"""A recheck in words, for a terminal."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator

from derive.review.issued import Aspect, Difference, Recheck
from derive.version import VERSION

MOST_SHOWN = 40
_ASPECTS: dict[Aspect, str] = {
    "source": "source",
    "ledger": "ledger",
    "equation": "equation",
    "words": "text",
    "drawing": "drawing",
    "markup": "markup",
    "file": "file",
    "derivation": "derivation",
}
_INDENT = "    "


def plain_recheck(found: Recheck, width: int = 100) -> str:
    """Give the verdict, then each difference with its place, what was issued and what comes out now."""
    lines = [_verdict(found), f"  made by nodeledger {found.issued.version}, rechecked by {VERSION}"]
    lines += [f"  source {source.file}, sha-256 {source.true_digest}" for source in found.issued.sources]
    if found.passed is not None:
        lines.append(f"  checks derived anew: {'all passed' if found.passed else '✗ failed'}")
    lines += [f"  note: {remark}" for remark in found.remarks]
    for difference in found.by_weight[:MOST_SHOWN]:
        lines += _difference(difference, width)
    left = len(found.differences) - MOST_SHOWN
    if left > 0:
        lines.append(f"  … and {left} more")
    return "\n".join(map(printable, lines)) + "\n"


def _verdict(found: Recheck) -> str:
    file, count = found.issued.file, len(found.differences)
    if found.standing == "same":
        return f"{file}: ✓ same: every equation and number on it comes out again"
    if found.standing == "newer":
        how = f"with {count} differences" if count != 1 else "with 1 difference"
        how = how if count else "with no difference"
        return f"{file}: ✓ same result from a newer version, {how}"
    return f"{file}: ✗ differs in {count} place{'s' if count != 1 else ''}"


def _difference(difference: Difference, width: int) -> Iterator[str]:
    yield f"  ✗ {_ASPECTS[difference.aspect]}: {difference.where}"
    for label, text in (("issued", difference.issued), ("now", difference.fresh)):
        if difference.issued or difference.fresh:
            shown = text or "nothing"
            room = max(30, width - len(_INDENT) - 8)
            first, *more = textwrap.wrap(shown, room) or [""]
            yield f"{_INDENT}{label:<6}  {first}"
            yield from (f"{_INDENT}        {line}" for line in more)


def printable(text: str) -> str:
    """Give a text that no terminal can be driven by: what an issued file holds may be anything."""
    return "".join(letter if letter.isprintable() else "\N{REPLACEMENT CHARACTER}" for letter in text)

"""Words for paper, whose lines end at none of the wrong places: a number keeps its unit."""

from __future__ import annotations

import re

from markupsafe import Markup, escape

_UNIT = r"(?:%|dB|[fpnµμumkMGT]?(?:Hz|Ω|V|A|F|H|S|W|s|K|rad/s))(?![\w·/])"
_NUMBER_WITH_UNIT = re.compile(rf"(?:[−+±-])?(?:\d[\d.,]*\d|\d) {_UNIT}")
_KEPT = Markup('<span class="kept">{}</span>')
# WeasyPrint 70 ends a line at its first word where the space before an image or a span is all that does not fit
# any more; a space in an element of its own is not part of the words that it cuts.
_SPACE = Markup("<span> </span>")


def on_paper(text: str, *, before_maths: bool) -> Markup:
    """Return words as markup, each number in one piece with its unit.

    Given: whether a formula follows the words on their line.
    """
    made, place = Markup(""), 0
    for found in _NUMBER_WITH_UNIT.finditer(text):
        made += _open_ended(text[place : found.start()]) + _KEPT.format(found[0])
        place = found.end()
    rest = text[place:]
    return made + (_open_ended(rest) if before_maths else escape(rest))


def _open_ended(words: str) -> Markup:
    if not words.endswith(" ") or not words.strip():
        return escape(words)
    return escape(words[:-1]) + _SPACE

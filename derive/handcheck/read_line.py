"""Reads one line of hand algebra: its remark, its sign, both sides, and where everything in it stands."""

from __future__ import annotations

import re
from collections.abc import Iterator

from derive.expressions.build import Placed
from derive.expressions.parse import parse_spelled
from derive.expressions.spell import spell
from derive.expressions.spelled import Refusal, Spelled
from derive.expressions.tree import Expression
from derive.handcheck.report import HandLine, Relation, Span, Unreadable, Way
from derive.reading.files import LONGEST_LINE

_SIGN = re.compile(r":=|~=|=~|==|[=~<>]")
_MEANS: dict[str, Relation] = {"=": "=", ":=": "=", "~": "~", "~=": "~", "=~": "~"}
_ANY_SIGN = re.compile(r"[=~≈≃≅∼≡]|:=|\\(?:approx|simeq|sim|equiv)(?![A-Za-z])")
# What engineers write before and behind a formula: "it follows that", dollars, a comma, the end of a row.
_BEFORE = re.compile(r"(?:[\s$&]|⇒|∴|=>|\\\[|\\(?:Rightarrow|implies|therefore)(?![A-Za-z]))+")
_BEHIND = re.compile(r"(?:[\s$,;]|\\\\|\\\])+$")
# A response may be called by its name and "(s)"; there is no other reading of it before the sign.
_OF_S = re.compile(r"\s*([A-Za-z][A-Za-z0-9_]*)\s*\(\s*s\s*\)\s*")
_CURE = "write LEFT = RIGHT, or LEFT ~ RIGHT for an approximation"


def read_line(
    number: int, where: str, written: str, remark: str = "", above: Expression | None = None
) -> tuple[HandLine, Expression | None]:
    """Give a claim with both sides, or with the reason why it cannot be read; and its left side by itself.

    Given: the text as it stands in the file, without its remark, and the left side of the line above, if it is known:
    a claim that begins with its sign takes it over. The left side is given as far as it can be read, also where the
    right one cannot.
    """
    behind = _BEHIND.search(written)
    kept = written[: behind.start()] if behind else written
    before = _BEFORE.match(kept)
    text = kept[before.end() :] if before else kept
    try:
        relation, left, right, spans = _sides(text, number, above)
    except Refusal as refusal:
        fault = Unreadable(min(refusal.position, len(text)), refusal.what, refusal.cure)
        return HandLine(number, where, text, remark=remark, fault=fault), _left_only(text, above)
    return HandLine(number, where, text, relation, left, right, spans, remark), left


_Read = tuple[Relation, Expression, Expression, tuple[tuple[Way, Span], ...]]


def _sides(text: str, number: int, above: Expression | None) -> _Read:
    if len(text) > LONGEST_LINE:
        raise Refusal(0, f"this line has {len(text):,} characters", "give parts of it names of their own")
    spelled = spell(text.replace("&", " "))
    relation, end, begin = _sign(spelled)
    right = _side(spelled.part(begin, len(spelled.text)), text, "right")
    spans: list[tuple[Way, Span]] = [((), Span(0, len(text)))]
    if not spelled.text[:end].strip():
        return relation, _left_of(number, above), right.node, (*spans, *_places(right, 1))
    left = _left(spelled.part(0, end), text)
    return relation, left.node, right.node, (*spans, *_places(left, 0), *_places(right, 1))


def _left_only(text: str, above: Expression | None) -> Expression | None:
    """Give the left side of a line that cannot be read as a whole; None where that cannot be read either."""
    sign = _ANY_SIGN.search(text)
    if sign is None or not text[: sign.start()].strip():
        return above if sign else None
    try:
        return _left(spell(text[: sign.start()]), text).node
    except Refusal:
        return None


def _left_of(number: int, above: Expression | None) -> Expression:
    if above is not None:
        return above
    if number == 1:
        raise Refusal(0, "the left side is missing", _CURE)
    what = "the left side is that of the line above, and it cannot be read there"
    raise Refusal(0, what, "mend the line above")


def _left(spelled: Spelled, text: str) -> Placed:
    named = _OF_S.fullmatch(spelled.text)
    return _side(spelled.part(*named.span(1)) if named else spelled, text, "left")


def _sign(spelled: Spelled) -> tuple[Relation, int, int]:
    """Give the sign between the sides, where the left one ends, and where the right one begins."""
    found = list(_SIGN.finditer(spelled.text))
    if not found:
        raise Refusal(spelled.end(len(spelled.text.rstrip())), 'expected "=" or "~"', _CURE)
    first = found[0]
    if first[0] not in _MEANS:
        what = f'"{first[0]}" cannot stand here; expected "=" or "~"'
        raise Refusal(spelled.start(first.start()), what, _CURE)
    if len(found) > 1:
        what = "a line makes one claim, and this one goes on with another sign"
        cure = f'begin a new line with the second "{found[1][0]}"'
        raise Refusal(spelled.start(found[1].start()), what, cure)
    return _MEANS[first[0]], first.start(), first.end()


def _side(spelled: Spelled, text: str, which: str) -> Placed:
    if not spelled.text.strip():
        place = spelled.start(0)
        raise Refusal(place, f"the {which} side is missing; expected a name, a number, …", "complete it")
    return parse_spelled(spelled, text)


def _places(placed: Placed, side: int) -> Iterator[tuple[Way, Span]]:
    """Give every place of a side with the stretch of the text that it stands on."""
    pending: list[tuple[Way, Placed]] = [((side,), placed)]
    while pending:
        way, each = pending.pop()
        yield way, Span(each.start, each.end)
        pending += [((*way, k), part) for k, part in reversed(list(enumerate(each.parts)))]


def read_expression(text: str) -> Expression:
    """Read an expression that stands by itself, such as the meaning of a defined name.

    Raises: Refusal, with the place.
    """
    return _side(spell(text), text, "right").node

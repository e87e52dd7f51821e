"""Reads the user's expressions by our own grammar; nothing here can run what it reads."""

from __future__ import annotations

from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

from derive.errors import InputError
from derive.expressions.build import Placed, TreeBuilder
from derive.expressions.spell import spell
from derive.expressions.spelled import Refusal, Spelled
from derive.expressions.tree import Expression, Power

if TYPE_CHECKING:
    from lark import Lark

MAX_LENGTH = 100_000
MAX_DEPTH = 200
MAX_NESTED_EXPONENT = 1000
_BEFORE, _AFTER = 48, 24

_WORDS = {
    "NUMBER": "a number",
    "NAME": "a name",
    "SQRT": '"sqrt("',
    "PLUS": '"+"',
    "MINUS": '"-"',
    "HAT": '"^"',
    "TIMES": '"*"',
    "OVER": '"/"',
    "_BARS": '"||"',
    "OPEN": '"("',
    "CLOSE": '")"',
    "$END": "the end",
}
_OPERATORS = {"PLUS", "MINUS", "TIMES", "OVER", "_BARS"}
_INSTEAD = {"|": "||", "[": "(", "{": "(", "]": ")", "}": ")"}


def parse_expression(text: str, *, where: str = "") -> Expression:
    """Read one expression of the user's language, exactly.

    Given: the text, and where it stands ("buffer.toml:31"), for the message.
    Gives: the tree in the shape that `derive.expressions.build` describes.
    Raises: InputError, with a caret under the place, for anything that is not an expression.
    """
    if not text.strip():
        raise InputError("an expression is missing here", where=where, cure="write one")
    if len(text) > MAX_LENGTH:
        raise InputError(
            f"this expression has {len(text):,} characters",
            where=where,
            cure=f"give parts of it names of their own, to stay below {MAX_LENGTH:,}",
        )
    try:
        return parse_placed(text).node
    except Refusal as refusal:
        what = f"this expression cannot be read\n{pointed(text, refusal.position)}\n{refusal.what}"
        raise InputError(what, where=where, cure=refusal.cure) from None


def parse_placed(text: str) -> Placed:
    """Read one expression, every part of it with its place in the text.

    Raises: Refusal, with the place, for anything that is not an expression.
    """
    return parse_spelled(spell(text), text)


def parse_spelled(spelled: Spelled, text: str) -> Placed:
    """Read an expression that was spelled in plain signs; `text` is what was typed, to which the places belong.

    Raises: Refusal, with the place, for anything that is not an expression.
    """
    _refuse_deep_parentheses(spelled)
    placed = _read(spelled, text)
    _refuse_deep_tree(placed, spelled)
    return placed if spelled.starts is None and not spelled.shift else _typed(placed, spelled)


def _typed(placed: Placed, spelled: Spelled) -> Placed:
    """Give the tree with the places in what was typed."""
    parts = tuple([_typed(part, spelled) for part in placed.parts])
    return Placed(placed.node, spelled.start(placed.start), spelled.end(placed.end), parts)


@cache
def _parser() -> Lark:
    # Imported on first use: it costs a tenth of a second, and most commands read no expression.
    from lark import Lark

    grammar = Path(__file__).with_name("grammar.lark").read_text(encoding="utf-8")
    return Lark(grammar, parser="lalr", transformer=TreeBuilder(), maybe_placeholders=False)


def _read(spelled: Spelled, text: str) -> Placed:
    parser = _parser()
    from lark.exceptions import UnexpectedCharacters, UnexpectedToken

    try:
        # With the builder inside the parser the "tree" that comes back is the builder's own.
        read: Any = parser.parse(spelled.text)
    except UnexpectedCharacters as error:
        raise _unknown_sign(spelled, error.pos_in_stream or 0) from None
    except UnexpectedToken as error:
        raise _out_of_place(spelled, text, error.token, error.accepts or error.expected) from None
    except Refusal as refusal:
        raise Refusal(spelled.start(refusal.position), refusal.what, refusal.cure) from None
    placed: Placed = read
    return placed


def _unknown_sign(spelled: Spelled, position: int) -> Refusal:
    sign = spelled.text[position]
    if sign in _INSTEAD:
        cure = f'write "{_INSTEAD[sign]}"'
    elif sign in "=~":
        cure = "give one side of the equation only"
    elif sign == "_":
        cure = "begin a name with a letter"
    else:
        cure = "use names, numbers, + - * / ^ || sqrt and parentheses"
    return Refusal(spelled.start(position), f'"{_visible(sign)}" has no meaning in an expression', cure)


def _out_of_place(spelled: Spelled, text: str, token: Any, accepts: set[str]) -> Refusal:
    # The parser may have closed an operand before it stopped; operators could have gone on from it.
    if "OPEN" not in accepts:
        accepts = accepts | _OPERATORS
    expected = ", ".join(sorted(_WORDS[kind] for kind in accepts))
    plain = spelled.text
    if token.type == "$END":
        cure = "close the parenthesis" if "CLOSE" in accepts else "complete it"
        what = f"the expression ends too early; expected {expected}"
        return Refusal(spelled.end(len(plain.rstrip())), what, cure)
    position = int(token.start_pos)
    start = spelled.start(position)
    typed = text[start : spelled.end(position + len(token))] or str(token)
    what = f'"{_visible(typed[:40])}" cannot stand here; expected {expected}'
    return Refusal(start, what, _cure(plain, position, token.type, accepts))


def _cure(text: str, position: int, kind: str, accepts: set[str]) -> str:
    before = text[:position].rstrip()
    if before.endswith("sqrt") and "TIMES" not in accepts:
        return "sqrt takes its argument in parentheses: sqrt(x)"
    if "TIMES" not in accepts:
        return "put a name, a number or a group in parentheses before it"
    if kind == "CLOSE":
        return "take this parenthesis away, or open one before it"
    if kind == "OPEN" and _ends_in_name(before):
        return 'write "*" before the parenthesis to multiply; the only function is sqrt(x)'
    if kind == "NAME" and before[-1:].isdigit():
        return 'write "*" between factors; a value code such as 4k7 is written out: 4700'
    return 'write "*" between factors'


def _ends_in_name(before: str) -> bool:
    start = len(before)
    while start and (before[start - 1].isalnum() or before[start - 1] == "_"):
        start -= 1
    return before[start : start + 1].isalpha()


def pointed(text: str, position: int) -> str:
    """Give the text about a position with a caret under it, each line indented."""
    start = max(0, position - _BEFORE) if len(text) > _BEFORE + _AFTER else 0
    end = max(position, start + _BEFORE) + _AFTER
    shown = ("..." if start else "") + text[start:end] + ("..." if end < len(text) else "")
    column = position - start + (3 if start else 0)
    return f"    {_visible(shown)}\n    {' ' * column}^"


def _visible(text: str) -> str:
    # One sign for one sign, so that the caret stays under its place.
    return "".join(c if c.isprintable() else " " if c.isspace() else "?" for c in text)


def _refuse_deep_parentheses(spelled: Spelled) -> None:
    depth = 0
    for position, sign in enumerate(spelled.text):
        if sign == "(":
            depth += 1
            if depth > MAX_DEPTH:
                raise Refusal(
                    spelled.start(position),
                    f"parentheses are nested more than {MAX_DEPTH} deep",
                    "give the inner parts names of their own",
                )
        elif sign == ")":
            depth -= 1


def _refuse_deep_tree(placed: Placed, spelled: Spelled) -> None:
    """Refuse what later recursion, or an exact power of a power of a number, could not bear."""
    pending = [(placed, 1, 1)]
    while pending:
        each, depth, exponent = pending.pop()
        if isinstance(each.node, Power):
            exponent *= max(1, abs(each.node.exponent))
        if depth > MAX_DEPTH or exponent > MAX_NESTED_EXPONENT:
            raise Refusal(
                spelled.start(each.start),
                "this expression is nested too deeply"
                if depth > MAX_DEPTH
                else "powers of powers grow too large here",
                "give the inner parts names of their own",
            )
        pending.extend((part, depth + 1, exponent) for part in each.parts)

"""Reads the user's expressions by our own grammar; nothing here can run what it reads."""

from __future__ import annotations

from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

from derive.errors import InputError
from derive.expressions.build import Refusal, TreeBuilder
from derive.expressions.tree import Expression, Power
from derive.expressions.walk import children_of

if TYPE_CHECKING:
    from lark import Lark

MAX_LENGTH = 100_000
MAX_DEPTH = 200
MAX_NESTED_EXPONENT = 1000
_BEFORE, _AFTER = 48, 24

_WORDS = {
    "NUMBER": "a number",
    "NAME": "a name",
    "_SQRT": '"sqrt("',
    "PLUS": '"+"',
    "MINUS": '"-"',
    "HAT": '"^"',
    "TIMES": '"*"',
    "OVER": '"/"',
    "_BARS": '"||"',
    "_OPEN": '"("',
    "_CLOSE": '")"',
    "$END": "the end",
}
_OPERATORS = {"PLUS", "MINUS", "TIMES", "OVER", "_BARS"}
_INSTEAD = {
    "·": "*",
    "×": "*",
    "⋅": "*",
    "−": "-",
    "–": "-",
    "÷": "/",
    "|": "||",
    "∥": "||",
    "‖": "||",
    "²": "^2",
    "³": "^3",
    "√": "sqrt(x)",
    "[": "(",
    "{": "(",
    "]": ")",
    "}": ")",
    "π": "pi",
    "β": "beta",
    "ω": "omega",
    "µ": "mu",
    "μ": "mu",
}


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
        _refuse_deep_parentheses(text)
        expression = _read(text)
    except Refusal as refusal:
        pointed = _pointed(text, refusal.position)
        what = f"this expression cannot be read\n{pointed}\n{refusal.what}"
        raise InputError(what, where=where, cure=refusal.cure) from None
    _refuse_deep_tree(expression, where)
    return expression


@cache
def _parser() -> Lark:
    # Imported on first use: it costs a tenth of a second, and most commands read no expression.
    from lark import Lark

    grammar = Path(__file__).with_name("grammar.lark").read_text(encoding="utf-8")
    return Lark(grammar, parser="lalr", transformer=TreeBuilder(), maybe_placeholders=False)


def _read(text: str) -> Expression:
    parser = _parser()
    from lark.exceptions import UnexpectedCharacters, UnexpectedToken

    try:
        # With the builder inside the parser the "tree" that comes back is the builder's own.
        read: Any = parser.parse(text)
    except UnexpectedCharacters as error:
        raise _unknown_sign(text, error.pos_in_stream or 0) from None
    except UnexpectedToken as error:
        raise _out_of_place(text, error.token, error.accepts or error.expected) from None
    expression: Expression = read
    return expression


def _unknown_sign(text: str, position: int) -> Refusal:
    sign = text[position]
    if sign in _INSTEAD:
        cure = f'write "{_INSTEAD[sign]}"'
    elif sign == "=":
        cure = "give one side of the equation only"
    elif sign == "_":
        cure = "begin a name with a letter"
    else:
        cure = "use names, numbers, + - * / ^ || sqrt and parentheses"
    return Refusal(position, f'"{_visible(sign)}" has no meaning in an expression', cure)


def _out_of_place(text: str, token: Any, accepts: set[str]) -> Refusal:
    # The parser may have closed an operand before it stopped; operators could have gone on from it.
    if "_OPEN" not in accepts:
        accepts = accepts | _OPERATORS
    expected = ", ".join(sorted(_WORDS[kind] for kind in accepts))
    if token.type == "$END":
        cure = "close the parenthesis" if "_CLOSE" in accepts else "complete it"
        what = f"the expression ends too early; expected {expected}"
        return Refusal(len(text.rstrip()), what, cure)
    position = int(token.start_pos)
    what = f'"{_visible(str(token)[:40])}" cannot stand here; expected {expected}'
    return Refusal(position, what, _cure(text, position, token.type, accepts))


def _cure(text: str, position: int, kind: str, accepts: set[str]) -> str:
    before = text[:position].rstrip()
    if before.endswith("sqrt") and "TIMES" not in accepts:
        return "sqrt takes its argument in parentheses: sqrt(x)"
    if "TIMES" not in accepts:
        return "put a name, a number or a group in parentheses before it"
    if kind == "_CLOSE":
        return "take this parenthesis away, or open one before it"
    if kind == "_OPEN" and _ends_in_name(before):
        return 'write "*" before the parenthesis to multiply; the only function is sqrt(x)'
    if kind == "NAME" and before[-1:].isdigit():
        return 'write "*" between factors; a value code such as 4k7 is written out: 4700'
    return 'write "*" between factors'


def _ends_in_name(before: str) -> bool:
    start = len(before)
    while start and (before[start - 1].isalnum() or before[start - 1] == "_"):
        start -= 1
    return before[start : start + 1].isalpha()


def _pointed(text: str, position: int) -> str:
    """Give the text about the position with a caret under it, each line indented."""
    start = max(0, position - _BEFORE) if len(text) > _BEFORE + _AFTER else 0
    end = max(position, start + _BEFORE) + _AFTER
    shown = ("..." if start else "") + text[start:end] + ("..." if end < len(text) else "")
    column = position - start + (3 if start else 0)
    return f"    {_visible(shown)}\n    {' ' * column}^"


def _visible(text: str) -> str:
    # One sign for one sign, so that the caret stays under its place.
    return "".join(c if c.isprintable() else " " if c.isspace() else "?" for c in text)


def _refuse_deep_parentheses(text: str) -> None:
    depth = 0
    for position, sign in enumerate(text):
        if sign == "(":
            depth += 1
            if depth > MAX_DEPTH:
                raise Refusal(
                    position,
                    f"parentheses are nested more than {MAX_DEPTH} deep",
                    "give the inner parts names of their own",
                )
        elif sign == ")":
            depth -= 1


def _refuse_deep_tree(expression: Expression, where: str) -> None:
    """Refuse what later recursion, or an exact power of a power of a number, could not bear."""
    pending = [(expression, 1, 1)]
    while pending:
        node, depth, exponent = pending.pop()
        if isinstance(node, Power):
            exponent *= max(1, abs(node.exponent))
        if depth > MAX_DEPTH or exponent > MAX_NESTED_EXPONENT:
            raise InputError(
                "this expression is nested too deeply"
                if depth > MAX_DEPTH
                else "powers of powers grow too large here",
                where=where,
                cure="give the inner parts names of their own",
            )
        pending.extend((child, depth + 1, exponent) for child in children_of(node))

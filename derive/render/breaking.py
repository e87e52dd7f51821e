"""Breaks a formula into lines that fit a column, by the structure of the formula.

A formula that is too wide is first cut into tokens, each as wide as may be: terms of sums, groups
of factors, branches of parallel combinations. A fraction stays one token and is broken inside,
above and below its bar. The tokens are then packed greedily, which needs no second pass and gives
lines a reader expects: full ones first. All widths are measured, none is guessed.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from derive.expressions.signs import split_sign
from derive.expressions.tree import (
    Equation,
    Expression,
    Name,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)
from derive.expressions.typst_maths import factor_sources, to_typst
from derive.expressions.walk import children_of
from derive.render.typesetter import Formula, Measurer

INDENT_EM = 1.4
LONGEST_LEAD = 0.3  # of the column: a longer left side takes a line of its own
LONGEST_FRACTION = 24  # lines above or below a bar: a page holds no more
_SIGNS = {"": "", "+": "+", "-": "-", "=": "=", "~": "approx", "∥": "parallel", "·": "dot", "/": "\\/"}
_BRACKETS_EM = 1.0
_SIGN_EM = {"": 0.0, "+": 1.15, "-": 1.15, "=": 1.25, "~": 1.25, "∥": 1.1, "·": 0.75, "/": 0.4}


@dataclass(frozen=True, slots=True)
class Token:
    """A stretch of a formula that stays on one line, with the sign that joins it to the last."""

    source: str
    width: float
    height: float
    sign: str = ""
    depth: int = 0

    @property
    def full_width(self) -> float:
        """The width with the sign and its spaces."""
        return self.width + _SIGN_EM[self.sign]

    def continuing(self) -> str:
        """Return the source of the token within a line."""
        return f" {_SIGNS[self.sign]} {self.source}" if self.sign else f" {self.source}"

    def opening(self) -> str:
        """Return the source of the token at the head of a line, its sign spaced as within one."""
        return f"{_SIGNS[self.sign]} med {self.source}" if self.sign else self.source


@dataclass(frozen=True, slots=True)
class Row:
    """A line of a broken formula; `source` has its alignment mark."""

    source: str
    width: float
    height: float


def subexpressions(whole: Expression | Equation) -> Iterator[Expression]:
    """Give every subexpression that may become a token of its own, without its sign."""
    pending = [whole.right, whole.left] if isinstance(whole, Equation) else [whole]
    while pending:
        part = split_sign(pending.pop())[1]
        yield part
        pending.extend(children_of(part))


def displayed(source: str) -> Formula:
    """Return the formula for a source that stands on a line of its own."""
    return Formula(source, display=True)


class Breaker:
    """Lays formulas out in lines no wider than asked, as far as their names allow."""

    def __init__(self, measurer: Measurer) -> None:
        self._measurer = measurer
        # Long formulas are asked for again and again; by identity, because hashing a tree walks it.
        self._sources: dict[int, tuple[Expression, str]] = {}

    def prepare(self, wholes: list[Expression | Equation]) -> None:
        """Measure in one run everything that breaking these formulas will ask for."""
        self._measurer.measure(
            displayed(self._source(part)) for whole in wholes for part in subexpressions(whole)
        )

    def rows(self, whole: Expression | Equation, limit: float) -> list[Row]:
        """Return the lines of a formula, ready to be joined by line breaks.

        Given: `limit`, the width of the column in em.
        """
        if not isinstance(whole, Equation):
            return _packed(self._tokens(whole, limit - INDENT_EM), limit)
        left = self._source(whole.left)
        lead = self._width(whole.left) + _SIGN_EM["="]
        if lead > LONGEST_LEAD * limit:
            tokens = self._tokens(whole.left, limit - INDENT_EM)
            tokens += _signed(self._tokens(whole.right, limit - 2 * INDENT_EM), whole.relation)
            return _packed(tokens, limit)
        tokens = self._tokens(whole.right, limit - lead - INDENT_EM)
        return _packed(tokens, limit, lead, f"{left} & {_SIGNS[whole.relation]} ")

    def _tokens(self, expression: Expression, limit: float) -> list[Token]:
        """Cut an expression into tokens no wider than the limit, where it can be cut."""
        negative, rest = split_sign(expression)
        if negative:
            first, *others = self._enclosed(rest, limit - 0.75, Sum | Parallel)
            minus = replace(first, source=f"-{first.source}", width=first.width + 0.75)
            return [minus, *others]
        if self._width(rest) <= limit:
            return [self._whole(rest)]
        match rest:
            case Sum(terms):
                return [t for i, term in enumerate(terms) for t in self._term(term, i, limit)]
            case Product(factors):
                return self._product(factors, limit)
            case Parallel(branches):
                cut = (self._enclosed(b, limit - _SIGN_EM["∥"], Sum | Parallel) for b in branches)
                return [t for i, tokens in enumerate(cut) for t in _signed(tokens, "∥" if i else "")]
            case Quotient(numerator, denominator):
                return self._quotient(numerator, denominator, limit)
            case Power(base, exponent) if not isinstance(base, Name | Number):
                return self._bracketed(base, limit, f"^({exponent})")
            case Root(radicand):
                return self._bracketed(radicand, limit, "^(1 \\/ 2)")
            case _:
                return [self._whole(rest)]

    def _term(self, term: Expression, position: int, limit: float) -> list[Token]:
        if not position:
            return self._tokens(term, limit)
        negative, rest = split_sign(term)
        tokens = self._enclosed(rest, limit - _SIGN_EM["+"], Sum | Parallel)
        return _signed(tokens, "-" if negative else "+")

    def _product(self, factors: tuple[Expression, ...], limit: float) -> list[Token]:
        """Keep neighbouring factors together as long as they fit; open those that do not."""
        made: list[Token] = []
        for factor, source in zip(factors, factor_sources(Product(factors)), strict=True):
            width = self._width(factor) + _BRACKETS_EM
            if width <= limit:
                new = [Token(source, width, self._height(factor))]
            else:
                new = self._enclosed(factor, limit, Sum | Parallel)
            # A fraction that starts a line after a bare factor would read as a new term.
            if made and _beside(made[-1], new[0]).full_width <= limit:
                made[-1] = _beside(made[-1], new[0])
            elif made:
                source = new[0].source.removeprefix("dot ")
                made.append(replace(new[0], source=source, sign="·"))
            else:
                made.append(new[0])
            made.extend(new[1:])
        return made

    def _enclosed(self, inner: Expression, limit: float, loose: object) -> list[Token]:
        """Cut an expression, in brackets if it is of a kind that does not hold together."""
        if split_sign(inner)[0] or isinstance(inner, loose):  # type: ignore[arg-type]
            return self._bracketed(inner, limit)
        return self._tokens(inner, limit)

    def _bracketed(self, inner: Expression, limit: float, after: str = "") -> list[Token]:
        """Put brackets round tokens; square ones of a fixed size where they fall on several lines."""
        width = self._width(inner) + _BRACKETS_EM
        if width + 0.4 * bool(after) <= limit:
            return [Token(f"({self._source(inner)}){after}", width, self._height(inner))]
        tokens = self._tokens(inner, limit - _BRACKETS_EM)
        size = max(token.height for token in tokens)
        left, right = (_bracket(side, size) for side in "[]")
        first = _unsigned(tokens[0])
        first = replace(first, source=f"{left} {first.source}", width=first.width + 0.6)
        made = [first, *(replace(token, depth=token.depth + 1) for token in tokens[1:])]
        last = made[-1]
        ending = 0.6 + (1.0 if after else 0.0)
        made[-1] = replace(last, source=f"{last.source} {right}{after}", width=last.width + ending)
        return made

    def _quotient(self, above: Expression, below: Expression, limit: float) -> list[Token]:
        rows_above, rows_below = self._inside(above, limit), self._inside(below, limit)
        rows = rows_above + rows_below
        if max(len(rows_above), len(rows_below)) > LONGEST_FRACTION:
            return self._bracketed(above, limit) + _signed(self._bracketed(below, limit), "/")
        source = f"frac({_stacked(rows_above)}, {_stacked(rows_below)})"
        height = sum(row.height + 0.5 for row in rows)
        return [Token(source, max(row.width for row in rows) + 0.2, height)]

    def _inside(self, expression: Expression, limit: float) -> list[Row]:
        """Lay out one side of a fraction bar."""
        room = limit - 0.2
        return _packed(self._tokens(expression, room - INDENT_EM), room)

    def _source(self, expression: Expression) -> str:
        known = self._sources.get(id(expression))
        if known is None:
            known = expression, to_typst(expression)
            self._sources[id(expression)] = known
        return known[1]

    def _whole(self, expression: Expression) -> Token:
        return Token(self._source(expression), self._width(expression), self._height(expression))

    def _width(self, expression: Expression) -> float:
        return self._measurer[displayed(self._source(expression))].width

    def _height(self, expression: Expression) -> float:
        return self._measurer[displayed(self._source(expression))].height


def _packed(tokens: list[Token], limit: float, lead: float = 0.0, opening: str = "& ") -> list[Row]:
    """Fill lines with tokens; those after the first are indented, inner ones further."""
    rows: list[Row] = []
    line, used, height, empty = opening, lead, 0.0, True
    for token in tokens:
        if not empty and used + token.full_width > limit:
            rows.append(Row(line, used, height))
            # Deep nesting must not eat the line.
            wished = INDENT_EM + 0.8 * min(token.depth, 3)
            indent = max(0.0, min(wished, limit - lead - token.full_width))
            line, used, height, empty = f"& #h({indent:.2f}em) ", lead + indent, 0.0, True
        line += token.opening() if empty else token.continuing()
        used += token.full_width
        height = max(height, token.height)
        empty = False
    rows.append(Row(line, used, height))
    return rows


def _signed(tokens: list[Token], sign: str) -> list[Token]:
    """Give the first token a sign; one that has a sign of its own keeps it behind the new one."""
    return [replace(_unsigned(tokens[0]), sign=sign), *tokens[1:]]


def _unsigned(token: Token) -> Token:
    """Take the sign of a token into its source."""
    if not token.sign:
        return token
    source = f"{_SIGNS[token.sign]} {token.source}"
    return replace(token, source=source, width=token.full_width, sign="")


def _beside(left: Token, right: Token) -> Token:
    return replace(
        left,
        source=left.source + right.continuing(),
        width=left.width + right.full_width + 0.2,
        height=max(left.height, right.height),
    )


def _bracket(side: str, height: float) -> str:
    """Return one square bracket on its own: its partner is on another line, so the size is given."""
    return f"lr(size: #{height:.2f}em, \\{side})" if height > 1.3 else f"\\{side}"


def _stacked(rows: list[Row]) -> str:
    if len(rows) == 1:
        return rows[0].source.removeprefix("& ")
    return " \\ ".join(row.source for row in rows)

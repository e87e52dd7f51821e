"""The values of the expressions in a ledger, worked apart from the program that wrote them.

An expression is read by Python's own parser into a syntax tree, of which nothing is ever run: only
names, numbers, + - * / ** and, for closed forms, sqrt, par and pi are let through.
"""

from __future__ import annotations

import ast
import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

PRIME = 2**61 - 1
# Names may be words that Python keeps for itself ("lambda"): each is given a prefix before parsing.
_NAME = re.compile(r"(?<![\w.])[A-Za-z]\w*")
_BINARY = {ast.Add: "add", ast.Sub: "subtract", ast.Mult: "multiply", ast.Div: "divide"}


@dataclass(frozen=True)
class Field:
    """Numbers with their arithmetic: how a rational gets in, and what is done with two of them."""

    number: Callable[[Fraction], Any]
    add: Callable[[Any, Any], Any]
    subtract: Callable[[Any, Any], Any]
    multiply: Callable[[Any, Any], Any]
    divide: Callable[[Any, Any], Any]
    root: Callable[[Any], Any]
    pi: Any = None

    def power(self, base: Any, exponent: int) -> Any:
        """Give the base to a whole power, by squaring."""
        value = self.number(Fraction(1))
        square = base
        for bit in reversed(bin(abs(exponent))[2:]):
            if bit == "1":
                value = self.multiply(value, square)
            square = self.multiply(square, square)
        return value if exponent >= 0 else self.divide(self.number(Fraction(1)), value)


def _no_root(value: Any) -> Any:
    above, below = value.numerator, value.denominator
    root = Fraction(_whole_root(above), _whole_root(below))
    if root * root != value:
        raise ArithmeticError(f"the square root of {value} is not rational")
    return root


def _whole_root(value: int) -> int:
    root = int(value**0.5)
    while root * root > value:
        root -= 1
    while (root + 1) ** 2 <= value:
        root += 1
    return root


RATIONALS = Field(
    number=lambda value: value,
    add=lambda a, b: a + b,
    subtract=lambda a, b: a - b,
    multiply=lambda a, b: a * b,
    divide=lambda a, b: a / b,
    root=_no_root,
)


def modular_root(value: int) -> int:
    """Give a square root of a square modulo PRIME, always the same one of the two."""
    root = pow(value, (PRIME + 1) // 4, PRIME)
    if root * root % PRIME != value % PRIME:
        raise ArithmeticError(f"{value} is no square modulo {PRIME}")
    return root


def _modular_quotient(a: int, b: int) -> int:
    if b % PRIME == 0:
        raise ZeroDivisionError("a divisor vanishes modulo the prime")
    return a * pow(b, -1, PRIME) % PRIME


RESIDUES = Field(
    number=lambda value: _modular_quotient(value.numerator, value.denominator),
    add=lambda a, b: (a + b) % PRIME,
    subtract=lambda a, b: (a - b) % PRIME,
    multiply=lambda a, b: a * b % PRIME,
    divide=_modular_quotient,
    root=modular_root,
)


def complex_field(mp: Any) -> Field:
    """Give the complex numbers of an mpmath context, at its precision."""
    return Field(
        number=lambda value: mp.mpc(value.numerator) / value.denominator,
        add=lambda a, b: a + b,
        subtract=lambda a, b: a - b,
        multiply=lambda a, b: a * b,
        divide=lambda a, b: a / b,
        root=mp.sqrt,
        pi=mp.mpc(mp.pi),
    )


Program = tuple[tuple[str, Any], ...]


def read_expression(text: str) -> Program:
    """Give an expression as instructions for a stack; a ValueError for anything but arithmetic."""
    tree = ast.parse(_NAME.sub(lambda found: f"n_{found[0]}", text.strip()), mode="eval").body
    program: list[tuple[str, Any]] = []
    waiting: list[Any] = [tree]
    # Children first: what is taken off the stack is a node to open, or an instruction to emit.
    while waiting:
        node = waiting.pop()
        if isinstance(node, tuple):
            program.append(node)
        else:
            waiting.extend(_opened(node))
    return tuple(program)


def read_user_text(text: str) -> Program:
    """Give text in the user's language, whose `||` and powers Python's parser reads by other signs.

    Every parallel combination must stand in parentheses or alone, as `||` binds tighter than that sign.
    """
    return read_expression(text.replace("||", "@").replace("^", "**"))


def _opened(node: ast.AST) -> Sequence[Any]:
    """Give the instruction of a node and its children, the first to be worked last."""
    if isinstance(node, ast.Constant) and type(node.value) in (int, float):
        return (("number", Fraction(repr(node.value))),)
    if isinstance(node, ast.Name):
        return (("name", node.id.removeprefix("n_")),)
    if isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
        return (("negate", None), node.operand)
    if isinstance(node, ast.BinOp) and type(node.op) in _BINARY:
        return ((_BINARY[type(node.op)], None), node.right, node.left)
    if isinstance(node, ast.BinOp) and isinstance(node.op, ast.MatMult):
        return (("parallel", 2), node.right, node.left)
    if isinstance(node, ast.BinOp) and isinstance(node.op, ast.Pow):
        exponent = _exponent(node.right)
        if exponent == Fraction(1, 2):
            return (("root", None), node.left)
        if exponent is not None and exponent.denominator == 1:
            return (("power", int(exponent)), node.left)
    if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and not node.keywords:
        if node.func.id == "n_sqrt" and len(node.args) == 1:
            return (("root", None), node.args[0])
        if node.func.id == "n_par" and len(node.args) > 1:
            return (("parallel", len(node.args)), *node.args)
    raise ValueError(f"no plain arithmetic: {ast.dump(node)[:80]}")


def _exponent(node: ast.AST) -> Fraction | None:
    if isinstance(node, ast.Constant) and type(node.value) is int:
        return Fraction(node.value)
    if isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
        inner = _exponent(node.operand)
        return None if inner is None else -inner
    if isinstance(node, ast.BinOp) and isinstance(node.op, ast.Div):
        above, below = _exponent(node.left), _exponent(node.right)
        return None if above is None or not below else above / below
    return None


def calculate(expression: str | Program, values: Mapping[str, Any], field: Field) -> Any:
    """Give the value of an expression for the values of its names; a KeyError for a name without."""
    program = read_expression(expression) if isinstance(expression, str) else expression
    stack: list[Any] = []
    for what, detail in program:
        if what == "number":
            stack.append(field.number(detail))
        elif what == "name":
            stack.append(field.pi if detail == "pi" and detail not in values else values[detail])
        elif what == "negate":
            stack.append(field.subtract(field.number(Fraction(0)), stack.pop()))
        elif what == "power":
            stack.append(field.power(stack.pop(), detail))
        elif what == "root":
            stack.append(field.root(stack.pop()))
        elif what == "parallel":
            stack[-detail:] = [_parallel(stack[-detail:], field)]
        else:
            right = stack.pop()
            stack[-1] = getattr(field, what)(stack[-1], right)
    (value,) = stack
    return value


def _parallel(branches: Sequence[Any], field: Field) -> Any:
    one = field.number(Fraction(1))
    total = field.number(Fraction(0))
    for branch in branches:
        total = field.add(total, field.divide(one, branch))
    return field.divide(one, total)


def names_in(expression: str) -> set[str]:
    """Give the names of an expression."""
    return {detail for what, detail in read_expression(expression) if what == "name"}


@dataclass(frozen=True)
class Response:
    """A result of a ledger at given values of its symbols."""

    gain: Any
    power_of_s: int
    numerator: tuple[Any, ...]
    denominator: tuple[Any, ...]
    field: Field

    def at(self, s: Any) -> Any:
        """Give H(s) = gain · s^power_of_s · numerator(s) / denominator(s)."""
        field = self.field
        below = self.polynomial(self.denominator, s)
        above = field.multiply(self.gain, self.polynomial(self.numerator, s))
        if self.power_of_s < 0:
            below = field.multiply(below, field.power(s, -self.power_of_s))
        elif self.power_of_s > 0:
            above = field.multiply(above, field.power(s, self.power_of_s))
        return field.divide(above, below)

    def polynomial(self, coefficients: Sequence[Any], s: Any) -> Any:
        """Give a polynomial's value, by Horner's rule."""
        total = self.field.number(Fraction(0))
        for coefficient in reversed(coefficients):
            total = self.field.add(self.field.multiply(total, s), coefficient)
        return total


class LedgerResult:
    """A result as the ledger gives it, read once and worked at many values."""

    def __init__(self, result: Mapping[str, Any]) -> None:
        self.power_of_s: int = result["power_of_s"]
        self.definitions = [(name, read_expression(text)) for name, text in result["definitions"]]
        self.gain = read_expression(result["gain"]["exact"])
        self.numerator = [read_expression(text) for text in result["numerator"]]
        self.denominator = [read_expression(text) for text in result["denominator"]]

    def known(self, values: Mapping[str, Any], field: Field) -> dict[str, Any]:
        """Give the values of the symbols and of what is defined with them, in its order."""
        known = dict(values)
        for name, text in self.definitions:
            known[name] = calculate(text, known, field)
        return known

    def at(self, values: Mapping[str, Any], field: Field) -> Response:
        """Give the response for values of the symbols; definitions apply in their order."""
        known = self.known(values, field)
        return Response(
            calculate(self.gain, known, field),
            self.power_of_s,
            tuple(calculate(text, known, field) for text in self.numerator),
            tuple(calculate(text, known, field) for text in self.denominator),
            field,
        )


def nominal_values(ledger: Mapping[str, Any]) -> dict[str, Fraction]:
    """Give the exact value of every symbol of a ledger that has one."""
    return {
        name: Fraction(entry["value"])
        for name, entry in ledger["symbols"].items()
        if entry["value"] is not None
    }

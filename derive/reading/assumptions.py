"""The [[assume]] and [budget] tables: what the user neglects, and what that may cost."""

from __future__ import annotations

import re
from collections.abc import Sequence
from fractions import Fraction
from math import prod
from typing import Any

from derive.errors import InputError
from derive.expressions.parse import parse_expression
from derive.expressions.tree import Expression, Parallel, Power, Quotient, Root, Sum
from derive.expressions.walk import children_of
from derive.quantities.dimension import FREQUENCY
from derive.quantities.value import read_number, read_value
from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import described, known_keys, table, text
from derive.reading.roles import BANDS
from derive.topology.topology import Assumption, AssumptionForm, BandName, Budget

MOST = 40
LONGEST_STATEMENT = 400
# What is larger when multiplied out would be no assumption that a person checks.
MOST_TERMS = 500
_CURE = 'write [[assume]] and under it that = "R_B -> inf" and because = "a reason"'
_FORMS = 'write "x -> inf", "x -> 0", "x >> y", "x << y" or "x = y"'
_SIGNS: dict[str, AssumptionForm] = {">>": "much_greater", "<<": "much_less", "=": "equal"}
_INSTEAD = {"≫": ">>", "≪": "<<", "→": "->", "∞": "inf", "≈": "=", "~": "="}
_BUDGET_CURE = 'write [budget] and under it gain = "2 %"'
_LIMITS = {
    "gain": ("%", Fraction(1, 100)),
    "magnitude": ("dB", Fraction(1)),
    "phase": ("deg", Fraction(1)),
}
_FIELDS = {"gain": "gain", "magnitude": "magnitude_db", "phase": "phase_deg"}


def read_assumptions(document: Document, finds: Sequence[str]) -> tuple[Assumption, ...]:
    """Give every assumption, in the order in which they are made.

    Raises: InputError where one does not say what is assumed, or not in one of the five forms.
    """
    raw = document.data.get("assume", [])
    if not isinstance(raw, list):
        raise document.error(
            f"assume: a list of tables is wanted, not {described(raw)}", "assume", cure=_CURE
        )
    if len(raw) > MOST:
        raise document.error(
            f"there are more than {MOST} assumptions", "assume", MOST, cure="keep those that matter"
        )
    return tuple(_assumption(document, item, place, finds) for place, item in enumerate(raw))


def _assumption(document: Document, raw: Any, place: int, finds: Sequence[str]) -> Assumption:
    path = ("assume", place)
    item = f"assumption {place + 1}"
    entries = table(document, raw, item, *path, cure=_CURE)
    known_keys(document, entries, ("that", "because", "find", "band"), item, *path)
    if "that" not in entries:
        raise document.error(
            f"{item} does not say what is assumed", *path, cure='write that = "R_B -> inf"'
        )
    that = text(document, entries["that"], f"{item}: that", *path, "that", longest=LONGEST_STATEMENT)
    because = text(document, entries.get("because", ""), f"{item}: because", *path, "because")
    form, left, right = read_statement(that, item, str(document.place(*path, "that")))
    bands: Sequence[BandName] = BANDS
    return Assumption(
        " ".join(that.split()),
        form,
        left,
        right,
        because,
        document.place(*path),
        finds=_chosen(document, entries, finds, item, *path, "find"),
        bands=_chosen(document, entries, bands, item, *path, "band"),
    )


def _chosen(
    document: Document, entries: dict[str, Any], known: Sequence[Any], item: str, *path: str | int
) -> tuple[Any, ...]:
    """Give the names under a key, one or a list of them; () where the key is not there."""
    key = str(path[-1])
    if key not in entries:
        return ()
    raw = entries[key]
    names = raw if isinstance(raw, list) else [raw]
    if not names:
        raise document.error(f"{item}: {key} is an empty list", *path, cure="leave it out")
    for name in names:
        if not isinstance(name, str):
            cure = f'write {key} = "{next(iter(known))}"'
            raise document.error(f"{item}: {key} wants a name, not {described(name)}", *path, cure=cure)
        if name not in known:
            what = f"{item}: there is no {key} {quoted(name)}"
            raise document.error(what, *path, cure=did_you_mean(name, known, f"there is {listed(known)}"))
    return tuple(dict.fromkeys(names))


def read_statement(
    that: str, item: str, where: str
) -> tuple[AssumptionForm, Expression, Expression | None]:
    """Split a statement at its sign and read both sides; nothing in it is ever run.

    Raises: InputError where there is no sign, or more than one, or a side is no expression.
    """
    for sign, instead in _INSTEAD.items():
        if sign in that:
            raise InputError(
                f"{item}: {quoted(that)} holds the sign {sign}", where=where, cure=f'write "{instead}"'
            )
    found = _outer_signs(that)
    if len(found) != 1:
        count = "more than one sign" if found else "no sign that says what is neglected"
        raise InputError(f"{item}: {quoted(that)} has {count}", where=where, cure=_FORMS)
    position, sign = found[0]
    left = _side(that[:position], item, where)
    right_text = that[position + len(sign) :].strip()
    if sign == "->":
        if right_text not in ("inf", "0"):
            what = f"{item}: a part goes to inf or to 0, not to {quoted(right_text)}"
            raise InputError(what, where=where, cure=_FORMS)
        return ("to_inf" if right_text == "inf" else "to_zero"), left, None
    return _SIGNS[sign], left, _side(right_text, item, where)


def _outer_signs(that: str) -> list[tuple[int, str]]:
    """Give the signs ->, >>, << and = outside parentheses, with their places."""
    found, depth = [], 0
    for match in re.finditer(r"->|>>|<<|=|[()]", that):
        if match[0] in "()":
            depth += 1 if match[0] == "(" else -1
        elif depth == 0:
            found.append((match.start(), match[0]))
    return found


def _side(written: str, item: str, where: str) -> Expression:
    try:
        expression = parse_expression(written.strip(), where=where)
        if max(_terms(expression)) > MOST_TERMS:
            raise InputError(
                f"the expression has more than {MOST_TERMS:,} terms when multiplied out",
                cure="name the parts that matter",
            )
        return expression
    except InputError as error:
        # Messages are of one line here: the caret's lines are folded into it.
        what = " ".join(part.strip() for part in error.what.split("\n") if part.strip(" ^"))
        raise InputError(f"{item}: {what}", where=where, cure=error.cure) from None


def _terms(expression: Expression) -> tuple[int, int]:
    """Bound the terms of an expression's numerator and denominator when multiplied out.

    Raises: InputError for a square root, which has neither.
    """
    if isinstance(expression, Root):
        raise InputError("a square root has no place in an assumption", cure="square both sides")
    inner = [_terms(child) for child in children_of(expression)]
    above, below = (prod(each[k] for each in inner) for k in (0, 1))
    if isinstance(expression, Sum):
        above = sum(each[0] * below // each[1] for each in inner)
    elif isinstance(expression, Parallel):
        above, below = above, sum(each[1] * above // each[0] for each in inner)
    elif isinstance(expression, Quotient):
        above, below = inner[0][0] * inner[1][1], inner[0][1] * inner[1][0]
    elif isinstance(expression, Power):
        power = min(abs(expression.exponent), 64)
        above, below = (min(each, 10**6) ** power for each in (above, below))
    return min(above, 10**9), min(below, 10**9)


def read_budget(document: Document) -> Budget:
    """Give the limits of errors; what the file does not state keeps its default.

    Raises: InputError where a limit is none.
    """
    if "budget" not in document.data:
        return Budget()
    entries = table(document, document.data["budget"], "budget", "budget", cure=_BUDGET_CURE)
    known_keys(document, entries, (*_LIMITS, "range", "simplify"), "budget", "budget")
    limits = {_FIELDS[key]: _limit(document, entries[key], key) for key in _LIMITS if key in entries}
    simplify = entries.get("simplify", False)
    if not isinstance(simplify, bool):
        raise document.error(
            f"budget: simplify wants true or false, not {described(simplify)}",
            "budget",
            "simplify",
            cure="write simplify = true",
        )
    bounds = _range(document, entries["range"]) if "range" in entries else None
    return Budget(**limits, range_hz=bounds, simplify=simplify, place=document.place("budget"))


def _limit(document: Document, raw: Any, key: str) -> Fraction:
    unit, scale = _LIMITS[key]
    cure = f'write {key} = "2 {unit}"'
    path = ("budget", key)
    if not isinstance(raw, str):
        raise document.error(
            f"budget: {key} wants a limit in {unit}, not {described(raw)}", *path, cure=cure
        )
    written = raw.strip()
    if key == "phase" and written.endswith("°"):
        written = f"{written[:-1]}deg"
    if not written.endswith(unit):
        raise document.error(f"budget: {key} = {quoted(raw)} is no limit in {unit}", *path, cure=cure)
    try:
        limit = read_number(written[: -len(unit)], where=str(document.place(*path))) * scale
    except InputError as error:
        raise document.error(f"budget: {key}: {error.what}", *path, cure=cure) from error
    if limit <= 0:
        raise document.error(f"budget: {key} = {quoted(raw)} leaves no room at all", *path, cure=cure)
    return limit


def _range(document: Document, raw: Any) -> tuple[Fraction, Fraction]:
    cure = 'write range = ["20 Hz", "20 kHz"]'
    path = ("budget", "range")
    if not isinstance(raw, list) or len(raw) != 2 or not all(isinstance(item, str) for item in raw):
        raise document.error("budget: range wants two frequencies", *path, cure=cure)
    ends = []
    for item in raw:
        try:
            found = read_value(item, FREQUENCY, where=str(document.place(*path)), cycles=True).exact
        except InputError as error:
            raise document.error(f"budget: range: {error.what}", *path, cure=cure) from error
        if found is None or found <= 0:
            raise document.error(f"budget: range: {quoted(item)} is no frequency", *path, cure=cure)
        ends.append(found)
    if ends[0] >= ends[1]:
        raise document.error(
            "budget: range ends before it begins", *path, cure="write the lower one first"
        )
    return ends[0], ends[1]

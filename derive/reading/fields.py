"""Typed items of a document: names, nodes, texts and values, each refused with its line."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterable, Sequence
from fractions import Fraction
from typing import Any

from derive.errors import InputError, NotYetSupportedError
from derive.quantities.dimension import RATIO, Dimension
from derive.quantities.symbol import Value
from derive.quantities.units import dimension_example, dimension_words
from derive.quantities.value import read_value
from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import BareNumber, Document
from derive.topology.topology import GROUND

RESERVED = ("s", GROUND)
NAME = re.compile(r"[A-Za-z][A-Za-z0-9_]*")
LONGEST_NAME = 40
_LARGEST_INTEGER = 10**60
_GROUND_SLIPS = ("gnd", "ground", "earth")
_TURNING_MARKS = "\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069"
NAME_RULE = "a name is a letter, then letters, digits and _"


def check_name(document: Document, name: str, what: str, *path: str | int) -> None:
    """Refuse a name that breaks the rule, or that is reserved."""
    if not NAME.fullmatch(name):
        raise document.error(f"{what} {quoted(name)} is not a name", *path, cure=NAME_RULE)
    if len(name) > LONGEST_NAME:
        raise document.error(
            f"{what} {quoted(name)} is longer than {LONGEST_NAME} characters",
            *path,
            cure="shorten it",
        )
    if name in RESERVED:
        meaning = "the complex frequency" if name == "s" else "the ground node"
        raise document.error(
            f"{what} {quoted(name)}: this name is reserved for {meaning}",
            *path,
            cure="choose another name",
        )


def node(document: Document, raw: Any, item: str, *path: str | int) -> str:
    """Give the node's name, or refuse it."""
    if not isinstance(raw, str):
        raise document.error(
            f"{item}: a node is wanted, not {described(raw)}",
            *path,
            cure='write the node\'s name in quotes, such as "out"',
        )
    if raw == GROUND:
        return raw
    if raw.casefold() in _GROUND_SLIPS or raw == "0":
        raise document.error(
            f"{item}: node {quoted(raw)}: the ground node has one name here",
            *path,
            cure=f'write "{GROUND}"',
        )
    check_name(document, raw, f"{item}: node", *path)
    return raw


def nodes(document: Document, raw: Any, count: int, item: str, *path: str | int) -> tuple[str, ...]:
    """Give so many nodes: a single name for one, a list for two that differ."""
    if count == 1:
        return (node(document, raw, item, *path),)
    key = path[-1]
    if not isinstance(raw, list) or len(raw) != count:
        found = f"{len(raw)} nodes" if isinstance(raw, list) else described(raw)
        raise document.error(
            f"{item}: {key} wants two nodes, not {found}",
            *path,
            cure=f'write {key} = ["a", "b"]',
        )
    pair = tuple(node(document, raw[i], item, *path, i) for i in range(count))
    if pair[0] == pair[1]:
        raise document.error(
            f"{item}: {key} names node {quoted(pair[0])} twice",
            *path,
            cure="name two different nodes",
        )
    return pair


def table(document: Document, raw: Any, item: str, *path: str | int, cure: str) -> dict[str, Any]:
    """Give the table, or refuse what is none."""
    if not isinstance(raw, dict):
        raise document.error(f"{item}: a table is wanted, not {described(raw)}", *path, cure=cure)
    return raw


def text(
    document: Document,
    raw: Any,
    item: str,
    *path: str | int,
    longest: int = 200,
    lines: bool = False,
) -> str:
    """Give a text that can be printed, or refuse it."""
    if not isinstance(raw, str):
        raise document.error(
            f"{item}: a text is wanted, not {described(raw)}", *path, cure="write it in quotes"
        )
    plain = raw.replace("\r\n", "\n")
    allowed = "\n\t" if lines else "\t"
    if any(_unprintable(letter) and letter not in allowed for letter in plain):
        raise document.error(
            f"{item}: the text holds a control character{'' if lines else ' or a line end'}",
            *path,
            cure="take it out",
        )
    if len(plain) > longest:
        raise document.error(
            f"{item}: the text is longer than {longest} characters", *path, cure="shorten it"
        )
    return plain


def value(
    document: Document,
    raw: Any,
    dimension: Dimension,
    item: str,
    *path: str | int,
    cycles: bool | None = None,
) -> Value:
    """Give the value, or refuse it; a bare number passes for a pure ratio only."""
    where = str(document.place(*path))
    key = path[-1]
    written = _written(document, raw, dimension, f"{item}: {key}", *path)
    try:
        return read_value(written, dimension, where=where, cycles=cycles)
    except InputError as error:
        raise InputError(f"{item}: {error.what}", where=where, cure=error.cure) from error


def known_keys(
    document: Document, found: Iterable[str], known: Sequence[str], item: str, *path: str | int
) -> None:
    """Refuse a key that is not known here, with the one that may have been meant."""
    for key in found:
        if key not in known:
            raise document.error(
                f"{item}: the key {quoted(key)} is not known here",
                *path,
                key,
                cure=did_you_mean(
                    key, known, f"the key{' is' if len(known) == 1 else 's are'} {listed(known)}"
                ),
            )


def not_yet(document: Document, what: str, *path: str | int, cure: str) -> NotYetSupportedError:
    """Give the error for what the contract holds, but this version does not."""
    return NotYetSupportedError(
        f"{what} not yet supported here", where=str(document.place(*path)), cure=cure
    )


def described(raw: Any) -> str:
    """Give what stands there in words: "the number 3", "a list"."""
    if isinstance(raw, bool):
        return f"the bare word {str(raw).lower()}"
    if isinstance(raw, BareNumber):
        return f"the bare number {raw.text[:40]}"
    if isinstance(raw, int):
        return f"the bare number {raw}" if abs(raw) < _LARGEST_INTEGER else "a huge number"
    if isinstance(raw, str):
        return f"the text {quoted(raw)}"
    if isinstance(raw, list):
        return "a list"
    return "a table" if isinstance(raw, dict) else "a date or time"


def _unprintable(letter: str) -> bool:
    # The marks that turn the direction of writing about could make a sheet say what it does not.
    return unicodedata.category(letter) in ("Cc", "Cs", "Zl", "Zp") or letter in _TURNING_MARKS


def _written(document: Document, raw: Any, dimension: Dimension, item: str, *path: str | int) -> str:
    if isinstance(raw, str):
        return raw
    if dimension == RATIO and isinstance(raw, BareNumber):
        return raw.text.replace("_", "")
    if dimension == RATIO and isinstance(raw, int) and not isinstance(raw, bool):
        if abs(raw) < _LARGEST_INTEGER:
            return str(raw)
        raise document.error(f"{item}: the number is too large", *path, cure="write a smaller one")
    raise document.error(
        f"{item} wants {dimension_words(dimension)}, not {described(raw)}",
        *path,
        cure=f"write it in quotes with its unit, such as {dimension_example(dimension)}",
    )


def exact_ratio(document: Document, raw: Any, item: str, *path: str | int) -> Fraction:
    """Give a pure ratio that may not be left open."""
    found = value(document, raw, RATIO, item, *path).exact
    if found is None:
        raise document.error(
            f'{item}: {path[-1]} may not be left open with "?"', *path, cure='write "1" or "1/2"'
        )
    return found

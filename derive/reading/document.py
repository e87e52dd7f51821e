"""A TOML text as data, with the line of every item and the errors that point to it."""

from __future__ import annotations

import re
import tomllib
from dataclasses import dataclass
from typing import Any

from derive.errors import InputError
from derive.quantities.words import quoted
from derive.reading.lines import LineIndex, Path, index_lines
from derive.topology.topology import Place

_POSITION = re.compile(r" \(at (?:line (\d+), column (\d+)|end of document)\)$")
_TWICE = ("overwrite", "Duplicate", "twice", "mutate immutable", "redefine namespace")


@dataclass(frozen=True, slots=True)
class BareNumber:
    """A number with a point or exponent that stands without quotes, as it was typed."""

    text: str


@dataclass(frozen=True, slots=True)
class Document:
    """The data of a file; paths into it give lines."""

    file: str
    data: dict[str, Any]
    index: LineIndex

    def place(self, *path: str | int) -> Place:
        """Give the file and line of the item."""
        return Place(self.file, self.index.line(path))

    def error(self, what: str, *path: str | int, cure: str) -> InputError:
        """Give the error that points to the item."""
        return InputError(what, where=str(self.place(*path)), cure=cure)


def load(text: str, file: str) -> Document:
    """Give the text's data and lines.

    Raises: InputError, with the line, where the text is not TOML.
    """
    index = index_lines(text)
    if index.too_deep:
        raise InputError(
            "the file nests tables or lists too deeply",
            where=f"{file}:{index.too_deep}",
            cure="a topology needs three levels at most",
        )
    try:
        data = tomllib.loads(text, parse_float=BareNumber)
    except tomllib.TOMLDecodeError as error:
        raise _not_toml(text, file, str(error), index) from error
    except ValueError as error:
        raise InputError(
            "the file holds a number or date that cannot be read",
            where=file,
            cure='write values in quotes, such as "4k7"',
        ) from error
    return Document(file, data, index)


def _not_toml(text: str, file: str, message: str, index: LineIndex) -> InputError:
    found = _POSITION.search(message)
    says = message[: found.start()] if found else message
    last = text.rstrip().count("\n") + 1
    line = int(found[1]) if found and found[1] else last
    if index.repeats and any(word in says for word in _TWICE):
        return _twice(file, *index.repeats[0])
    column = f", column {found[2]}" if found and found[2] else ""
    return InputError(
        f"this is not TOML: {_softened(says)}{column}", where=f"{file}:{line}", cure=_cure(says)
    )


def _twice(file: str, path: Path, first: int, second: int) -> InputError:
    name = quoted(str(path[-1]))
    table = f" in {quoted('.'.join(str(step) for step in path[:-1]))}" if path[:-1] else ""
    return InputError(
        f"the name {name} is written twice{table}, first in line {first}",
        where=f"{file}:{second}",
        cure="rename one of them or take one out",
    )


def _softened(says: str) -> str:
    words = says[:1].lower() + says[1:]
    return "".join(letter if letter.isprintable() else "�" for letter in words)[:160]


def _cure(says: str) -> str:
    if "inline table" in says:
        return "see that { } stand on one line, with commas between the keys and none at the end"
    if "array" in says:
        return "see that the list has its closing ] and commas between its items"
    if "Invalid value" in says:
        return 'write texts and values in quotes, such as "4k7"'
    if "key" in says or "'='" in says or "statement" in says:
        return 'write name = value, one a line, such as title = "Line buffer"'
    return "see that every text has both its quotes and every bracket its partner"

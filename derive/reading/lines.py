"""The line on which every table, key and item of a TOML text stands.

The standard parser gives no positions, so this one walks a text that the standard parser has
already accepted and notes where things begin; it reads no values and judges nothing.
"""

from __future__ import annotations

import tomllib
from bisect import bisect_right
from dataclasses import dataclass

Path = tuple[str | int, ...]

# The standard parser takes time that grows with the square of the depth, and stack with the depth.
DEEPEST = 20
_BLANK = " \t\r\n"
_BARE_END = " \t\r\n=.]}#,"


@dataclass(frozen=True, slots=True)
class LineIndex:
    """Lines by path.

    `repeats` holds (path, first line, second line) of names written twice; `too_deep` is the line
    where tables or lists nest deeper than `DEEPEST`, 0 where none do.
    """

    lines: dict[Path, int]
    repeats: tuple[tuple[Path, int, int], ...]
    too_deep: int = 0

    def line(self, path: Path) -> int:
        """Give the line of the item, or of the nearest thing around it that has one."""
        for length in range(len(path), 0, -1):
            if path[:length] in self.lines:
                return self.lines[path[:length]]
        return 1


def index_lines(text: str) -> LineIndex:
    """Give the line of every table, key and array item of the text.

    Given: TOML text. A text that is not TOML is indexed as far as it makes sense, one that nests too
    deeply as far as it does not.
    """
    walker = _Walker(text)
    too_deep = 0
    try:
        walker.document()
    except _TooDeepError:
        too_deep = walker.line()
    except _LostError:
        pass
    return LineIndex(walker.lines, tuple(walker.repeats), too_deep)


class _LostError(Exception):
    """The text makes no sense from here on."""


class _TooDeepError(Exception):
    """The text nests deeper than any topology does."""


class _Walker:
    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.starts = [0, *(i + 1 for i, letter in enumerate(text) if letter == "\n")]
        self.lines: dict[Path, int] = {}
        self.repeats: list[tuple[Path, int, int]] = []
        self.counts: dict[Path, int] = {}
        self.valued: set[Path] = set()

    def document(self) -> None:
        table: Path = ()
        while self.skip():
            if self.text.startswith("[", self.at):
                table = self.header()
            else:
                self.pair(table)

    def line(self) -> int:
        return bisect_right(self.starts, self.at)

    def peek(self) -> str:
        return self.text[self.at : self.at + 1]

    def take(self, expected: str) -> None:
        if not self.text.startswith(expected, self.at):
            raise _LostError
        self.at += len(expected)

    def skip(self) -> bool:
        """Pass blanks, line ends and comments; False at the end of the text."""
        while self.at < len(self.text):
            letter = self.text[self.at]
            if letter == "#":
                end = self.text.find("\n", self.at)
                self.at = len(self.text) if end < 0 else end
            elif letter in _BLANK:
                self.at += 1
            else:
                return True
        return False

    def header(self) -> Path:
        line = self.line()
        many = self.text.startswith("[[", self.at)
        self.take("[[" if many else "[")
        path = self.through_arrays(self.key())
        self.take("]]" if many else "]")
        self.note_ancestors(path, line)
        if many:
            number = self.counts.get(path, 0)
            self.counts[path] = number + 1
            self.lines.setdefault(path, line)
            path = (*path, number)
            self.lines[path] = line
        elif path in self.valued:
            self.repeats.append((path, self.lines[path], line))
        else:
            self.lines[path] = line
            self.valued.add(path)
        return path

    def through_arrays(self, keys: Path) -> Path:
        path: Path = ()
        for index, key in enumerate(keys):
            path = (*path, key)
            if path in self.counts and index < len(keys) - 1:
                path = (*path, self.counts[path] - 1)
        return path

    def note_ancestors(self, path: Path, line: int) -> None:
        for length in range(1, len(path)):
            self.lines.setdefault(path[:length], line)

    def pair(self, table: Path) -> None:
        line = self.line()
        path = table + self.key()
        self.skip()
        self.take("=")
        self.note_ancestors(path, line)
        if path in self.valued:
            self.repeats.append((path, self.lines[path], line))
        self.valued.add(path)
        self.lines.setdefault(path, line)
        self.skip()
        self.value(path)

    def key(self) -> Path:
        keys: list[str | int] = []
        while True:
            self.skip()
            keys.append(self.one_key())
            if len(keys) > DEEPEST:
                raise _TooDeepError
            self.skip()
            if self.peek() != ".":
                return tuple(keys)
            self.at += 1

    def one_key(self) -> str:
        begin = self.at
        if self.peek() in ('"', "'"):
            self.string()
            return self.unquoted(self.text[begin : self.at])
        while self.at < len(self.text) and self.text[self.at] not in _BARE_END:
            self.at += 1
        if self.at == begin:
            raise _LostError
        return self.text[begin : self.at]

    def unquoted(self, key: str) -> str:
        try:
            return str(tomllib.loads(f"k = {key}")["k"])
        except tomllib.TOMLDecodeError as error:
            raise _LostError from error

    def value(self, path: Path) -> None:
        letter = self.peek()
        if len(path) > DEEPEST:
            raise _TooDeepError
        if letter == "":
            raise _LostError
        if letter in ('"', "'"):
            self.string()
        elif letter == "[":
            self.array(path)
        elif letter == "{":
            self.inline_table(path)
        else:
            self.bare()

    def string(self) -> None:
        quote = self.peek()
        long = self.text.startswith(quote * 3, self.at)
        mark = quote * 3 if long else quote
        self.at += len(mark)
        while not self.text.startswith(mark, self.at):
            if self.at >= len(self.text) or (not long and self.peek() == "\n"):
                raise _LostError
            self.at += 2 if quote == '"' and self.peek() == "\\" else 1
        self.at += len(mark)
        # Up to two quotes may stand right before the closing three.
        while long and self.peek() == quote:
            self.at += 1

    def array(self, path: Path) -> None:
        self.take("[")
        number = 0
        while self.skip() and self.peek() != "]":
            self.lines[(*path, number)] = self.line()
            self.value((*path, number))
            number += 1
            self.skip()
            if self.peek() != ",":
                break
            self.at += 1
        self.skip()
        self.take("]")

    def inline_table(self, path: Path) -> None:
        self.take("{")
        while self.skip() and self.peek() != "}":
            self.pair(path)
            self.skip()
            if self.peek() != ",":
                break
            self.at += 1
        self.skip()
        self.take("}")

    def bare(self) -> None:
        # A bare value may hold a blank (a date and its time), so it runs to a true end.
        begin = self.at
        while self.at < len(self.text) and self.text[self.at] not in ",]}#\n":
            self.at += 1
        if self.at == begin:
            raise _LostError

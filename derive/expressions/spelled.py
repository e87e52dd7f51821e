"""Text in the plain signs of the grammar, every sign of it with the place in what the user typed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

PieceKind = Literal["name", "number", "open", "close", "root", "raised", "sign", "space"]


class Refusal(Exception):
    """Raised inside the reader for what cannot be read; `position` is a place in what the user typed."""

    def __init__(self, position: int, what: str, cure: str) -> None:
        self.position = position
        self.what = what
        self.cure = cure
        super().__init__(what)


@dataclass(frozen=True, slots=True)
class Piece:
    """A run of plain signs that stands for what was typed from `start` to before `end`.

    `by_command` tells a name or parenthesis that a command or braces made.
    """

    text: str
    start: int
    end: int
    kind: PieceKind
    by_command: bool = False


@dataclass(frozen=True, slots=True)
class Spelled:
    """Plain text; `starts` and `ends` say from where to where each of its signs was typed.

    Both are None where every sign stands for itself, `shift` further on.
    """

    text: str
    starts: tuple[int, ...] | None = None
    ends: tuple[int, ...] | None = None
    shift: int = 0

    def start(self, position: int) -> int:
        """Give where the sign at a position was typed; past the last one, where the typing ends."""
        if self.starts is None or self.ends is None:
            return position + self.shift
        if position < len(self.starts):
            return self.starts[position]
        return self.ends[-1] if self.ends else self.shift

    def end(self, position: int) -> int:
        """Give where what stands before a position ends."""
        if self.ends is None:
            return position + self.shift
        return self.ends[position - 1] if 0 < position <= len(self.ends) else self.start(position)

    def part(self, begin: int, end: int) -> Spelled:
        """Give the plain text from one position to before another."""
        if self.starts is None or self.ends is None:
            return Spelled(self.text[begin:end], shift=self.shift + begin)
        return Spelled(
            self.text[begin:end], self.starts[begin:end], self.ends[begin:end], shift=self.start(begin)
        )


def joined(pieces: list[Piece]) -> Spelled:
    """Join pieces, words and numbers kept apart; one as long as what was typed keeps its places sign by sign."""
    texts: list[str] = []
    starts: list[int] = []
    ends: list[int] = []
    for piece in pieces:
        if texts and piece.kind in ("name", "number", "root") and texts[-1][-1:].isalnum():
            texts.append(" ")
            starts.append(piece.start)
            ends.append(piece.start)
        texts.append(piece.text)
        if len(piece.text) == piece.end - piece.start:
            starts.extend(range(piece.start, piece.end))
            ends.extend(range(piece.start + 1, piece.end + 1))
        else:
            starts.extend([piece.start] * len(piece.text))
            ends.extend([piece.end] * len(piece.text))
    return Spelled("".join(texts), tuple(starts), tuple(ends))

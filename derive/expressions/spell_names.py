"""Spells names: letters of all kinds with their subscripts, R_{E} and r_π and C₁ as R_E and r_pi and C_1."""

from __future__ import annotations

import re

from derive.expressions.latex import GAPS, WORDS
from derive.expressions.letters import GREEK_COMMANDS, greek_word, is_gap, lowered, plain_letter
from derive.expressions.spelled import Piece, PieceKind, Refusal

MAX_BRACES = 60
BRACES_CURE = "see that every { has its }"
COMMAND = re.compile(r"\\([A-Za-z]+|.)", re.DOTALL)
_LETTERS_AND_DIGITS = re.compile(r"[A-Za-z0-9_]*")
_KNOWN = r"\frac, \sqrt, \cdot, \times, \parallel, \left, \right, spaces and Greek letters are read"
_NAME = re.compile("[A-Za-z0-9]+(_[A-Za-z0-9]+)*")


class NameSpeller:
    """The part of the speller that reads names; `at` is how far it has come."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.depth = 0
        self.pieces: list[Piece] = []
        self.is_latex = False

    def put(self, text: str, start: int, end: int, kind: PieceKind, by_command: bool = False) -> None:
        """Add a piece."""
        self.pieces.append(Piece(text, start, end, kind, by_command))

    def gap(self) -> None:
        """Pass spaces."""
        while self.at < len(self.text) and is_gap(self.text[self.at]):
            self.at += 1

    def name(self) -> None:
        """Spell a name with its subscripts."""
        start = self.at
        command = self.text[start] == "\\"
        text = self.word()
        while self.at < len(self.text):
            sign = self.text[self.at]
            if self.text.startswith(("_{", "_\\"), self.at):
                text = f"{text}_{self.subscript()}"
                break
            if low := lowered(sign):
                text += low if "_" in text else f"_{low}"
                self.at += 1
            elif (word := greek_word(sign)) and (text.endswith("_") or _may_carry(text)):
                text += word
                self.at += 1
                text += self.tail()
            elif text.endswith("_") and (letter := plain_letter(sign)):
                text += letter
                self.at += 1
                text += self.rest()
            else:
                break
        self.put(text, start, self.at, "name", by_command=command)

    def word(self) -> str:
        """Take the letter, Greek letter or word that a name begins with, and what of it is plain."""
        sign = self.text[self.at]
        if sign == "\\":
            return self.named_letter() + self.tail()
        self.at += 1
        if word := greek_word(sign):
            return word + self.tail()
        return plain_letter(sign) + self.rest()

    def rest(self) -> str:
        """Take plain letters, digits and underscores, but for one that braces or a command follow."""
        found = _LETTERS_AND_DIGITS.match(self.text, self.at)
        taken = found[0] if found else ""
        if taken.endswith("_") and self.text[self.at + len(taken) :].startswith(("{", "\\")):
            taken = taken[:-1]
        self.at += len(taken)
        return taken

    def tail(self) -> str:
        """Take what may follow a Greek letter: digits, and subscripts behind an underscore."""
        sign = self.text[self.at : self.at + 1]
        return self.rest() if sign == "_" or (sign.isascii() and sign.isdigit()) else ""

    def named_letter(self) -> str:
        r"""Take a Greek letter by its command, or the word in \mathrm{...}."""
        found = COMMAND.match(self.text, self.at)
        name = found[1] if found else ""
        start, self.at = self.at, self.at + 1 + len(name)
        if name in GREEK_COMMANDS:
            return GREEK_COMMANDS[name]
        if name not in WORDS:
            raise unknown_command(start, name)
        self.gap()
        if self.text.startswith("{", self.at):
            word = self.inside()
            if word[:1].isalpha():
                return word
        raise Refusal(start, f"\\{name} holds no word", f"write \\{name}{{out}}")

    def subscript(self) -> str:
        """Take a subscript in braces, or one of a single command."""
        self.is_latex = True
        self.at += 1
        return self.inside() if self.text[self.at] == "{" else self.named_letter()

    def inside(self) -> str:
        """Take the letters and digits between braces; commas and inner subscripts become underscores."""
        start = self.at
        self.depth += 1
        if self.depth > MAX_BRACES:
            raise Refusal(start, "subscripts are nested too deeply", "shorten this name")
        self.at += 1
        text = ""
        while not self.text.startswith("}", self.at):
            if self.at >= len(self.text):
                raise Refusal(len(self.text.rstrip()), "a brace is not closed", BRACES_CURE)
            text += self.inner()
        self.at += 1
        self.depth -= 1
        if not _NAME.fullmatch(text):
            raise Refusal(start, "a subscript of letters and digits is wanted", "write R_{E} or r_{\\pi}")
        return text

    def inner(self) -> str:
        """Take one sign of a subscript."""
        sign = self.text[self.at]
        if sign == "{":
            return self.inside()
        found = COMMAND.match(self.text, self.at)
        if found and (found[1] in GREEK_COMMANDS or found[1] in WORDS):
            return self.named_letter()
        if found and found[1] in GAPS:
            self.at = found.end()
            return ""
        taken = plain_letter(sign) or greek_word(sign) or lowered(sign)
        if not taken and (is_gap(sign) or sign in ",_"):
            taken = "" if is_gap(sign) else "_"
        elif not taken and sign.isascii() and sign.isdigit():
            taken = sign
        elif not taken:
            raise Refusal(self.at, "a subscript holds letters and digits only", "shorten it to a name")
        self.at += 1
        return taken


def unknown_command(start: int, name: str) -> Refusal:
    """Give the error for a command that is not read."""
    shown = name if name.isprintable() else "?"
    return Refusal(start, f"\\{shown} has no meaning here", _KNOWN)


def _may_carry(text: str) -> bool:
    """Say whether a Greek letter right behind a name is its subscript: rπ, Cμ, but not R_Eβ."""
    return len(text) == 1 and text.isascii()

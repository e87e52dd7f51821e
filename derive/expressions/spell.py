"""Writes what engineers type in the plain signs of the grammar: Ω β π ∥ ² − ·, and fragments of LaTeX.

Nothing is understood here: one run of signs becomes another, and keeps its place. The grammar then reads both
ways of writing alike.
"""

from __future__ import annotations

import re
from collections.abc import Callable

from derive.expressions.latex import COMMANDS, DELIMITERS, FRACTIONS, GAPS, RELATIONS, SIZES, WORDS
from derive.expressions.letters import (
    GREEK_COMMANDS,
    NUMBER,
    OHMS,
    RAISED,
    SIGNS,
    greek_word,
    is_gap,
    plain_letter,
)
from derive.expressions.side_by_side import multiplied
from derive.expressions.spell_names import BRACES_CURE, COMMAND, MAX_BRACES, NameSpeller, unknown_command
from derive.expressions.spelled import PieceKind, Refusal, Spelled, joined

_POWERS = {"p": -12, "n": -9, "u": -6, "µ": -6, "μ": -6, "m": -3, "": 0, "k": 3, "M": 6, "G": 9}


def spell(text: str) -> Spelled:
    """Give what was typed in the plain signs of the grammar.

    Two factors side by side are multiplied where braces or commands show LaTeX, and nobody could read it
    otherwise. What has no plain sign is left as it is, for the grammar to refuse.
    Raises: Refusal for LaTeX that is broken or has no meaning here.
    """
    if text.isascii() and not any(sign in text for sign in ("\\", "{", "}", "//")):
        return Spelled(text)
    speller = _Speller(text)
    speller.run()
    pieces = speller.pieces
    return joined(multiplied(pieces, text) if speller.is_latex else pieces)


class _Speller(NameSpeller):
    def run(self, closing: str = "") -> None:
        """Spell up to the closing brace, or to the end."""
        while self.at < len(self.text):
            sign = self.text[self.at]
            if sign == "}":
                if closing:
                    return
                raise Refusal(self.at, '"}" closes nothing', BRACES_CURE)
            self.one(sign)
        if closing:
            raise Refusal(len(self.text.rstrip()), "a brace is not closed", BRACES_CURE)

    def one(self, sign: str) -> None:
        """Spell what begins here."""
        if sign == "\\":
            self.command()
        elif sign == "{":
            self.group()
        elif plain_letter(sign) or greek_word(sign):
            self.name()
        elif number := NUMBER.match(self.text, self.at):
            self.number(number)
        elif sign in RAISED:
            self.raised()
        elif self.text.startswith("^{", self.at):
            self.put("^", self.at, self.at + 1, "sign")
            self.at += 1
            self.group()
        elif sign == "√":
            self.radical()
        else:
            self.sign(sign)

    def sign(self, sign: str) -> None:
        """Spell a sign by itself."""
        long = "//" if self.text.startswith("//", self.at) else sign
        text = " " if is_gap(sign) else SIGNS.get(long, long)
        kind: PieceKind = "space" if text.isspace() else "sign"
        kind = {"(": "open", ")": "close"}.get(text, kind)  # type: ignore[assignment]
        self.put(text, self.at, self.at + len(long), kind)
        self.at += len(long)

    def number(self, found: re.Match[str]) -> None:
        """Spell a number; one of ohms is that number with its power of ten."""
        text, start, self.at = found[0], self.at, found.end()
        ohms = OHMS.match(self.text, self.at)
        if ohms:
            mantissa, _, power = text.lower().partition("e")
            if len(power) < 6:
                text = f"{mantissa}e{int(power or 0) + _POWERS[ohms[1]]}"
                self.at = ohms.end()
        self.put(text, start, self.at, "number")

    def raised(self) -> None:
        """Spell raised digits as an exponent."""
        start = self.at
        while self.at < len(self.text) and self.text[self.at] in RAISED:
            self.at += 1
        digits = "".join(RAISED[sign] for sign in self.text[start : self.at])
        self.put(f"^{digits}", start, self.at, "raised")

    def radical(self) -> None:
        """Spell a radical sign over a parenthesis, a name or a number."""
        start = self.at
        self.at += 1
        while self.at < len(self.text) and is_gap(self.text[self.at]):
            self.at += 1
        self.put("sqrt", start, start + 1, "root")
        rest = self.text[self.at : self.at + 1]
        if rest and (plain_letter(rest) or greek_word(rest) or NUMBER.match(self.text, self.at)):
            self.put("(", self.at, self.at, "open", by_command=True)
            self.one(rest)
            self.put(")", self.at, self.at, "close")

    def group(self, before: Callable[[], None] | None = None) -> None:
        """Spell what stands between braces, in parentheses."""
        self.is_latex = True
        start = self.at
        self.depth += 1
        if self.depth > MAX_BRACES:
            what = f"braces are nested more than {MAX_BRACES} deep"
            raise Refusal(start, what, "give the inner parts names of their own")
        self.put("(", start, start + 1, "open", by_command=True)
        self.at += 1
        self.run("}")
        self.put(")", self.at, self.at + 1, "close")
        self.at += 1
        self.depth -= 1

    def argument(self, command: str) -> None:
        """Spell the argument of a command: braces, or one sign."""
        self.gap()
        sign = self.text[self.at : self.at + 1]
        if sign == "{":
            self.group()
            return
        start = self.at
        if sign.isascii() and sign.isalnum():
            self.at += 1
            kind: PieceKind = "number" if sign.isdigit() else "name"
            self.put("(", start, start, "open", by_command=True)
            self.put(sign, start, self.at, kind)
            self.put(")", self.at, self.at, "close")
            return
        raise Refusal(start, f"\\{command} lacks what it stands over", f"write \\{command}{{...}}")

    def command(self) -> None:
        """Spell a command of LaTeX."""
        self.is_latex = True
        start = self.at
        found = COMMAND.match(self.text, self.at)
        if found is None:
            raise Refusal(start, "a backslash stands alone", "take it away")
        name, end = found[1], found.end()
        if name in GREEK_COMMANDS or name in WORDS:
            self.name()
            return
        self.at = end
        if name in GAPS:
            self.put(" ", start, end, "space")
        elif name in COMMANDS:
            text, kind = COMMANDS[name]
            self.put(text, start, end, kind)
        elif name in RELATIONS:
            self.put(RELATIONS[name], start, end, "sign")
        elif name in SIZES:
            self.delimiter(start)
        elif name in FRACTIONS:
            self.fraction(name, start)
        elif name == "sqrt":
            self.root(start)
        else:
            raise unknown_command(start, name)

    def delimiter(self, start: int) -> None:
        r"""Spell what stands behind \left or \right."""
        self.gap()
        for written, text in DELIMITERS.items():
            if self.text.startswith(written, self.at):
                self.at += len(written)
                kind: PieceKind = {"(": "open", ")": "close"}.get(text, "space")  # type: ignore[assignment]
                self.put(text, start, self.at, kind)
                return
        raise Refusal(self.at, "a parenthesis is wanted here", r"write \left( and \right)")

    def fraction(self, name: str, start: int) -> None:
        """Spell a fraction as a quotient in parentheses."""
        self.put("(", start, self.at, "open", by_command=True)
        self.argument(name)
        self.put("/", self.at, self.at, "sign")
        self.argument(name)
        self.put(")", self.at, self.at, "close")

    def root(self, start: int) -> None:
        """Spell a square root."""
        self.gap()
        if self.text.startswith("[", self.at):
            raise Refusal(self.at, "only square roots are read", r"write \sqrt{x}")
        self.put("sqrt", start, self.at, "root")
        self.argument("sqrt")

"""Reads the pages of a PDF out: what is written on them and what is drawn, in order."""

from __future__ import annotations

import hashlib
import re
from typing import Any

import pikepdf

from derive.review.pdf_objects import Budget, content, page_numbers

# The mode in which letters take their place and leave no ink.
_UNSEEN = 3
_PAIR = re.compile(rb"<([0-9A-Fa-f]+)>\s*<([0-9A-Fa-f]+)>")
_RANGE = re.compile(rb"<([0-9A-Fa-f]+)>\s*<([0-9A-Fa-f]+)>\s*<([0-9A-Fa-f]+)>")
_SHOWS = frozenset({"Tj", "TJ", "'", '"'})
_WIDE_GAP = -200  # thousandths of the size: as far apart as words are


class Font:
    """What the codes of a font mean as letters."""

    def __init__(self, font: Any, budget: Budget) -> None:
        self.width = 2 if font.get("/Subtype") == pikepdf.Name("/Type0") else 1
        self.letters: dict[int, str] = {}
        if "/ToUnicode" in font:
            self._learn(budget.stream(font["/ToUnicode"]))

    def _learn(self, table: bytes) -> None:
        for block in re.findall(rb"beginbfchar(.*?)endbfchar", table, re.DOTALL):
            for code, letters in _PAIR.findall(block):
                self.letters[int(code, 16)] = _letters(letters)
        for block in re.findall(rb"beginbfrange(.*?)endbfrange", table, re.DOTALL):
            for first, last, letters in _RANGE.findall(block):
                start, end = int(first, 16), int(last, 16)
                for code in range(start, min(end, start + 255) + 1):
                    text = _letters(letters)
                    self.letters[code] = text[:-1] + chr(ord(text[-1]) + code - start) if text else ""

    def text(self, codes: bytes) -> str:
        """Give the letters of a string of codes."""
        whole = range(0, len(codes) - self.width + 1, self.width)
        numbers = (int.from_bytes(codes[at : at + self.width], "big") for at in whole)
        return "".join(self.letters.get(number, "\N{REPLACEMENT CHARACTER}") for number in numbers)


def _letters(digits: bytes) -> str:
    return bytes.fromhex(digits.decode("ascii")).decode("utf-16-be", "replace")


class Heights:
    """Follows how high on the page text is set."""

    def __init__(self) -> None:
        self._scale, self._shift = 1.0, 0.0
        self._kept: list[tuple[float, float]] = []
        self._line = 0.0

    def follow(self, name: str, operands: Any) -> None:
        """Take in one operator of the page."""
        if name == "q":
            self._kept.append((self._scale, self._shift))
        elif name == "Q" and self._kept:
            self._scale, self._shift = self._kept.pop()
        elif name == "cm":
            self._shift += self._scale * float(operands[5])
            self._scale *= float(operands[3])
        elif name == "BT":
            self._line = 0.0
        elif name == "Tm":
            self._line = float(operands[5])
        elif name in ("Td", "TD"):
            self._line += float(operands[1])

    @property
    def of_text(self) -> float:
        """The height of the line of text, in points from the foot of the page."""
        return self._shift + self._scale * self._line


class Reader:
    """Reads pages out, each font once."""

    def __init__(self, pdf: Any, budget: Budget) -> None:
        self._pdf = pdf
        self._budget = budget
        self._fonts: dict[tuple[int, int], Font] = {}
        self._numbers = page_numbers(pdf)

    def items(self, number: int) -> list[list[Any]]:
        """Give the items of a page: ["words" | "equation" | "drawing", text, digest, height on the page]."""
        page = self._pdf.pages[number - 1]
        resources = page.obj.get("/Resources", pikepdf.Dictionary())
        found: list[list[Any]] = []
        drawn, marks, height = hashlib.sha256(), 0, 0.0
        text, font, unseen, mode = "", None, False, False
        heights = Heights()
        stream = self._pdf.make_stream(content(page, self._budget))
        for instruction in pikepdf.parse_content_stream(stream):
            self._budget.count()
            operands, name = instruction.operands, str(instruction.operator)
            heights.follow(name, operands)
            if name == "Tf":
                font = self._font(resources, operands[0])
            elif name == "Tr":
                unseen = int(operands[0]) == _UNSEEN
            if name in _SHOWS:
                text += self._shown(font, operands)
                mode, height = unseen, heights.of_text
            elif name == "ET":
                if marks:
                    found.append(["drawing", "", drawn.hexdigest(), height])
                found.append(["equation" if mode else "words", text.strip(), text, height])
                drawn, text, marks = hashlib.sha256(), "", 0
            elif name == "BT":
                mode = unseen
            else:
                marks += 1
                drawn.update(f"{[str(operand) for operand in operands]} {name}\n".encode())
                if name == "Do":
                    drawn.update(self._drawing(resources, operands[0]).encode())
        if marks:
            found.append(["drawing", "", drawn.hexdigest(), 0.0])
        return found

    def _font(self, resources: Any, name: Any) -> Font | None:
        fonts = resources.get("/Font", pikepdf.Dictionary())
        if str(name) not in fonts:
            return None
        font = fonts[str(name)]
        if font.objgen not in self._fonts or not font.is_indirect:
            self._fonts[font.objgen] = Font(font, self._budget)
        return self._fonts[font.objgen]

    def _drawing(self, resources: Any, name: Any) -> str:
        drawings = resources.get("/XObject", pikepdf.Dictionary())
        if str(name) not in drawings:
            return ""
        return self._budget.once(drawings[str(name)], self._numbers)

    @staticmethod
    def _shown(font: Font | None, operands: Any) -> str:
        if font is None:
            return ""
        found = ""
        for operand in operands:
            for part in operand if isinstance(operand, pikepdf.Array) else (operand,):
                if isinstance(part, pikepdf.String):
                    found += font.text(bytes(part))
                elif not isinstance(part, pikepdf.Object) and part < _WIDE_GAP:
                    found += " "
        return found

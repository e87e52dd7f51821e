"""Every formula of a sheet, set once: found, measured, broken, and ready for paper and for screen."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

from derive.expressions.speech import to_speech
from derive.expressions.tree import ZERO, Equation, Expression, Name, Negative, Product, Sum
from derive.expressions.typst_maths import to_typst
from derive.expressions.unicode_text import to_unicode
from derive.render.breaking import Breaker, Row, displayed
from derive.render.text_lines import TextLine, spread, whole
from derive.render.typesetter import Formula, Measurer, Size, draw, mathml
from derive.render.within_words import run_on, slashed
from derive.sheet.document import (
    Display,
    Folded,
    Line,
    Maths,
    Matrix,
    Paragraph,
    Plot,
    RootMaps,
    Sheet,
    Table,
    Text,
    unfolded,
)
from derive.sheet.wording import marked

# The columns of the A4 page in em of the text that stands in them; print.css holds the same in mm.
COLUMN_EM = 32.0
WIDE_EM = 45.0
BOX_EM = 1.8
REASON_EM = 13.6
PARAGRAPH_EM = 48.0
TABLE_EM = 52.0
NARROW_TABLE_EM = 25.0  # of one or two columns
PADDING_EM = 1.2  # of a cell, left and right
LETTER_EM = 0.52  # of words, on average, with room to spare
NAME_EM = 3.0  # of a name by itself, on average, with room to spare
WORDS_EM = 9.0  # the most that a column of words takes from those of formulas

RUN_ON_EM = 11.0  # a longer formula within words is set in parts, so that the line can break
MOST_LINES = 22  # of one formula in one picture: more would not fit a page
LABEL_EM = 4.0  # "row 3:" before the equation of a row
TALLEST_EM = 50.0  # of a formula that is kept on one page
TALL_EM = 8.0  # a formula that grows taller than this in its column is given the page's width

_Content = Expression | Equation


@dataclass(frozen=True, slots=True)
class Piece:
    """One picture of maths: what is drawn, how large it is, and the same as lines of text and as speech."""

    formula: Formula
    size: Size
    lines: tuple[TextLine, ...]
    speech: str
    label: str = ""


@dataclass(frozen=True, slots=True)
class Shown:
    """A displayed formula: its pieces one below the other, and whether it needs the whole width."""

    pieces: tuple[Piece, ...]
    wide: bool = False

    @property
    def tall(self) -> bool:
        """Say whether a page may have to end within the formula."""
        return _height(self.pieces) > TALLEST_EM


class SheetMaths:
    """The formulas of one sheet; ask it for the pieces of each place that the sheet has them."""

    def __init__(self, sheet: Sheet) -> None:
        self._measurer = Measurer()
        self._breaker = Breaker(self._measurer)
        self._broken: dict[tuple[_Content, float], list[Formula]] = {}
        self._rows: dict[tuple[_Content, float], list[list[Row]]] = {}
        inlines, displays = _gather(sheet)
        self._break_all(self._too_wide(inlines, displays))
        self._inline = {key: self._set_inline(*key) for key in inlines}
        self._display = {block: self._set_display(block) for block in displays}

    def inline(self, content: _Content, limit: float) -> tuple[Piece, ...]:
        """Return the pieces of a formula within words, none wider than the limit in em."""
        return self._inline[content, limit]

    def display(self, block: Display) -> Shown:
        """Return what a display shows, laid out for its column or for the page's width."""
        return self._display[block]

    def formulas(self) -> list[Formula]:
        """Return every formula that the sheet shows, each once, in order of appearance."""
        pieces = [p for ps in self._inline.values() for p in ps]
        pieces += [p for shown in self._display.values() for p in shown.pieces]
        return list(dict.fromkeys(piece.formula for piece in pieces))

    def covers(self, sheet: Sheet) -> bool:
        """Say whether every formula of a sheet is among these."""
        inlines, displays = _gather(sheet)
        return inlines.keys() <= self._inline.keys() and displays.keys() <= self._display.keys()

    @cached_property
    def drawn(self) -> list[bytes]:
        """Every formula as an SVG page, in the order of `formulas`."""
        return draw(self.formulas())

    @cached_property
    def marked_up(self) -> list[str]:
        """Every formula as a `<math>` element, in the order of `formulas`."""
        return mathml(self.formulas())

    def _too_wide(
        self, inlines: dict[tuple[_Content, float], None], displays: dict[Display, None]
    ) -> list[tuple[_Content, float]]:
        """Measure all in one run; give what has to be broken, with each width to break it to."""
        wholes = {block: displayed(_whole(block.content)) for block in displays}
        words = [Formula(source, display=False) for key in inlines for source in _ways(key[0])]
        self._measurer.measure([*wholes.values(), *words])
        found: list[tuple[_Content, float]] = []
        for block, formula in wholes.items():
            width, room, most = self._width(formula), _room(block), _most(block)
            if isinstance(block.content, Matrix):
                if width > most:
                    found += [(row, most - LABEL_EM) for row in _row_equations(block.content)]
            elif width > room:
                found += [(block.content, room), (block.content, most)]
        for content, limit in inlines:
            if any(self._width(part) > limit for part in _pieces(content)):
                found.append((content, limit))
        return found

    def _break_all(self, jobs: list[tuple[_Content, float]]) -> None:
        """Break all of them; those that came out too wide all the same are broken tighter."""
        self._breaker.prepare([content for content, _ in jobs])
        for tighter in (1.0, 0.94, 0.88, 0.8, 0.7):
            for content, limit in jobs:
                rows = self._breaker.rows(content, limit * tighter)
                chunks = [rows[i : i + MOST_LINES] for i in range(0, len(rows), MOST_LINES)]
                self._rows[content, limit] = chunks
                self._broken[content, limit] = [
                    displayed(" \\ ".join(row.source for row in chunk)) for chunk in chunks
                ]
            self._measurer.measure(formula for job in jobs for formula in self._broken[job])
            jobs = [job for job in jobs if any(self._width(f) > job[1] for f in self._broken[job])]
            if not jobs:
                break

    def _set_inline(self, content: _Content, limit: float) -> tuple[Piece, ...]:
        if (content, limit) in self._broken:
            return self._in_rows(content, limit)
        single = Formula(slashed(content), display=False)
        if self._width(single) <= min(limit, RUN_ON_EM):
            return self._pieces([single], content)
        cut = _pieces(content)
        rows = [[Row("", self._width(piece), 1.0)] for piece in cut]
        return self._pieces(cut, content, lines=spread(to_unicode(content), rows))

    def _set_display(self, block: Display) -> Shown:
        content = block.content
        single = displayed(_whole(content))
        width, room, most = self._width(single), _room(block), _most(block)
        wide = room == most
        if isinstance(content, Matrix):
            if width > most:
                return Shown(self._matrix_rows(content, most - LABEL_EM), wide=True)
            text = "; ".join(to_unicode(equation) for equation in _row_equations(content))
            speech = "; ".join(to_speech(equation) for equation in _row_equations(content))
            piece = Piece(single, self._measurer[single], whole(text), speech)
            return Shown((piece,), wide=wide or width > room)
        if width <= room:
            return Shown(self._pieces([single], content), wide)
        narrow = self._in_rows(content, room)
        if wide or _height(narrow) <= TALL_EM:
            return Shown(narrow, wide)
        if width <= most:
            return Shown(self._pieces([single], content), wide=True)
        broad = self._in_rows(content, most)
        return Shown(broad, wide=True) if _height(broad) < 0.85 * _height(narrow) else Shown(narrow)

    def _matrix_rows(self, matrix: Matrix, limit: float) -> tuple[Piece, ...]:
        """Write a matrix that is wider than the page row by row, as the equation of each row."""
        made: list[Piece] = []
        for i, equation in enumerate(_row_equations(matrix), start=1):
            made += self._in_rows(equation, limit, f"row {i}:")
        return tuple(made)

    def _in_rows(self, content: _Content, limit: float, label: str = "") -> tuple[Piece, ...]:
        """Give the pictures of a formula that was broken to a width."""
        lines = spread(to_unicode(content), self._rows[content, limit])
        return self._pieces(self._broken[content, limit], content, label, lines)

    def _pieces(
        self,
        formulas: list[Formula],
        content: _Content,
        label: str = "",
        lines: list[tuple[TextLine, ...]] | None = None,
    ) -> tuple[Piece, ...]:
        # The first piece speaks for the whole: half a formula is not worth hearing.
        lines = lines or [whole(to_unicode(content)), *(() for _ in formulas[1:])]
        return tuple(
            Piece(
                formula,
                self._measurer[formula],
                lines[place],
                "" if place else to_speech(content),
                "" if place else label,
            )
            for place, formula in enumerate(formulas)
        )

    def _width(self, formula: Formula) -> float:
        return self._measurer[formula].width


def cell_em(table: Table) -> float:
    """Return the width in em that a formula may take in a cell of a table.

    Columns of words are given what their words need, up to a measure; the rest is shared by the
    columns that hold formulas.
    """
    taken, sharing = 0.0, 0
    for place, column in enumerate(table.columns):
        cells = [column.heading, *(row[place] for row in table.rows)]
        longest = max(sum(len(i.text) for i in cell if isinstance(i, Text)) for cell in cells)
        formulas = [item.content for cell in cells for item in cell if isinstance(item, Maths)]
        if any(not isinstance(content, Name) for content in formulas):
            sharing += 1
        elif formulas:
            # Names alone, such as those of parts, leave the room to the columns of formulas.
            taken += min(longest * LETTER_EM, WORDS_EM) + NAME_EM + PADDING_EM
        else:
            taken += min(longest * LETTER_EM, WORDS_EM) + PADDING_EM
    # Rounded, so that tables of one shape share their formulas.
    room = TABLE_EM if len(table.columns) > 2 else NARROW_TABLE_EM
    return float(max(4, int((room - taken) / max(sharing, 1) - PADDING_EM)))


def _gather(
    sheet: Sheet,
) -> tuple[dict[tuple[_Content, float], None], dict[Display, None]]:
    inlines: dict[tuple[_Content, float], None] = {}
    displays: dict[Display, None] = {}
    for section in sheet.sections:
        if section.about is not None:
            inlines[section.about.content, PARAGRAPH_EM] = None
        for block in unfolded(section.blocks):
            if isinstance(block, Display):
                displays[block] = None
            for line, limit in _lines(block):
                for item in line:
                    if isinstance(item, Maths):
                        inlines[item.content, limit] = None
    return inlines, displays


def _lines(block: object) -> Iterator[tuple[Line, float]]:
    """Give each line of words of a block with the width that a formula may take in it."""
    match block:
        case Paragraph(line) | Folded(line):
            yield line, PARAGRAPH_EM
        case Display():
            yield block.reason, REASON_EM
        case Plot() | RootMaps():
            yield marked(block.caption), PARAGRAPH_EM
        case Table():
            limit = cell_em(block)
            yield marked(block.caption), PARAGRAPH_EM
            for column in block.columns:
                yield column.heading, limit
            for row in block.rows:
                for cell in row:
                    yield cell, limit
        case _:
            pass


def _ways(content: _Content) -> list[str]:
    """Give the sources of a formula within words: whole, and cut where a line may end."""
    return [slashed(content), *run_on(content)]


def _pieces(content: _Content) -> list[Formula]:
    return [Formula(source, display=False) for source in run_on(content)]


def _room(block: Display) -> float:
    """Return the width in em that a display has; without a reason at its side it has the page's."""
    return (COLUMN_EM if block.reason else WIDE_EM) - (BOX_EM if block.boxed else 0.0)


def _most(block: Display) -> float:
    return WIDE_EM - (BOX_EM if block.boxed else 0.0)


def _whole(content: _Content | Matrix) -> str:
    if not isinstance(content, Matrix):
        return to_typst(content)
    rows = "; ".join(", ".join(_cell(entry) for entry in row) for row in content.rows)
    columns = ("; ".join(_cell(e) for e in column) for column in (content.unknowns, content.right))
    unknowns, right = columns
    return f'mat(delim: "[", {rows}) mat(delim: "[", {unknowns}) = mat(delim: "[", {right})'


def _cell(entry: Expression) -> str:
    # Braces that print nothing keep the commas of an entry out of the matrix's own.
    return f"display({to_typst(entry)})"


def _row_equations(matrix: Matrix) -> list[Equation]:
    made = []
    for row, right in zip(matrix.rows, matrix.right, strict=True):
        terms: list[Expression] = []
        for entry, unknown in zip(row, matrix.unknowns, strict=True):
            if entry == ZERO:
                continue
            negative = isinstance(entry, Negative) and not isinstance(entry.operand, Sum)
            inner = entry.operand if isinstance(entry, Negative) and negative else entry
            product = Product((inner, unknown))
            terms.append(Negative(product) if negative else product)
        left = terms[0] if len(terms) == 1 else Sum(tuple(terms)) if terms else ZERO
        made.append(Equation(left, right))
    return made


def _height(pieces: tuple[Piece, ...]) -> float:
    return sum(piece.size.height for piece in pieces)

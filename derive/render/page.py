"""Turns a sheet into the page that screen and paper share; they differ in how maths is marked up."""

from __future__ import annotations

import base64
import hashlib
import re
from collections.abc import Callable
from dataclasses import dataclass

from markupsafe import Markup, escape

from derive.expressions.tree import Equation, Expression
from derive.render import templates
from derive.render.maths import (
    PARAGRAPH_EM,
    REASON_EM,
    Piece,
    SheetMaths,
    cell_em,
)
from derive.render.plot import plot_svg
from derive.sheet.document import (
    Block,
    Display,
    Field,
    Folded,
    Line,
    Mark,
    Maths,
    Paragraph,
    Plot,
    Reference,
    Section,
    Sheet,
    SourceText,
    Table,
    Text,
)
from derive.sheet.wording import marked

# What no page may hold: halves of surrogate pairs, and control characters but for tab and line end.
_UNPRINTABLE = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\ud800-\udfff\ufffe\uffff]")
_SIGNS = {True: "✓", False: "✗", None: "–"}
_TONES = {True: "pass", False: "fail", None: "open"}
_KINDS: dict[type, str] = {
    Paragraph: "paragraph",
    Display: "display",
    Table: "table",
    SourceText: "source",
    Plot: "plot",
    Folded: "folded",
}
_LONG_FIELD = 40  # letters: a longer entry of the title block takes a row of its own
_SHORT_TABLE = 8  # rows: a longer one may begin at the foot of a page and go on
_FEW_COLUMNS = 2  # spread over the whole page, the eye would lose the row
# Cells of more letters than this want the whole width, however few the columns.
_SENTENCE = 60
_MANY_COLUMNS = 8
_LONG_WORD = 18  # letters: a longer word in a table may be broken anywhere

Setter = Callable[[Piece], Markup]


@dataclass(frozen=True, slots=True)
class Cell:
    """A cell of the title block; `span` counts twelfths of its width.

    `digest` is that of the topology which the cell names, where the sheet has several.
    """

    label: str
    text: str
    span: int
    kind: str = ""
    digest: str = ""


@dataclass(frozen=True, slots=True)
class Heading:
    """A section's title with its number."""

    number: str
    title: str
    level: int
    about: Maths | None = None


@dataclass(frozen=True, slots=True)
class Group:
    """Headings, the blocks that must not be parted from them, and the blocks that follow."""

    headings: tuple[Heading, ...]
    kept: tuple[Block, ...]
    rest: tuple[Block, ...]


class Page:
    """What the templates ask for while they write a sheet."""

    def __init__(self, sheet: Sheet, maths: SheetMaths, set_piece: Setter) -> None:
        self.sheet = sheet
        self._maths = maths
        self._set = set_piece
        self._tables = 0
        self._figures = 0

    def words(self, line: Line, limit: float) -> Markup:
        """Return a line of words, maths, links and marks as markup."""
        return Markup("").join(self._inline(item, limit) for item in line)

    def paragraph(self, line: Line) -> Markup:
        """Return the words of a paragraph."""
        return self.words(line, PARAGRAPH_EM)

    def reason(self, line: Line) -> Markup:
        """Return the words at the side of a formula."""
        return self.words(line, REASON_EM)

    def title(self, heading: Heading) -> Markup:
        """Return the words of a heading, and what it is about."""
        line: Line = (Text(heading.title),)
        return self.words((*line, Text(" "), heading.about) if heading.about else line, PARAGRAPH_EM)

    def caption(self, block: Table) -> Markup:
        """Return the caption of a table, names such as A_v in it set as maths."""
        return self.words(marked(block.caption), PARAGRAPH_EM)

    def cell(self, line: Line, limit: float) -> Markup:
        """Return the words of a cell of a table whose formulas have this width in em."""
        return self.words(line, limit)

    def cell_limit(self, block: Table) -> float:
        """Return the width in em that formulas have in the cells of a table."""
        return cell_em(block)

    def shown(self, block: Display) -> list[tuple[str, Markup]]:
        """Return the label and the markup of each piece of a displayed formula."""
        return [(p.label, self._set(p)) for p in self._maths.display(block).pieces]

    def is_wide(self, block: Display) -> bool:
        """Say whether a displayed formula takes the page's width."""
        return self._maths.display(block).wide

    def is_tall(self, block: Display) -> bool:
        """Say whether a displayed formula is too tall to be kept on one page."""
        return self._maths.display(block).tall

    def table_number(self) -> int:
        """Return the number of the next table."""
        self._tables += 1
        return self._tables

    def figure_number(self) -> int:
        """Return the number of the next figure that is not a table."""
        self._figures += 1
        return self._figures

    def plot(self, block: Plot, number: int, paper: bool) -> Markup:
        """Return a plot: on the page itself for a screen, as an image for paper."""
        svg = plot_svg(block, number)
        if not paper:
            return svg
        # Inline drawings flood the writer's log; an image is tagged with its words.
        data = base64.b64encode(printable(svg).encode("utf-8")).decode("ascii")
        return Markup('<img class="plot" src="data:image/svg+xml;base64,{}" alt="{}">').format(
            data, f"{block.caption}. {block.words}"
        )

    def anchor(self, anchor: str) -> str:
        """Return the identifier in the page for an anchor of the sheet."""
        return "at-" + "".join(c if c.isascii() and c.isalnum() else f"_{ord(c):x}" for c in anchor)

    def kind(self, block: Block) -> str:
        """Return the name of the template that writes a block."""
        return _KINDS[type(block)]

    def leads_to(self, block: Block | None) -> bool:
        """Say whether words before a block belong to it, and are not to be parted from it by a page's end."""
        return isinstance(block, Display | Table | Plot)

    def is_short(self, block: Table) -> bool:
        """Say whether a table is short enough to be kept on one page."""
        return len(block.rows) <= _SHORT_TABLE

    def breadth(self, block: Table) -> str:
        """Return the class of a table that has fewer or more columns than the page's width suits."""
        columns = len(block.columns)
        if columns > _MANY_COLUMNS:
            return " many"
        return " few" if columns <= _FEW_COLUMNS and not _has_sentences(block) else ""

    def breaks_words(self, line: Line) -> bool:
        """Say whether a cell holds a word too long to be kept whole in a narrow column."""
        words = (word for item in line if isinstance(item, Text) for word in item.text.split())
        return any(len(word) > _LONG_WORD for word in words)

    def _inline(self, item: Text | Maths | Reference | Mark, limit: float) -> Markup:
        match item:
            case Text(text):
                return escape(text)
            case Maths(content):
                return self._run(content, limit)
            case Reference(anchor, number):
                link = Markup('<a class="ref" href="#{}">({})</a>')
                return link.format(self.anchor(anchor), number)
            case Mark(passed, text):
                mark = Markup('<span class="mark {}">{}\N{NO-BREAK SPACE}{}</span>')
                return mark.format(_TONES[passed], _SIGNS[passed], text or _TONES[passed])

    def _run(self, content: Expression | Equation, limit: float) -> Markup:
        return Markup(" ").join(self._set(p) for p in self._maths.inline(content, limit))


def _has_sentences(table: Table) -> bool:
    """Say whether a cell holds so many words that it wants the page's width."""
    lines = (cell for row in table.rows for cell in row)
    return any(isinstance(part, Text) and len(part.text) > _SENTENCE for line in lines for part in line)


def compose(sheet: Sheet, maths: SheetMaths, set_piece: Setter, **more: object) -> str:
    """Return the whole page as HTML text.

    Given: `set_piece`, which marks up one piece of maths, and more values for the template, of which
    `paper` says whether the page is to be printed as a PDF.
    """
    template = templates.environment().get_template("sheet.html.j2")
    page = template.render(
        page=Page(sheet, maths, set_piece),
        sheet=sheet,
        rows=title_rows(sheet),
        groups=groups(sheet.sections),
        warning=warning(sheet),
        **more,
    )
    return printable(page)


def printable(text: str) -> str:
    """Return the text with a sign in place of what no page may hold."""
    return _UNPRINTABLE.sub("\N{REPLACEMENT CHARACTER}", text)


def digest(sheet: Sheet) -> str:
    """Return the SHA-256 of the topology that the sheet carries, as 64 hexadecimal digits."""
    return digest_of(sheet.topology_text)


def digest_of(text: str) -> str:
    """Return the SHA-256 of a text as 64 hexadecimal digits."""
    return hashlib.sha256(text.encode("utf-8", errors="replace")).hexdigest()


def title_rows(sheet: Sheet) -> list[list[Cell]]:
    """Return the cells of the title block, row by row, each row twelve twelfths wide."""
    fields = list(sheet.fields)
    number = next((f for f in fields if f.label.casefold() in ("number", "document")), None)
    first = [Cell("Title", sheet.title, 9 if number else 12, "title")]
    if number:
        fields.remove(number)
        first.append(Cell(number.label, number.text, 3, "docno"))
    short = [f for f in fields if len(f.text) <= _LONG_FIELD and "\n" not in f.text]
    entries = [(field, "") for field in short]
    if sheet.passed:
        entries.append((Field("Status", f"✓ {sheet.status or 'all checks passed'}"), "status pass"))
    else:
        entries.append((Field("Status", f"✗ {sheet.status or _failed(sheet)}"), "status fail"))
    last = [[Cell("Source", sheet.topology_name, 12, "digest")]]
    if sheet.sources:
        last = [
            [Cell(f"Source of {source.stage}", source.file, 12, "digest", digest_of(source.text))]
            for source in sheet.sources
        ]
    long = [[Cell(f.label, f.text, 12, "long")] for f in fields if f not in short]
    return [first, *_spread(entries), *long, *last]


def warning(sheet: Sheet) -> str:
    """Return what stands over the failures on the first page."""
    checks = "Checks" if len(sheet.failures) > 1 else "A check"
    return sheet.warning or f"{checks} failed: the results of this sheet are not to be relied on."


def _failed(sheet: Sheet) -> str:
    count = len(sheet.failures)
    return f"{count} checks failed" if count > 1 else "a check failed"


def _spread(entries: list[tuple[Field, str]]) -> list[list[Cell]]:
    """Spread entries evenly over rows of up to four, the fuller rows first."""
    rows = -(-len(entries) // 4)
    made = []
    for row in range(rows):
        part = entries[-(-row * len(entries) // rows) : -(-(row + 1) * len(entries) // rows)]
        made.append([Cell(f.label, f.text, 12 // len(part), kind) for f, kind in part])
    return made


def groups(sections: tuple[Section, ...]) -> list[Group]:
    """Return the sections numbered, each heading kept with what it stands over.

    A section without blocks lends its heading to the next one, so that no heading ends a page.
    """
    made: list[Group] = []
    waiting: list[Heading] = []
    main = part = 0
    for section in sections:
        if section.level == 1:
            main, part = main + 1, 0
        else:
            part += 1
        number = f"{main}" if section.level == 1 else f"{main}.{part}"
        waiting.append(Heading(number, section.title, section.level + 1, section.about))
        if section.blocks:
            kept = _kept(section.blocks)
            made.append(Group(tuple(waiting), section.blocks[:kept], section.blocks[kept:]))
            waiting = []
    if waiting:
        made.append(Group(tuple(waiting), (), ()))
    return made


def _kept(blocks: tuple[Block, ...]) -> int:
    """Count the blocks that stay on one page with the heading over them.

    Words that lead to a formula are kept with it; a long table may begin at the foot of a page.
    """
    match blocks:
        case (Paragraph(), Display(), *_):
            return 2
        case (Paragraph(), Table(_, _, rows), *_) if len(rows) <= _SHORT_TABLE:
            return 2
        case (Table(_, _, rows), *_) if len(rows) > _SHORT_TABLE:
            return 0
        case (SourceText(text), *_) if text.count("\n") > _SHORT_TABLE:
            return 0
        case (Folded(), *_):
            return 0
        case _:
            return 1

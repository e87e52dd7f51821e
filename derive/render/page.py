"""Turns a sheet into the page that screen and paper share; they differ in how maths is marked up."""

from __future__ import annotations

import base64
import re
from collections.abc import Callable

from markupsafe import Markup, escape

from derive.expressions.tree import Equation, Expression
from derive.expressions.unicode_text import to_unicode
from derive.render.circuit import circuit_svg, share_of_page
from derive.render.groups import SHORT_TABLE, Heading, groups
from derive.render.line_ends import on_paper
from derive.render.look import OURS, Look
from derive.render.maths import (
    PARAGRAPH_EM,
    REASON_EM,
    Piece,
    SheetMaths,
    cell_em,
)
from derive.render.plot import plot_svg
from derive.render.root_map import root_maps_svg
from derive.render.title_block import title_rows, warning
from derive.sheet.document import (
    Block,
    Circuit,
    Display,
    Folded,
    Inline,
    Line,
    Mark,
    Maths,
    Paragraph,
    Plot,
    Reference,
    Revised,
    RootMaps,
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
_ELEMENTS = {"added": "ins", "removed": "del", "changed": "span"}
_KINDS: dict[type, str] = {
    Paragraph: "paragraph",
    Display: "display",
    Table: "table",
    SourceText: "source",
    Plot: "plot",
    RootMaps: "plot",
    Circuit: "circuit",
    Folded: "folded",
}
_FEW_COLUMNS = 2  # spread over the whole page, the eye would lose the row
# Cells of more letters than this want the whole width, however few the columns.
_SENTENCE = 60
_MANY_COLUMNS = 8
MAIN = 2  # the level of the headings that the contents list
FEWEST_LISTED = 6  # of fewer sections there is no table of contents
_LONG_NUMBER = 34  # letters: as many has a pair of poles, −3.16456 krad/s ± j 251.557 krad/s
_LONG_WORD = 18  # letters: a longer word in a table may be broken anywhere

Setter = Callable[[Piece], Markup]


class Page:
    """What the templates ask for while they write a sheet."""

    def __init__(
        self, sheet: Sheet, maths: SheetMaths, set_piece: Setter, *, paper: bool = False
    ) -> None:
        self.sheet = sheet
        self._maths = maths
        self._set = set_piece
        self._paper = paper
        self._tables = 0
        self._figures = 0

    def words(self, line: Line, limit: float) -> Markup:
        """Return a line of words, maths, links and marks as markup."""
        following = (*line[1:], None)
        return Markup("").join(
            on_paper(item.text, before_maths=isinstance(after, Maths))
            if self._paper and isinstance(item, Text)
            else self._inline(item, limit)
            for item, after in zip(line, following, strict=False)
        )

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

    def plain_title(self, heading: Heading) -> str:
        """Return the words of a heading with its number, for the head of the pages."""
        about = f" {to_unicode(heading.about.content)}" if heading.about else ""
        return f"{heading.number}  {heading.title}{about}"

    def caption(self, block: Table | Plot | RootMaps) -> Markup:
        """Return the caption of a table or a figure, names such as A_v in it set as maths."""
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

    def plot(self, block: Plot | RootMaps, number: int, paper: bool) -> Markup:
        """Return a plot: on the page itself for a screen, as an image for paper."""
        svg = plot_svg(block, number) if isinstance(block, Plot) else root_maps_svg(block, number)
        if not paper:
            return svg
        # Inline drawings flood the writer's log; an image is tagged with its words.
        data = base64.b64encode(printable(svg).encode("utf-8")).decode("ascii")
        return Markup('<img class="plot" src="data:image/svg+xml;base64,{}" alt="{}">').format(
            data, f"{block.caption}. {block.words}"
        )

    def circuit(self, block: Circuit, number: int, paper: bool) -> Markup:
        """Return a drawing of a circuit: on the page itself for a screen, as an image for paper."""
        svg = circuit_svg(block.drawing, block.words, number, block.caption)
        if not paper:
            return svg
        data = base64.b64encode(printable(svg).encode("utf-8")).decode("ascii")
        return Markup(
            '<img class="circuit" style="width:{:.2f}%" src="data:image/svg+xml;base64,{}" alt="{}">'
        ).format(share_of_page(block.drawing), data, f"{block.caption}. {block.words}")

    def is_narrow(self, block: Plot | RootMaps) -> bool:
        """Say whether a plot takes half the page's width, so that another may stand beside it."""
        return block.narrow if isinstance(block, Plot) else len(block.maps) == 1

    def field(self, label: str) -> str:
        """Return an entry of the title block by its label; "" where there is none."""
        return next((field.text for field in self.sheet.fields if field.label == label), "")

    def author(self) -> str:
        """Return who prepared the sheet, for the file's own description."""
        return self.field("Prepared")

    def subject(self) -> str:
        """Return what the file is, for its own description."""
        return ", ".join(filter(None, (f"Derivation of {self.sheet.title}", self.designation())))

    def designation(self) -> str:
        """Return number and revision: "RG-310-04, revision B"."""
        number, revision = self.field("Number"), self.field("Revision")
        return ", ".join(filter(None, (number, revision and f"revision {revision}")))

    def running(self) -> str:
        """Return what stands at the head of every page of paper."""
        return " – ".join(filter(None, (self.designation(), self.sheet.title)))

    def anchor(self, anchor: str) -> str:
        """Return the identifier in the page for an anchor of the sheet."""
        return "at-" + "".join(c if c.isascii() and c.isalnum() else f"_{ord(c):x}" for c in anchor)

    def kind(self, block: Block) -> str:
        """Return the name of the template that writes a block."""
        return _KINDS[type(block)]

    def leads_to(self, block: Block | None) -> bool:
        """Say whether words before a block belong to it, and are not to be parted from it by a page's end."""
        return isinstance(block, Display | Table | Plot | RootMaps | Circuit)

    def is_short(self, block: Table) -> bool:
        """Say whether a table is short enough to be kept on one page."""
        return len(block.rows) <= SHORT_TABLE

    def breadth(self, block: Table) -> str:
        """Return the class of a table that has fewer or more columns than the page's width suits."""
        columns = len(block.columns)
        if columns > _MANY_COLUMNS:
            return " many"
        return " few" if columns <= _FEW_COLUMNS and not _has_sentences(block) else ""

    def is_wordy(self, line: Line) -> bool:
        """Say whether a cell holds words rather than a number with its unit, and so may take several lines."""
        return sum(len(item.text) for item in line if isinstance(item, Text)) > _LONG_NUMBER

    def breaks_words(self, line: Line) -> bool:
        """Say whether a cell holds a word too long to be kept whole in a narrow column."""
        words = (word for item in line if isinstance(item, Text) for word in item.text.split())
        return any(len(word) > _LONG_WORD for word in words)

    def _inline(self, item: Inline, limit: float) -> Markup:
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

            case Revised(sign, text):
                # The element says to a reader's ear what the colour says to the eye.
                words = Markup('<{0} class="revised {1}">{2}</{0}>')
                return words.format(_ELEMENTS[sign], sign, text)

    def _run(self, content: Expression | Equation, limit: float) -> Markup:
        return Markup(" ").join(self._set(p) for p in self._maths.inline(content, limit))


def _has_sentences(table: Table) -> bool:
    """Say whether a cell holds so many words that it wants the page's width."""
    lines = (cell for row in table.rows for cell in row)
    return any(isinstance(part, Text) and len(part.text) > _SENTENCE for line in lines for part in line)


def compose(
    sheet: Sheet, maths: SheetMaths, set_piece: Setter, *, look: Look = OURS, **more: object
) -> str:
    """Return the whole page as HTML text.

    Given: `set_piece`, which marks up one piece of maths, and more values for the template, of which
    `paper` says whether the page is to be printed as a PDF.
    Raises: InputError where a template of the user's own folder goes wrong.
    """
    made = groups(sheet.sections)
    mains = tuple(h for group in made for h in group.headings if h.level == MAIN)
    page = look.page(
        page=Page(sheet, maths, set_piece, paper=bool(more.get("paper"))),
        sheet=sheet,
        rows=title_rows(sheet),
        groups=made,
        contents=mains if len(mains) >= FEWEST_LISTED else (),
        warning=warning(sheet),
        **more,
    )
    return printable(page)


def printable(text: str) -> str:
    """Return the text with a sign in place of what no page may hold."""
    return _UNPRINTABLE.sub("\N{REPLACEMENT CHARACTER}", text)

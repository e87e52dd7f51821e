"""A sheet as an A4 PDF that carries its source and its ledger."""

from __future__ import annotations

import contextlib
import hashlib
import io
import mimetypes
import warnings
from datetime import UTC, datetime
from typing import Any

from markupsafe import Markup

from derive.errors import OutputError
from derive.render import templates
from derive.render.archive import finish
from derive.render.hidden_text import HiddenText
from derive.render.look import OURS, Look
from derive.render.maths import Piece, SheetMaths
from derive.render.outline import read_page
from derive.render.page import compose
from derive.render.title_block import digest
from derive.sheet.document import Sheet

# The same bytes from the same input: the files inside bear a date that says nothing.
_NO_DATE = datetime(2000, 1, 1, tzinfo=UTC)
CONTINUED = "(the formula before, continued)"
_PACKAGES = (
    "libpango-1.0-0 libpangoft2-1.0-0 libharfbuzz0b libharfbuzz-subset0 libfontconfig1 libglib2.0-0"
)


def to_pdf(sheet: Sheet, maths: SheetMaths | None = None, look: Look = OURS) -> bytes:
    """Return the sheet as an A4 PDF for the archive, with topology and ledger attached.

    Given: the sheet's `maths`, where it has been set already; the user's own `look`.
    Raises: OutputError if the maths cannot be typeset, or a library for PDF is missing; InputError where a user's
    template goes wrong.
    """
    weasyprint = _weasyprint()
    from weasyprint.text.fonts import FontConfiguration

    maths = maths or SheetMaths(sheet)
    pictures = Pictures(maths)
    page = compose(sheet, maths, pictures.markup, look=look, paper=True, digest=digest(sheet))
    fetcher = weasyprint.urls.URLFetcher(allowed_protocols=("file", "data"), fail_on_errors=False)
    base = templates.folder().as_uri() + "/"
    fonts = FontConfiguration()
    text = "\n".join([*map(templates.read_text, ("fonts.paper.css", "print.css")), look.style])
    style = weasyprint.CSS(string=text, base_url=base, url_fetcher=fetcher, font_config=fonts)
    document = weasyprint.HTML(string=page, base_url=base, url_fetcher=fetcher).render(
        font_config=fonts,
        stylesheets=[style],
        cache=pictures.cache,
        pdf_variant="pdf/a-3a",
        pdf_tags=True,
    )
    with warnings.catch_warnings():
        # The writer leaves the file of its colour profile to the garbage collector.
        warnings.simplefilter("ignore", ResourceWarning)
        made: bytes = document.write_pdf(
            finisher=lambda _, pdf: _finish(pdf, pictures),
            cache=pictures.cache,
            attachments=_attachments(weasyprint, sheet),
            pdf_variant="pdf/a-3a",
            pdf_identifier=hashlib.sha256(page.encode("utf-8")).digest()[:16],
        )
    return made


class Pictures:
    """The formulas of a document as images, each under its own address in the cache."""

    def __init__(self, maths: SheetMaths) -> None:
        from derive.render.picture import FormulaImage, GlyphForm

        self.hidden = HiddenText()
        self.words: set[str] = set()
        self._addresses = {formula: f"eq:{i}" for i, formula in enumerate(maths.formulas())}
        outlines: dict[str, str] = {}
        drawings = [read_page(page, outlines) for page in maths.drawn]
        forms = {
            key: GlyphForm(f"g{i}-", operators) for i, (key, operators) in enumerate(outlines.items())
        }
        self.cache: dict[str, Any] = {
            address: FormulaImage(drawing, forms, self.hidden)
            for address, drawing in zip(self._addresses.values(), drawings, strict=True)
        }

    def markup(self, piece: Piece) -> Markup:
        """Return the image element for one piece, lowered onto the line of the words around it."""
        address = self._addresses[piece.formula]
        image = self.cache[address]
        image.lines = image.lines or piece.lines
        display = piece.formula.display
        # WeasyPrint asks the image itself for its size; a style would cost more than the drawing.
        place = "" if display else f' style="vertical-align:{-piece.size.depth:.4f}em"'
        return Markup('<img class="{}" src="{}" alt="{}"{}>').format(
            "shown" if display else "inline",
            address,
            self._spoken(piece),
            Markup(place),
        )

    def _spoken(self, piece: Piece) -> str:
        """Return a piece's words for those who do not see it, and keep them: by them the tags tell formulas."""
        words = piece.speech or CONTINUED
        self.words.add(words)
        return words


def _attachments(weasyprint: Any, sheet: Sheet) -> list[Any]:
    # Not every system knows the type, and the type is written into the file.
    mimetypes.add_type("application/toml", ".toml")
    own = ((sheet.topology_name, sheet.topology_text, "topology of this sheet", "Source"),)
    several = tuple((f"{s.stage}.toml", s.text, f"source of {s.stage}", "Source") for s in sheet.sources)
    files = (
        *(several or own),
        (sheet.ledger_name, sheet.ledger_text, "results of this sheet, for programs", "Data"),
    )
    return [
        weasyprint.Attachment(
            file_obj=io.BytesIO(text.encode("utf-8", "replace")),
            name=name,
            description=description,
            created=_NO_DATE,
            modified=_NO_DATE,
            relationship=relationship,
        )
        for name, text, description, relationship in files
    ]


def _finish(pdf: Any, pictures: Pictures) -> None:
    """Add the font of the hidden text, and what an archive asks for."""
    pictures.hidden.finish(pdf)
    finish(pdf, pictures.words)


def load() -> None:
    """Import the PDF writer ahead of need; that it is missing is said when it is needed."""
    with contextlib.suppress(OutputError):
        _weasyprint()


def _weasyprint() -> Any:
    """Import the PDF writer only now: it is slow to start, and its libraries may be missing."""
    try:
        import weasyprint
    except OSError as problem:
        raise OutputError(
            "no PDF can be written: a system library for text layout is missing",
            cure=f"on Debian, install {_PACKAGES}",
        ) from problem
    return weasyprint

"""What can be said of an issued PDF from its own objects: declarations, tags, fonts, headings, final equations."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

import pikepdf

from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.final import final
from derive.sheet.plain import equation_text
from derive.sheet.view import views

HEADINGS = ("/H1", "/H2", "/H3")
FONT_FILES = {"/FontFile", "/FontFile2", "/FontFile3"}


def faults_of_document(document: pikepdf.Pdf) -> list[str]:
    """Say what an archive, a screen reader or the eye would miss in an opened PDF."""
    return [
        *_declaration_faults(document),
        *_alternative_faults(document),
        *_font_faults(document),
        *lonely_headings(document),
    ]


def _declaration_faults(document: pikepdf.Pdf) -> list[str]:
    with document.open_metadata() as data:
        said = [data.get(key) for key in ("pdfaid:part", "pdfaid:conformance", "pdfuaid:part")]
    found = [] if said == ["3", "A", "1"] else [f"it declares {said}"]
    if not document.Root.MarkInfo.Marked or "/Lang" not in document.Root:
        found.append("no tags, or no language")
    return found


def elements(element: pikepdf.Object) -> Iterator[pikepdf.Object]:
    """Give the structure elements below one, in the order of reading, with itself."""
    if not isinstance(element, pikepdf.Dictionary):
        return
    yield element
    for kid in _kids(element):
        yield from elements(kid)


def _kids(element: pikepdf.Object) -> list[pikepdf.Object]:
    kids = element.get("/K", [])
    return list(kids) if isinstance(kids, pikepdf.Array) else [kids]


def _alternative_faults(document: pikepdf.Pdf) -> list[str]:
    pictures = [
        e for e in elements(document.Root.StructTreeRoot) if e.get("/S") in ("/Figure", "/Formula")
    ]
    silent = [e for e in pictures if not str(e.get("/Alt", "")).strip()]
    found = [f"{element.S} without alternative text" for element in silent]
    return found if pictures else ["no figure and no formula is tagged"]


def _font_faults(document: pikepdf.Pdf) -> list[str]:
    found = set()
    for page in document.pages:
        for font in page.Resources.get("/Font", {}).values():
            if font.Subtype == "/Type3":
                continue  # its glyphs stand in the file itself
            own = font.DescendantFonts[0] if font.Subtype == "/Type0" else font
            if not FONT_FILES & set(own.FontDescriptor.keys()):
                found.add(f"font {font.BaseFont} is not embedded")
    return sorted(found)


def lonely_headings(document: pikepdf.Pdf) -> list[str]:
    """Name the pages on which a heading stands with nothing under it."""
    numbers = {page.obj.objgen: number for number, page in enumerate(document.pages, start=1)}
    lonely, waiting = [], 0
    for element, in_heading in _marked(document.Root.StructTreeRoot, False):
        page = numbers[element.Pg.objgen]
        if waiting and page != waiting:
            lonely.append(f"page {waiting}: a heading has nothing under it")
        waiting = page if in_heading else 0
    return lonely


def _marked(element: pikepdf.Object, in_heading: bool) -> Iterator[tuple[pikepdf.Object, bool]]:
    """Give the elements that have marks on a page, in the order of reading, and whether a heading holds them."""
    if not isinstance(element, pikepdf.Dictionary):
        return
    in_heading = in_heading or str(element.get("/S", "")) in HEADINGS
    kids = _kids(element)
    if any(isinstance(kid, int) for kid in kids):
        yield element, in_heading
    for kid in kids:
        yield from _marked(kid, in_heading)


def final_equations(document: pikepdf.Pdf) -> list[str]:
    """Work the final equations out anew from the topology that is attached to an issued PDF, in plain text."""
    name = next(name for name in document.attachments if name.endswith(".toml"))
    topology = parse(document.attachments[name].get_file().read_bytes().decode(), name)
    outcome = derive(topology, other_engine=False).outcome
    return [equation_text(final(view).equation) for view in views(outcome)]


def unfound(equations: Iterable[str], text: str) -> list[str]:
    """Give the equations that a search through a text does not find, wherever its lines end."""
    flat = "".join(text.split())
    return [equation for equation in equations if "".join(equation.split()) not in flat]

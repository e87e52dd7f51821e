"""Holds an issued PDF against the fresh one: by digests first, then by what stands on the pages that differ."""

from __future__ import annotations

from collections.abc import Iterator

from derive.review.issued import Aspect, Difference, Issued, Item
from derive.review.pdf import PdfContents, read_pdf
from derive.review.places import compare_items

_PARTS = {
    "content": "how it is drawn",
    "Font": "a font",
    "XObject": "a drawing",
    "Annots": "links and notes",
    "MediaBox": "its size",
    "ExtGState": "how ink is laid",
}
_DOCUMENT = {
    "StructTreeRoot": "the order of reading and the words for what is drawn",
    "Metadata": "the description of the document",
    "Info": "the description of the document",
    "Outlines": "the bookmarks",
    "Names": "the attached files and the places that links lead to",
    "AF": "the attached files",
    "OutputIntents": "the colours",
    "AcroForm": "a form that may be filled in",
}
_MOST_PAGES = 60  # read out: where more differ, the first say enough


def pdf_differences(issued: Issued, fresh: bytes) -> list[Difference]:
    """Give what differs between two PDFs in anything that can be reached in them."""
    old, new = read_pdf(issued.data, issued.file), read_pdf(fresh, "the fresh sheet")
    keys = [*old.digests, *(key for key in new.digests if key not in old.digests)]
    differing = [key for key in keys if old.digests.get(key) != new.digests.get(key)]
    if not differing:
        return []
    pages = sorted({page for page in map(_page, differing) if page})[:_MOST_PAGES]
    found: list[Difference] = []
    if old.pages != new.pages:
        found.append(Difference("words", "number of pages", str(old.pages), str(new.pages)))
    found += _shown(issued, fresh, pages)
    told = {
        int(words.split()[1]) for words in (d.where.split(",")[0] for d in found) if words[:4] == "page"
    }
    return [*found, *_untold(differing, told)]


def _untold(differing: list[str], told: set[int]) -> Iterator[Difference]:
    """Give what differs beyond what was read out: of each kind once, with its pages."""
    kinds: dict[tuple[str, Aspect], list[int]] = {}
    for key in differing:
        if _page(key) not in told:
            pages = kinds.setdefault(_named(key), [])
            pages += [] if _page(key) in pages else [_page(key)]
    for (what, aspect), pages in kinds.items():
        where = "document" if pages == [0] else f"page{'s' if pages[1:] else ''} {_listed(pages)}"
        yield Difference(aspect, f"{where}, {what}", "", "")


def _listed(pages: list[int]) -> str:
    return ", ".join(map(str, pages)) if len(pages) < 6 else f"{pages[0]} to {pages[-1]}"


def _shown(issued: Issued, fresh: bytes, pages: list[int]) -> list[Difference]:
    if not pages:
        return []
    old = read_pdf(issued.data, issued.file, pages)
    new = read_pdf(fresh, "the fresh sheet", pages)
    found: list[Difference] = []
    for page in pages:
        found += compare_items(_of(old, page), _of(new, page))
    return found


def _of(contents: PdfContents, page: int) -> tuple[Item, ...]:
    return contents.items.get(page, ())


def _page(key: str) -> int:
    return int(key.partition("/")[0])


def _named(key: str) -> tuple[str, Aspect]:
    """Say what an entry of the digests is to a reader."""
    page, _, rest = key.partition("/")
    part = rest.partition("/")[0]
    if page == "0":
        return _DOCUMENT.get(part, f"its entry {part}"), "file"
    return _PARTS.get(part, f"its entry {part}"), "drawing"

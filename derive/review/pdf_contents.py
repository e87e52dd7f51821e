"""What is in a PDF: the files that it carries, its bookmarks, and a digest of all that can be reached, by its place."""

from __future__ import annotations

import hashlib
import io
import zlib
from typing import Any

import pikepdf

from derive.review.pdf_objects import Budget, DamagedError, content, fingerprint, page_numbers
from derive.review.pdf_text import Reader

MOST_PAGES = 2_000
MOST_BOOKMARKS = 20_000


def read(data: bytes, asked: list[int]) -> dict[str, Any]:
    """Give what a PDF carries, its digests by place, and the items of the pages asked for.

    Raises: DamagedError.
    """
    try:
        with pikepdf.open(io.BytesIO(data), attempt_recovery=False, suppress_warnings=True) as pdf:
            budget = Budget()
            pages = len(pdf.pages)
            if pages > MOST_PAGES:
                raise DamagedError(f"it has {pages:,} pages")
            # Whoever asks for pages has the digests, by which they were chosen.
            digests = {} if asked else _digests(pdf, budget)
            reader = Reader(pdf, budget)
            wanted = [number for number in asked if 1 <= number <= pages]
            return {
                "pages": pages,
                "carried": _carried(pdf, budget),
                "headings": _headings(pdf, budget),
                "digests": digests,
                "items": {str(number): reader.items(number) for number in wanted},
            }
    except pikepdf.PasswordError:
        raise DamagedError("it is locked by a password") from None
    except (pikepdf.PdfError, zlib.error, LookupError, ValueError, TypeError, AttributeError) as error:
        words = " ".join(str(error).split())[:120]
        raise DamagedError(f"its structure is damaged ({words})") from None


def _digests(pdf: Any, budget: Budget) -> dict[str, str]:
    pages = page_numbers(pdf)
    found: dict[str, str] = {}
    for number, page in enumerate(pdf.pages, 1):
        found[f"{number}/content"] = hashlib.sha256(content(page, budget)).hexdigest()
        resources = page.obj.get("/Resources", pikepdf.Dictionary())
        for kind in sorted(resources.keys()):
            entries = resources[kind]
            if isinstance(entries, pikepdf.Dictionary):
                for name in sorted(entries.keys()):
                    found[f"{number}{kind}{name}"] = _entry(entries[name], pages, budget)
            else:
                found[f"{number}{kind}"] = _entry(entries, pages, budget)
        for key in sorted(page.obj.keys()):
            if key not in ("/Contents", "/Resources", "/Parent"):
                found[f"{number}{key}"] = _entry(page.obj[key], pages, budget)
    for key in sorted(pdf.Root.keys()):
        if key != "/Pages":
            found[f"0{key}"] = _entry(pdf.Root[key], pages, budget)
    if "/Info" in pdf.trailer:
        found["0/Info"] = _entry(pdf.trailer["/Info"], pages, budget)
    return found


def _entry(thing: Any, pages: dict[tuple[int, int], int], budget: Budget) -> str:
    if isinstance(thing, pikepdf.Object):
        return budget.once(thing, pages)
    return fingerprint(thing, pages, budget)


def _headings(pdf: Any, budget: Budget) -> list[list[Any]]:
    """Give the bookmarks in their order, each with the page and the height there that it leads to."""
    pages = page_numbers(pdf)
    found: list[list[Any]] = []
    waiting = [pdf.Root["/Outlines"].get("/First")] if "/Outlines" in pdf.Root else []
    while waiting:
        entry = waiting.pop()
        if entry is None:
            continue
        budget.count()
        if len(found) > MOST_BOOKMARKS:
            raise DamagedError("it has more bookmarks than a sheet does")
        goal = entry.get("/Dest")
        page = goal[0] if isinstance(goal, pikepdf.Array) and len(goal) else None
        number = pages.get(page.objgen, 0) if isinstance(page, pikepdf.Object) else 0
        top = float(goal[3]) if number and len(goal) > 3 and goal[3] is not None else 0.0
        found.append([str(entry.get("/Title", "")), number, top])
        waiting += [entry.get("/Next"), entry.get("/First")]
    return found


def _carried(pdf: Any, budget: Budget) -> list[dict[str, str]]:
    """Give the attached files in their order, each with its name and what it is to the document."""
    found = []
    for entry in pdf.Root.get("/AF", []):
        data = budget.stream(entry["/EF"]["/F"])
        try:
            text = data.decode("utf-8")
        except UnicodeDecodeError:
            raise DamagedError(f"{entry.get('/F', 'an attached file')} in it is not UTF-8 text") from None
        found.append(
            {
                "name": str(entry.get("/UF", entry.get("/F", ""))),
                "relation": str(entry.get("/AFRelationship", "")),
                "text": text,
            }
        )
    return found

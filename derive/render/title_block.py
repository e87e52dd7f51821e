"""The title block of the first page, as rows of cells."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass

from derive.sheet.document import Field, Sheet

_LONG_FIELD = 40  # letters: a longer entry of the title block takes a row of its own


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
        entries.append((Field("Status", f"✓ {sheet.status or _passed(sheet)}"), "status pass"))
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


def _passed(sheet: Sheet) -> str:
    return f"no check failed, {sheet.left_open} left open" if sheet.left_open else "all checks passed"


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

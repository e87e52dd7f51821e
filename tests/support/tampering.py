"""Changes issued sheets as a careless or a dishonest hand would: one place at a time, chosen by a seeded generator.

Each way of tampering gives the changed bytes and the aspects of which one must be named when it is found.
"""

from __future__ import annotations

import io
import json
import random
import re
from collections.abc import Callable

import pikepdf

LETTERS = "abcdefghikmnopqrstuvwxyz0123456789ABCDEFGHKLMNPQRSTUVWXYZ"
Tampered = tuple[bytes, frozenset[str]]
Way = Callable[[bytes, random.Random], Tampered]

SOURCE = frozenset({"source"})
LEDGER = frozenset({"ledger"})
READ = frozenset({"equation", "words"})
DRAWN = frozenset({"drawing"})
ANY = frozenset({"source", "ledger", "equation", "words", "drawing", "markup", "file", "derivation"})


def other(letter: str, chance: random.Random) -> str:
    """Give another letter than this one."""
    return chance.choice([new for new in LETTERS if new != letter])


def changed(text: str, places: list[int], chance: random.Random) -> str:
    """Give the text with one of its letters, at one of these places, exchanged."""
    at = chance.choice(places)
    return f"{text[:at]}{other(text[at], chance)}{text[at + 1 :]}"


def _letters(text: str, start: int, end: int) -> list[int]:
    return [
        at
        for at in range(start, end)
        if text[at].isascii() and text[at].isalnum() and text[at - 1] != "\\"
    ]


def _within(text: str, pattern: str, chance: random.Random) -> str:
    """Change a letter within one of the first groups that a pattern finds."""
    spans = [found.span(1) for found in re.finditer(pattern, text, re.DOTALL)]
    spans = [span for span in spans if _letters(text, *span)]
    start, end = chance.choice(spans)
    return changed(text, _letters(text, start, end), chance)


def json_source(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter of the topology."""
    return _json_entry(data, chance, ("topology", "text")), SOURCE


def json_digest(data: bytes, chance: random.Random) -> Tampered:
    """Change a digit of its digest."""
    return _json_entry(data, chance, ("topology", "sha256")), SOURCE


def _json_entry(data: bytes, chance: random.Random, path: tuple[str, str]) -> bytes:
    ledger = json.loads(data)
    text = ledger[path[0]][path[1]]
    ledger[path[0]][path[1]] = changed(text, _letters(text, 0, len(text)), chance)
    return (json.dumps(ledger, ensure_ascii=False, indent=1) + "\n").encode()


def json_entry(data: bytes, chance: random.Random) -> Tampered:
    """Change one value anywhere among symbols and results."""
    ledger = json.loads(data)
    leaves: list[tuple[object, object]] = []
    waiting: list[object] = [ledger["symbols"], ledger["results"]]
    while waiting:
        held = waiting.pop()
        pairs = held.items() if isinstance(held, dict) else enumerate(held)  # type: ignore[arg-type]
        for key, value in pairs:
            if isinstance(value, dict | list):
                waiting.append(value)
            elif value is not None:
                leaves.append((held, key))
    held, key = chance.choice(leaves)
    value = held[key]  # type: ignore[index]
    if isinstance(value, bool):
        new: object = not value
    elif isinstance(value, int | float):
        new = value * 1.0000001 + 1e-9
    else:
        places = _letters(value, 0, len(value))
        new = changed(value, places, chance) if places else f"{value}x"
    held[key] = new  # type: ignore[index]
    return (json.dumps(ledger, ensure_ascii=False, indent=1) + "\n").encode(), LEDGER


def any_byte(data: bytes, chance: random.Random) -> Tampered:
    """Change, take out or double one byte anywhere."""
    at = chance.randrange(len(data))
    way = chance.randrange(3)
    middle = (
        bytes([(data[at] + chance.randrange(1, 256)) % 256])
        if way == 0
        else data[at : at + 1] * (way - 1) * 2
    )
    return data[:at] + middle + data[at + 1 :], ANY


def html_source(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter of the topology that the page carries."""
    return _html(data, r'id="topology">.*?"text": "(.*?)"\}</script>', chance), SOURCE


def html_ledger(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter of the results in the ledger that the page carries."""
    return _html(data, r'id="ledger">.*?"results"(.*?)</script>', chance), LEDGER | SOURCE


def html_equation(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter of an equation."""
    return _html(data, r"<m[ino]>([^<]+)</m[ino]>", chance), frozenset({"equation"})


def html_words(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter of the words in a paragraph, a cell or a heading."""
    return _html(data, r"<(?:p|td|th|h2|h3)\b[^>]*>([^<]+)<", chance), frozenset({"words"})


def html_style(data: bytes, chance: random.Random) -> Tampered:
    """Hide something by a style."""
    what = chance.choice(["math", ".step", "table", ".banner", ".mark"])
    text = data.decode().replace("</style>", f"{what} {{ display: none }}</style>", 1)
    return text.encode(), frozenset({"markup"})


def _html(data: bytes, pattern: str, chance: random.Random) -> bytes:
    return _within(data.decode(), pattern, chance).encode()


def _pdf(data: bytes, change: Callable[[pikepdf.Pdf], None]) -> bytes:
    with pikepdf.open(io.BytesIO(data)) as pdf:
        change(pdf)
        made = io.BytesIO()
        pdf.save(made, fix_metadata_version=False)
        return made.getvalue()


def packed_anew(data: bytes) -> bytes:
    """Give a PDF as another program would write it, nothing in it changed."""
    return _pdf(data, lambda pdf: None)


def pdf_source(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter of the attached topology."""
    return _attachment(data, chance, "/Source"), SOURCE


def pdf_ledger(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter of the results in the attached ledger."""
    return _attachment(data, chance, "/Data"), LEDGER | SOURCE


def _attachment(data: bytes, chance: random.Random, relation: str) -> bytes:
    def change(pdf: pikepdf.Pdf) -> None:
        (entry,) = [entry for entry in pdf.Root.AF if str(entry.AFRelationship) == relation]
        text = entry.EF.F.read_bytes().decode()
        start = text.index('"results"') + 10 if relation == "/Data" else 0
        entry.EF.F.write(changed(text, _letters(text, start, len(text)), chance).encode())

    return _pdf(data, change)


def pdf_equation(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter in the plain text of an equation, which lies unseen under it."""
    return _strings(data, chance, unseen=True), frozenset({"equation"})


def pdf_words(data: bytes, chance: random.Random) -> Tampered:
    """Change a letter of what is printed in words."""
    return _strings(data, chance, unseen=False), frozenset({"words"})


def _strings(data: bytes, chance: random.Random, *, unseen: bool) -> bytes:
    step = 2 if unseen else 4

    def change(pdf: pikepdf.Pdf) -> None:
        pages = [(page, _codes(page, unseen)) for page in pdf.pages]
        page, places = chance.choice([entry for entry in pages if len(entry[1]) > 1])
        drawn = page.Contents.read_bytes()
        start = chance.choice(places)
        codes = {drawn[at : at + step] for at in places} - {drawn[start : start + step]}
        new = chance.choice(sorted(codes))
        page.Contents = pdf.make_stream(drawn[:start] + new + drawn[start + step :])

    return _pdf(data, change)


def _codes(page: pikepdf.Page, unseen: bool) -> list[int]:
    """Give where the strings of letters begin on a page, those that are seen or those that are not."""
    drawn = page.Contents.read_bytes()
    return [
        block.start() + found.start(1)
        for block in re.finditer(rb"BT\b.*?\bET", drawn, re.DOTALL)
        if (b"3 Tr" in block.group()) == unseen
        for found in re.finditer(rb"<([0-9a-fA-F]{2,})>", block.group())
    ]


def pdf_glyph(data: bytes, chance: random.Random) -> Tampered:
    """Draw another sign in an equation, and leave the text under it as it is."""

    def change(pdf: pikepdf.Pdf) -> None:
        pages = [page for page in pdf.pages if len(_glyphs(page)) > 1]
        page = chance.choice(pages)
        drawn = page.Contents.read_bytes()
        found = chance.choice(_glyphs(page))
        names = sorted({glyph.group(1) for glyph in _glyphs(page)} - {found.group(1)})
        new = chance.choice(names)
        page.Contents = pdf.make_stream(drawn[: found.start(1)] + new + drawn[found.end(1) :])

    return _pdf(data, change), DRAWN


def _glyphs(page: pikepdf.Page) -> list[re.Match[bytes]]:
    return list(re.finditer(rb"(/ig\d+-\d+) Do", page.Contents.read_bytes()))


def pdf_outline(data: bytes, chance: random.Random) -> Tampered:
    """Change the outline of a sign wherever it is drawn."""

    def change(pdf: pikepdf.Pdf) -> None:
        drawings = pdf.pages[0].Resources.XObject
        names = sorted(name for name in map(str, dict(drawings)) if "/ig" in name)
        stream = drawings[chance.choice(names)]
        stream.write(stream.read_bytes() + b"\n0 0 1 1 re f")

    return _pdf(data, change), DRAWN


def pdf_cover(data: bytes, chance: random.Random) -> Tampered:
    """Lay a white patch over a page."""

    def change(pdf: pikepdf.Pdf) -> None:
        page = chance.choice(list(pdf.pages))
        patch = f"\nq 1 g {chance.randrange(80, 400)} {chance.randrange(80, 600)} 90 14 re f Q\n"
        page.Contents = pdf.make_stream(page.Contents.read_bytes() + patch.encode())

    return _pdf(data, change), DRAWN


WAYS: dict[str, tuple[Way, ...]] = {
    "json": (json_source, json_digest, json_entry, json_entry, any_byte),
    "html": (html_source, html_ledger, html_equation, html_words, html_style, any_byte),
    "pdf": (pdf_source, pdf_ledger, pdf_equation, pdf_words, pdf_glyph, pdf_outline, pdf_cover),
}

"""A sheet as one HTML file that needs nothing else: maths as MathML, fonts and data inside."""

from __future__ import annotations

import base64
import hashlib
import json
import re
from xml.etree import ElementTree

from markupsafe import Markup

from derive.render import templates
from derive.render.look import OURS, Look
from derive.render.maths import Piece, SheetMaths
from derive.render.page import compose
from derive.render.title_block import digest, digest_of
from derive.render.typesetter import Formula
from derive.sheet.document import Sheet

PRINTED = ("maths.css", "print.css", "print.browser.css")
_FONT_MARK = re.compile(r'url\("fonts/([\w.-]+)"\)')
# What makes a pair of parentheses grow; round anything else they keep the size of the letters.
_TALL = frozenset({"mfrac", "mtable", "msqrt", "munderover"})
_FENCES = frozenset("()[]")


def to_html(sheet: Sheet, maths: SheetMaths | None = None, look: Look = OURS) -> bytes:
    """Return the sheet as one self-contained HTML file.

    Given: the sheet's `maths`, where it has been set already; the user's own `look`.
    Raises: OutputError if the maths cannot be typeset; InputError where a user's template goes wrong.
    """
    maths = maths or SheetMaths(sheet)
    script = Markup(templates.read_text("sheet.js"))
    formulas = maths.formulas()
    elements = dict(zip(formulas, map(tidy, maths.marked_up), strict=True))
    page = compose(
        sheet,
        maths,
        lambda piece: _marked_up(piece, elements),
        paper=False,
        look=look,
        digest=digest(sheet),
        fonts=Markup(_fonts()),
        style=Markup("\n".join(map(templates.read_text, ("maths.css", "style.css")))),
        print_style=Markup("\n".join(map(templates.read_text, PRINTED))),
        script=script,
        policy=_policy(script),
        topology=in_script(json.dumps(_topology(sheet), ensure_ascii=False)),
        ledger=in_script(sheet.ledger_text),
    )
    return page.encode("utf-8")


def in_script(text: str) -> Markup:
    """Return JSON text that no script element can be closed by; it reads as the same data."""
    return Markup(text.replace("<", "\\u003c").replace(">", "\\u003e").replace("&", "\\u0026"))


def tidy(element: str) -> str:
    """Return a `<math>` element with plain letters and with parentheses as tall as they need be."""
    root = ElementTree.fromstring(element)
    for node in root.iter():
        if node.tag == "mi" and node.text and len(node.text) == 1:
            node.text = _plain_letter(node.text)
        fences = [c for c in node if c.tag == "mo" and c.text in _FENCES]
        if fences and not any(inner.tag in _TALL for inner in node.iter() if inner is not node):
            for fence in fences:
                fence.set("stretchy", "false")
    if root.get("display") == "block":
        for fraction in root.iter("mfrac"):
            fraction.set("displaystyle", "true")
    return ElementTree.tostring(root, encoding="unicode")


def _plain_letter(letter: str) -> str:
    """Return the letter behind a mathematical italic one: browsers slant single letters themselves."""
    code = ord(letter)
    if 0x1D434 <= code <= 0x1D467:
        place = code - 0x1D434
        return chr(ord("A") + place) if place < 26 else chr(ord("a") + place - 26)
    if code == 0x210E:
        return "h"
    if 0x1D6FC <= code <= 0x1D714:
        return chr(0x3B1 + code - 0x1D6FC)
    return letter


def _marked_up(piece: Piece, elements: dict[Formula, str]) -> Markup:
    return Markup(elements[piece.formula])


def _topology(sheet: Sheet) -> dict[str, str] | list[dict[str, str]]:
    """Return the topology that the page carries, or all of them where it has several."""
    if sheet.sources:
        return [
            {"stage": s.stage, "file": s.file, "sha256": digest_of(s.text), "text": s.text}
            for s in sheet.sources
        ]
    return {
        "file": sheet.topology_name,
        "sha256": digest(sheet),
        # The page may be renamed, and is still to be made anew under its own name.
        "ledger": sheet.ledger_name,
        "text": sheet.topology_text,
    }


def _fonts() -> str:
    """Return the style of the fonts, with the fonts inside."""

    def embedded(found: re.Match[str]) -> str:
        data = base64.b64encode((templates.fonts() / found.group(1)).read_bytes())
        return f'url("data:font/woff2;base64,{data.decode("ascii")}")'

    return _FONT_MARK.sub(embedded, templates.read_text("fonts.screen.css"))


def _policy(script: str) -> str:
    """Return what the page may do, for browsers to enforce: run its own script, and fetch nothing."""
    # The template writes the script between two line ends.
    data = hashlib.sha256(f"\n{script}\n".encode()).digest()
    allowed = f"'sha256-{base64.b64encode(data).decode('ascii')}'"
    return (
        "default-src 'none'; style-src 'unsafe-inline'; font-src data:; img-src data:; "
        f"script-src {allowed}; base-uri 'none'; form-action 'none'"
    )

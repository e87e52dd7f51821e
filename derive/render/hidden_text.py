"""Text that is found and copied but not seen, laid under formulas that are drawn as outlines."""

from __future__ import annotations

from typing import Any

import pydyf

FONT = "FHidden"
_ADVANCE = 500  # of 1000: an invisible letter needs a width only
_MOST = 255  # codes of a simple font


class HiddenText:
    """Hands out codes for the characters used, and in the end the font that explains them."""

    def __init__(self) -> None:
        self._codes: dict[str, int] = {}

    def operators(self, text: str, width: float, height: float, top: float = 0.0) -> bytes:
        """Return the operators that lay the text across a box that begins at `top`, y downwards, without ink."""
        codes = bytes(self._code(letter) for letter in text)
        size = max(1.0, min(height, 10.0))
        natural = len(codes) * size * _ADVANCE / 1000
        stretch = 100 * width / natural if natural else 100
        below = top + height / 2 + size / 3
        return (
            f"BT 3 Tr /{FONT} {size:.2f} Tf {stretch:.2f} Tz "
            f"1 0 0 -1 0 {below:.2f} Tm <{codes.hex()}> Tj 0 Tr 100 Tz ET"
        ).encode()

    def _code(self, letter: str) -> int:
        if letter not in self._codes:
            if len(self._codes) >= _MOST:
                letter = "?" if "?" in self._codes else next(iter(self._codes))
            else:
                self._codes[letter] = len(self._codes) + 1
        return self._codes[letter]

    def finish(self, pdf: Any) -> None:
        """Add the font to the document, where any text was laid.

        The glyphs are empty procedures, so nothing shows even where a reader ignores the mode.
        """
        if not self._codes:
            return
        blank = pydyf.Stream([f"{_ADVANCE} 0 0 0 0 0 d1".encode()], compress=False)
        explained = pydyf.Stream([self._to_unicode().encode()], compress=True)
        pdf.add_object(blank)
        pdf.add_object(explained)
        count = len(self._codes)
        names = [f"/h{code}" for code in range(1, count + 1)]
        font = pydyf.Dictionary(
            {
                "Type": "/Font",
                "Subtype": "/Type3",
                "FontBBox": pydyf.Array([0, 0, _ADVANCE, 1000]),
                "FontMatrix": pydyf.Array([0.001, 0, 0, 0.001, 0, 0]),
                "FirstChar": 1,
                "LastChar": count,
                "Widths": pydyf.Array([_ADVANCE] * count),
                "Resources": pydyf.Dictionary(),
                "CharProcs": pydyf.Dictionary({name[1:]: blank.reference for name in names}),
                "Encoding": pydyf.Dictionary(
                    {"Type": "/Encoding", "Differences": pydyf.Array([1, *names])}
                ),
                "ToUnicode": explained.reference,
            }
        )
        pdf.add_object(font)
        _fonts_of(pdf)[FONT] = font.reference

    def _to_unicode(self) -> str:
        pairs = [
            f"<{code:02x}> <{letter.encode('utf-16-be').hex()}>" for letter, code in self._codes.items()
        ]
        # A block may hold a hundred lines (ISO 32000-1, 9.10.3, from memory).
        blocks = [pairs[i : i + 100] for i in range(0, len(pairs), 100)]
        listed = "\n".join(
            f"{len(block)} beginbfchar\n" + "\n".join(block) + "\nendbfchar" for block in blocks
        )
        return (
            "/CIDInit /ProcSet findresource begin\n12 dict begin\nbegincmap\n"
            "/CIDSystemInfo << /Registry (Adobe) /Ordering (UCS) /Supplement 0 >> def\n"
            "/CMapName /Hidden def\n/CMapType 2 def\n"
            f"1 begincodespacerange\n<00> <ff>\nendcodespacerange\n{listed}\n"
            "endcmap\nCMapName currentdict /CMap defineresource pop\nend\nend"
        )


def _fonts_of(pdf: Any) -> Any:
    """Find the dictionary of fonts that all pages share."""
    by_reference = {made.reference: made for made in pdf.objects if made.number is not None}
    for made in pdf.objects:
        if isinstance(made, pydyf.Dictionary) and made.get("Type") == "/Page":
            return by_reference[by_reference[made["Resources"]]["Font"]]
    raise ValueError("a document without pages has no fonts")

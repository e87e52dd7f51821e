r"""Factors that stand side by side in LaTeX, multiplied where that is the only reading.

g_m R_E and \frac{a}{b} c and 2\beta are products. Nothing is put in where a reader could doubt: behind an
inline fraction bar (1/R_E C), beside a parallel combination (a b \parallel c), before a number, where a value code
may be meant (4k7), and between a name and a name in parentheses, which may be a function of it (A_v(s)). There the
grammar refuses what is written, and asks for the sign.
"""

from __future__ import annotations

import re
from collections.abc import Iterator

from derive.expressions.spelled import Piece, Refusal

_ENDS = ("name", "number", "close", "raised")
_BEGINS = ("name", "number", "open", "root")
_RUN_ON = re.compile("(?:s(?=[A-Z][A-Za-z0-9]*_)|[A-Za-z]_[A-Za-z0-9](?=[A-Z]_))")
_CODE = re.compile(r"[pnuµmkMGRF][0-9]*")


def multiplied(pieces: list[Piece], text: str) -> list[Piece]:
    """Give the pieces with a product sign between factors that stand side by side.

    Raises: Refusal where a product without a sign meets a parallel combination.
    """
    pieces = list(_parted(pieces, text))
    made: list[Piece] = []
    # For each level of parentheses: is the last operand behind a bar or bars, and was it joined without a sign?
    levels = [(False, False)]
    for place, piece in enumerate(pieces):
        last = next((each for each in reversed(made) if each.kind != "space"), None)
        tight, bare = levels[-1]
        if piece.kind in _BEGINS and last is not None and last.kind in _ENDS and not tight:
            if _is_product(pieces, place, last, made):
                made.append(Piece("*", piece.start, piece.start, "sign"))
                levels[-1] = (tight, True)
        elif piece.kind == "sign" and piece.text == "||" and bare:
            cure = r"put the parallel combination in parentheses, or write \cdot between the factors"
            raise Refusal(piece.start, "which factors are in parallel here is open to doubt", cure)
        if piece.kind == "open":
            levels.append((False, False))
        elif piece.kind == "close" and len(levels) > 1:
            levels.pop()
        elif piece.kind == "sign" and piece.text != "^":
            levels[-1] = (piece.text in ("/", "||"), False)
        made.append(piece)
    return made


def _parted(pieces: list[Piece], text: str) -> Iterator[Piece]:
    r"""Part factors that are run together: sC_\mu and g_mR_E, where LaTeX ends a subscript behind one sign."""
    for piece in pieces:
        while piece.kind == "name" and (found := _RUN_ON.match(piece.text)):
            middle = piece.start + found.end()
            if text[piece.start : middle] != found[0]:
                break
            yield Piece(found[0], piece.start, middle, "name")
            piece = Piece(piece.text[found.end() :], middle, piece.end, "name", by_command=True)
        yield piece


def _is_product(pieces: list[Piece], place: int, last: Piece, made: list[Piece]) -> bool:
    piece = pieces[place]
    if piece.kind == "number":
        return False
    if piece.kind == "open" and last.kind == "name":
        inner = [each for each in pieces[place + 1 : place + 6] if each.kind != "space"]
        return not (len(inner) > 1 and inner[0].kind == "name" and inner[1].kind == "close")
    if piece.kind == "name" and last.kind == "number" and piece.start == last.end:
        signs = [each for each in made[-8:] if each.kind != "space"]
        is_exponent = len(signs) > 1 and signs[-2].text == "^"
        return is_exponent or piece.by_command or not _CODE.fullmatch(piece.text)
    return True

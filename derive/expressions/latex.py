"""The commands of LaTeX that are read in an expression, each with the plain signs that it stands for."""

from __future__ import annotations

from derive.expressions.spelled import PieceKind

COMMANDS: dict[str, tuple[str, PieceKind]] = {
    "cdot": ("*", "sign"),
    "times": ("*", "sign"),
    "ast": ("*", "sign"),
    "div": ("/", "sign"),
    "parallel": ("||", "sign"),
    "Vert": ("||", "sign"),
    "|": ("||", "sign"),
    "{": ("(", "open"),
    "}": (")", "close"),
    "lbrack": ("(", "open"),
    "rbrack": (")", "close"),
}
RELATIONS = {
    "approx": "~",
    "simeq": "~",
    "cong": "~",
    "sim": "~",
    "equiv": "=",
    "triangleq": "=",
    "eq": "=",
}
FRACTIONS = ("frac", "dfrac", "tfrac", "cfrac")
GAPS = frozenset(
    (",", ";", ":", "!", " ", ">", "quad", "qquad", "thinspace", "displaystyle", "nonumber", "notag")
)
_BIG = ("big", "Big", "bigg", "Bigg")
SIZES = frozenset(("left", "right", *_BIG, *(f"{size}{side}" for size in _BIG for side in "lr")))
# What may stand behind \left and \right; a point is an invisible one.
DELIMITERS = {"(": "(", ")": ")", "[": "(", "]": ")", r"\{": "(", r"\}": ")", ".": " "}
# Commands whose argument is a word, set upright.
WORDS = frozenset(("mathrm", "mathit", "mathsf", "mathbf", "text", "textrm", "textit", "operatorname"))

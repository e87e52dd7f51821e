"""Words of a drawing as runs of letters, and how wide they are.

A drawing must know how wide its words are before anything draws them. The widths are those of STIX Two
Text; a test holds them against the fonts.
"""

from __future__ import annotations

from dataclasses import dataclass

from derive.expressions.names import GREEK, shape_of

SIZE, SMALL = 12.0, 10.5  # of names and of values
SUBSCRIPT = 0.74  # of the size of the letters before it
DROP = 0.22  # of a subscript, in em of the letters before it
# Hundredths of an em, and the letters that are so wide.
_UPRIGHT = (
    "19' 22` 24,.:; 26jι 27| 28!il· 31f{} 32-t 33\" 34() 35[] 36I 37² 38\\rε 39/ζξτ 40Js° 41*? 45cν "
    "46ezχ 47γ 48^agvxyδο 49υ 50$0123456789Sκ 51_oηθλ 52bqρ 53β 54dkpσ 55μµ 56~α 57#PuΓ 58Lhn "
    "59FZπ 60TφΣ 62Bψ 63E 65YΞ 66RXω 67CΔ 68V 69% 70<>K 71Λ 72+=AGΦΨ−± 73D 74&NOQΘ 75Uw 76Π 78HΩ "
    "85m 90@M 94W"
)
_SLANTED = (
    "19' 22` 24,.:; 27!jl|ι 28i· 29f 30t 31{} 32- 33\" 34()I 35[]ζ 36ε 37s² 38rξ 39*/ 40?Jτ° 41ce "
    "42\\z 43v 45gxyο 47γδνχ 48^oκ 496 50$012345789bkηλρυ 51_βθ 52pqσ 53Sa 54d 55h~ 56nuαμµ 57#LPΓ "
    "58F 59Bπ 60φ 61ETYZΣ 62R 63ψΔΞ 64VX 66CKω 68%AΛ 69w 70<>DG 71NOQ 72&+=ΘΦΨ−± 73U 74Π 76H 79Ω "
    "82m 87M 91W 92@"
)
_SPACE = 0.24
_WIDEST = 1.0  # of a letter that is not listed


def _read(table: str) -> dict[str, float]:
    return {letter: int(group[:2]) / 100 for group in table.split(" ") for letter in group[2:]}


_WIDTHS = {False: _read(_UPRIGHT), True: _read(_SLANTED)}


@dataclass(frozen=True, slots=True)
class Run:
    """Letters that are set alike."""

    text: str
    slanted: bool = False
    lowered: bool = False


Words = tuple[Run, ...]


def name_words(name: str) -> Words:
    """Give a name as it is set in formulas: R_E as a slanted R with a lowered E."""
    shape = shape_of(name)
    runs = [_run(shape.base, lowered=False)]
    for place, chunk in enumerate(shape.subscripts):
        if place:
            runs.append(Run(" ", lowered=True))
        runs += [_run(letters, lowered=True) for letters in chunk]
    return tuple(runs)


def plain_words(text: str) -> Words:
    """Give words that are set as they are."""
    return (Run(text),)


def _run(letters: str, *, lowered: bool) -> Run:
    slanted = (len(letters) == 1 and letters.isalpha()) or letters in GREEK
    return Run(GREEK.get(letters, letters), slanted, lowered)


def run_width(run: Run, size: float) -> float:
    """Give how wide a run is set in letters of this size."""
    widths = _WIDTHS[run.slanted]
    ems = sum(_SPACE if letter == " " else widths.get(letter, _WIDEST) for letter in run.text)
    return ems * size * (SUBSCRIPT if run.lowered else 1.0)


def width_of(words: Words, size: float) -> float:
    """Give how wide words are set in letters of this size."""
    return sum(run_width(run, size) for run in words)


def as_text(words: Words) -> str:
    """Give words as plain text, a subscript behind an underscore."""
    made = ""
    lowered = False
    for run in words:
        made += ("_" if run.lowered and not lowered else "") + run.text
        lowered = run.lowered
    return made

"""Takes a name apart into letter and subscripts, the way an engineer reads it.

The first underscore begins the subscript. Without one, digits, a Greek name, a single letter or a
usual word behind the first letter are its subscript: R12, Cpi, GF, Rin. A name that fits no pattern
stays one word.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

GREEK = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "zeta": "ζ",
    "eta": "η", "theta": "θ", "iota": "ι", "kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν",
    "xi": "ξ", "omicron": "ο", "pi": "π", "rho": "ρ", "sigma": "σ", "tau": "τ", "upsilon": "υ",
    "phi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω", "Alpha": "Α", "Beta": "Β", "Gamma": "Γ",
    "Delta": "Δ", "Epsilon": "Ε", "Zeta": "Ζ", "Eta": "Η", "Theta": "Θ", "Iota": "Ι",
    "Kappa": "Κ", "Lambda": "Λ", "Mu": "Μ", "Nu": "Ν", "Xi": "Ξ", "Omicron": "Ο", "Pi": "Π",
    "Rho": "Ρ", "Sigma": "Σ", "Tau": "Τ", "Upsilon": "Υ", "Phi": "Φ", "Chi": "Χ", "Psi": "Ψ",
    "Omega": "Ω",
}  # fmt: skip

# Common practice: the words that stand behind a quantity's letter without an underscore, and the
# pairs of terminals and supplies that stand behind the letters of voltage, current and the like.
_WORDS = frozenset(
    ["in", "out", "ref", "load", "tail", "gen", "src", "bias", "fb", "th", "eq", "tot", "max", "min"]
)
_TERMINALS = frozenset(["be", "bc", "ce", "cb", "eb", "gs", "gd", "ds", "db", "sb", "gb"])
_SUPPLIES = frozenset(["bb", "cc", "ee", "dd", "ss", "os", "oc", "sc", "dc", "ac"])
_PAIRS = _TERMINALS | _SUPPLIES
_PAIRED = frozenset("VvIiCcRrg")
_UNJOINED = re.compile(r"([A-Za-z])([A-Za-z]*)([0-9]*)")
_RUNS = re.compile(r"[A-Za-z]+|[0-9]+")


@dataclass(frozen=True, slots=True)
class NameShape:
    """A name taken apart: its base, and its subscripts, each as runs of letters or of digits."""

    base: str
    subscripts: tuple[tuple[str, ...], ...] = ()


def shape_of(name: str) -> NameShape:
    """Take a name apart; what fits no pattern comes back whole as the base."""
    base, underscore, rest = name.partition("_")
    if not underscore:
        return _unjoined(name)
    chunks = rest.split("_")
    inner = _unjoined(base)
    if not all(chunks):
        # Two underscores together, or one at the end, must stay visible: R_ is not R.
        return NameShape(name)
    return NameShape(inner.base, (*inner.subscripts, *map(_runs, chunks)))


def _runs(chunk: str) -> tuple[str, ...]:
    return tuple(_RUNS.findall(chunk))


def _unjoined(name: str) -> NameShape:
    if len(name) == 1 or name in GREEK:
        return NameShape(name)
    letters = name.rstrip("0123456789")
    if letters in GREEK:
        return NameShape(letters, ((name[len(letters) :],),))
    found = _UNJOINED.fullmatch(name)
    if found is None:
        return NameShape(name)
    first, word, digits = found.groups()
    pair = first in _PAIRED and word.lower() in _PAIRS
    usual = len(word) <= 1 or word in GREEK or word.lower() in _WORDS or pair
    if not usual:
        return NameShape(name)
    return NameShape(first, (tuple(run for run in (word, digits) if run),))

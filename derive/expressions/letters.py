"""The letters and signs that engineers type beside plain ones, and the plain ones they stand for."""

from __future__ import annotations

import re
import unicodedata
from functools import lru_cache

from derive.expressions.names import GREEK

NUMBER = re.compile(r"(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")
# A number of ohms, with a prefix or without; the sign has a code of its own beside the letter.
OHMS = re.compile(r"(?:\s|\\[,;: ])*([pnuµμmkMG]?)(?:[ΩΩ]|\\Omega(?![A-Za-z]))(?![A-Za-z0-9_])")
SIGNS = {
    "·": "*", "×": "*", "⋅": "*", "∙": "*", "∗": "*", "−": "-", "–": "-", "‐": "-", "‑": "-",
    "÷": "/", "∕": "/", "⁄": "/", "∥": "||", "‖": "||", "//": "||", "≈": "~", "≃": "~", "≅": "~", "∼": "~",
    "≡": "=", "≜": "=", "≔": "=",
}  # fmt: skip
RAISED = dict(zip("⁰¹²³⁴⁵⁶⁷⁸⁹⁻⁺", "0123456789-+", strict=True))
_WORDS = {letter: word for word, letter in GREEK.items()}
_VARIANTS = {"ς": "sigma", "ϵ": "epsilon", "ϑ": "theta", "ϕ": "phi", "ϱ": "rho", "ϖ": "pi", "ϰ": "kappa"}
GREEK_COMMANDS = {word: word for word in GREEK} | {
    f"var{word}": word for word in ("epsilon", "theta", "phi", "rho", "sigma", "pi", "kappa")
}


@lru_cache(maxsize=1024)
def plain_letter(sign: str) -> str:
    """Give the plain letter of a letter, also of one that is set in italics; "" for anything else."""
    if sign.isascii():
        return sign if sign.isalpha() else ""
    if lowered(sign):
        return ""
    plain = unicodedata.normalize("NFKC", sign)
    return plain if len(plain) == 1 and plain.isascii() and plain.isalpha() else ""


@lru_cache(maxsize=1024)
def greek_word(sign: str) -> str:
    """Give the name of a Greek letter, "beta" for β; "" for anything else."""
    if sign.isascii():
        return ""
    plain = unicodedata.normalize("NFKC", sign)
    return _VARIANTS.get(sign) or _WORDS.get(plain, "") if not lowered(sign) else ""


@lru_cache(maxsize=1024)
def lowered(sign: str) -> str:
    """Give the letter or digit, or the name of the Greek letter, that a small low one stands for."""
    kind, _, code = unicodedata.decomposition(sign).partition(" ")
    if kind != "<sub>" or " " in code:
        return ""
    letter = chr(int(code, 16))
    if letter.isascii():
        return letter if letter.isalnum() else ""
    return _WORDS.get(letter, "")


def is_gap(sign: str) -> bool:
    """Say whether a sign is a space of any width."""
    return sign in " \t\r\n" or unicodedata.category(sign) == "Zs"

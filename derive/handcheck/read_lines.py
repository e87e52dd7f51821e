"""Parts the text of a hand derivation into claims and remarks, each with its line in the file."""

from __future__ import annotations

import re
from dataclasses import replace

from derive.expressions.tree import Expression
from derive.handcheck.read_line import read_line
from derive.handcheck.report import HandLine

# What frames formulas in LaTeX and says nothing itself.
_FRAME = re.compile(r"\s*(?:\\(?:begin|end)\{[A-Za-z]+\*?\}|\\\[|\\\]|\$\$)\s*")


def read_lines(text: str, file: str, first: int) -> tuple[HandLine, ...]:
    """Give every claim of a text, read or with the reason why it cannot be.

    Given: the file's name, and the line of it that the text begins on. Behind # stands a remark; one on a line of
    its own belongs to the claim below it, after the last claim to that one. A line that ends with a backslash
    goes on in the next.
    """
    claims: list[HandLine] = []
    above: Expression | None = None
    remarks: list[str] = []
    begun, start = "", first
    # One line more than there are, so that what was begun is ended.
    for place, line in enumerate((*text.replace("\r\n", "\n").split("\n"), ""), first):
        written, _, remark = line.partition("#")
        remarks += [remark.strip()] if remark.strip() else []
        start = start if begun else place
        if _goes_on(written):
            begun += written.rstrip()[:-1] + " "
            continue
        claim, begun = begun + written, ""
        if claim.strip() and not _FRAME.fullmatch(claim):
            where = f"{file}:{start}"
            made, above = read_line(len(claims) + 1, where, claim, "\n".join(remarks), above)
            claims.append(made)
            remarks = []
    return _with_last_words(claims, remarks)


def _goes_on(written: str) -> bool:
    r"""Say whether a line ends with one backslash; two of them end a row of LaTeX."""
    bare = written.rstrip()
    return bare.endswith("\\") and not bare.endswith("\\\\")


def _with_last_words(claims: list[HandLine], remarks: list[str]) -> tuple[HandLine, ...]:
    """Give what is remarked behind the last claim to it."""
    if not claims or not remarks:
        return tuple(claims)
    last = claims[-1]
    words = "\n".join([last.remark, *remarks] if last.remark else remarks)
    return (*claims[:-1], replace(last, remark=words))

"""Tolerances as they are typed: a percentage or a letter of IEC 60062."""

from __future__ import annotations

import re
from fractions import Fraction

from derive.errors import InputError
from derive.quantities.value import read_number
from derive.quantities.words import quoted

# IEC 60062:2016; C from memory. The letters of capacitors below 10 pF, which there mean picofarads,
# are not read that way: the contract gives every letter its percentage.
TOLERANCE_LETTERS: dict[str, Fraction] = {
    "B": Fraction(1, 1000),
    "C": Fraction(25, 10000),
    "D": Fraction(5, 1000),
    "F": Fraction(1, 100),
    "G": Fraction(2, 100),
    "J": Fraction(5, 100),
    "K": Fraction(10, 100),
    "M": Fraction(20, 100),
}

_PERCENT = re.compile(r"([^%]+)%")


def read_tolerance(text: str, *, where: str) -> Fraction:
    """Give the tolerance as a fraction of the value: 1/20 for "5 %" and for "J".

    Raises: InputError for anything but a percentage between 0 and 100 or a letter of the table.
    """
    written = text.strip()
    if written in TOLERANCE_LETTERS:
        return TOLERANCE_LETTERS[written]
    percent = _PERCENT.fullmatch(written)
    cure = f'write "5 %" or one of the letters {" ".join(TOLERANCE_LETTERS)}'
    if not percent:
        raise InputError(f"{quoted(written)} is not a tolerance", where=where, cure=cure)
    try:
        tolerance = read_number(percent[1], where=where) / 100
    except InputError as error:
        raise InputError(f"{quoted(written)} is not a tolerance", where=where, cure=cure) from error
    if not 0 < tolerance < 1:
        raise InputError(
            f"the tolerance {quoted(written)} is not between 0 % and 100 %", where=where, cure=cure
        )
    return tolerance

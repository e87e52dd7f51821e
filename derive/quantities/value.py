"""Values as they are typed: IEC 60062 codes, numbers with prefix and unit, pure ratios."""

from __future__ import annotations

import re
from fractions import Fraction

from derive.errors import InputError
from derive.quantities.dimension import (
    CAPACITANCE,
    FREQUENCY,
    RATIO,
    RESISTANCE,
    Dimension,
)
from derive.quantities.symbol import Value
from derive.quantities.units import (
    PREFIXES,
    TypedUnit,
    dimension_example,
    dimension_words,
    read_unit,
    typed_units,
)
from derive.quantities.words import nearest, quoted

LONGEST_VALUE = 60
LARGEST_EXPONENT = 60
OPEN_VALUE = "?"

_NUMBER = r"[+-]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
_PLAIN = re.compile(rf"({_NUMBER})\s*(.*)", re.DOTALL)
_RATIO = re.compile(rf"({_NUMBER})\s*/\s*({_NUMBER})")
# The letter stands where the decimal point would; it may come first (R47, p33).
_CODE = re.compile(r"([+-]?)([0-9]*)([RFfpnu\u00b5\u03bcmkKMGT])([0-9]+)\s*(.*)", re.DOTALL)
_POINT_LETTERS = {"R": RESISTANCE, "F": CAPACITANCE}
_COMMA = re.compile(r"[0-9],[0-9]")


def read_value(text: str, dimension: Dimension, *, where: str, cycles: bool | None = None) -> Value:
    """Give the value that the text states, exactly, in SI base units.

    Given: a text such as "4k7", "R47", "4.7E+3 ohm", "10 uF", "100n", "1/2" (pure ratios only) or
    "?", and the dimension that is wanted. For a frequency, `cycles` says whether it is counted in
    Hz (True) or rad/s (False); None takes either as written.
    Raises: InputError where the text states no value of this dimension.
    Source: IEC 60062:2016 for the letter codes.
    """
    written = text.strip()
    if written == OPEN_VALUE:
        return Value(None, OPEN_VALUE)
    if len(written) > LONGEST_VALUE:
        raise InputError(
            f"the value {quoted(written)} is longer than {LONGEST_VALUE} characters",
            where=where,
            cure=_example_cure(dimension),
        )
    reading = _Reading(written.replace("\u2212", "-"), written, dimension, where, cycles)
    return Value(reading.exact(), written)


def read_number(text: str, *, where: str) -> Fraction:
    """Give a plain decimal number exactly, or refuse it.

    Given: digits with an optional sign, point and exponent.
    Raises: InputError for anything else, and for exponents that no circuit needs.
    """
    written = text.strip().replace("\u2212", "-")
    if len(written) > LONGEST_VALUE or not re.fullmatch(_NUMBER, written):
        raise InputError(
            f"{quoted(text)} is not a number", where=where, cure='write it as "0.5" or "1.2e3"'
        )
    return _exact(written, where)


class _Reading:
    """One text on its way to a number; it only bundles what every message needs."""

    def __init__(
        self, text: str, written: str, dimension: Dimension, where: str, cycles: bool | None
    ) -> None:
        self.text = text
        self.written = written
        self.dimension = dimension
        self.where = where
        self.cycles = cycles

    def exact(self) -> Fraction:
        ratio = _RATIO.fullmatch(self.text)
        if ratio and self.dimension == RATIO:
            return self._quotient(ratio[1], ratio[2])
        code = _CODE.fullmatch(self.text)
        if code:
            return self._code(code)
        plain = _PLAIN.fullmatch(self.text)
        if not plain or self._has_comma():
            raise self._garbage()
        number = _exact(plain[1], self.where)
        if not plain[2]:
            return self._bare(number)
        unit = read_unit(plain[2])
        if unit is None:
            raise self._unknown_unit(plain[2])
        self._judge(unit)
        return number * unit.factor

    def _quotient(self, above: str, below: str) -> Fraction:
        divisor = _exact(below, self.where)
        if divisor == 0:
            raise InputError(
                f"{quoted(self.written)} divides by zero",
                where=self.where,
                cure='write a ratio such as "1/2"',
            )
        return _exact(above, self.where) / divisor

    def _code(self, code: re.Match[str]) -> Fraction:
        sign, whole, letter, part, rest = code.groups()
        number = Fraction(int((whole or "0") + part), 10 ** len(part))
        if letter in _POINT_LETTERS:
            self._judge(TypedUnit(Fraction(1), letter, _POINT_LETTERS[letter]))
        else:
            number *= PREFIXES[letter]
        if rest:
            unit = read_unit(rest, prefixed=False)
            if unit is None:
                raise self._unknown_unit(rest, prefixed=False)
            self._judge(unit)
        return -number if sign == "-" else number

    def _bare(self, number: Fraction) -> Fraction:
        if self.dimension == RATIO:
            return number
        raise InputError(
            f"the value {quoted(self.written)} has no unit where {self._wanted()} is wanted",
            where=self.where,
            cure=_example_cure(self.dimension),
        )

    def _judge(self, unit: TypedUnit) -> None:
        if not unit.name:
            return
        if unit.dimension != self.dimension:
            found = "a temperature" if unit.dimension is None else dimension_words(unit.dimension)
            raise InputError(
                f"the value {quoted(self.written)} is {found}, where {self._wanted()} is wanted",
                where=self.where,
                cure=self._cure(),
            )
        if self.dimension == FREQUENCY and self.cycles is not None:
            wanted = "Hz" if self.cycles else "rad/s"
            if unit.name != wanted:
                raise InputError(
                    f"the value {quoted(self.written)} is in {unit.name}, where {wanted} is wanted",
                    where=self.where,
                    cure=f"{self._cure()}; 1 Hz is 2π rad/s",
                )

    def _wanted(self) -> str:
        return dimension_words(self.dimension)

    def _cure(self) -> str:
        if self.dimension == FREQUENCY and self.cycles is not None:
            return 'write it as "10 MHz"' if self.cycles else 'write it as "62.8 Mrad/s"'
        return _example_cure(self.dimension)

    def _has_comma(self) -> bool:
        return bool(_COMMA.search(self.text))

    def _garbage(self) -> InputError:
        cure = "write a decimal point, not a comma" if self._has_comma() else self._cure()
        return InputError(
            f"{quoted(self.written)} is not a value that can be read as {self._wanted()}",
            where=self.where,
            cure=cure,
        )

    def _unknown_unit(self, unit: str, *, prefixed: bool = True) -> InputError:
        near = nearest(unit, typed_units(self.dimension, prefixed=prefixed))
        return InputError(
            f"the value {quoted(self.written)} has an unknown unit {quoted(unit)}",
            where=self.where,
            cure=f'did you mean "{near}"?' if near else self._cure(),
        )


def _exact(number: str, where: str) -> Fraction:
    digits, _, exponent = number.replace("E", "e").partition("e")
    # Judged by its length first: a huge exponent must be refused before it is computed.
    if exponent and (len(exponent.lstrip("+-").lstrip("0")) > 2 or abs(int(exponent)) > LARGEST_EXPONENT):
        raise InputError(
            f"the number {quoted(number)} has an exponent beyond ±{LARGEST_EXPONENT}",
            where=where,
            cure="write a value that a part can have",
        )
    return Fraction(digits) * Fraction(10) ** int(exponent or "0")


def _example_cure(dimension: Dimension) -> str:
    return f"write it as {dimension_example(dimension)}"

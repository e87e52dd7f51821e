"""Units and SI prefixes as they are typed, and the names of units as they are printed."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    CURRENT,
    FREQUENCY,
    INDUCTANCE,
    RATIO,
    RESISTANCE,
    TIME,
    VOLTAGE,
    Dimension,
)

# `m` is milli and `M` is mega, always; `K` is the kilo of IEC 60062. Three letters stand for micro:
# u, the micro sign U+00B5 and the Greek mu U+03BC, since keyboards differ.
PREFIXES: dict[str, Fraction] = {
    "f": Fraction(1, 10**15),
    "p": Fraction(1, 10**12),
    "n": Fraction(1, 10**9),
    "u": Fraction(1, 10**6),
    "\u00b5": Fraction(1, 10**6),
    "\u03bc": Fraction(1, 10**6),
    "m": Fraction(1, 10**3),
    "k": Fraction(10**3),
    "K": Fraction(10**3),
    "M": Fraction(10**6),
    "G": Fraction(10**9),
    "T": Fraction(10**12),
}

# The factor of a square law, in A/V², and the slope of its saturation, in 1/V.
TRANSCONDUCTANCE_FACTOR = CURRENT / VOLTAGE**2
PER_VOLT = RATIO / VOLTAGE

# Typed unit -> what it measures. Ohm has two code points: U+03A9 (omega) and U+2126 (ohm sign).
# None marks a unit that is known, but measures nothing of a linear circuit.
UNITS: dict[str, Dimension | None] = {
    "\u03a9": RESISTANCE,
    "\u2126": RESISTANCE,
    "ohm": RESISTANCE,
    "ohms": RESISTANCE,
    "Ohm": RESISTANCE,
    "Ohms": RESISTANCE,
    "R": RESISTANCE,
    "V/A": RESISTANCE,
    "F": CAPACITANCE,
    "H": INDUCTANCE,
    "S": CONDUCTANCE,
    "A/V": CONDUCTANCE,
    "V": VOLTAGE,
    "A": CURRENT,
    "Hz": FREQUENCY,
    "rad/s": FREQUENCY,
    "s": TIME,
    "V/V": RATIO,
    "A/A": RATIO,
    "A/V²": TRANSCONDUCTANCE_FACTOR,
    "A/V^2": TRANSCONDUCTANCE_FACTOR,
    "A/V2": TRANSCONDUCTANCE_FACTOR,
    "1/V": PER_VOLT,
    "/V": PER_VOLT,
    "V^-1": PER_VOLT,
    "°C": None,
}

# Units that take no prefix: ratios, reciprocals, degrees.
_BARE = ("°C", "V/V", "A/A", "1/V", "/V", "V^-1")

_WORDS: dict[Dimension, tuple[str, str]] = {
    RATIO: ("a pure ratio", '"100" or "1/2"'),
    RESISTANCE: ("a resistance", '"4k7" or "4.7 kΩ"'),
    CAPACITANCE: ("a capacitance", '"100n" or "100 nF"'),
    INDUCTANCE: ("an inductance", '"10u" or "10 uH"'),
    CONDUCTANCE: ("a conductance", '"40 mS"'),
    VOLTAGE: ("a voltage", '"12 V"'),
    CURRENT: ("a current", '"1 mA"'),
    FREQUENCY: ("a frequency", '"10 MHz" or "62.8 Mrad/s"'),
    TIME: ("a time", '"1 us"'),
    TRANSCONDUCTANCE_FACTOR: ("a transconductance factor", '"2 mA/V²"'),
    PER_VOLT: ("a slope in 1/V", '"0.02 1/V"'),
}

_PRINTED: dict[Dimension, str] = {
    RATIO: "",
    RESISTANCE: "Ω",
    CAPACITANCE: "F",
    INDUCTANCE: "H",
    CONDUCTANCE: "S",
    VOLTAGE: "V",
    CURRENT: "A",
    FREQUENCY: "rad/s",
    TIME: "s",
    TRANSCONDUCTANCE_FACTOR: "A/V²",
    PER_VOLT: "1/V",
}

_SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


@dataclass(frozen=True, slots=True)
class TypedUnit:
    """A unit as typed: the factor of its prefix, its name ("" where none), what it measures."""

    factor: Fraction
    name: str
    dimension: Dimension | None


def read_unit(text: str, *, prefixed: bool = True) -> TypedUnit | None:
    """Give the unit that the text names, or None where it names none.

    Given: the text behind a number, such as "kΩ", "n" or "rad/s". A unit wins over a prefix of the
    same letter. Without `prefixed` a prefix is refused.
    """
    if text in UNITS:
        return TypedUnit(Fraction(1), text, UNITS[text])
    if not prefixed or text[:1] not in PREFIXES:
        return None
    factor, rest = PREFIXES[text[0]], text[1:]
    if not rest:
        return TypedUnit(factor, "", None)
    if rest in UNITS and rest not in _BARE:
        return TypedUnit(factor, rest, UNITS[rest])
    return None


def typed_units(dimension: Dimension, *, prefixed: bool = True) -> tuple[str, ...]:
    """Give every spelling of a unit of the dimension, with its prefixes or without."""
    plain = [name for name, measures in UNITS.items() if measures == dimension]
    if not prefixed:
        return tuple(plain)
    return (*plain, *(prefix + name for prefix in PREFIXES for name in plain))


def dimension_words(dimension: Dimension) -> str:
    """Give the quantity in words: "a resistance"."""
    if dimension in _WORDS:
        return _WORDS[dimension][0]
    return f"a quantity in {unit_of(dimension)}"


def dimension_example(dimension: Dimension) -> str:
    """Give an example of how a value of this dimension is typed."""
    return _WORDS.get(dimension, ("", '"1"'))[1]


def unit_of(dimension: Dimension) -> str:
    """Give the printed unit: "Ω", "F", "rad/s", "s²", "Ω·s²", "" for a pure ratio."""
    if dimension in _PRINTED:
        return _PRINTED[dimension]
    above, below = _factors(dimension, "Ω", "", superscript=True)
    return _joined(above, below, "·")


def ledger_unit(dimension: Dimension) -> str:
    """Give the unit in ASCII for the ledger: "ohm", "F", "rad/s", "s^2", "1" for a pure ratio."""
    if dimension == RATIO:
        return "1"
    if dimension in _PRINTED:
        return "ohm" if dimension == RESISTANCE else _PRINTED[dimension]
    above, below = _factors(dimension, "ohm", "^", superscript=False)
    return _joined(above, below, "*")


def _factors(
    dimension: Dimension, ohm: str, power_sign: str, *, superscript: bool
) -> tuple[list[str], list[str]]:
    volt_power, ohm_power, second_power = dimension.volt, dimension.ohm, dimension.second
    powers: list[tuple[str, int]] = []
    if volt_power == 1 and ohm_power == -1:
        powers.append(("A", 1))
    elif volt_power == 0 and ohm_power == -1:
        powers.append(("S", 1))
    else:
        powers += [("V", volt_power), (ohm, ohm_power)]
    powers.append(("s", second_power))
    above: list[str] = []
    below: list[str] = []
    for name, power in powers:
        if power:
            size = "" if abs(power) == 1 else power_sign + str(abs(power))
            shown = name + (size.translate(_SUPERSCRIPTS) if superscript else size)
            (above if power > 0 else below).append(shown)
    return above, below


def _joined(above: list[str], below: list[str], times: str) -> str:
    top = times.join(above) or "1"
    if not below:
        return top
    bottom = times.join(below)
    return f"{top}/{bottom}" if len(below) == 1 else f"{top}/({bottom})"

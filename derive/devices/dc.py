"""The DC parameters of a device, in its own polarity, and the symbols that they are written with."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from derive.devices.model import Names
from derive.errors import InputError
from derive.quantities.dimension import Dimension
from derive.quantities.format import engineering
from derive.quantities.symbol import Symbol
from derive.quantities.words import quoted
from derive.topology.topology import Part

Pair = tuple[str, str]
COMMON_PRACTICE = "common practice"


def own_values(
    part: Part,
    keys: tuple[str, ...],
    defaults: Mapping[str, Fraction],
    polarities: Mapping[str, int],
) -> dict[str, Fraction]:
    """Give the values of the keys that are given or have a default, and `polarity` 1 or -1.

    Raises: InputError for a value that was left open with "?".
    """
    given = dict(part.parameters)
    values = {"polarity": Fraction(polarities[dict(part.words).get("polarity", next(iter(polarities)))])}
    for key in keys:
        if key in given:
            exact = given[key].exact
            if exact is None:
                raise InputError(
                    f"part {part.name}: {key} is left open, and the operating point needs it",
                    where=str(part.place),
                    cure=f"give {key} a value, or give the small-signal parameters",
                )
            values[key] = exact
        elif key in defaults:
            values[key] = defaults[key]
    return values


def mirrored(pair: Pair, values: Mapping[str, Fraction]) -> Pair:
    """Give the pair in the direction in which the current of the device's own polarity goes."""
    return pair if values["polarity"] > 0 else (pair[1], pair[0])


def dc_symbol(
    part: Part,
    key: str,
    dimension: Dimension,
    values: Mapping[str, Fraction],
    names: Names,
    origin: str = "",
) -> Symbol:
    """Give the symbol of one DC parameter; its origin says where it is common practice.

    Raises: InputError where the operating point needs the value and it is not given.
    """
    if key not in values:
        raise InputError(
            f"part {part.name}: the operating point needs {quoted(key)}, and it is not given",
            where=str(part.place),
            cure=f"give {key} in the part or its model",
        )
    text = next((value.text for name, value in part.parameters if name == key), "")
    where = origin or (f"part {part.name}" if text else COMMON_PRACTICE)
    name = names.indexed(part, key)
    return Symbol(name, dimension, values[key], where, text or engineering(values[key], dimension))

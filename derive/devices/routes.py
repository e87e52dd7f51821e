"""From what is given of a device to its small-signal parameters, by the formulas that its model states.

A parameter that is given stands; the first formula whose names all have values gives one that is
not. Every further way to the same parameter must agree, since two data that disagree are a slip
somewhere. What came from the operating point is left out of that: it is as good as its assumptions
(constant V_BE), while what is given was given on purpose.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import cache

from derive.devices.model import Names
from derive.devices.parameters import DeviceParameters, LeftOut, Origin, ParameterLine
from derive.devices.thermal import temperature_of
from derive.errors import InputError
from derive.expressions.parse import parse_expression
from derive.expressions.tree import Equation, Expression, Name
from derive.expressions.walk import evaluate, names_of, substitute
from derive.quantities.dimension import VOLTAGE, Dimension
from derive.quantities.format import engineering
from derive.quantities.rounding import PI, square_root
from derive.quantities.words import listed
from derive.topology.kind import Keys, Kind
from derive.topology.topology import GROUND, Part

# Two ways to one parameter agree within this; data sheets print three figures.
AGREEMENT = Fraction(1, 1000)
CONSTANTS = ("pi", "V_T")


@dataclass(frozen=True, slots=True)
class Route:
    """One way to a parameter: a formula in the expression language, and what must not be known.

    With `compares` False it gives a value where there is none, but is too rough to contradict one.
    """

    key: str
    formula: str
    without: tuple[str, ...] = ()
    compares: bool = True


@dataclass(frozen=True, slots=True)
class Wanted:
    """A small-signal parameter of the model, and what is said where it is left out.

    `across` names the terminals between which it acts: on one node it has no effect.
    """

    key: str
    left_out: str
    across: Keys | None = None
    parasitic: bool = False


@dataclass(frozen=True, slots=True)
class Known:
    """A quantity with its value (None for one left open), and where it came from."""

    value: Fraction | None
    words: str = "given"
    from_point: bool = False
    text: str = ""
    equation: Expression | None = None


@dataclass(frozen=True, slots=True)
class Routes:
    """What a model states: the parameters that it wants, the ways to them, and the point's quantities."""

    spec: Kind
    wanted: tuple[Wanted, ...]
    routes: tuple[Route, ...]
    of_the_point: tuple[str, ...]

    def dimension(self, key: str) -> Dimension:
        """Give the dimension of a parameter."""
        if key == "V_T":
            return VOLTAGE
        return next(item.dimension for item in self.spec.parameters if item.name == key)

    def printed(self, key: str, value: Fraction, digits: int = 4) -> str:
        """Give a value with its unit; a frequency that counts cycles in Hz."""
        cycles = any(item.name == key and item.cycles for item in self.spec.parameters)
        return engineering(value, self.dimension(key), digits, unit="Hz" if cycles else None)


def work_out(
    part: Part, stated: Routes, further: Mapping[str, Known], volts: Fraction, names: Names
) -> DeviceParameters:
    """Give every wanted parameter of a part, or say why it is left out.

    Given: `further` holds what the operating point and common practice give, which counts where the
    file gives nothing; `volts` is the thermal voltage.
    Raises: InputError where two ways to one parameter disagree, or a formula gives no positive value.
    """
    known = {key: Known(value.exact, text=value.text) for key, value in part.parameters}
    known |= {key: found for key, found in further.items() if key not in known}
    at = f"V_T = kT/q = {engineering(volts, VOLTAGE)} at {_kelvin(temperature_of(volts))}"
    known |= {"pi": Known(PI), "V_T": Known(volts, words=at)}
    for route in stated.routes:
        _take(part, stated, route, known)
    lines, left_out = [], []
    for wanted in stated.wanted:
        symbol = names.indexed(part, wanted.key)
        if _is_idle(part, wanted):
            first, second = wanted.across or ("", "")
            left_out.append(LeftOut(symbol, f"without effect: {first} and {second} are one node"))
        elif wanted.key in known:
            lines.append(_line(part, stated, wanted, symbol, known, names))
        else:
            left_out.append(LeftOut(symbol, wanted.left_out))
    return DeviceParameters(part.name, tuple(lines), tuple(left_out))


def _is_idle(part: Part, wanted: Wanted) -> bool:
    wires = dict(part.wires)
    ends = {wires.get(key, (GROUND,)) for key in wanted.across or ()}
    return len(ends) == 1


def _take(part: Part, stated: Routes, route: Route, known: dict[str, Known]) -> None:
    """Follow one route, if it is open: to a new value, or to a second one which must agree."""
    formula = _formula(route.formula)
    needs = names_of(formula)
    if any(name not in known for name in needs) or any(name in known for name in route.without):
        return
    value = _value(formula, known)
    from_point = any(known[name].from_point for name in needs)
    first = known.get(route.key)
    if first is None:
        if value is not None and value <= 0:
            raise _not_positive(part, stated, route, value, known)
        words = "; ".join(_input(stated, name, known) for name in needs if name != "pi")
        known[route.key] = Known(value, f"from {words}", from_point, equation=formula)
        return
    if value is None or first.value is None or from_point or first.from_point or not route.compares:
        return
    if abs(value - first.value) > AGREEMENT * abs(first.value):
        raise _contradiction(part, stated, route, value, known)


def _value(formula: Expression, known: Mapping[str, Known]) -> Fraction | None:
    values = {name: known[name].value for name in names_of(formula)}
    closed = {name: value for name, value in values.items() if value is not None}
    if len(closed) < len(values):
        return None
    return evaluate(formula, closed, lambda number: number, square_root)


@cache
def _formula(text: str) -> Expression:
    return parse_expression(text)


def _line(
    part: Part,
    stated: Routes,
    wanted: Wanted,
    symbol: str,
    known: Mapping[str, Known],
    names: Names,
) -> ParameterLine:
    found = known[wanted.key]
    equation = None
    origin: Origin = "given"
    if found.equation is not None:
        inputs = [name for name in names_of(found.equation) if name not in CONSTANTS]
        indices: dict[str, Expression] = {name: Name(names.indexed(part, name)) for name in inputs}
        equation = Equation(Name(symbol), substitute(found.equation, indices))
        origin = _origin(stated, inputs, known)
    return ParameterLine(
        wanted.key,
        symbol,
        stated.dimension(wanted.key),
        found.value,
        origin,
        "left open" if found.value is None and equation is None else found.words,
        equation,
        "parasitic" if wanted.parasitic else "",
        found.text,
    )


def _origin(stated: Routes, inputs: list[str], known: Mapping[str, Known]) -> Origin:
    """Say whether a value of the data sheet goes into a formula; common practice is none."""
    small_signal = {wanted.key for wanted in stated.wanted}
    own = small_signal.union(stated.of_the_point)
    given = {name for name in inputs if known[name].words == "given"}
    return "data sheet" if given - own else "operating point"


def _input(stated: Routes, name: str, known: Mapping[str, Known]) -> str:
    """Give one quantity that a formula takes: "I_C = 1 mA from the operating point"."""
    found = known[name]
    if name == "V_T":
        return found.words
    value = "open" if found.value is None else stated.printed(name, found.value)
    words = "" if found.words == "given" or found.equation is not None else f" {found.words}"
    return f"{name} = {value}{words}"


def _kelvin(temperature: Fraction) -> str:
    return f"{float(temperature):.6g} K"


def _not_positive(
    part: Part, stated: Routes, route: Route, value: Fraction, known: Mapping[str, Known]
) -> InputError:
    inputs = [name for name in names_of(_formula(route.formula)) if name not in CONSTANTS]
    return InputError(
        f"part {part.name}: {route.key} = {route.formula} comes to "
        f"{stated.printed(route.key, value)}, so "
        f"{listed(_input(stated, name, known) for name in inputs)} disagree",
        where=str(part.place),
        cure=f"check them against one data sheet and one current, or give {route.key} itself",
    )


def _contradiction(
    part: Part, stated: Routes, route: Route, value: Fraction, known: Mapping[str, Known]
) -> InputError:
    first = known[route.key]
    way = "is given as" if first.equation is None else f"{first.words} is"
    inputs = names_of(_formula(route.formula))
    words = [_input(stated, name, known) for name in inputs if name not in CONSTANTS]
    stood = stated.printed(route.key, first.value or Fraction(0), 6)
    temperature = f", {known['V_T'].words}" if "V_T" in inputs else ""
    return InputError(
        f"part {part.name}: {route.key} {way} {stood}, but {route.formula} is "
        f"{stated.printed(route.key, value, 6)} ({listed(words)}{temperature})",
        where=str(part.place),
        cure=f"keep one of {listed(dict.fromkeys([route.key, *_data(inputs)]), 'or')}",
    )


def _data(inputs: tuple[str, ...]) -> list[str]:
    return [name for name in inputs if name not in CONSTANTS]

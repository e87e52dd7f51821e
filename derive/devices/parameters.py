"""The nouns of a device's parameters: each with its value, and where it came from."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from derive.expressions.tree import Equation
from derive.quantities.dimension import Dimension

Origin = Literal["given", "operating point", "data sheet"]


@dataclass(frozen=True, slots=True)
class DevicePoint:
    """The operating point of one device.

    `current` is that of its collector or drain, or of its one path, counted positive for the
    device's own polarity; `voltages` holds the DC voltage of each terminal by its key against
    ground; empty where only the current was given.
    """

    part: str
    current: Fraction
    voltages: tuple[tuple[str, Fraction], ...] = ()


@dataclass(frozen=True, slots=True)
class ParameterLine:
    """One small-signal parameter: its symbol, value and origin, and the equation it follows from.

    `key` is its bare name (g_m), `symbol` its name in this circuit (g_m1). `says` is a phrase such
    as "given" or "from the operating point, V_T = kT/q at 300.15 K"; `text` is the value as it was
    written, "" where it was not. `value` is None where something it needs was left open ("?").
    """

    key: str
    symbol: str
    dimension: Dimension
    value: Fraction | None
    origin: Origin
    says: str
    equation: Equation | None = None
    role: Literal["", "parasitic"] = ""
    text: str = ""


@dataclass(frozen=True, slots=True)
class LeftOut:
    """A parameter that the model does without, and why: ("r_o", "taken as infinite: V_A not given")."""

    symbol: str
    why: str


@dataclass(frozen=True, slots=True)
class DeviceParameters:
    """All small-signal parameters of one device."""

    part: str
    lines: tuple[ParameterLine, ...]
    left_out: tuple[LeftOut, ...]

    def value(self, key: str) -> Fraction | None:
        """Give a parameter's value by its bare name; None where it is left out or open."""
        return next((line.value for line in self.lines if line.key == key), None)

    def symbol(self, key: str) -> str | None:
        """Give a parameter's symbol by its bare name; None where it is left out."""
        return next((line.symbol for line in self.lines if line.key == key), None)

"""Dimensions of circuit quantities as whole powers of volt, ohm and second."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Dimension:
    """A product of powers of volt, ohm and second: enough for every quantity of a linear circuit."""

    volt: int = 0
    ohm: int = 0
    second: int = 0

    def __mul__(self, other: Dimension) -> Dimension:
        return Dimension(self.volt + other.volt, self.ohm + other.ohm, self.second + other.second)

    def __truediv__(self, other: Dimension) -> Dimension:
        return self * other**-1

    def __pow__(self, exponent: int) -> Dimension:
        return Dimension(self.volt * exponent, self.ohm * exponent, self.second * exponent)


RATIO = Dimension()
VOLTAGE = Dimension(volt=1)
RESISTANCE = Dimension(ohm=1)
TIME = Dimension(second=1)
CURRENT = VOLTAGE / RESISTANCE
CONDUCTANCE = RATIO / RESISTANCE
CAPACITANCE = TIME / RESISTANCE
INDUCTANCE = TIME * RESISTANCE
FREQUENCY = RATIO / TIME

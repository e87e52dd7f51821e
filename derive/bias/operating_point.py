"""The nouns of the bias: node voltages, devices' points, how they were derived, and the checks."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from derive.devices.parameters import DevicePoint
from derive.eliminate.derivation import Derivation, Step
from derive.expressions.tree import Equation

Method = Literal["linear", "square law, closed form", "square law, numeric", "exponential law, numeric"]


@dataclass(frozen=True, slots=True)
class RegionCheck:
    """Whether a device works in the region that its model supposes, with the voltages that say so."""

    part: str
    passed: bool
    measured: str
    limit: str


@dataclass(frozen=True, slots=True)
class NewtonCheck:
    """The same current by Newton's method on the device's own law; `difference` is relative, signed."""

    part: str
    current: float
    difference: float
    passed: bool
    limit: str


@dataclass(frozen=True, slots=True)
class CurrentDerivation:
    """How a device's current was derived: the steps shown, and the final equation.

    `steps` come with certificates as those of the signal equations do; they are empty where the
    current was found numerically, and `says` then tells how. `derivation` holds the same steps with
    the DC circuit's equations, whose meanings in words the steps refer to by their rows. `broken`
    lists the steps whose proof failed, each with what is wrong.
    """

    part: str
    symbol: str
    steps: tuple[Step, ...]
    result: Equation | None
    says: str
    derivation: Derivation | None = None
    broken: tuple[tuple[int, str], ...] = ()


@dataclass(frozen=True, slots=True)
class OperatingPoint:
    """The DC solution of a topology.

    `nodes` holds (node, volts) in the order in which nodes are named; `dissipation` (part, watts) of
    every resistor and device.
    """

    method: Method
    nodes: tuple[tuple[str, Fraction], ...]
    devices: tuple[DevicePoint, ...]
    dissipation: tuple[tuple[str, Fraction], ...]
    derivations: tuple[CurrentDerivation, ...]
    regions: tuple[RegionCheck, ...]
    newton: tuple[NewtonCheck, ...]

    @property
    def passed(self) -> bool:
        """Whether every device is in its region, Newton's method agrees and every step holds."""
        checks = [c.passed for c in self.regions] + [c.passed for c in self.newton]
        return all(checks) and not any(found.broken for found in self.derivations)

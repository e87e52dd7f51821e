"""The currents of the operating point against those of the devices' own laws."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

from derive.bias.dc_circuit import DcCircuit
from derive.bias.newton import by_own_laws
from derive.bias.operating_point import NewtonCheck
from derive.devices.parameters import DevicePoint

# Common practice: a constant V_BE is good for hand work if the currents come out this near.
JUNCTION = (0.10, "within 10 % of the exponential law (common practice for a constant junction voltage)")
# The slope of saturation (lambda) is left out of the hand's law and stands in the device's own.
SQUARE = (0.20, "within 20 % of the square law with its slope (common practice)")
NOT_FOUND = "Newton's method did not converge"


def newton_checks(
    dc: DcCircuit,
    points: Sequence[DevicePoint],
    nodes: Mapping[str, Fraction],
    thermal_voltage: Fraction,
) -> tuple[NewtonCheck, ...]:
    """Compare each device's current with that of its own law; a search that fails is a failed check.

    A device whose current the file gives has no law to be held against.
    """
    found = by_own_laws(dc, nodes, thermal_voltage)
    checks = []
    for device, point in zip(dc.devices, points, strict=True):
        if device.given is not None:
            continue
        largest, limit = SQUARE if device.is_square else JUNCTION
        if found is None:
            nothing = float("nan")
            checks.append(NewtonCheck(point.part, nothing, nothing, False, f"{limit}; {NOT_FOUND}"))
            continue
        current = found.currents[point.part]
        difference = (float(point.current) - current) / current if current else float("inf")
        passed = abs(difference) <= largest
        checks.append(NewtonCheck(point.part, current, difference, passed, limit))
    return tuple(checks)

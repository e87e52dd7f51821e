"""Each device's point, and the power of resistors and devices, from currents and node voltages."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from derive.bias.currents import Solved
from derive.bias.dc_circuit import DcCircuit
from derive.bias.dc_device import DcDevice
from derive.devices.parameters import DevicePoint
from derive.topology.topology import GROUND


def device_points(dc: DcCircuit, solved: Solved) -> tuple[DevicePoint, ...]:
    """Give the current and the terminals' voltages of every device, in the order of the file."""
    at = {**dict(solved.nodes), GROUND: Fraction(0)}
    return tuple(
        DevicePoint(
            device.part.name,
            solved.currents[device.part.name],
            tuple((key, at[nodes[0]]) for key, nodes in device.part.wires),
        )
        for device in dc.devices
    )


def dissipation(
    dc: DcCircuit, points: tuple[DevicePoint, ...], nodes: Mapping[str, Fraction]
) -> tuple[tuple[str, Fraction], ...]:
    """Give the power of every resistor and device, in the order of the file."""
    at = {**nodes, GROUND: Fraction(0)}
    devices = {device.part.name: device for device in dc.devices}
    by_part = {point.part: point for point in points}
    found = []
    for part in dc.topology.parts:
        if part.name in devices:
            found.append((part.name, _power(devices[part.name], by_part[part.name])))
        elif part.kind == "resistor" and part.value is not None and part.value.exact:
            first, second = part.nodes("between")
            # What hangs between capacitors carries no direct current.
            across = at[first] - at[second] if first in at and second in at else Fraction(0)
            found.append((part.name, across**2 / part.value.exact))
    return tuple(found)


def _power(device: DcDevice, point: DevicePoint) -> Fraction:
    at = dict(point.voltages)
    first, second = device.main
    power = device.sign * (at[first] - at[second]) * point.current
    if device.control is not None and "beta" in device.values:
        base = device.sign * (at[device.control] - at[second])
        power += base * point.current / device.values["beta"]
    return power

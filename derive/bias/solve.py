"""The operating point of a topology: currents and voltages, how they follow, and what checks say."""

from __future__ import annotations

from derive.bias.compare import newton_checks
from derive.bias.currents import by_constant_voltages, by_exponential_laws
from derive.bias.dc_circuit import dc_circuit
from derive.bias.operating_point import OperatingPoint
from derive.bias.points import device_points, dissipation
from derive.bias.regions import region_checks
from derive.devices.registry import biased_device
from derive.devices.thermal import thermal_voltage
from derive.errors import InputError
from derive.topology.topology import Part, Topology


def operating_point(topology: Topology) -> OperatingPoint | None:
    """Give the DC solution, or None where every device gives its small-signal values or its current.

    Raises: InputError where a device needs an operating point and there is none: no supplies, no DC
    path, a shorted supply, a value that is missing, or a device that does not conduct.
    """
    needing = [part for part in topology.parts if _needs_point(part)]
    if not needing:
        return None
    if not topology.supplies:
        raise _no_supplies(needing[0])
    dc = dc_circuit(topology)
    temperature = thermal_voltage(topology.temperature)
    solved = by_constant_voltages(dc)
    off = solved.not_conducting
    if off:
        solved = by_exponential_laws(dc, solved, off, temperature)
    nodes = dict(solved.nodes)
    points = device_points(dc, solved)
    return OperatingPoint(
        solved.method,
        solved.nodes,
        points,
        dissipation(dc, points, nodes),
        solved.derivations,
        region_checks(dc, points),
        newton_checks(dc, points, nodes, temperature),
    )


def _needs_point(part: Part) -> bool:
    model = biased_device(part.kind)
    return model is not None and not model.is_settled(part)


def _no_supplies(part: Part) -> InputError:
    model = biased_device(part.kind)
    current = model.CURRENT if model else "current"
    return InputError(
        f"part {part.name}: it needs an operating point, and the file has no [supplies]",
        where=str(part.place),
        cure=f"write [supplies] with the DC values, or give the part its {current} or its "
        "small-signal values",
    )

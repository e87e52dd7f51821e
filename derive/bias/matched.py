"""Transistors with one base-emitter voltage: their currents go as their saturation currents.

Where two junctions stand between the same two nodes, as in a mirror or a pair with joined bases, a
constant V_BE at both settles nothing about how the current divides. The exponential law does: at
one V_BE the currents are in the ratio of the saturation currents, 1 for like devices.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction

from derive.bias.dc_device import DcDevice
from derive.bias.paths import Join, reached
from derive.devices.elements import CurrentGain, VoltageDrive
from derive.devices.model import DcModel, Names
from derive.quantities.dimension import RATIO
from derive.quantities.symbol import Symbol


def with_matched(devices: Sequence[DcDevice], shorts: Sequence[Join], names: Names) -> list[DcDevice]:
    """Give the devices, each later one of a group of parallel junctions answering to the first."""
    found: list[DcDevice] = []
    for device in devices:
        leader = next((first for first in found if _parallel(first, device, shorts)), None)
        found.append(device if leader is None else _following(device, leader, names))
    return found


def ratio(leader: DcDevice, device: DcDevice) -> Fraction | None:
    """Give the ratio of the saturation currents; None where the data do not settle it."""
    one, other = leader.values.get("I_S"), device.values.get("I_S")
    if one is not None and other is not None:
        return other / one
    if one is None and other is None and leader.values["V_BE"] == device.values["V_BE"]:
        return Fraction(1)
    return None


def _parallel(leader: DcDevice, device: DcDevice, shorts: Sequence[Join]) -> bool:
    if not (_has_junction(leader) and _has_junction(device)) or leader.sign != device.sign:
        return False
    same = all(leader.node(k) in reached(device.node(k), shorts) for k in ("base", "emitter"))
    return same and ratio(leader, device) is not None


def _has_junction(device: DcDevice) -> bool:
    return device.model.KIND == "bipolar" and any(isinstance(d, VoltageDrive) for d in device.dc.drives)


def _following(device: DcDevice, leader: DcDevice, names: Names) -> DcDevice:
    """Give the device with its base current a multiple of the leader's."""
    part, beta = device.part, device.dc.symbols[1]
    times = Symbol(
        names.indexed(part, "m"),
        RATIO,
        ratio(leader, device),
        f"saturation currents of {part.name} and {leader.part.name}",
    )
    junction = device.dc.drives[0].nodes
    base = CurrentGain(device.base_current, part.name, junction, leader.dc.drives[0].name, times.name)
    collector = device.dc.elements[0]
    if not isinstance(collector, CurrentGain):
        return device
    collector = replace(collector, senses=base.name)
    return replace(device, dc=DcModel((collector, base), (), (times, beta)), leader=leader.part.name)

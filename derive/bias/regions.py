"""Whether each device works in the region that its small-signal model supposes."""

from __future__ import annotations

from fractions import Fraction

from derive.bias.dc_circuit import DcCircuit
from derive.bias.dc_device import DcDevice
from derive.bias.operating_point import RegionCheck
from derive.devices.parameters import DevicePoint
from derive.quantities.dimension import CURRENT, VOLTAGE
from derive.quantities.format import engineering

# Common practice: a collector junction forward by no more than this carries no current to speak of.
COLLECTOR_JUNCTION = Fraction("0.4")
# A current that the file gives besides beta is held against that of the DC circuit.
GIVEN = Fraction(1, 10)


def region_checks(dc: DcCircuit, points: tuple[DevicePoint, ...]) -> tuple[RegionCheck, ...]:
    """Check every device: its model's region, and for a bipolar transistor the collector junction."""
    return tuple(_check(device, point) for device, point in zip(dc.devices, points, strict=True))


def _check(device: DcDevice, point: DevicePoint) -> RegionCheck:
    at = dict(point.voltages)
    if device.control == "gate" and {"V_t", "V_P"}.isdisjoint(device.values):
        return _by_overdrive(device, point)
    region = device.model.region(at, device.values)
    passed, measured, limit = region.passed, region.measured, region.limit
    if {"base", "collector"} <= at.keys():
        v_bc = device.sign * (at["base"] - at["collector"])
        name = "V_BC" if device.sign > 0 else "V_CB"
        passed = passed and v_bc <= COLLECTOR_JUNCTION
        measured += f", {name} = {engineering(v_bc, VOLTAGE)}"
        limit += f" and {name} ≤ {engineering(COLLECTOR_JUNCTION, VOLTAGE)} (common practice)"
    given = dict(device.part.parameters).get(device.model.CURRENT)
    if device.given is None and given is not None and given.exact:
        agrees = abs(point.current - given.exact) <= GIVEN * given.exact
        passed = passed and agrees
        name = device.model.CURRENT
        measured += (
            f", {name} = {engineering(point.current, CURRENT)} by the DC circuit, "
            f"{engineering(given.exact, CURRENT)} given"
        )
        limit += f"; the given {name} within 10 % of the DC circuit's"
    return RegionCheck(point.part, passed, measured, limit)


def _by_overdrive(device: DcDevice, point: DevicePoint) -> RegionCheck:
    """Check a field-effect transistor whose current is given and whose threshold is not."""
    at = dict(point.voltages)
    v_ds = device.sign * (at["drain"] - at["source"])
    ds = "V_DS" if device.sign > 0 else "V_SD"
    given = dict(device.part.parameters).get("V_ov")
    overdrive = given.exact if given is not None else None
    measured = f"{ds} = {engineering(v_ds, VOLTAGE)}"
    if overdrive is None:
        return RegionCheck(
            point.part, v_ds > 0, measured, f"{ds} above 0; saturation not judged: V_ov not given"
        )
    limit = f"saturation: {ds} not below V_ov = {engineering(overdrive, VOLTAGE)}"
    return RegionCheck(point.part, v_ds >= overdrive, measured, limit)

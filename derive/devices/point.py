"""What the operating point gives a device, and what is said where a device has none."""

from __future__ import annotations

from derive.devices.parameters import DeviceParameters, DevicePoint
from derive.devices.routes import Known
from derive.errors import InputError
from derive.topology.topology import Part

# What is said of a parameter without which there is no model.
NOT_KNOWN = "not known"
FROM_POINT = "from the operating point"


def point_quantities(current: str, point: DevicePoint | None) -> dict[str, Known]:
    """Give the device's current at the operating point, under its name; nothing where there is none."""
    if point is None:
        return {}
    return {current: Known(point.current, FROM_POINT, from_point=True)}


def needs(
    part: Part, found: DeviceParameters, key: str, current: str, *for_bias: str
) -> DeviceParameters:
    """Give the parameters, or refuse a device whose foremost one is not known.

    Raises: InputError that names what would settle it.
    """
    if not any(item.why == NOT_KNOWN for item in found.left_out):
        return found
    data = " and ".join(for_bias)
    raise InputError(
        f"part {part.name}: its {key} is not known: neither {key} nor {current} is given, and the "
        f"operating point was not worked out",
        where=str(part.place),
        cure=f"give {current}, or {key}, or {data} and the supplies from which {current} follows",
    )

"""How small a small signal is: the amplitude at each device at which its second harmonic is one per cent.

An exponential law gives a second harmonic of v/(4·V_T) relative to the fundamental, a square law one of v/(4·V_ov),
v being the amplitude between the controlling terminals (the first terms of each law's series, common practice).
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.bias.operating_point import OperatingPoint
from derive.devices.elements import SmallSignal
from derive.devices.thermal import thermal_voltage

ONE_PER_CENT = Fraction(1, 100)
# By kind of device: the signal that controls its current, and whether its law is exponential.
CONTROL = {
    "bipolar": ("v_be", True),
    "diode": ("v_d", True),
    "mosfet": ("v_gs", False),
    "jfet": ("v_gs", False),
}


@dataclass(frozen=True, slots=True)
class SmallSignalLimit:
    """Up to which amplitude in volts a device is linear to one per cent of second harmonic.

    `scale` is V_T or the device's V_ov, `law` "exponential" or "square law"; both amplitudes are None where
    V_ov is not known.
    """

    part: str
    signal: str
    law: str
    scale: Fraction | None
    amplitude: Fraction | None


def small_signal_limits(
    circuit: SmallSignal, point: OperatingPoint | None
) -> tuple[SmallSignalLimit, ...]:
    """Give the limit of every device whose law is known, in the order of the file."""
    found = []
    for part in circuit.topology.parts:
        if part.kind in CONTROL:
            signal, exponential = CONTROL[part.kind]
            scale = (
                thermal_voltage(circuit.topology.temperature)
                if exponential
                else _overdrive(circuit, point, part.name, dict(part.parameters).get("V_ov"))
            )
            law = "exponential law" if exponential else "square law"
            amplitude = None if scale is None else 4 * ONE_PER_CENT * scale
            found.append(SmallSignalLimit(part.name, signal, law, scale, amplitude))
    return tuple(found)


def _overdrive(
    circuit: SmallSignal, point: OperatingPoint | None, part: str, given: object
) -> Fraction | None:
    """Give V_ov: as it was given, or 2·I_D/g_m of the square law."""
    written = getattr(given, "exact", None)
    if isinstance(written, Fraction):
        return written
    current = next((d.current for d in point.devices if d.part == part), None) if point else None
    g_m = next((d.value("g_m") for d in circuit.devices if d.part == part), None)
    return 2 * current / g_m if current is not None and g_m else None

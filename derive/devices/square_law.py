"""The square law that MOSFETs and JFETs share, in the device's own polarity.

Saturation: I_D = (k/2)·V_ov²·(1 + λ·V_DS) for V_DS ≥ V_ov, V_ov = V_GS - V_t; below it the triode
region: I_D = k·(V_ov·V_DS - V_DS²/2)·(1 + λ·V_DS), so that the two meet.

Source: C.-T. Sah, IEEE Trans. Electron Devices 11 (1964), and H. Shichman and D. A. Hodges, IEEE J.
Solid-State Circuits 3 (1968), from memory.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction

from derive.devices.elements import CurrentDrive
from derive.devices.model import DcModel, Region
from derive.quantities.dimension import CURRENT, VOLTAGE
from derive.quantities.format import engineering
from derive.quantities.symbol import Symbol


def drain_current(v_gs: float, v_ds: float, factor: float, threshold: float, slope: float) -> float:
    """Give I_D for a V_DS that is not negative; a negative one changes drain and source."""
    if v_ds < 0:
        return -drain_current(v_gs - v_ds, -v_ds, factor, threshold, slope)
    v_ov = v_gs - threshold
    if v_ov <= 0:
        return 0.0
    modulation = 1 + slope * v_ds
    if v_ds >= v_ov:
        return factor / 2 * v_ov**2 * modulation
    return factor * (v_ov * v_ds - v_ds**2 / 2) * modulation


def saturation(v_gs: Fraction, v_ds: Fraction, threshold: Fraction, sign: Fraction, name: str) -> Region:
    """Say whether a device is in saturation; `name` is that of its threshold."""
    gs, ds = ("V_GS", "V_DS") if sign > 0 else ("V_SG", "V_SD")
    v_ov = v_gs - threshold
    volts = [engineering(value, VOLTAGE) for value in (v_gs, v_ds, v_ov)]
    return Region(
        v_ov > 0 and v_ds >= v_ov,
        f"{gs} = {volts[0]}, {ds} = {volts[1]}",
        f"saturation: {gs} − {name} = {volts[2]} above 0 and {ds} not below it",
    )


def own_voltages(
    voltages: Mapping[str, Fraction], values: Mapping[str, Fraction]
) -> tuple[Fraction, Fraction]:
    """Give V_GS and V_DS as an n-channel device's."""
    sign = values["polarity"]
    source = voltages["source"]
    return sign * (voltages["gate"] - source), sign * (voltages["drain"] - source)


def terminal_currents(
    voltages: Mapping[str, float],
    values: Mapping[str, float],
    law: Callable[[float, float, Mapping[str, float]], float],
) -> dict[str, float]:
    """Give the current into gate, drain and source; `law` is I_D of V_GS and V_DS in own polarity."""
    sign = float(values["polarity"])
    gate, drain, source = (voltages[key] for key in ("gate", "drain", "source"))
    into = sign * law(sign * (gate - source), sign * (drain - source), values)
    return {"gate": 0.0, "drain": into, "source": -into}


def unknown_current(name: str, path: tuple[str, str], symbols: Sequence[Symbol]) -> DcModel:
    """Give the DC model of a device whose current, along the path, is for the square law to settle."""
    unknown = Symbol(name, CURRENT, None, "the square law", "?")
    return DcModel((), (CurrentDrive(name, path),), (unknown, *symbols))

"""Limits of validity: where in frequency, temperature, amplitude and tolerance the results hold."""

from __future__ import annotations

import math
from fractions import Fraction

from derive.bias.second_order import SmallSignalLimit, small_signal_limits
from derive.check.verdict import Outcome
from derive.devices.elements import Capacitor
from derive.devices.parameters import DeviceParameters
from derive.quantities.dimension import FREQUENCY, VOLTAGE
from derive.quantities.format import engineering
from derive.quantities.words import listed
from derive.sheet.document import Column, Line, Section, Table, Text
from derive.sheet.wording import marked

ORDER = 88
SCOPE = "sheet"
Row = tuple[str, str]


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section: one row a limit, each with the number that this circuit gives it."""
    rows = [
        *_bands(outcome),
        *_transits(outcome),
        *_amplitudes(outcome),
        *_temperature(outcome),
        *_values(outcome),
        *_assumptions(outcome),
    ]
    columns = (Column((Text("Limit"),), leads=True), Column((Text("The results hold"),)))
    cells: tuple[tuple[Line, ...], ...] = tuple(((Text(what),), marked(says)) for what, says in rows)
    return (Section("Limits of validity", (Table("Limits of validity", columns, cells),)),)


def _bands(outcome: Outcome) -> list[Row]:
    report = outcome.bands
    if report is None or not outcome.circuit.roles:
        return [("Frequency", "at every frequency for the elements as modelled: lumped, and linear")]
    rows = []
    for band in report.bands:
        low, high = report.edges.of(band.circuit.band)
        ends = [f"above {_hertz(low)}"] if low else []
        ends += [f"below {_hertz(high)}"] if high else []
        if band.circuit.band == "mid":
            says = f"well {' and '.join(ends)}" if ends else "between the corners of the other bands"
        elif band.circuit.band == "low":
            corner = high or low
            says = f"around and below {_hertz(corner)}" if corner else "at low frequencies"
        elif band.circuit.band == "high":
            corner = low or high
            says = f"around and above {_hertz(corner)}" if corner else "at high frequencies"
        else:
            says = "at every frequency for the elements as modelled"
        rows.append((f"Frequency, {band.circuit.band} band", says))
    return rows


def _transits(outcome: Outcome) -> list[Row]:
    """Say up to where the model of a device holds whose capacitances stand in a result.

    Source: g_m/(2π·(C_π + C_μ)), and with C_gs and C_gd likewise, is textbook standard; that one lumped model
    serves well below it only is common practice.
    """
    circuits = [result.solution.derivation.system.small_signal for result in outcome.results]
    with_capacitances = {e.part for c in circuits for e in c.elements if isinstance(e, Capacitor)}
    rows = []
    for device in outcome.circuit.devices:
        hertz = _transit(device) if device.part in with_capacitances else None
        if hertz is not None:
            says = (
                f"well below its transition frequency, {_hertz(hertz)} by the values given; poles and zeros above "
                "that are the model's rather than the device's (common practice)"
            )
            rows.append((f"Frequency, {device.part}", says))
    return rows


def _transit(device: DeviceParameters) -> float | None:
    transconductance = device.value("g_m")
    for names in (("C_pi", "C_mu"), ("C_gs", "C_gd")):
        farads = sum(device.value(name) or Fraction(0) for name in names)
        if transconductance and device.value(names[0]):
            return float(transconductance / farads) / (2 * math.pi)
    return None


def _hertz(value: float) -> str:
    return engineering(value, FREQUENCY, 4, unit="Hz")


def _amplitudes(outcome: Outcome) -> list[Row]:
    return [_amplitude(limit) for limit in small_signal_limits(outcome.circuit, outcome.point)]


def _amplitude(limit: SmallSignalLimit) -> Row:
    what = f"Amplitude at {limit.part}"
    name = "V_T" if limit.law == "exponential law" else "V_ov"
    if limit.scale is None or limit.amplitude is None:
        return (
            what,
            f"for {limit.signal} much smaller than {name} , which is not known here ({limit.law})",
        )
    scale, most = (engineering(v, VOLTAGE, 4) for v in (limit.scale, limit.amplitude))
    return what, (
        f"for {limit.signal} much smaller than {name} = {scale}: from an amplitude of {most} on, the second "
        f"harmonic is 1 % or more ({limit.law})"
    )


def _temperature(outcome: Outcome) -> list[Row]:
    topology = outcome.circuit.topology
    if not outcome.circuit.devices:
        return []
    kelvin = engineering(topology.temperature, VOLTAGE, 6, unit="K")
    return [("Temperature", f"at junctions of {kelvin}; g_m and the current gain follow it")]


def _values(outcome: Outcome) -> list[Row]:
    topology = outcome.circuit.topology
    rows: list[Row] = []
    open_values = [symbol.name for symbol in outcome.circuit.symbols if symbol.value is None]
    if open_values:
        rows.append(("Values", f"in symbols only: {', '.join(open_values)} left open"))
    loose = [part.name for part in topology.parts if part.tolerance]
    if loose:
        rows.append(
            (
                "Tolerances",
                f"as symbols for all values; as numbers at the nominal ones. Of {len(loose)} parts with a tolerance "
                "the plots show the span over the corners, devices held at their nominal parameters",
            )
        )
    elif not open_values:
        rows.append(
            ("Values", "as symbols for all values; as numbers at the nominal ones, no tolerance given")
        )
    left_out = [
        f"{device.part} without {listed([left.symbol for left in device.left_out])}"
        for device in outcome.circuit.devices
        if device.left_out
    ]
    if left_out:
        rows.append(("Left out of the devices", "; ".join(left_out)))
    return rows


def _assumptions(outcome: Outcome) -> list[Row]:
    registers = [result.solution.register for result in outcome.results]
    entries = [entry for register in registers if register for entry in register.entries]
    if not entries:
        return [("Assumptions", "exactly: none was made beyond those of the bands and the device models")]
    failed = sum(entry.status.startswith("fails") for entry in entries)
    words = (
        f"exactly; the reduced forms within their stated errors ({len(entries)} entries in the register"
    )
    return [("Assumptions", f"{words}, {failed} of them fail)" if failed else f"{words})")]

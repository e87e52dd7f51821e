"""The kinds of part that a topology may name: their keys, and what their values measure."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    FREQUENCY,
    INDUCTANCE,
    RATIO,
    RESISTANCE,
    Dimension,
)

Sign = Literal["positive", "not zero", "coupling"]


@dataclass(frozen=True, slots=True)
class Kind:
    """One kind of part.

    `wires` holds (key, number of nodes); `dimension` is that of the value, None where the value is
    `true` or a model; `conducts` names the key whose two nodes make the part a two-node one.
    """

    name: str
    wires: tuple[tuple[str, int], ...]
    dimension: Dimension | None
    example: str
    sign: Sign = "positive"
    senses_part: bool = False
    has_coils: bool = False
    has_parameters: bool = False
    two_node_key: str | None = None

    @property
    def keys(self) -> tuple[str, ...]:
        """Every key that must be written besides the kind itself."""
        more = ("senses",) if self.senses_part else ("coils",) if self.has_coils else ()
        return (*(key for key, _ in self.wires), *more)


@dataclass(frozen=True, slots=True)
class Parameter:
    """A further value of an op amp: its dimension, and whether a frequency counts in Hz."""

    dimension: Dimension
    cycles: bool | None = None


OPAMP_PARAMETERS: dict[str, Parameter] = {
    "A_0": Parameter(RATIO),
    "f_unity": Parameter(FREQUENCY, cycles=True),
    "w_unity": Parameter(FREQUENCY, cycles=False),
    "R_in": Parameter(RESISTANCE),
    "R_out": Parameter(RESISTANCE),
}

_BETWEEN = (("between", 2),)

KINDS: dict[str, Kind] = {
    kind.name: kind
    for kind in (
        Kind(
            "resistor",
            _BETWEEN,
            RESISTANCE,
            '{ resistor = "4k7", between = ["a", "b"] }',
            two_node_key="between",
        ),
        Kind(
            "capacitor",
            _BETWEEN,
            CAPACITANCE,
            '{ capacitor = "100n", between = ["a", "b"] }',
            two_node_key="between",
        ),
        Kind(
            "inductor",
            _BETWEEN,
            INDUCTANCE,
            '{ inductor = "10 uH", between = ["a", "b"] }',
            two_node_key="between",
        ),
        Kind(
            "transconductance",
            (("flows", 2), ("senses", 2)),
            CONDUCTANCE,
            '{ transconductance = "40 mS", flows = ["c", "e"], senses = ["b", "e"] }',
            sign="not zero",
            two_node_key="flows",
        ),
        Kind(
            "voltage_gain",
            (("output", 2), ("senses", 2)),
            RATIO,
            '{ voltage_gain = "10", output = ["out", "gnd"], senses = ["in", "gnd"] }',
            sign="not zero",
            two_node_key="output",
        ),
        Kind(
            "current_gain",
            (("flows", 2),),
            RATIO,
            '{ current_gain = "100", flows = ["c", "e"], senses = "R_1" }',
            sign="not zero",
            senses_part=True,
            two_node_key="flows",
        ),
        Kind(
            "transresistance",
            (("output", 2),),
            RESISTANCE,
            '{ transresistance = "1 kΩ", output = ["out", "gnd"], senses = "R_1" }',
            sign="not zero",
            senses_part=True,
            two_node_key="output",
        ),
        Kind(
            "ideal_opamp",
            (("output", 1), ("inputs", 2)),
            None,
            '{ ideal_opamp = true, output = "out", inputs = ["plus", "minus"] }',
        ),
        Kind(
            "opamp",
            (("output", 1), ("inputs", 2)),
            None,
            '{ opamp = true, output = "out", inputs = ["plus", "minus"], f_unity = "10 MHz" }',
            has_parameters=True,
        ),
        Kind(
            "coupling",
            (),
            RATIO,
            '{ coupling = "0.98", coils = ["L_1", "L_2"] }',
            sign="coupling",
            has_coils=True,
        ),
    )
}

# Kind of the contract that this version cannot work yet -> what may be written in its place.
DEVICES: dict[str, str] = {
    "bipolar": "write its small-signal parts: resistor r_pi, transconductance g_m, resistor r_o, "
    "capacitors C_pi and C_mu",
    "mosfet": "write its small-signal parts: transconductance g_m, resistor r_o, capacitors C_gs "
    "and C_gd",
    "jfet": "write its small-signal parts: transconductance g_m, resistor r_o, capacitors C_gs and C_gd",
    "diode": "write its small-signal part: resistor r_d",
}

# Parameters of a device's model, known so that they are not taken for slips of the pen.
DEVICE_PARAMETERS = (
    *("polarity", "beta", "V_A", "f_T", "V_BE", "lambda", "I_C", "I_D", "V_ov"),
    *("g_m", "g_mb", "r_pi", "r_o", "r_b", "C_pi", "C_mu", "C_gs", "C_gd", "C_db", "C_sb"),
)

# Kinds whose current may be named, by `senses` or by a find.
TWO_NODE_KINDS = tuple(kind.name for kind in KINDS.values() if kind.two_node_key)

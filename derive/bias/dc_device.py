"""A device in the DC circuit: what its model says of it there, or the current that the file gives."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.devices.elements import CurrentDrive
from derive.devices.model import BiasedDevice, DcModel, Names
from derive.quantities.dimension import CURRENT
from derive.quantities.symbol import Symbol
from derive.topology.topology import Part


@dataclass(frozen=True, slots=True)
class DcDevice:
    """A device in the DC circuit: its part, its model, and what stands for it.

    `values` are its DC values in its own polarity. `given` is its current where that alone is known
    of it, in place of a law; `leader` is the part whose base-emitter voltage it shares.
    """

    part: Part
    model: BiasedDevice
    dc: DcModel
    values: dict[str, Fraction]
    given: Fraction | None = None
    leader: str | None = None

    @property
    def sign(self) -> int:
        """1 for npn, n-channel and what has no polarity, -1 for pnp and p-channel."""
        return 1 if self.values["polarity"] > 0 else -1

    @property
    def control(self) -> str | None:
        """The key of the base or gate; None for a device without one."""
        return next((senses[0] for _, senses in self.model.SPEC.controls), None)

    @property
    def main(self) -> tuple[str, str]:
        """The keys between which the device's current flows: collector and emitter, and so on."""
        wires = [key for key, _ in self.model.SPEC.wires]
        return next((flows for flows, _ in self.model.SPEC.controls), (wires[0], wires[-1]))

    @property
    def is_square(self) -> bool:
        """Whether its current is for the square law to settle."""
        law = self.given is None and self.dc.drives
        return bool(law) and isinstance(self.dc.drives[0], CurrentDrive)

    @property
    def base_current(self) -> str:
        """The name of the element that stands for the base current of a device with a leader."""
        return f"{self.part.name}.I_B"

    def node(self, key: str) -> str:
        """Give the node of a terminal."""
        return self.part.nodes(key)[0]


def dc_device(part: Part, model: BiasedDevice, names: Names) -> DcDevice:
    """Give a device in the DC circuit: by its law, or with the current that the file gives it.

    A bipolar transistor whose beta is known goes by its law in any case.
    """
    values = model.dc_values(part)
    current = dict(part.parameters).get(model.CURRENT)
    has_law = "beta" in values or not model.SPEC.controls or not model.is_settled(part)
    if has_law or current is None or current.exact is None:
        return DcDevice(part, model, model.dc_elements(part, names), values)
    symbol = Symbol(
        names.indexed(part, model.CURRENT), CURRENT, current.exact, f"part {part.name}", current.text
    )
    first, second = (part.nodes(key)[0] for key in model.SPEC.controls[0][0])
    flows = (first, second) if values["polarity"] > 0 else (second, first)
    drive = CurrentDrive(symbol.name, flows)
    return DcDevice(part, model, DcModel((), (drive,), (symbol,)), values, current.exact)

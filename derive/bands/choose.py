"""Which bands a circuit is worked in, and what each band makes of a part with a role."""

from __future__ import annotations

from typing import Literal

from derive.devices.elements import Inductor, SmallSignal
from derive.topology.topology import BandName, Role

State = Literal["kept", "short", "open"]
LOW_FREQUENCY: frozenset[Role] = frozenset({"coupling", "bypass"})
HIGH_FREQUENCY: frozenset[Role] = frozenset({"parasitic"})


def bands_of(circuit: SmallSignal) -> tuple[BandName, ...]:
    """Give the bands to work in: those that the user chose, else those that the roles call for.

    Coupling and bypass parts call for low and mid, parasitic ones for mid and high, both kinds for
    low, mid and high. A circuit without roles is worked in full.
    """
    if circuit.topology.bands:
        return circuit.topology.bands
    roles = {role for _, role in circuit.roles}
    low, high = bool(roles & LOW_FREQUENCY), bool(roles & HIGH_FREQUENCY)
    if low and high:
        return ("low", "mid", "high")
    if low:
        return ("low", "mid")
    return ("mid", "high") if high else ("full",)


def state_in(role: Role, band: BandName, *, inductor: bool) -> State:
    """Give the state of a part with this role in this band.

    A capacitor that acts at low frequency is a short from mid-band up, a parasitic one is open up to
    mid-band. An inductor is the reverse, as its reactance rises with frequency: a choke that acts at
    low frequency is open from mid-band up, a parasitic inductance is a short up to mid-band.
    """
    if role in LOW_FREQUENCY and band in ("mid", "high"):
        return "open" if inductor else "short"
    if role in HIGH_FREQUENCY and band in ("low", "mid"):
        return "short" if inductor else "open"
    return "kept"


def states(circuit: SmallSignal, band: BandName) -> dict[str, State]:
    """Give the state in this band of every element that has a role and is not kept."""
    inductors = {element.name for element in circuit.elements if isinstance(element, Inductor)}
    found = {name: state_in(role, band, inductor=name in inductors) for name, role in circuit.roles}
    return {name: state for name, state in found.items() if state != "kept"}

"""What is said of parts that stand in every term: poles at the origin, and parts that do not act at all."""

from __future__ import annotations

from derive.bands.wiring import ends_of
from derive.devices.elements import CurrentDrive, SmallSignal
from derive.eliminate.derivation import Derivation
from derive.normalise.form import NormalForm
from derive.reactances.expansion import Expansion
from derive.reactances.states import State


def at_the_origin(derivation: Derivation, form: NormalForm, expansion: Expansion, base: int) -> list[str]:
    """Say for each state of `base`, which every term of the denominator has, what it does to the response.

    One that every term of the numerator has as well cancels: it does not act. Another brings a pole at
    the origin, unless zeros there take it away.
    """
    circuit, find = derivation.system.small_signal, derivation.system.find
    found = []
    for state in expansion.among(base):
        place = 1 << expansion.states.index(state)
        if expansion.top_base is not None and expansion.top_base & place:
            carries = _carries_a_drive(circuit, state)
            how = "carries the drive's current: it" if carries else "stands in every term alike: it"
            found.append(f"{state.symbol} {how} does not act in {find.name}")
            continue
        blocks = state.kind == "capacitor" and find.quantity == "impedance"
        why = {
            "capacitor": f"{state.symbol} blocks DC"
            if blocks
            else f"{state.symbol} sees an open circuit at DC",
            "inductor": f"{state.symbol} sees a short at DC",
            "op amp": f"the op amp of {state.symbol} has nothing that feeds DC back",
        }[state.kind]
        what = "a pole at the origin" if form.power_of_s < 0 else "it has no part in b_1 and higher"
        found.append(f"{why}: {what}")
    return found


def _carries_a_drive(circuit: SmallSignal, state: State) -> bool:
    """Whether a drive of current and this element meet at a node where nothing else does."""
    element = next(item for item in circuit.elements if item.name == state.element)
    others = [item for item in circuit.elements if item is not element]
    for drive in circuit.drives:
        if isinstance(drive, CurrentDrive):
            for node in {*drive.nodes} & {*ends_of(element)}:
                rest = [item for item in (*others, *circuit.drives) if node in ends_of(item)]
                if rest == [drive]:
                    return True
    return False

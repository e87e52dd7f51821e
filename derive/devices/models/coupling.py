"""Two coupled inductors: each coil's voltage gains s·M times the other's current, M = k·√(L_1·L_2).

M is written as a symbol of its own, because the square root of two symbols is no polynomial; the
relation M² = k²·L_1·L_2 is kept beside it.
"""

from __future__ import annotations

from derive.devices.elements import Coupling
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import RATIO
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "coupling"
SPEC = Kind(
    KIND,
    (),
    '{ coupling = "0.98", coils = ["L_1", "L_2"] }',
    dimension=RATIO,
    sign="coupling",
    has_coils=True,
)


def linearise(part: Part, names: Names) -> Model:
    """Give the coupling, with the mutual inductance named after the part: M_K for a part K."""
    if part.coils is None:
        raise ValueError(f"coupling {part.name} has no coils")
    mutual = f"M_{part.name}"
    while mutual in names.taken:
        mutual += "_"
    element = Coupling(part.name, part.name, part.coils, part.name, mutual)
    return Model((element,), (value_symbol(part, RATIO, positive=False),))

"""The response of a nested derivation at many values of s at once, line by line."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray

from derive.eliminate.derivation import Derivation
from derive.eliminate.rules import form_ratio, name_entry, name_ratio
from derive.expressions.walk import evaluate

LINES = frozenset({name_entry.NAME, name_ratio.NAME})
Complex = NDArray[np.complex128]


def nested_response(derivation: Derivation, values: Mapping[str, float], s: Complex) -> Complex:
    """Give wanted/input at each s, in floating point.

    The order of elimination is the same at every s: where a pivot is next to nothing, such as s·C far below
    all corners, digits are lost.

    Given: a nested derivation, and a value for each of the circuit's symbols.
    Raises: DeriveError where a value is missing.
    """
    known: dict[str, Any] = {**values, "s": s}
    total: Any = 0.0
    for step in derivation.steps:
        if step.rule in LINES:
            known[step.defines or ""] = evaluate(step.equation.right, known, float)
        elif step.rule == form_ratio.NAME:
            total = evaluate(step.equation.right, known, float)
    response: Complex = np.broadcast_to(np.asarray(total, np.complex128), s.shape)
    return response

"""The noun of a readable form: the normal form once more, in the fewest signs."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from derive.expressions.tree import Expression
from derive.expressions.walk import names_of

Definition = tuple[str, Expression]


def used_in(expressions: Iterable[Expression], known: Iterable[Definition]) -> tuple[Definition, ...]:
    """Give the definitions that expressions need, those of the names within definitions included."""
    used = {name for expression in expressions for name in names_of(expression)}
    kept: list[Definition] = []
    for name, value in reversed(tuple(known)):
        if name in used:
            used |= set(names_of(value))
            kept.insert(0, (name, value))
    return tuple(kept)


@dataclass(frozen=True, slots=True)
class ReadableForm:
    """Gain and coefficients as a person writes them, each identically equal to the normal form's.

    Their trees may hold `Parallel`. `definitions` are the names that they use beyond the circuit's
    symbols (β = g_m·r_π), in an order in which each needs symbols and earlier ones only. `far_gain` is
    the response far above all corners where it is zero at zero frequency, None elsewhere. The factors are
    those of numerator and denominator in s, each by its coefficients, () where one does not come apart.
    """

    gain: Expression
    numerator: tuple[Expression, ...]
    denominator: tuple[Expression, ...]
    definitions: tuple[Definition, ...] = ()
    far_gain: Expression | None = None
    numerator_factors: tuple[tuple[Expression, ...], ...] = ()
    denominator_factors: tuple[tuple[Expression, ...], ...] = ()

    @property
    def expressions(self) -> tuple[Expression, ...]:
        """Everything that is written for reading."""
        far = () if self.far_gain is None else (self.far_gain,)
        factors = (*self.numerator_factors, *self.denominator_factors)
        entries = (entry for factor in factors for entry in factor)
        return (self.gain, *self.numerator, *self.denominator, *far, *entries)

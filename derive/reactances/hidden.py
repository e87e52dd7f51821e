"""Modes of a circuit that one of its responses does not show: which parts make them, and the circuit without."""

from __future__ import annotations

from dataclasses import replace

from derive.algebra.ring import Polynomial, used_names
from derive.eliminate.derivation import Derivation
from derive.expressions.text import to_text
from derive.expressions.tree import Expression
from derive.expressions.walk import names_of
from derive.reactances.expansion import Expansion, Ratio
from derive.reactances.states import states_of
from derive.readable.measure import leaves

# A longer mode is told by its part alone.
SHORT = 3


def hidden_symbols(derivation: Derivation, factor: tuple[Ratio, ...]) -> tuple[str, ...]:
    """Give the symbols of the parts in the hidden factor; () where the response holds one of them as well."""
    ring = derivation.system.ring.plain()
    symbols = [state.symbol for state in states_of(derivation.system.small_signal)]
    within = [part for ratio in factor[1:] for part in ratio]
    shown: list[Polynomial] = [derivation.numerator, derivation.denominator]
    used, others = used_names(ring, within), used_names(ring, shown)
    found = tuple(symbol for symbol in symbols if symbol in used)
    return () if set(found) & set(others) else found


def without(expansion: Expansion, symbols: tuple[str, ...]) -> Expansion | None:
    """Give what is left of the polynomials with the parts out of action, which is the response's own.

    Gives None where one of them stands in every term.
    """
    mask = sum(1 << place for place, state in enumerate(expansion.states) if state.symbol in symbols)
    if (expansion.base or 0) & mask or (expansion.top_base or 0) & mask:
        return None
    bottom = {group: value for group, value in expansion.bottom.items() if not group & mask}
    top = {group: value for group, value in expansion.top.items() if not group & mask}
    if not bottom or not top:
        return None
    return replace(expansion, bottom=bottom, top=top)


def sentence(
    name: str, readable: tuple[Expression, ...], symbols: tuple[str, ...], *, coefficients: bool
) -> str:
    """Say what cancels, for a reader who is to see the table of the whole circuit.

    Given: whether the response has coefficients of its own.
    """
    if not symbols:
        return (
            f"The circuit has modes that do not show in {name}: they cancel. The time constants in the table are "
            f"those of the whole circuit, and no coefficients of {name} are made of them."
        )
    single = len(readable) == 2
    who, at = " and ".join(symbols), ""
    if single and leaves(readable[1]) <= SHORT:
        beside = [known for known in names_of(readable[1]) if known not in symbols]
        who += f" with {' and '.join(beside)}" if beside else ""
        at = f", 1/({to_text(readable[1]).replace('*', '·')}),"
    own = f", the coefficients those of {name}" if coefficients else ""
    verb = ("is" if at else "makes") if len(symbols) == 1 else "make"
    mode = "a mode" if single else "modes"
    cancels = (
        f"{'does' if single else 'do'} not show in {name}: {'it cancels' if single else 'they cancel'}"
    )
    return (
        f"{who} {verb} {mode} of the circuit{at} that {cancels}. The time constants in the table are "
        f"those of the whole circuit{own}."
    )

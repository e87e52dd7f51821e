"""The assumptions that the tool has made, in the words in which a user would write them."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from derive.algebra.common_factor import remove_common_monomial
from derive.algebra.ring import Polynomial, Ring
from derive.approximate.questions import Without
from derive.approximate.simplify_network import Network, Stamp
from derive.approximate.simplify_terms import Kept, Terms
from derive.approximate.simplify_trials import Change
from derive.expressions.polynomials import multiply
from derive.expressions.text import to_text
from derive.expressions.tree import Expression, Name, Number, Power
from derive.topology.topology import Assumption, AssumptionForm

# Of more dropped terms than this nobody wants the list.
LISTED_TERMS = 20


def element_assumption(network: Network, change: Change) -> Without:
    """Say that an element was taken out or shorted: R_B -> inf, C_mu -> 0."""
    stamp = network.stamps[change.place]
    large = change.shorted != stamp.inverted
    form: AssumptionForm = "to_inf" if large else "to_zero"
    name = stamp.symbols[0]
    that = f"{name} -> {'inf' if large else '0'}"
    because = "taken out" if not change.shorted else "shorted"
    if stamp.rows == stamp.columns and _is_branch(network, stamp):
        because = "shorted" if not change.shorted else "taken out"
    says = f"{stamp.owner} {because}: of all elements left it mattered least"
    return Without(Assumption(that, form, Name(name), None, says, None, "tool"), change.error)


def _is_branch(network: Network, stamp: Stamp) -> bool:
    return network.labels[stamp.rows[0]][0] == "branch" if stamp.rows[0] >= 0 else False


def tie_assumption(name: str, leader: str) -> Without:
    """Say that a matched part goes by another's name: g_m2 = g_m1."""
    made = Assumption(
        f"{name} = {leader}", "equal", Name(name), Name(leader), "matched parts", None, "tool"
    )
    return Without(made, None)


def term_assumptions(
    ring: Ring, order: Sequence[str], terms: Terms, kept: Kept
) -> tuple[list[Without], int]:
    """Say which terms were dropped, each as small against the largest kept of its coefficient.

    Gives the first LISTED_TERMS of them, the largest first, and how many more there are. A coefficient that is
    dropped whole is small against the largest term of all that are kept.
    """
    dropped = [place for place in range(len(kept)) if not kept[place]]
    dropped.sort(key=lambda place: -abs(terms.values[place]))
    found = []
    for place in dropped[:LISTED_TERMS]:
        same = [k for k in range(len(kept)) if kept[k] and terms.powers[k] == terms.powers[place]]
        whole = not same
        if whole:
            same = [k for k in range(len(kept)) if kept[k]]
        largest = max(same, key=lambda k: abs(terms.values[k]))
        pair = (_term(terms, place, with_s=whole), _term(terms, largest, with_s=whole))
        # What both have is no part of the comparison.
        small, large = (_written(ring, order, term) for term in remove_common_monomial(*pair))
        because = "its power of s does not matter here" if whole else _share(terms, place)
        that = f"{to_text(small)} << {to_text(large)}"
        found.append(Without(Assumption(that, "much_less", small, large, because, None, "tool"), None))
    return found, max(0, len(dropped) - LISTED_TERMS)


def _share(terms: Terms, place: int) -> str:
    whole = terms.values[terms.powers == terms.powers[place]].sum()
    part = abs(terms.values[place] / whole) if whole else 1.0
    return f"{100 * part:.2g} % of its coefficient"


def _term(terms: Terms, place: int, *, with_s: bool) -> Polynomial:
    key, number = terms.keys[place]
    at_s = terms.ring.names.index("s")
    if not with_s:
        key = (*key[:at_s], 0, *key[at_s + 1 :])
    return terms.ring.context.from_dict({key: number})


def _written(ring: Ring, order: Sequence[str], term: Polynomial) -> Expression:
    """Write one term, without its sign: s first, then its factors in their order."""
    ((exponents, number),) = term.to_dict().items()
    powers = {name: int(power) for name, power in zip(ring.names, exponents, strict=True) if power}
    names = [name for name in ("s", *order) if name in powers]
    names += [name for name in powers if name not in names]
    factors: list[Expression] = [Number(Fraction(abs(int(number))))]
    factors += [Name(n) if powers[n] == 1 else Power(Name(n), powers[n]) for n in names]
    return multiply(factors)

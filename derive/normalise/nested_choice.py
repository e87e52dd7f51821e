"""Which form a result is derived in: multiplied out, or nested; decided by the count of terms.

The count is read off the diagram of the determinants before anything is multiplied out.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import prod

from derive.eliminate.derivation import Derivation, Nested, Plan
from derive.eliminate.eliminate import eliminate
from derive.eliminate.limited import eliminate_within_limits
from derive.eliminate.names import names_taken
from derive.eliminate.nested import eliminate_nested, needed
from derive.eliminate.plan import plan
from derive.errors import TooLargeError
from derive.nodal.system import NodalSystem
from derive.normalise.form import NominalNumbers, NormalForm
from derive.normalise.nested import normalise_nested
from derive.normalise.nested_terms import Determinants, determinants
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers

# More terms than this take minutes, and fill pages that nobody reads.
TERMS = 20_000
# Beyond six unknowns every step is repeated in many rows: pages of them come from far fewer terms.
UNKNOWNS, TERMS_OF_MANY = 6, 5_000


@dataclass(frozen=True, slots=True, eq=False)
class Choice:
    """The form chosen: `nested` is None for one multiplied out.

    `terms` is the count for the denominator, None where it is so small that nobody counted, or past
    counting; `found` holds the determinants that were counted.
    """

    nested: Nested | None
    terms: int | None
    found: Determinants | None
    large: bool = False

    def as_nested(self) -> Choice:
        """Choose the nested form after all: rows on the way were too long."""
        exact = self.found is None or self.found.distinct
        return replace(self, nested=Nested(self.terms, exact))


def derive_form(system: NodalSystem) -> tuple[Derivation, NormalForm, NominalNumbers | None]:
    """Derive a quantity from its equations in the form chosen: derivation, normal form, nominal numbers.

    Raises: SingularError; TooLargeError where the user asked for a form that cannot be written out.
    """
    order = plan(system)
    choice = choose(system, order)
    if choice.nested is None:
        try:
            return _expanded(system, order, choice)
        except TooLargeError:
            if system.small_signal.topology.form == "expanded":
                raise
            choice = choice.as_nested()
    derivation = eliminate_nested(system, order, choice.nested or Nested(None))
    form, derivation, numbers = normalise_nested(derivation, choice.found)
    return derivation, form, numbers


def _expanded(
    system: NodalSystem, order: Plan, choice: Choice
) -> tuple[Derivation, NormalForm, NominalNumbers | None]:
    """Multiply out: a small result here, another in a process of its own that cannot take the machine down."""
    derivation = (
        eliminate_within_limits(system, order, choice.terms) if choice.large else eliminate(system, order)
    )
    form, derivation = normalise(derivation)
    return derivation, form, nominal_numbers(derivation)


def choose(system: NodalSystem, plan: Plan) -> Choice:
    """Choose by the user's word, else by the count of terms and of unknowns."""
    asked = system.small_signal.topology.form
    if asked != "nested" and _most(system) <= TERMS_OF_MANY:
        return Choice(None, None, None)
    try:
        found = determinants(system, needed(plan), names_taken(system))
    except TooLargeError:
        if asked == "expanded":
            return Choice(None, None, None, large=True)
        return Choice(Nested(None, asked=asked == "nested"), None, None)
    terms = found.terms
    limit = TERMS if len(system.unknowns) <= UNKNOWNS else TERMS_OF_MANY
    if asked == "expanded" or (not asked and terms <= limit):
        return Choice(None, terms, found, large=terms > limit)
    return Choice(Nested(terms, found.distinct, asked == "nested"), terms, found)


def _most(system: NodalSystem) -> int:
    """Bound the number of terms: a product takes one value from each equation."""
    unknowns = {unknown.name for unknown in system.unknowns}
    return prod(
        sum(len(entry) for name, entry in equation.row if name in unknowns)
        for equation in system.equations
    )

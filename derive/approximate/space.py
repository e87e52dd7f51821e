"""The names that assumptions on one result may use, and exact ratios over all of them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from derive.algebra.ratio import coefficients, exact_value, lowest_terms
from derive.algebra.ring import Polynomial, Ring, moved, used_names
from derive.algebra.ring import ring as make_ring
from derive.bands.band_circuit import BandCircuit, Merged
from derive.devices.elements import SmallSignal
from derive.eliminate.derivation import Derivation
from derive.eliminate.scribe import rank_of, writer_of
from derive.expressions.polynomials import Writer
from derive.expressions.tree import ONE, ZERO, Expression, Name, Parallel, Sum
from derive.expressions.walk import children_of, evaluate, with_children
from derive.normalise import numbers
from derive.normalise.form import NominalNumbers, NormalForm
from derive.normalise.numbers import values_of
from derive.readable.form import ReadableForm
from derive.readable.prove import expanded, ratio_of
from derive.readable.readable import read_form, read_ratio
from derive.readable.vocabulary import Vocabulary, vocabulary_of


@dataclass(frozen=True, slots=True, eq=False)
class Ratio:
    """H = top/bottom in lowest terms, over the ring of a space."""

    top: Polynomial
    bottom: Polynomial

    @property
    def key(self) -> tuple[str, str]:
        """A text that is the same for the same ratio."""
        return str(self.top), str(self.bottom)


@dataclass(frozen=True, slots=True, eq=False)
class Space:
    """The ring of s and every symbol of a band's circuit, merged or not, with what is known of them.

    `values` is None where a value is left open; `squares` holds the exact squares of mutual inductances,
    none where one is.
    """

    band: BandCircuit
    ring: Ring
    writer: Writer
    vocabulary: Vocabulary
    values: Mapping[str, Fraction] | None
    squares: Mapping[str, Fraction]

    @property
    def merged(self) -> tuple[Merged, ...]:
        """The merged parts, in an order in which each needs earlier ones only."""
        return self.band.definitions

    def ratio(self, top: Polynomial, bottom: Polynomial) -> Ratio:
        """Bring a ratio to lowest terms."""
        return Ratio(*lowest_terms(self.ring, top, bottom))

    def names(self, ratio: Ratio) -> tuple[str, ...]:
        """Give the names that a ratio depends on, s included."""
        return used_names(self.ring, (ratio.top, ratio.bottom))

    def knows(self, name: str) -> bool:
        """Whether a name is a symbol of this circuit, a merged name, or one of its words such as beta."""
        return name in self.ring.names or name in dict(self.vocabulary.definitions)

    def polynomials_of(self, expression: Expression) -> tuple[Polynomial, Polynomial]:
        """Give an expression as numerator and denominator, its words such as beta written out."""
        return ratio_of(expanded(expression, self.vocabulary.definitions), self.ring)

    def value(self, polynomial: Polynomial) -> Fraction:
        """Give a polynomial's exact nominal value (no value may be open)."""
        return exact_value(self.ring, polynomial, self.values or {}, self.squares)

    def read(self, top: Polynomial, bottom: Polynomial) -> Expression:
        """Write a ratio for reading."""
        return read_ratio(self.ring, *lowest_terms(self.ring, top, bottom), self.vocabulary)

    def term(self, exponents: Sequence[int], coefficient: int) -> Expression:
        """Write one term."""
        return self.writer.collected(self.ring.context.from_dict({tuple(exponents): coefficient}))

    def folded(self, expression: Expression) -> Expression:
        """Put a merged part's name where an expression holds the combination that it stands for."""
        children = tuple(self.folded(child) for child in children_of(expression))
        if children:
            expression = with_children(expression, children)
        for merged in self.merged:
            definition = merged.definition
            if isinstance(definition, Parallel | Sum) and type(definition) is type(expression):
                wanted = sorted(map(repr, children_of(definition)))
                if wanted == sorted(map(repr, children_of(expression))):
                    return Name(merged.name)
        return expression


def space_of(band: BandCircuit, derivation: Derivation, vocabulary: Vocabulary) -> tuple[Space, Ratio]:
    """Give the space of one result, and its exact ratio there."""
    whole = band.unmerged
    source = derivation.system.ring.plain()
    more = [symbol.name for symbol in whole.symbols if symbol.name not in source.names]
    ring = make_ring((*source.names, *more))
    vocabulary = _widened(vocabulary, whole)
    space = Space(
        band, ring, writer_of(ring, vocabulary.dimensions), vocabulary, _values(band), _squares(whole)
    )
    top, bottom = (moved(p, source, ring) for p in (derivation.numerator, derivation.denominator))
    return space, space.ratio(top, bottom)


def _widened(vocabulary: Vocabulary, whole: SmallSignal) -> Vocabulary:
    """Give a vocabulary that also has the symbols that were merged."""
    other = vocabulary_of(whole)
    more = [symbol.name for symbol in whole.symbols if symbol.name not in vocabulary.dimensions]
    dimensions = {**vocabulary.dimensions, **{name: other.dimensions[name] for name in more}}
    order = sorted([*vocabulary.order, *more], key=lambda name: rank_of(dimensions[name]))
    values = {**vocabulary.values, **{name: other.values[name] for name in more}}
    return replace(vocabulary, order=tuple(order), dimensions=dimensions, values=values)


def _values(band: BandCircuit) -> dict[str, Fraction] | None:
    known = values_of(band.unmerged)
    if known is None:
        return None
    for merged in band.definitions:
        known[merged.name] = evaluate(merged.definition, known, Fraction)
    return known


def _squares(circuit: SmallSignal) -> dict[str, Fraction]:
    known = values_of(circuit)
    return {} if known is None else numbers.mutual_squares(circuit, known)


def form_of(space: Space, ratio: Ratio) -> NormalForm:
    """Bring a ratio into normal form."""
    if ratio.top == 0:
        return NormalForm(ZERO, 0, (ONE,), (ONE,))
    top, bottom = coefficients(space.ring, ratio.top, "s"), coefficients(space.ring, ratio.bottom, "s")
    low_top, low_bottom = min(top), min(bottom)
    gain = _written(space, top[low_top], bottom[low_bottom])
    return NormalForm(gain, low_top - low_bottom, _normalised(space, top), _normalised(space, bottom))


def _normalised(space: Space, found: dict[int, Polynomial]) -> tuple[Expression, ...]:
    low, high = min(found), max(found)
    return tuple(
        ONE if k == low else _written(space, found[k], found[low]) if k in found else ZERO
        for k in range(low, high + 1)
    )


def _written(space: Space, top: Polynomial, bottom: Polynomial) -> Expression:
    return space.writer.ratio(*lowest_terms(space.ring, top, bottom))


def readable_of(space: Space, form: NormalForm) -> ReadableForm:
    """Give a normal form for reading."""
    return read_form(form, space.ring, space.vocabulary)


def numbers_of(space: Space, ratio: Ratio) -> NominalNumbers | None:
    """Give a ratio's numbers at the nominal values; None where a value is open."""
    if space.values is None:
        return None
    if ratio.top == 0:
        return NominalNumbers(Fraction(0), (Fraction(0),), (Fraction(1),), (), (), ())
    return numbers.numbers_of(_dense(space, ratio.top), _dense(space, ratio.bottom))


def _dense(space: Space, polynomial: Polynomial) -> tuple[Fraction, ...]:
    found = coefficients(space.ring, polynomial, "s")
    values = {power: space.value(part) for power, part in found.items()}
    dense = [values.get(power, Fraction(0)) for power in range(min(values), max(values) + 1)]
    while len(dense) > 1 and not dense[-1]:
        dense.pop()
    return tuple(dense)

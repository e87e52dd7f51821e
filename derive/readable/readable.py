"""Write exact ratios for reading: the shortest of what the rewrites find, proved equal to what it came from."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from functools import lru_cache

from derive.algebra.ring import Polynomial, Ring, moved, used_names
from derive.expressions.polynomials import Writer
from derive.expressions.text import to_text
from derive.expressions.tree import Expression
from derive.normalise.form import NormalForm
from derive.readable.candidates import candidates
from derive.readable.form import Definition, ReadableForm, used_in
from derive.readable.measure import leaves, measure
from derive.readable.memory import memory_of
from derive.readable.prove import ratio_of, same_ratio
from derive.readable.vocabulary import Junction, Vocabulary

# Ratios of more terms are written as they are: nobody reads them, and the search would be slow.
LONGEST = 400


def read_ratio(
    ring: Ring, numerator: Polynomial, denominator: Polynomial, vocabulary: Vocabulary
) -> Expression:
    """Give numerator/denominator (over a ring without inverted names) in the fewest signs.

    Gives: an expression identically equal to the ratio, never longer than the ratio written out.
    """
    return _worked(_Question(ring, numerator, denominator, vocabulary))


class _Question:
    """What is asked, equal to another if the same is asked: the same resistance is met again and again."""

    __slots__ = ("denominator", "key", "numerator", "ring", "vocabulary")

    def __init__(
        self, ring: Ring, numerator: Polynomial, denominator: Polynomial, vocabulary: Vocabulary
    ) -> None:
        self.ring = ring
        self.numerator = numerator
        self.denominator = denominator
        self.vocabulary = vocabulary
        self.key = (ring.names, str(numerator), str(denominator), vocabulary.key)

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _Question) and self.key == other.key

    def __hash__(self) -> int:
        return hash(self.key)


@lru_cache(maxsize=1024)
def _worked(question: _Question) -> Expression:
    ring, vocabulary = question.ring, question.vocabulary
    numerator, denominator = question.numerator, question.denominator
    raw = Writer(ring, _writing_order(ring, vocabulary)).ratio(numerator, denominator)
    if len(numerator) + len(denominator) > LONGEST or numerator == 0:
        return raw
    words = _words(vocabulary.junctions)
    memory = memory_of((*words, *(name for name in ring.names if name not in words)), vocabulary.key)
    space = memory.space(_names(ring, (numerator, denominator), vocabulary))
    ratio = space.ratio(moved(numerator, ring, space.ring), moved(denominator, ring, space.ring))
    best, least = raw, measure(raw)
    for candidate, bonus in candidates(space, ratio, vocabulary, memory):
        length = measure(candidate) - bonus
        if length < least and _never_longer(candidate, raw):
            best, least = candidate, length
    used = definitions_used((best,), vocabulary)
    proved = best is raw or same_ratio(best, used, ring, numerator, denominator)
    return best if proved else raw


def _writing_order(ring: Ring, vocabulary: Vocabulary) -> tuple[str, ...]:
    known = [name for name in vocabulary.order if name in ring.names]
    return ("s", *known, *(name for name in ring.names if name != "s" and name not in known))


def _names(ring: Ring, polynomials: Sequence[Polynomial], vocabulary: Vocabulary) -> tuple[str, ...]:
    """Give the names that occur, and those of the words that can stand for some of them."""
    used = used_names(ring, polynomials)
    known = [
        junction for junction in vocabulary.junctions if junction.g_m in used and junction.r_pi in used
    ]
    return (*_words(known), *used)


def _words(junctions: Iterable[Junction]) -> tuple[str, ...]:
    return tuple(word for j in junctions for word in (j.beta, j.r_e, j.alpha))


def _never_longer(candidate: Expression, raw: Expression) -> bool:
    """Whether a form has neither more names nor more letters than what it came from."""
    return leaves(candidate) <= leaves(raw) and len(to_text(candidate)) <= len(to_text(raw))


def read_expression(expression: Expression, ring: Ring, vocabulary: Vocabulary) -> Expression:
    """Give an expression in the ring's names (s included or not) in the fewest signs."""
    numerator, denominator = ratio_of(expression, ring)
    return read_ratio(ring, numerator, denominator, vocabulary)


def read_form(form: NormalForm, ring: Ring, vocabulary: Vocabulary) -> ReadableForm:
    """Give a normal form's gain and coefficients for reading."""
    gain = read_expression(form.gain, ring, vocabulary)
    top = tuple(read_expression(entry, ring, vocabulary) for entry in form.numerator)
    bottom = tuple(read_expression(entry, ring, vocabulary) for entry in form.denominator)
    return ReadableForm(gain, top, bottom, definitions_used((gain, *top, *bottom), vocabulary))


def definitions_used(expressions: Sequence[Expression], vocabulary: Vocabulary) -> tuple[Definition, ...]:
    """Give the definitions of the names beyond the circuit's symbols that the expressions use."""
    return used_in(expressions, vocabulary.definitions)

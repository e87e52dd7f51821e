"""What an approximate line costs: its errors over the band and at the corners, and what it leaves out."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from fractions import Fraction

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial
from derive.approximate.approximate import reference
from derive.approximate.corners import corners_say, toleranced
from derive.approximate.errors import Exact, errors_of
from derive.approximate.judge import Judgement, judge, over_limits
from derive.approximate.register import Errors
from derive.approximate.space import Ratio, Space, form_of, numbers_of, space_of
from derive.eliminate.names import names_used
from derive.eliminate.scribe import writer_of
from derive.errors import DeriveError
from derive.expressions.tree import ONE, Expression, Name
from derive.handcheck.names import NameRefused, Names
from derive.handcheck.report import HandLine, LineVerdict, Neglected, Pricing
from derive.handcheck.solved import Solved, TooLarge
from derive.quantities.words import listed
from derive.readable.measure import leaves
from derive.readable.readable import definitions_used, read_ratio
from derive.readable.vocabulary import vocabulary_of
from derive.topology.topology import Assumption

PI = Fraction("3.14159265358979323846264338327950288419716939937510")
# Neglected terms that are longer are not written out, nor are more of them.
MOST_LEAVES, MOST_NEGLECTED, MOST_TERMS = 20, 8, 20
OPEN = "a value is left open, so it has no price"


class Pricer:
    """Prices the approximate lines of one derivation."""

    def __init__(self, names: Names, solved: Solved) -> None:
        self._names = names
        self._solved = solved
        self._space: Space | None = None

    def verdict(self, line: HandLine, left: Expression, right: Expression) -> LineVerdict:
        """Give the verdict on one approximate line."""
        try:
            exact, short = (Ratio(*ratio) for ratio in self._solved.ratios(left, right))
            space = self._made()
        except NameRefused as refused:
            if left == Name(refused.name) and self._names.is_new(refused.name):
                cure = f'say first what it is exactly, by a line "{refused.name} = ..."'
                return LineVerdict(line, "refused", refused.what, cure)
            return LineVerdict(line, "refused", refused.what, refused.cure)
        except (TooLarge, ZeroDivisionError):
            return LineVerdict(
                line, "undecided", "it cannot be written out in the symbols of the circuit"
            )
        except DeriveError as error:
            return LineVerdict(line, "undecided", error.what)
        if exact.key == short.key:
            return LineVerdict(line, "within", "it is even exact", proof="identical when multiplied out")
        numbers, found = numbers_of(space, exact), numbers_of(space, short)
        if numbers is None or found is None:
            pricing = Pricing(None, None, None, "", (), self._neglected(space, exact, short, None))
            return LineVerdict(line, "undecided", OPEN, pricing=pricing)
        if exact.top == 0 or short.top == 0:
            side = "left" if exact.top == 0 else "right"
            return LineVerdict(line, "beyond", f"the {side} side is zero, the other is not")
        derivation = self._names.solution.derivation
        power = form_of(space, exact).power_of_s
        budget = self._names.solution.judged.topology.budget
        known, _ = reference(space, derivation, numbers, power, budget)
        errors = errors_of(found, form_of(space, short).power_of_s, known)
        judgement = judge(
            space, _assumed(line), None, exact, (short, None), (errors, errors), budget, known
        )
        return self._priced(line, space, (exact, short), known, errors, judgement)

    def _priced(
        self,
        line: HandLine,
        space: Space,
        ratios: tuple[Ratio, Ratio],
        known: Exact,
        errors: Errors | None,
        judgement: Judgement,
    ) -> LineVerdict:
        exact, short = ratios
        constant = not any("s" in space.names(ratio) for ratio in ratios)
        budget = self._names.solution.judged.topology.budget
        limits = tuple(over_limits(errors, budget)) if errors is not None else (judgement.reason,)
        reason = judgement.reason
        if constant:
            limits = tuple(_of_value(words) for words in limits if "magnitude" not in words)
            reason = listed(limits) if limits else _of_value(reason)
        relative = None
        if constant:
            top, bottom = (space.value(p) for p in (short.top * exact.bottom, short.bottom * exact.top))
            relative = float(top / bottom - 1) if bottom else None
        corners, _ = toleranced(space, exact)
        neglected = self._neglected(space, exact, short, known)
        shown = [e for each in neglected for e in (each.term, each.against)]
        pricing = Pricing(
            relative,
            None if constant else errors,
            judgement.worst,
            corners_say(corners),
            limits,
            neglected,
            definitions_used(shown, space.vocabulary),
        )
        outcome = "within" if judgement.status == "holds" else "beyond"
        why = "within the budget" if outcome == "within" else "beyond the budget"
        return LineVerdict(
            line, "within" if outcome == "within" else "beyond", f"{why}: {reason}", pricing=pricing
        )

    def _made(self) -> Space:
        """Give the space of this result, over the ring that lines are written out in.

        Raises: TooLarge where the result is in nested form.
        """
        if self._space is not None:
            return self._space
        solution = self._names.solution
        if solution.band is None or solution.derivation.nested is not None:
            raise TooLarge
        vocabulary = vocabulary_of(solution.band.circuit, names_used(solution.derivation))
        space, _ = space_of(solution.band, solution.derivation, vocabulary)
        ring = self._solved.ring
        values = None
        if space.values is not None:
            values = {name: Fraction(1) for name in ring.names} | dict(space.values) | {"pi": PI}
        writer = writer_of(ring, space.vocabulary.dimensions)
        self._space = replace(space, ring=ring, values=values, writer=writer)
        return self._space

    def _neglected(
        self, space: Space, exact: Ratio, short: Ratio, known: Exact | None
    ) -> tuple[Neglected, ...]:
        """Give what the short form leaves out, coefficient by coefficient."""
        found: list[Neglected] = []
        for of, whole, kept, scale in _compared(space, exact, short, known):
            if len(found) == MOST_NEGLECTED:
                break
            top = whole[0] * kept[1] - kept[0] * whole[1]
            term = self._written(space, top, whole[1] * kept[1])
            against = self._written(space, *kept)
            if scale is not None:
                term = self._written(space, *whole)
            if term is None or against is None:
                continue
            small = whole if scale is not None else (top, whole[1] * kept[1])
            found.append(Neglected(of, term, against, _size(space, small, kept, scale)))
        return tuple(found)

    def _written(self, space: Space, top: Polynomial, bottom: Polynomial) -> Expression | None:
        top, bottom = lowest_terms(space.ring, top, bottom)
        if len(top) + len(bottom) > MOST_TERMS:
            return None
        written = read_ratio(space.ring, top, bottom, space.vocabulary)
        return written if leaves(written) <= MOST_LEAVES else None


Pair = tuple[Polynomial, Polynomial]


def _compared(
    space: Space, exact: Ratio, short: Ratio, known: Exact | None
) -> Iterator[tuple[str, Pair, Pair, float | None]]:
    """Give (where, exact, kept, scale) of the gain and of every coefficient in which the two differ.

    `scale` is None where both have the coefficient; where the short form has it not, it is what s times the
    coefficient before it is compared at: the upper end of the range.
    """
    sides = []
    for name in ("numerator", "denominator"):
        one, other = (
            coefficients(space.ring, r.top if name == "numerator" else r.bottom, "s")
            for r in (exact, short)
        )
        sides.append((name, one, other))
    (_, a, c), (_, b, d) = sides
    gain = (a[min(a)], b[min(b)])
    kept_gain = (c[min(c)], d[min(d)])
    if gain[0] * kept_gain[1] != gain[1] * kept_gain[0]:
        yield "gain" if max(len(a), len(b)) > 1 else "value", gain, kept_gain, None
    upper = 6.283185307179586 * known.range_hz[1] if known else None
    for name, one, other in sides:
        low, low_other = min(one), min(other)
        for k in range(1, max(one) - low + 1):
            whole = (one.get(low + k, space.ring.zero), one[low])
            kept = (other.get(low_other + k, space.ring.zero), other[low_other])
            if whole[0] * kept[1] == whole[1] * kept[0]:
                continue
            where = f"coefficient of s{'' if k == 1 else f'^{k}'} in the {name}"
            if kept[0] != 0:
                yield where, whole, kept, None
            elif upper is not None:
                before = one.get(low + k - 1, one[low])
                yield f"{where}, at the upper end of the range", whole, (before, one[low]), upper


def _size(space: Space, small: Pair, large: Pair, scale: float | None) -> float | None:
    if space.values is None:
        return None
    top, bottom = (space.value(p) for p in (small[0] * large[1], small[1] * large[0]))
    return abs(float(top / bottom)) * (1 if scale is None else scale) if bottom else None


def _assumed(line: HandLine) -> Assumption:
    """Give an assumption that stands for the line where one is asked for: it compares no two terms."""
    return Assumption(line.text, "to_zero", ONE)


def _of_value(words: str) -> str:
    return words.replace("the gain is", "the value is").replace(
        "limit of the magnitude", "limit of the gain"
    )

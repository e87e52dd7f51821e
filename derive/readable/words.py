"""The words of a bipolar transistor: its ratio in g_m and r_π written with β, with r_e, or with g_m and β.

Each way is an exchange of variables: g_m·r_π = β wherever both multiply; r_π = (1 + β)·r_e and
g_m = β/((1 + β)·r_e); r_π = β/g_m. What is found in the new variables, with β taken as free, holds for
every β, and so for that of the circuit.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from derive.algebra.ratio import coefficients
from derive.algebra.ring import Polynomial
from derive.readable.vocabulary import Junction
from derive.readable.workspace import Ratio, Workspace

Exchange = Callable[[Workspace, Ratio, Junction], Ratio]


@dataclass(frozen=True, slots=True)
class Way:
    """One way to write a transistor; `corner` says whether it is for corner frequencies, None for both."""

    exchange: Exchange
    corner: bool | None


def with_beta(space: Workspace, ratio: Ratio, junction: Junction) -> Ratio:
    """Write β for g_m·r_π wherever both multiply."""

    def turned(polynomial: Polynomial) -> Polynomial:
        g_m, r_pi, beta = (
            space.ring.names.index(n) for n in (junction.g_m, junction.r_pi, junction.beta)
        )
        terms: dict[tuple[int, ...], int] = {}
        for exponents, coefficient in polynomial.to_dict().items():
            powers = list(map(int, exponents))
            both = min(powers[g_m], powers[r_pi])
            powers[g_m] -= both
            powers[r_pi] -= both
            powers[beta] += both
            key = tuple(powers)
            terms[key] = terms.get(key, 0) + int(coefficient)
        return space.ring.context.from_dict(terms)

    return space.ratio(turned(ratio.top), turned(ratio.bottom), ratio.minus)


def with_r_e(space: Workspace, ratio: Ratio, junction: Junction) -> Ratio:
    """Write (1 + β)·r_e for r_π and β/((1 + β)·r_e) for g_m."""
    beta, r_e = space.ring.generator(junction.beta), space.ring.generator(junction.r_e)
    emitter = (1 + beta) * r_e
    return _exchanged(space, ratio, junction, emitter, beta, emitter)


def with_g_m(space: Workspace, ratio: Ratio, junction: Junction) -> Ratio:
    """Write β/g_m for r_π."""
    beta, g_m = space.ring.generator(junction.beta), space.ring.generator(junction.g_m)
    highest = max(space.degree(p, junction.r_pi) for p in (ratio.top, ratio.bottom))

    def turned(polynomial: Polynomial) -> Polynomial:
        total = space.ring.zero
        for power, part in coefficients(space.ring, polynomial, junction.r_pi).items():
            total += part * beta**power * g_m ** (highest - power)
        return total

    return space.ratio(turned(ratio.top), turned(ratio.bottom), ratio.minus)


WAYS = (
    Way(with_beta, None),
    Way(with_r_e, False),
    # A corner is read as g_m/C: the transit frequency of a part of the transistor.
    Way(with_g_m, True),
)


def _exchanged(
    space: Workspace,
    ratio: Ratio,
    junction: Junction,
    r_pi: Polynomial,
    above: Polynomial,
    below: Polynomial,
) -> Ratio:
    """Put r_pi and above/below in the place of r_π and g_m."""
    highest = max(space.degree(p, junction.g_m) for p in (ratio.top, ratio.bottom))

    def turned(polynomial: Polynomial) -> Polynomial:
        total = space.ring.zero
        for power, part in coefficients(space.ring, polynomial, junction.g_m).items():
            for times, rest in coefficients(space.ring, part, junction.r_pi).items():
                total += rest * r_pi**times * above**power * below ** (highest - power)
        return total

    return space.ratio(turned(ratio.top), turned(ratio.bottom), ratio.minus)

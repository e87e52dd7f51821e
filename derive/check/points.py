"""Values that nobody chose: the same for the same circuit, and unlike one another.

They come from the digest of the topology's text and the wanted quantity's name, so that a sheet
made twice has the same bytes, while no circuit can be drawn to suit them beforehand.
"""

from __future__ import annotations

import hashlib
from collections.abc import Iterable
from fractions import Fraction

from flint import fmpz

from derive.check.verdict import Solution
from derive.devices.elements import Coupling, Inductor, SmallSignal

PRIME_BITS = 61


class Stream:
    """A stream of numbers drawn from a digest."""

    def __init__(self, seed: str) -> None:
        self._seed = seed.encode()
        self._count = 0

    def below(self, limit: int) -> int:
        """Give the next number from 1 to limit − 1."""
        self._count += 1
        digest = hashlib.sha256(self._seed + b"/%d" % self._count).digest()
        return 1 + int.from_bytes(digest, "big") % (limit - 1)

    def prime(self) -> int:
        """Give the next prime of 61 bits."""
        while True:
            candidate = (1 << (PRIME_BITS - 1)) | self.below(1 << (PRIME_BITS - 1)) | 1
            if fmpz(candidate).is_prime():
                return candidate

    def distinct(self, count: int, low: int, high: int) -> list[int]:
        """Give `count` whole numbers from low to high, no two alike."""
        high = max(high, low + 4 * count)
        chosen: dict[int, None] = {}
        while len(chosen) < count:
            chosen[low - 1 + self.below(high - low + 2)] = None
        return list(chosen)


def stream(solution: Solution, road: str) -> Stream:
    """Give the stream of numbers of one road for one solution."""
    system = solution.derivation.system
    text = hashlib.sha256(system.small_signal.topology.text.encode()).hexdigest()
    band = f"/{solution.band.band}" if solution.band else ""
    return Stream(f"{text}/{system.find.name}{band}/{road}")


def _coils(circuit: SmallSignal) -> dict[str, str]:
    inductances = {e.name: e.inductance for e in circuit.elements if isinstance(e, Inductor)}
    return {
        coil: inductances[coil]
        for element in circuit.elements
        if isinstance(element, Coupling)
        for coil in element.coils
    }


def _couple(circuit: SmallSignal, values: dict[str, Fraction], turns: Iterable[int]) -> None:
    """Make each mutual inductance k·√(L_1·L_2) whole: coils are squares times one inductance."""
    couplings = [e for e in circuit.elements if isinstance(e, Coupling)]
    coils = _coils(circuit)
    symbols = list(dict.fromkeys(coils.values()))
    if not symbols:
        return
    base = values[symbols[0]]
    by_symbol = dict(zip(symbols, turns, strict=False))
    for symbol in symbols:
        values[symbol] = base * by_symbol[symbol] ** 2
    for coupling in couplings:
        first, second = (by_symbol[coils[coil]] for coil in coupling.coils)
        values[coupling.mutual] = values[coupling.coefficient] * base * first * second


def symbol_names(circuit: SmallSignal) -> list[str]:
    """Give the circuit's symbols, mutual inductances included."""
    names = dict.fromkeys(symbol.name for symbol in circuit.symbols)
    for element in circuit.elements:
        if isinstance(element, Coupling):
            names[element.mutual] = None
    return list(names)


def values_modulo(circuit: SmallSignal, numbers: Stream, prime: int) -> dict[str, int]:
    """Give every symbol a value modulo the prime, coupled coils so that M = k·√(L_1·L_2)."""
    names = symbol_names(circuit)
    values = {name: Fraction(numbers.below(prime)) for name in names}
    turns = [numbers.below(prime) for _ in range(2 * len(circuit.elements))]
    _couple(circuit, values, turns)
    return {name: int(value) % prime for name, value in values.items()}


def values_exact(circuit: SmallSignal, numbers: Stream) -> dict[str, Fraction]:
    """Give every symbol a whole value, no two alike, coupled coils so that M = k·√(L_1·L_2)."""
    names = symbol_names(circuit)
    chosen = numbers.distinct(len(names) + len(circuit.elements), 2, 997)
    values = {name: Fraction(value) for name, value in zip(names, chosen, strict=False)}
    for element in circuit.elements:
        if isinstance(element, Coupling):  # a real coil pair has k below 1
            k = values[element.coefficient]
            values[element.coefficient] = 1 / (1 + k)
    _couple(circuit, values, chosen[len(names) :])
    return values

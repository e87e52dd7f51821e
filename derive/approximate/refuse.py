"""Assumptions that cannot be meant: names that are nowhere, contradictions, and what changes nothing."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from derive.algebra.ring import Ring
from derive.algebra.ring import ring as make_ring
from derive.approximate.register import Register
from derive.bands.band_circuit import BandCircuit
from derive.devices.elements import SmallSignal
from derive.errors import InputError
from derive.expressions.walk import names_of
from derive.quantities.words import did_you_mean, listed, quoted
from derive.readable.prove import ratio_of
from derive.readable.vocabulary import vocabulary_of
from derive.topology.topology import Assumption

Key = tuple[str, str]


def refuse_assumptions(circuit: SmallSignal, bands: Sequence[BandCircuit]) -> None:
    """Refuse assumptions that name what is in no band's circuit, or contradict earlier ones.

    Given: the bands' circuits, all that the topology has.
    Raises: InputError at the assumption's line.
    """
    assumptions = circuit.topology.assumptions
    if not assumptions:
        return
    known = _known(circuit, bands)
    for number, assumption in enumerate(assumptions, start=1):
        for name in _names(assumption):
            if name not in known:
                reason = (
                    "s is no part" if name == "s" else f"no circuit has anything called {quoted(name)}"
                )
                near = [each for each in known if each.startswith(name[:1])] or list(known)
                raise _refusal(
                    number, assumption, reason, did_you_mean(name, known, f"there is {listed(near[:12])}")
                )
    _refuse_contradictions(assumptions)


def refuse_idle(assumptions: Sequence[Assumption], registers: Iterable[Register | None]) -> None:
    """Refuse an assumption that changes nothing in any result.

    Given: the registers of all results of the topology.
    Raises: InputError at the assumption's line.
    """
    found = list(registers)
    if any(register is not None and register.remark for register in found):
        return
    used = {entry.number for register in found if register for entry in register.entries}
    for number, assumption in enumerate(assumptions, start=1):
        if number not in used:
            raise _refusal(
                number,
                assumption,
                "it changes nothing in any result",
                "take it out, or look at the order: an earlier assumption may have removed it already",
            )


def _names(assumption: Assumption) -> list[str]:
    sides = [side for side in (assumption.left, assumption.right) if side is not None]
    return [name for side in sides for name in names_of(side)]


def _known(circuit: SmallSignal, bands: Sequence[BandCircuit]) -> dict[str, None]:
    """Give every name that an assumption may use, in a stable order."""
    known = dict.fromkeys(symbol.name for symbol in circuit.symbols)
    known |= dict.fromkeys(merge.name for merge in circuit.topology.merges)
    for band in bands:
        known |= dict.fromkeys(merged.name for merged in band.definitions)
        known |= dict.fromkeys(name for name, _ in vocabulary_of(band.circuit).definitions)
    return known


def _refusal(number: int, assumption: Assumption, why: str, cure: str) -> InputError:
    what = f"assumption {number} ({assumption.that}): {why}"
    return InputError(what, where=str(assumption.place or ""), cure=cure)


@dataclass(slots=True)
class _Made:
    """What the assumptions so far say of sizes, each with the number of the one that says it."""

    infinite: dict[Key, int] = field(default_factory=dict)
    zero: dict[Key, int] = field(default_factory=dict)
    larger: dict[Key, dict[Key, int]] = field(default_factory=dict)
    equal: dict[frozenset[Key], int] = field(default_factory=dict)

    def smaller_than(self, key: Key) -> dict[Key, int]:
        """Give everything that is said to be much smaller than something, directly or through others."""
        found: dict[Key, int] = {}
        pending = [key]
        while pending:
            for other, number in self.larger.get(pending.pop(), {}).items():
                if other not in found:
                    found[other] = number
                    pending.append(other)
        return found

    def against_limit(self, key: Key, *, upward: bool) -> int:
        """Give the assumption that a limit contradicts; 0 where there is none."""
        if key in (self.zero if upward else self.infinite):
            return (self.zero if upward else self.infinite)[key]
        if upward:
            return next((below[key] for below in self.larger.values() if key in below), 0)
        return next(iter(self.larger.get(key, {}).values()), 0)

    def against_order(self, large: Key, small: Key) -> int:
        """Give the assumption that large >> small contradicts; 0 where there is none."""
        pair = frozenset((large, small))
        found = self.zero.get(large, 0) or self.infinite.get(small, 0) or self.equal.get(pair, 0)
        return found or self.smaller_than(small).get(large, 0)

    def against_tie(self, one: Key, other: Key) -> int:
        """Give the assumption that one = other contradicts; 0 where there is none."""
        return self.smaller_than(one).get(other, 0) or self.smaller_than(other).get(one, 0)


def _refuse_contradictions(assumptions: Sequence[Assumption]) -> None:
    names = dict.fromkeys(name for assumption in assumptions for name in _names(assumption))
    ring = make_ring(tuple(names))
    scopes: dict[tuple[tuple[str, ...], tuple[str, ...]], _Made] = {}
    for number, assumption in enumerate(assumptions, start=1):
        own = scopes.setdefault((assumption.finds, assumption.bands), _Made())
        for scope, made in scopes.items():
            if _overlap(scope[0], assumption.finds) and _overlap(scope[1], assumption.bands):
                _refuse_one(made, number, assumption, ring, assumptions)
        _note(own, number, assumption, ring)


def _overlap(one: Sequence[str], other: Sequence[str]) -> bool:
    return not one or not other or bool(set(one) & set(other))


def _keys(assumption: Assumption, ring: Ring) -> tuple[Key, Key]:
    """Give what identifies the two sides, the larger one first."""
    found = []
    for side in (assumption.left, assumption.right or assumption.left):
        try:
            top, bottom = ratio_of(side, ring)
        except ZeroDivisionError:
            top, bottom = ring.one, ring.zero
        found.append((str(top), str(bottom)))
    first, second = found
    return (second, first) if assumption.form == "much_less" else (first, second)


def _refuse_one(
    made: _Made, number: int, assumption: Assumption, ring: Ring, assumptions: Sequence[Assumption]
) -> None:
    one, other = _keys(assumption, ring)
    again = 0
    if assumption.form in ("to_inf", "to_zero"):
        upward = assumption.form == "to_inf"
        against = made.against_limit(one, upward=upward)
        again = (made.infinite if upward else made.zero).get(one, 0)
    elif one == other:
        raise _refusal(number, assumption, "both sides are the same", "name two different things")
    elif assumption.form == "equal":
        against = made.against_tie(one, other)
    else:
        against = made.against_order(one, other)
        again = made.larger.get(one, {}).get(other, 0)
    if against:
        earlier = assumptions[against - 1]
        line = f", line {earlier.place.line}" if earlier.place else ""
        why = f"it contradicts assumption {against} ({earlier.that}{line})"
        raise _refusal(number, assumption, why, "take one of the two out")
    if again:
        why = f"assumption {again} says the same already"
        raise _refusal(number, assumption, why, "take one of the two out")


def _note(made: _Made, number: int, assumption: Assumption, ring: Ring) -> None:
    one, other = _keys(assumption, ring)
    if assumption.form == "to_inf":
        made.infinite[one] = number
    elif assumption.form == "to_zero":
        made.zero[one] = number
    elif assumption.form == "equal":
        made.equal[frozenset((one, other))] = number
    else:
        made.larger.setdefault(one, {})[other] = number

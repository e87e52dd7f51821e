"""One random circuit, worked by the product and by the independent solver, and the two compared."""

from __future__ import annotations

import random
from dataclasses import dataclass

from circuits import accepted_circuit
from ledger_arithmetic import PRIME, RESIDUES, LedgerResult
from modular_solver import Circuit

from derive.errors import SingularError, TooLargeError
from derive.pipeline import derive

POINTS = 3
# What is not asked for here, and what does not apply where nothing stores energy or bridges two nodes; these
# last are judged below where they fail.
NOT_ALWAYS = ("another engine",)
MAY_NOT_APPLY = (
    "readable form",
    "time constants",
    "Miller's theorem",
    "estimates",
    "assumptions",
    "short forms",
)


@dataclass(frozen=True)
class Comparison:
    """How one circuit went: `differences` is empty where product and solver agree.

    `failed` names the product's own checks that failed, `left_open` those that neither passed nor failed.
    """

    text: str
    kinds: tuple[str, ...]
    singular: bool
    results: int
    drafts_refused: int
    differences: tuple[str, ...]
    failed: tuple[str, ...] = ()
    left_open: tuple[str, ...] = ()
    too_large: bool = False


def random_point(circuit: Circuit, chance: random.Random) -> tuple[dict[str, int], int]:
    """Give a residue for every symbol and for s; inductances are squares, so that M exists."""
    coils = set(circuit.coils())
    values = {}
    for name in circuit.symbols():
        value = chance.randrange(1, PRIME)
        values[name] = value * value % PRIME if name in coils else value
    return values, chance.randrange(1, PRIME)


def compare(seed: int) -> Comparison:
    """Draw the circuit of a seed and compare; the same seed gives the same circuit."""
    chance = random.Random(seed)
    topology, refused = accepted_circuit(chance)
    circuit = Circuit(topology.text)
    points = [random_point(circuit, chance) for _ in range(POINTS)]
    truths = [circuit.solve(*point) for point in points]
    kinds = tuple(sorted({part.kind for part in topology.parts}))
    singular = all(truth is None for truth in truths)
    differences: list[str] = []
    checks: list[dict] = []
    count, too_large = 0, False
    try:
        # What is said of a result beyond itself takes most of the time: it is tried on every tenth.
        results = derive(topology, other_engine=False, explain=seed % 10 == 0)
    except SingularError as error:
        if not singular:
            differences.append(f"refused, but it has a unique solution: {error}")
    except TooLargeError:
        too_large = True
    else:
        if singular:
            differences.append("has no unique solution, but was not refused")
        else:
            ledger = results.ledger()
            count = len(ledger["results"])
            if set(ledger["symbols"]) != set(circuit.symbols()):
                differences.append(f"other symbols: {sorted(ledger['symbols'])}")
            for result in ledger["results"]:
                differences += _differences(result, points, truths)
                checks += [check for check in result["checks"] if check["name"] not in NOT_ALWAYS]
    return Comparison(
        topology.text,
        kinds,
        singular,
        count,
        refused,
        tuple(differences),
        _named(checks, False),
        _named([check for check in checks if check["name"] not in MAY_NOT_APPLY], None),
        too_large,
    )


def _named(checks: list[dict], passed: bool | None) -> tuple[str, ...]:
    return tuple(f"{check['name']}: {check['measured']}" for check in checks if check["passed"] is passed)


def _differences(result: dict, points: list, truths: list) -> list[str]:
    read = LedgerResult(result)
    found = []
    for (values, s), truth in zip(points, truths, strict=True):
        if truth is None:
            found.append(f"{result['find']}: no solution at one point only")
        elif read.at(values, RESIDUES).at(s) != truth[result["find"]]:
            found.append(f"{result['find']}: another value")
    return found

"""The ledger: the sheet's data for machines, in the form of the interface contract."""

from __future__ import annotations

import json
import math
from collections.abc import Sequence
from fractions import Fraction
from typing import Any

from derive.check.verdict import Outcome, Result, Solution, Verdict
from derive.devices.elements import Coupling, SmallSignal
from derive.eliminate.derivation import Step
from derive.expressions.ledger_text import to_ledger
from derive.expressions.text import to_text
from derive.expressions.tree import Equation, Expression
from derive.expressions.walk import substitute
from derive.handcheck.report import HandReport
from derive.normalise.form import CertifiedRoot, NominalNumbers
from derive.quantities.units import ledger_unit
from derive.sheet.approximations import approximations, shown_in
from derive.sheet.definitions import definitions_of, used_in
from derive.sheet.digest import digest as digest
from derive.sheet.hand.ledger import hand_data
from derive.sheet.simplified import simplified
from derive.sheet.wording import Wording, plain_line
from derive.topology.topology import Find
from derive.version import VERSION

FORMAT = 1


def ledger(outcome: Outcome) -> dict[str, Any]:
    """Give the ledger as plain data, keys in their stable order."""
    topology = outcome.circuit.topology
    return {
        "ledger": FORMAT,
        "made_by": {"name": "nodeledger", "version": VERSION},
        "topology": {
            "file": topology.file,
            "sha256": digest(topology.text),
            "text": topology.text,
        },
        "symbols": _symbols(outcome.circuit),
        "results": [_result(result) for result in outcome.results],
        **_hand(outcome),
    }


def _hand(outcome: Outcome) -> dict[str, Any]:
    """Give the check of the hand derivation, where the topology names one."""
    source = outcome.circuit.topology.hand
    if source is None or not isinstance(outcome.hand, HandReport):
        return {}
    return {"hand": hand_data(outcome.hand, source.text)}


def ledger_text(outcome: Outcome) -> str:
    """Give the ledger as it is written to a file."""
    return json.dumps(ledger(outcome), ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def exact_text(value: Fraction) -> str:
    """Write a rational exactly: as a decimal where it has one of at most 60 digits, else as p/q.

    Decimals beyond 10^6 or below 10^-3 carry a power of ten: 4.7e-12.
    """
    if value.denominator == 1 and abs(value) < 10**9:
        return str(value.numerator)
    denominator, power = value.denominator, 0
    for prime in (2, 5):
        count = 0
        while denominator % prime == 0:
            denominator //= prime
            count += 1
        power = max(power, count)
    if denominator != 1:
        return f"{value.numerator}/{value.denominator}"
    digits = str(abs(value.numerator * 10**power // value.denominator))
    return _decimal(digits, -power, value < 0)


def _decimal(digits: str, exponent: int, negative: bool) -> str:
    stripped = digits.rstrip("0") or "0"
    exponent += len(digits) - len(stripped)
    if len(stripped) > 60:
        raise ValueError("a value of more than 60 digits")
    sign = "-" if negative else ""
    point = len(stripped) + exponent
    if -3 < point <= 0:
        return f"{sign}0.{'0' * -point}{stripped}"
    if 0 < point <= 6:
        whole = stripped[:point].ljust(point, "0")
        rest = stripped[point:]
        return f"{sign}{whole}.{rest}" if rest else f"{sign}{whole}"
    rest = f".{stripped[1:]}" if len(stripped) > 1 else ""
    return f"{sign}{stripped[0]}{rest}e{point - 1}"


def _symbols(circuit: SmallSignal) -> dict[str, Any]:
    return {
        symbol.name: {
            "value": None if symbol.value is None else exact_text(symbol.value),
            "unit": ledger_unit(symbol.dimension),
            "origin": symbol.origin,
        }
        for symbol in circuit.symbols
    }


def _result(result: Result) -> dict[str, Any]:
    solution = result.solution
    system = solution.derivation.system
    numbers = solution.numbers
    return {
        "find": system.find.name,
        "band": solution.band_name,
        "per": _per(system.find),
        "gain": {"exact": to_ledger(solution.form.gain), "value": gain_value(numbers)},
        "power_of_s": solution.form.power_of_s,
        "numerator": [to_ledger(entry) for entry in solution.form.numerator],
        "denominator": [to_ledger(entry) for entry in solution.form.denominator],
        "definitions": _definitions(solution),
        "zeros": _roots(numbers.zeros if numbers else ()),
        "poles": _roots(numbers.poles if numbers else ()),
        "steps": _steps(result),
        "readable": _readable(solution),
        "time_constants": _time_constants(solution),
        "bandwidth": _bandwidth(solution),
        "estimates": _estimates(solution),
        "approximations": approximations(solution.register),
        **({"simplified": simplified(solution.simplified)} if solution.simplified else {}),
        "checks": [_check(verdict) for verdict in result.verdicts],
    }


def gain_value(numbers: NominalNumbers | None) -> float | None:
    """Give the gain at the nominal values; None where it is not known or not finite."""
    return _float(numbers.gain) if numbers else None


def _per(find: Find) -> str | dict[str, str] | None:
    if find.quantity == "impedance":
        return None
    if len(find.per) == 1 and find.per[0][1] == 1:
        return find.per[0][0]
    return {name: exact_text(weight) for name, weight in find.per}


def _definitions(solution: Solution) -> list[list[str]]:
    """Define what is not a part's own value: mutual inductances, merged parts, a nested form's, words such as β."""
    circuit = solution.judged
    inductance = {e.name: getattr(e, "inductance", "") for e in circuit.elements}
    mutual = [
        [
            element.mutual,
            f"{element.coefficient}*({'*'.join(inductance[coil] for coil in element.coils)})**(1/2)",
        ]
        for element in circuit.elements
        if isinstance(element, Coupling)
    ]
    known: dict[str, Expression] = {}
    for entry in solution.band.definitions if solution.band else ():
        known[entry.name] = substitute(entry.definition, known)
    words = used_in(_readables(solution), definitions_of(solution))
    defined = [[name, to_ledger(value)] for name, value in words]
    merged = [[name, to_ledger(expanded)] for name, expanded in known.items()]
    nested = [[name, to_ledger(meaning)] for name, meaning in solution.form.definitions]
    return [*mutual, *merged, *nested, *defined]


def _readables(solution: Solution) -> list[Expression]:
    """Give every expression that stands in the ledger for reading."""
    read, constants = solution.readable, solution.time_constants
    found = [read.gain, *read.numerator, *read.denominator] if read else []
    found += shown_in(solution.register)
    rows = (*constants.open_circuit, *constants.short_circuit) if constants else ()
    return found + [row.readable for row in rows if row.readable is not None]


def _readable(solution: Solution) -> dict[str, Any]:
    """Give the normal form for reading; as it was derived where there is no shorter one."""
    form = solution.readable or solution.form
    return {
        "gain": to_text(form.gain),
        "numerator": [to_text(entry) for entry in form.numerator],
        "denominator": [to_text(entry) for entry in form.denominator],
    }


def _time_constants(solution: Solution) -> list[dict[str, Any]]:
    found = solution.time_constants
    return [
        {
            "part": row.symbol,
            "kind": row.kind,
            "resistance": None if row.resistance is None else to_ledger(row.resistance),
            "readable": None if row.readable is None else to_text(row.readable),
            "seconds": _float(row.seconds),
            "share": _float(row.share),
        }
        for row in ((*found.open_circuit, *found.short_circuit) if found else ())
    ]


def _bandwidth(solution: Solution) -> dict[str, float | None]:
    found = solution.estimates.bandwidth if solution.estimates else None
    return {
        "low_hz": _float(found.low_hz) if found else None,
        "high_hz": _float(found.high_hz) if found else None,
    }


def _estimates(solution: Solution) -> list[dict[str, Any]]:
    found = solution.estimates.estimates if solution.estimates else ()
    return [
        {"name": rule.name, "value": rule.value, "exact": rule.exact, "error": rule.error}
        for rule in found
    ]


def _float(value: Fraction | float | None) -> float | None:
    """Give a number as JSON can hold it; None for one that is too large or none."""
    try:
        found = None if value is None else float(value)
    except OverflowError:
        return None
    return found if found is None or math.isfinite(found) else None


def _roots(roots: Sequence[CertifiedRoot]) -> list[list[float]]:
    return [[root.real, root.imaginary] for root in roots for _ in range(root.multiplicity)]


def _steps(result: Result) -> list[dict[str, Any]]:
    derivation = result.solution.derivation
    wording = Wording(derivation)
    broken = dict(result.broken_steps)
    equations = {step.number: step.equation for step in derivation.steps}
    return [
        {
            "n": step.number,
            "rule": step.rule,
            "says": plain_line(wording.says(step)),
            "before": [_equation(equations[number]) for number in _uses(step)],
            "after": [_equation(step.equation)],
            "proof": {"method": _method(step), "passed": step.number not in broken}
            | ({"why": broken[step.number]} if step.number in broken else {}),
        }
        for step in derivation.steps
    ]


def _uses(step: Step) -> list[int]:
    return [number for number, _ in step.certificate.uses] if step.certificate else []


def _equation(equation: Equation) -> str:
    return f"{to_ledger(equation.left)} = {to_ledger(equation.right)}"


def _method(step: Step) -> str:
    """Say how the step's proof goes; the multipliers are what a reader needs to replay it."""
    if step.certificate is None:
        return "definition" if step.defines else "true at the circuit's independent solution"
    parts = [f"({to_ledger(multiplier)})*[{number}]" for number, multiplier in step.certificate.uses]
    return f"{' + '.join(parts)} = ({to_ledger(step.certificate.divisor)})*[{step.number}]"


def _check(verdict: Verdict) -> dict[str, Any]:
    return {
        "name": verdict.name,
        "method": verdict.method,
        "passed": verdict.passed,
        "measured": verdict.measured,
        "limit": verdict.limit,
    }

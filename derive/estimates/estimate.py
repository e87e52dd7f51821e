"""Say all of poles, zeros and corner frequencies: closed forms, estimates and their errors, edges, limits."""

from __future__ import annotations

import math
from dataclasses import replace

from derive.eliminate.derivation import Derivation
from derive.eliminate.names import names_used
from derive.estimates.bandwidth import find_bandwidth
from derive.estimates.closed_forms import closed_forms
from derive.estimates.estimates import ClosedForm, Estimates
from derive.estimates.limits import limits_of_gain
from derive.estimates.response import response_of
from derive.estimates.rules import Given, rules_of_thumb
from derive.estimates.sensitivities import root_sensitivities
from derive.nodal.voltages import fresh
from derive.normalise.form import CertifiedRoot, NominalNumbers, NormalForm
from derive.normalise.normalise import COEFFICIENT
from derive.reactances.time_constants import TimeConstants
from derive.readable.readable import definitions_used
from derive.readable.vocabulary import Vocabulary
from derive.topology.topology import BandName

# Closed forms and certified roots agree far better where both are of one root.
SAME_ROOT = 1e-6
ZERO_RESPONSE = "the response is zero: it has no poles, zeros or bandwidth"
OPEN = "no bandwidth and no errors of estimates: a value is left open"
UNDEFINED = "no bandwidth: at these values the response is zero or undefined"


def estimate(
    derivation: Derivation,
    form: NormalForm,
    numbers: NominalNumbers | None,
    time_constants: TimeConstants | None,
    vocabulary: Vocabulary,
    band: BandName,
) -> Estimates:
    """Give the closed forms, estimates, bandwidth, sensitivities and limits of one response.

    What cannot be given is left out, and `remark` says why there is no bandwidth. The sum of time
    constants is taken from `time_constants` where they are given and all show in the response, else from the
    response's coefficients.
    """
    if form.is_zero:
        return Estimates((), (), None, (), (), remark=ZERO_RESPONSE)
    words = (name for name, _ in vocabulary.definitions)
    taken = {*names_used(derivation), *vocabulary.order, *words}
    if derivation.nested is not None:
        # Nothing is in symbols where nothing was multiplied out.
        if numbers is None:
            return Estimates((), (), None, (), (), remark=OPEN)
        return _in_numbers(derivation, form, numbers, None, band, taken)
    forms = _at_roots(closed_forms(derivation, vocabulary, taken), numbers)
    limits = limits_of_gain(derivation, vocabulary) if form.power_of_s == 0 else ()
    shown = [form.readable for form in forms]
    shown += [limit.limit for limit in limits if limit.limit is not None]
    definitions = definitions_used(shown, vocabulary)
    if numbers is None:
        return Estimates(forms, (), None, (), limits, definitions, OPEN)
    found = _in_numbers(derivation, form, numbers, time_constants, band, taken)
    return replace(
        found,
        closed_forms=forms,
        sensitivities=root_sensitivities(derivation, numbers),
        limits=limits,
        definitions=definitions,
    )


def _at_roots(forms: tuple[ClosedForm, ...], numbers: NominalNumbers | None) -> tuple[ClosedForm, ...]:
    """Leave out forms of roots that are not there at the nominal values, as those of coils coupled fully."""
    if numbers is None:
        return forms
    kept: list[ClosedForm] = []
    for form in forms:
        roots = numbers.poles if form.of == "pole" else numbers.zeros
        value = abs(form.value or 0.0)
        if not form.name.startswith("Q"):
            if any(math.isclose(root.magnitude, value, rel_tol=SAME_ROOT) for root in roots):
                kept.append(form)
        elif any(math.isclose(_quality(root), value, rel_tol=SAME_ROOT) for root in roots):
            kept.append(form)
        elif kept and kept[-1].of == form.of:
            # A pair on the axis, or one that is not there: its ω_0 goes with its Q.
            kept.pop()
    return tuple(kept)


def _quality(root: CertifiedRoot) -> float:
    """Give the Q of a pair, 1/2 where its two are one, infinity on the axis; -1 for a single real root."""
    if root.imaginary == 0:
        return 0.5 if root.multiplicity > 1 else -1.0
    return root.quality or math.inf


def _in_numbers(
    derivation: Derivation,
    form: NormalForm,
    numbers: NominalNumbers,
    time_constants: TimeConstants | None,
    band: BandName,
    taken: set[str],
) -> Estimates:
    """Give the bandwidth and the rules with what is to be said of both."""
    response = response_of(numbers, form.power_of_s)
    if response is None:
        return Estimates((), (), None, (), (), remark=UNDEFINED)
    impedance = derivation.system.find.quantity == "impedance"
    bandwidth, remark = find_bandwidth(response, numbers.poles, band, impedance=impedance)
    names = coefficient_names(derivation, form)
    given = Given(
        numbers,
        impedance,
        form.power_of_s,
        bandwidth,
        time_constants,
        lambda index: names.get(index, f"b_{index}"),
        fresh(taken, "pi"),
        band == "low",
    )
    rules, no_rules = rules_of_thumb(given)
    return Estimates((), rules, bandwidth, (), (), remark=remark, rules_remark=no_rules)


def coefficient_names(derivation: Derivation, form: NormalForm) -> dict[int, str]:
    """Give the name under which the derivation defines each coefficient of the denominator."""
    found = {}
    for step in derivation.steps:
        if step.rule == COEFFICIENT and step.defines is not None and step.defines.startswith("b_"):
            index = step.defines[2:].split("_")[0]
            if index.isdigit() and int(index) < len(form.denominator):
                found[int(index)] = step.defines
    return found

"""The road on poles, zeros and corners: it passes what is right, and each kind of fault makes it fail."""

from dataclasses import replace
from functools import cache

import pytest
from road import derivation_of

from derive.check.roads import estimates as road
from derive.check.verdict import Solution
from derive.estimates.estimate import estimate
from derive.estimates.estimates import Estimate
from derive.expressions.parse import parse_expression
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers
from derive.readable.vocabulary import vocabulary_of

COMMON_EMITTER = """
R_S = { resistor = "1k", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
C_pi = { capacitor = "12 pF", between = ["b", "gnd"] }
C_mu = { capacitor = "2 pF", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_L = { resistor = "4k7", between = ["out", "gnd"] }
"""
BAND_PASS = """
L_1 = { inductor = "1 mH", between = ["in", "a"] }
C_1 = { capacitor = "1 nF", between = ["a", "out"] }
R_1 = { resistor = "100 ohm", between = ["out", "gnd"] }
"""
NOTCH = """
R_1 = { resistor = "10k", between = ["in", "a"] }
R_2 = { resistor = "12k", between = ["a", "out"] }
C_3 = { capacitor = "20n", between = ["a", "gnd"] }
C_1 = { capacitor = "10n", between = ["in", "b"] }
C_2 = { capacitor = "9n", between = ["b", "out"] }
R_3 = { resistor = "5k", between = ["b", "gnd"] }
"""
HIGH_PASS = """
C_1 = { capacitor = "1 nF", between = ["in", "a"] }
R_1 = { resistor = "1k", between = ["a", "gnd"] }
A_1 = { voltage_gain = "2", output = ["m", "gnd"], senses = ["a", "gnd"] }
C_2 = { capacitor = "3 nF", between = ["m", "out"] }
R_2 = { resistor = "1k", between = ["out", "gnd"] }
"""
COUPLED = """
R_1 = { resistor = "1k", between = ["in", "a"] }
L_1 = { inductor = "1 mH", between = ["a", "gnd"] }
L_2 = { inductor = "2 mH", between = ["out", "gnd"] }
K_1 = { coupling = "0.5", coils = ["L_1", "L_2"] }
R_2 = { resistor = "1k", between = ["out", "gnd"] }
"""
STAGES = {
    "common emitter": COMMON_EMITTER,
    "band-pass": BAND_PASS,
    "notch": NOTCH,
    "high-pass": HIGH_PASS,
    "coupled coils": COUPLED,
}


@cache
def solution_of(name, find='voltage = "out"\nper = "V_s"', opened="", band="full"):
    parts = STAGES[name].replace(opened, '"?"') if opened else STAGES[name]
    form, derivation = normalise(derivation_of(parts, find=find))
    numbers = nominal_numbers(derivation)
    vocabulary = vocabulary_of(derivation.system.small_signal, ("H",))
    said = estimate(derivation, form, numbers, None, vocabulary, band)
    return replace(Solution(derivation, form, numbers), estimates=said)


def judged(solution, **changes):
    return road.judge(replace(solution, estimates=replace(solution.estimates, **changes)))


def changed(items, index, **changes):
    items = list(items)
    items[index] = replace(items[index], **changes)
    return tuple(items)


def expression(text):
    return parse_expression(text)


@pytest.mark.parametrize("name", STAGES)
def test_what_the_product_says_is_found_right(name):
    verdict = road.judge(solution_of(name))
    assert (verdict.passed, verdict.limit) == (True, road.LIMIT)


@pytest.mark.parametrize("name", ["common emitter", "notch"])
def test_impedances_are_found_right(name):
    assert road.judge(solution_of(name, find='impedance = "out"')).passed is True


def test_the_verdict_counts_what_was_judged():
    assert road.judge(solution_of("common emitter")).measured == (
        "1 closed form, 4 estimates, 1 crossing, 8 limits, 14 sensitivities"
    )


def test_nothing_stated_is_no_verdict():
    assert road.judge(replace(solution_of("notch"), estimates=None)).passed is None


def test_open_values_are_judged_in_symbols():
    solution = solution_of("common emitter", opened='"4k7"')
    assert road.judge(solution).passed is True
    forms = solution.estimates.closed_forms
    zero = next(index for index, form in enumerate(forms) if form.of == "zero")
    assert judged(solution, closed_forms=changed(forms, zero, value=2e10)).passed is False
    wrong = changed(forms, zero, expression=expression("g_m/C_pi"))
    assert judged(solution, closed_forms=wrong).passed is False


@pytest.mark.parametrize(
    ("name", "change", "measured"),
    [
        ("omega_0", {"expression": expression("1/sqrt(2*L_1*C_1)")}, "is no pole of the circuit"),
        ("omega_0", {"readable": expression("sqrt(R_1)/C_1")}, "is no pole of the circuit"),
        ("Q", {"readable": expression("R_1*sqrt(C_1/L_1)")}, "is no pole of the circuit"),
        ("omega_0", {"value": 1.0}, "its value is not what its formula gives"),
        ("omega_0", {"value": None}, "its value is not what its formula gives"),
        ("Q", {"value": -10.0}, "its value is not what its formula gives"),
        ("omega_z1", {"readable": expression("g_m/(C_mu + C_pi)")}, "is no zero of the circuit"),
        ("omega_z1", {"says": "left half-plane zero"}, "is no zero of the circuit"),
        ("omega_z1", {"of": "pole"}, "is no pole of the circuit"),
        ("omega_z1", {"expression": expression("g_m/C_nowhere")}, "cannot be read"),
    ],
)
def test_a_wrong_closed_form_fails(name, change, measured):
    solution = solution_of("common emitter" if name == "omega_z1" else "band-pass")
    forms = solution.estimates.closed_forms
    index = [form.name for form in forms].index(name)
    verdict = judged(solution, closed_forms=changed(forms, index, **change))
    assert verdict.passed is False
    assert measured in verdict.measured


@pytest.mark.parametrize("index", range(4))
@pytest.mark.parametrize(
    ("change", "measured"),
    [
        (lambda one: {"value": one.value * 1.000001}, "its value is not"),
        (lambda one: {"exact": one.exact * 1.01}, "what it is held against"),
        (lambda one: {"error": one.error + 1e-6}, "its error is another"),
        (lambda one: {"error": -one.error}, "its error is another"),
        (lambda one: {"formula": expression("b_1*b_1")}, "its value is not"),
        (lambda one: {"formula": expression("b_77")}, "cannot be read"),
    ],
)
def test_a_wrong_estimate_fails(index, change, measured):
    solution = solution_of("common emitter")
    estimates = solution.estimates.estimates
    said = change(estimates[index])
    if "value" in said and estimates[index].name.endswith("factors"):
        said["value"] *= 1.0001
    verdict = judged(solution, estimates=changed(estimates, index, **said))
    assert verdict.passed is False
    assert measured in verdict.measured


def test_an_estimate_against_the_wrong_pole_fails():
    solution = solution_of("common emitter")
    first, second = solution.estimates.estimates[:2]
    error = (first.value - second.exact) / second.exact
    wrong = changed(solution.estimates.estimates, 0, exact=second.exact, error=error, usable=False)
    assert judged(solution, estimates=wrong).measured == (
        "dominant pole: what it is held against is not that pole"
    )


def test_a_rule_for_a_real_pole_held_against_a_pair_fails():
    solution = solution_of("band-pass")
    assert not any(one.unit == "rad/s" for one in solution.estimates.estimates)
    # b_1 is R_1·C_1, and the pair lies at 1 Mrad/s.
    value, exact = -1e7, -1e6
    wrong = Estimate(
        "dominant pole", expression("-1/b_1"), "rad/s", value, exact, (value - exact) / exact, False, ""
    )
    assert judged(solution, estimates=(wrong,)).measured == (
        "dominant pole: what it is held against is not that pole"
    )


def test_rules_of_a_low_band_are_about_its_lowest_and_highest_pole():
    solution = solution_of("high-pass", band="low")
    lowest, highest = solution.estimates.estimates[:2]
    assert (lowest.name, highest.name) == ("lowest pole", "highest pole")
    assert road.judge(solution).passed is True
    # 1 and 3 µs: b_1 = 4 µs, b_2 = 3 µs².
    assert (highest.exact, highest.value) == pytest.approx((-1e6, -4e6 / 3))
    for index, other in ((0, highest), (1, lowest)):
        one = solution.estimates.estimates[index]
        error = (one.value - other.exact) / other.exact
        wrong = changed(solution.estimates.estimates, index, exact=other.exact, error=error, usable=False)
        assert judged(solution, estimates=wrong).measured == (
            f"{one.name}: what it is held against is not that pole"
        )


@pytest.mark.parametrize("shift", [1e-3, -1e-3])
def test_a_wrong_sensitivity_of_q_fails(shift):
    solution = solution_of("band-pass")
    roots = solution.estimates.sensitivities
    symbol, value = roots[0].quality[0]
    wrong = changed(roots, 0, quality=((symbol, value + shift), *roots[0].quality[1:]))
    assert judged(solution, sensitivities=wrong).measured == (
        f"Q of pole 1 follows {symbol} otherwise than stated"
    )
    missing = changed(roots, 0, quality=())
    assert judged(solution, sensitivities=missing).passed is False
    real = solution_of("common emitter").estimates.sensitivities
    added = changed(real, 0, quality=(("R_S", 1.0),))
    assert judged(solution_of("common emitter"), sensitivities=added).passed is False


def test_an_estimate_that_errs_too_much_may_not_be_called_usable():
    solution = solution_of("notch")
    estimates = solution.estimates.estimates
    index = next(k for k, one in enumerate(estimates) if abs(one.error) > 0.1)
    verdict = judged(solution, estimates=changed(estimates, index, usable=True))
    assert verdict.passed is False
    assert "called usable" in verdict.measured


@pytest.mark.parametrize(
    ("name", "change", "measured"),
    [
        ("common emitter", lambda b: {"reference": b.reference * 1.001}, "the reference is not"),
        ("band-pass", lambda b: {"reference": b.reference * 1.001}, "the reference is not"),
        ("high-pass", lambda b: {"reference": b.reference / 1.001}, "the reference is not"),
        (
            "band-pass",
            lambda b: {"crossings_hz": b.crossings_hz[:1], "high_hz": None},
            "not those of the",
        ),
        ("notch", lambda b: {"crossings_hz": b.crossings_hz[:1]}, "not those of the circuit"),
        ("notch", lambda b: {"crossings_hz": (*b.crossings_hz, 1e6)}, "does not cross the line at 1 MHz"),
        ("notch", lambda b: {"crossings_hz": b.crossings_hz[::-1]}, "out of order"),
        ("notch", lambda b: {"low_hz": b.crossings_hz[1]}, "the edges of the pass band"),
        ("notch", lambda b: {"high_hz": b.crossings_hz[1]}, "the edges of the pass band"),
        ("band-pass", lambda b: {"low_hz": None}, "the edges of the pass band"),
    ],
)
def test_a_wrong_bandwidth_fails(name, change, measured):
    solution = solution_of(name)
    bandwidth = solution.estimates.bandwidth
    wrong = replace(bandwidth, **change(bandwidth))
    verdict = judged(solution, bandwidth=wrong, estimates=())
    assert verdict.passed is False
    assert measured in verdict.measured


def test_a_crossing_that_moved_a_little_fails():
    solution = solution_of("common emitter")
    moved = solution.estimates.bandwidth.high_hz * 1.0001
    wrong = replace(solution.estimates.bandwidth, crossings_hz=(moved,), high_hz=moved)
    verdict = judged(solution, bandwidth=wrong, estimates=())
    assert verdict.measured == "the response does not cross the line at 553 kHz"


def test_no_bandwidth_needs_a_reason():
    solution = solution_of("common emitter")
    assert judged(solution, bandwidth=None, estimates=(), remark="").passed is False
    assert judged(solution, bandwidth=None, estimates=(), remark="none").passed is True


@pytest.mark.parametrize("name", ["common emitter", "band-pass", "notch", "high-pass"])
@pytest.mark.parametrize("shift", [1e-4, -1e-4j])
def test_a_wrong_sensitivity_fails(name, shift):
    solution = solution_of(name)
    roots = solution.estimates.sensitivities
    symbol, value = roots[0].by_symbol[0]
    wrong = changed(roots, 0, by_symbol=((symbol, value + shift), *roots[0].by_symbol[1:]))
    verdict = judged(solution, sensitivities=wrong)
    assert verdict.passed is False
    assert f"pole 1 follows {symbol} otherwise than stated" in verdict.measured


def test_a_wrong_root_fails():
    solution = solution_of("common emitter")
    roots = solution.estimates.sensitivities
    last = len(roots) - 1
    wrong = changed(roots, last, root=-roots[last].root)
    assert judged(solution, sensitivities=wrong).measured == "zero 1 is no zero of the circuit"


@pytest.mark.parametrize("limit", ["0", "1", "-g_m*R_L", "g_m", "R_nowhere"])
def test_a_wrong_limit_fails(limit):
    solution = solution_of("common emitter")
    limits = solution.estimates.limits
    index = next(k for k, one in enumerate(limits) if (one.symbol, one.to) == ("r_pi", "inf"))
    # With endless r_π the base draws nothing: the gain is −g_m·R_L, and the others are wrong.
    verdict = judged(solution, limits=changed(limits, index, limit=expression(limit)))
    assert verdict.passed is (limit == "-g_m*R_L")


def test_finite_and_infinite_limits_may_not_be_taken_for_one_another():
    solution = solution_of("common emitter")
    limits = solution.estimates.limits
    assert judged(solution, limits=changed(limits, 0, limit=None)).passed is False
    infinite = next(k for k, one in enumerate(limits) if one.limit is None)
    assert judged(solution, limits=changed(limits, infinite, limit=expression("0"))).passed is False

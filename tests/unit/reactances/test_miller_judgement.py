"""When Miller's approximation may be used, and the plain reasons where it misleads."""

from fractions import Fraction

import pytest
from miller_circuits import FOLLOWER, STAGE, views_of

from derive.reactances.miller import MillerError
from derive.reactances.miller_errors import Comparison, Landmarks, _errors, _errors_of_poles
from derive.reactances.miller_judgement import EXACT, judge

NODES = ("b", "out")
TRUE = Landmarks(0, Fraction(-10), (), (-1e6 + 0j, -1e9 + 0j))


def judged(
    exact=TRUE, approximate=None, *, gain=Fraction(-10), own=(), missing=(), further=(), errors=None
):
    """Judge a comparison of two responses made up by hand."""
    approximate = approximate or exact
    if errors is None:
        pairs = zip(("first pole", "second pole"), approximate.poles, exact.poles, strict=False)
        errors = [MillerError(name, one, two, ((one - two) / two).real) for name, one, two in pairs]
    comparison = Comparison(exact, approximate, False, tuple(errors), tuple(missing), tuple(further))
    return judge(comparison, gain, own, NODES)


def poles(*found, zeros=()):
    return Landmarks(0, Fraction(-10), tuple(zeros), tuple(map(complex, found)))


def test_close_first_pole_may_be_used_and_says_how_close():
    usable, reasons = judged(approximate=poles(-1.05e6, -5e7))
    assert usable is True
    assert reasons == (
        "first pole within 5 %",
        "do not use it for the second pole, which would be 95 % too low",
    )


def test_close_second_pole_may_be_used_too():
    assert judged(approximate=poles(-1.0e6, -1.02e9))[1] == (
        "first pole within 0.01 %",
        "second pole within 2 %",
    )


@pytest.mark.parametrize("gain", ["1", "0.76", "1.24", "0.99"])
def test_gain_near_plus_one_misleads(gain):
    usable, (reason,) = judged(gain=Fraction(gain))
    assert usable is False
    assert reason.startswith(f"the gain from b to out is {gain}, near +1")


@pytest.mark.parametrize("gain", ["0.5", "1.5", "-1", "2", "-100"])
def test_gain_far_from_plus_one_does_not_mislead(gain):
    usable, reasons = judged(gain=Fraction(gain))
    assert usable is True
    assert not any("gain from" in reason for reason in reasons)


@pytest.mark.parametrize(
    ("gain", "words"),
    [
        ("0.639", "the gain from b to out is 0.639, positive and above one half"),
        ("1.27", "the gain from b to out is 1.27: its near half is negative"),
    ],
)
def test_gain_towards_plus_one_leaves_the_first_pole_alone(gain, words):
    usable, reasons = judged(gain=Fraction(gain))
    assert usable is True
    assert reasons == ("for the first pole alone, within 0.01 %", words)
    usable, reasons = judged(approximate=poles(-2e6, -1e9), gain=Fraction(gain))
    assert usable is False
    assert reasons == (words, "the first pole would be 100 % too high")


def test_gain_that_changes_within_a_decade_of_the_first_pole_misleads():
    assert judged(own=[-1.1e7 + 0j])[0] is True
    usable, (reason,) = judged(own=[-1.1e7 + 0j, -9e6 + 0j])
    assert usable is False
    assert reason == (
        "the gain from b to out changes from 1.43 MHz on, within a decade of the first pole at 159 kHz"
    )
    errors = (MillerError("first pole", -1e6, -1e6, 0.0),)
    comparison = Comparison(TRUE, TRUE, False, errors, (), ())
    _, (reason,) = judge(comparison, Fraction(-10), [-9e6 + 0j], NODES, cause="C_L")
    assert reason.startswith("the gain from b to out changes, through C_L, from 1.43 MHz on, within")


def test_first_pole_beyond_ten_percent_misleads():
    assert judged(approximate=poles(-1.099e6, -1e9))[0] is True
    usable, reasons = judged(approximate=poles(-0.88e6, -1e9))
    assert usable is False
    assert reasons == ("the first pole would be 12 % too low",)


def test_missing_zero_within_a_decade_of_the_first_pole_misleads():
    usable, reasons = judged(missing=[1.2e7 + 0j])
    assert usable is True
    assert reasons[-1] == "the zero at 1.91 MHz (right half-plane) is missing"
    usable, reasons = judged(missing=[-8e6 + 0j])
    assert usable is False
    assert reasons == (
        "the zero at 1.27 MHz (left half-plane) is missing, with the first pole at 159 kHz",
    )


def test_pair_of_zeros_is_told_once():
    _, reasons = judged(missing=[-1e5 - 2e6j, -1e5 + 2e6j])
    assert reasons == (
        "the pair of zeros at 319 kHz (left half-plane) is missing, with the first pole at 159 kHz",
    )


def test_zero_that_the_circuit_has_not_misleads_within_a_decade():
    assert judged(further=[2e7 + 0j])[0] is True
    usable, (reason,) = judged(further=[2e6 + 0j])
    assert usable is False
    assert reason.startswith("it has a zero at 318 kHz (right half-plane) that the circuit has not")


def test_further_pole_misleads_within_a_decade_and_is_told_beyond():
    usable, reasons = judged(approximate=poles(-1e6, -3e6, -1e9))
    assert usable is False
    assert "up to a decade beyond the first pole it has 2 poles, where the circuit has 1" in reasons
    usable, reasons = judged(approximate=poles(-1e6, -1e9, -2e9))
    assert usable is True
    assert "it has 3 poles, where the circuit has 2" in reasons


def test_pole_in_the_right_half_plane_misleads_near_the_first_and_leaves_that_one_alone_beyond():
    usable, reasons = judged(approximate=poles(-1e6, 1e9), errors=_errors(poles(-1e6, 1e9), TRUE, (), 0))
    assert usable is True
    assert reasons == (
        "for the first pole alone, within 0.01 %",
        "it has a pole in the right half-plane, at 159 MHz, where the circuit has none",
    )
    usable, reasons = judged(approximate=poles(-1e6, 9e6))
    assert usable is False
    assert reasons == (
        "it has a pole in the right half-plane, at 1.43 MHz, where the circuit has none, within a decade of "
        "the first pole",
    )
    false = poles(1e6, -1e9)
    usable, reasons = judged(approximate=false, errors=_errors(false, TRUE, (), 0))
    assert usable is False
    assert reasons == ("the first pole would be in the right half-plane",)


def test_roots_that_cannot_be_compared_have_no_error():
    pair = poles(-7e5 - 7e5j, -7e5 + 7e5j)
    (error,) = _errors_of_poles(pair, TRUE, 0)
    assert (error.name, error.error, error.says) == ("first pole", None, "a pair, and not real")
    error, _ = _errors_of_poles(TRUE, poles(-7e5 - 7e5j, -7e5 + 7e5j, -1e9), 0)
    assert (error.error, error.says) == (None, "real, and no pair")
    first, second, third = _errors_of_poles(poles(-1e6, -1e8, 3e9), poles(-1e6, -1e9, -2e9), 0)
    assert (first.error, third.name, third.error, third.says) == (
        0,
        "third pole",
        None,
        "wrong half-plane",
    )
    assert second.error == pytest.approx(-0.9)
    # One that the circuit has no counterpart of is told as well.
    *_, last = _errors_of_poles(poles(-1e6, -1e9, 3e9), TRUE, 0)
    assert (last.approximate, last.exact, last.error) == (3e9, None, None)
    assert last.says == "the circuit has no such pole"
    # Two pairs are compared by their size.
    (error,) = _errors_of_poles(poles(-6 - 8j, -6 + 8j), poles(-3 - 4j, -3 + 4j), 0)
    assert (error.error, error.approximate) == (1.0, -6 + 8j)


def test_complex_pair_in_a_real_poles_place_misleads():
    pair = poles(-7e5 - 7e5j, -7e5 + 7e5j)
    usable, reasons = judged(approximate=pair, errors=_errors_of_poles(pair, TRUE, 0))
    assert usable is False
    assert reasons[-1] == "the first pole would be a pair, and not real"


def test_pair_that_does_not_follow_the_capacitor_is_not_what_it_is_judged_by():
    # A tank far below the pole of the stage, behind a buffer: C_mu has no part in it.
    tuned = (
        STAGE.replace('"out"', '"c"').replace("C_L", "C_x")
        + """
A_1 = { voltage_gain = "1", output = ["m", "gnd"], senses = ["c", "gnd"] }
R_9 = { resistor = "10 ohm", between = ["m", "n"] }
L_9 = { inductor = "1m", between = ["n", "out"] }
C_9 = { capacitor = "1u", between = ["out", "gnd"] }
"""
    )
    plain, view = views_of(STAGE)["C_mu"], views_of(tuned)["C_mu"]
    errors = {error.name: error for error in view.errors}
    # √(L/C)/R is 3.16: a pair at 1/√(L·C).
    assert abs(errors["first pole"].exact) == pytest.approx(1e-9**-0.5)
    assert errors["first pole"].error == pytest.approx(0, abs=1e-12)
    first = next(error for error in plain.errors if error.name == "first pole")
    assert errors["second pole"].error == pytest.approx(first.error)
    assert view.usable is True
    assert view.reasons[0].startswith("the second pole, at ")
    assert view.reasons[0].endswith(" is judged, as the first does not follow C_mu")
    assert view.reasons[1].startswith("second pole within ")
    assert "second pole, at" not in " ".join(plain.reasons)


def test_poles_at_the_low_end_are_not_the_first_pole():
    # A coupling capacitor: a zero at the origin and a pole at 100 rad/s below the pass band.
    exact = Landmarks(1, Fraction(-1), (), (-100 + 0j, -1e6 + 0j, -1e9 + 0j))
    assert exact.first == 1
    assert exact.upper_poles == (-1e6 + 0j, -1e9 + 0j)
    error = MillerError("first pole", -1.2e6 + 0j, -1e6 + 0j, 0.2)
    assert judged(exact, errors=[error])[1] == ("the first pole would be 20 % too high",)


def test_response_without_a_pole_to_compare_is_refused():
    usable, (reason,) = judged(poles(), poles(-1e6))
    assert usable is False
    assert reason == "the response has no pole at the upper end of its band to compare"


def test_other_power_of_s_and_no_response_at_all_are_refused():
    other = Landmarks(-1, Fraction(1), (), (-1e6 + 0j,))
    assert judged(approximate=other, errors=[])[1] == (
        "it starts with another power of s than the response",
    )
    nothing = Comparison(TRUE, None, False, (), (), ())
    assert judge(nothing, Fraction(-10), (), NODES)[0] is False


def test_wrong_gain_is_refused():
    error = MillerError("gain", -9 + 0j, -10 + 0j, -0.1)
    assert judged(errors=[error])[1] == ("the gain would be 10 % too low",)


def test_stage_with_a_resistive_source_may_be_used():
    view = views_of(STAGE)["C_mu"]
    assert view.usable is True
    assert view.reasons[0].startswith("first pole within ")
    assert view.reasons[-1] == "the zero at 3.18 GHz (right half-plane) is missing"


def test_stage_with_a_heavy_load_may_not():
    loaded = STAGE.replace('C_L = { capacitor = "5p"', 'C_L = { capacitor = "500p"')
    view = views_of(loaded)["C_mu"]
    assert view.usable is False
    assert any("changes, through C_L, from" in reason for reason in view.reasons)
    # Near and far pole are of one size now: 1/(R·172 pF) and 1/(R_L·502 pF), and the sum counts both.
    first = next(error for error in view.errors if error.name == "first pole")
    assert first.error > 0.10


def test_follower_misleads_in_several_ways():
    view = views_of(FOLLOWER)["C_pi"]
    assert view.usable is False
    assert len(view.reasons) >= 3


def test_ideal_follower_without_a_resistance_behind_it_is_exact():
    bootstrapped = """
R_S = { resistor = "1k", between = ["in", "b"] }
C_1 = { capacitor = "10p", between = ["b", "o"] }
C_2 = { capacitor = "2p", between = ["b", "gnd"] }
A_1 = { voltage_gain = "1", output = ["o", "gnd"], senses = ["b", "gnd"] }
R_o = { resistor = "1k", between = ["o", "out"] }
R_x = { resistor = "1k", between = ["out", "gnd"] }
"""
    view = views_of(bootstrapped)["C_1"]
    assert view.halves == (0, 0)
    assert view.usable is True
    assert view.reasons == (EXACT,)
    assert all(error.error == 0 for error in view.errors)

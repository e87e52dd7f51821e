"""Newton's method against an outside solver, and the checks of regions, made to fail as well."""

from fractions import Fraction
from math import exp, isnan

import numpy as np
import pytest
from biased import fet, npn, pnp, resistor, topology
from scipy.optimize import root
from stages import DIVIDER, JFET, MOSFET, PNP, STAGES, TWO_RAILS

from derive.bias import newton
from derive.bias.solve import operating_point

# k·T/q at 300.15 K, k and q as the SI defines them.
V_T = 1.380649e-23 * 300.15 / 1.602176634e-19
TEN = (("V_CC", "vcc", "10"),)


def exponential(v_be, v_at_one_milliampere=0.7, v_t=V_T):
    return 1e-3 * exp((v_be - v_at_one_milliampere) / v_t)


def checked(parts, supplies=TWO_RAILS[:1], **more):
    return operating_point(topology(parts, supplies, **more))


def test_the_exponential_law_of_a_divider_stage():
    def balance(x):
        v_b, v_e = x
        i_c = exponential(v_b - v_e)
        return [
            1e3 * ((12 - v_b) / 68e3 - v_b / 12e3 - i_c / 100),
            1e3 * (i_c * 1.01 - v_e / 1e3),
        ]

    v_b, v_e = root(balance, [1.7, 1.0], tol=1e-13).x
    (check,) = checked(DIVIDER).newton
    assert check.current == pytest.approx(exponential(v_b - v_e), rel=1e-7)
    hand = 100 * (1.8 - 0.7) / (10200 + 101e3)
    assert check.difference == pytest.approx(hand / exponential(v_b - v_e) - 1, rel=1e-3)
    assert check.passed


def test_the_law_follows_the_temperature():
    (check,) = checked(DIVIDER, temperature=Fraction(400)).newton
    cold = checked(DIVIDER).newton[0]
    assert check.current != cold.current


def test_a_current_far_from_a_milliampere_fails_with_its_difference():
    parts = (
        resistor("R_1", "6k8", "vcc", "b"),
        resistor("R_2", "470 Ω", "b", "gnd"),
        npn("Q1", "b", "vcc", "e"),
        resistor("R_E", "1 Ω", "e", "gnd"),
    )
    (check,) = checked(parts).newton
    hand = float(checked(parts).devices[0].current)

    def balance(x):
        i_c = exponential(x[0] - x[1])
        into_base = (12 - x[0]) / 6800 - x[0] / 470
        return [1e3 * (into_base - i_c / 100), 1e3 * (i_c * 1.01 - x[1])]

    v_b, v_e = root(balance, [0.75, 0.01], tol=1e-14).x
    assert check.current == pytest.approx(exponential(v_b - v_e), rel=1e-6)
    assert check.difference == pytest.approx(hand / check.current - 1, rel=1e-9)
    assert abs(check.difference) > 0.1
    assert not check.passed
    assert "10 %" in check.limit


def test_an_unlike_pair_is_solved_by_the_exponential_law():
    parts = (
        npn("Q1", "gnd", "c1", "e"),
        npn("Q2", "b2", "c2", "e"),
        resistor("R_B", "1k", "b2", "gnd"),
        resistor("R_T", "10k", "e", "vee"),
        resistor("R_C1", "5k", "vcc", "c1"),
        resistor("R_C2", "5k", "vcc", "c2"),
    )
    point = checked(parts, TWO_RAILS)

    def balance(x):
        v_e, v_b = x
        one, other = exponential(-v_e), exponential(v_b - v_e)
        return [
            1e4 * (1.01 * (one + other) - (v_e + 12) / 10e3),
            1e4 * (other / 100 + v_b / 1e3),
        ]

    v_e, v_b = root(balance, [-0.69, -0.005], tol=1e-14).x
    assert point.method == "exponential law, numeric"
    assert float(point.devices[0].current) == pytest.approx(exponential(-v_e), rel=1e-8)
    assert float(point.devices[1].current) == pytest.approx(exponential(v_b - v_e), rel=1e-8)
    assert float(dict(point.nodes)["b2"]) == pytest.approx(v_b, rel=1e-8)
    assert "do not settle how the current divides" in point.derivations[0].says
    assert point.passed


def test_a_base_somewhat_below_its_constant_voltage_still_conducts_by_the_exponential_law():
    parts = (
        resistor("R_1", "180k", "vcc", "b"),
        resistor("R_2", "10k", "b", "gnd"),
        npn("Q1", "b", "c", "gnd"),
        resistor("R_C", "1k", "vcc", "c"),
    )
    point = checked(parts)

    def balance(x):
        return [1e4 * ((12 - x[0]) / 180e3 - x[0] / 10e3 - exponential(x[0]) / 100)]

    (v_b,) = root(balance, [0.62], tol=1e-14).x
    assert 12 * 10 / 190 < 0.7
    assert point.method == "exponential law, numeric"
    assert float(point.devices[0].current) == pytest.approx(exponential(v_b), rel=1e-8)


@pytest.mark.parametrize("name", STAGES)
def test_newton_agrees_on_every_textbook_stage(name):
    point = checked(*STAGES[name])
    assert point.newton
    assert all(check.passed and abs(check.difference) < 0.05 for check in point.newton)


def test_a_saturation_current_that_is_given_is_used():
    parts = (*DIVIDER[:2], npn("Q1", "b", "c", "e", I_S="0.01 pA"), *DIVIDER[3:])
    (check,) = checked(parts).newton

    def balance(x):
        i_c = 1e-14 * (exp((x[0] - x[1]) / V_T) - 1)
        return [
            1e3 * ((12 - x[0]) / 68e3 - x[0] / 12e3 - i_c / 100),
            1e3 * (i_c * 1.01 - x[1] / 1e3),
        ]

    v_b, v_e = root(balance, [1.7, 1.05], tol=1e-13).x
    assert check.current == pytest.approx(1e-14 * (exp((v_b - v_e) / V_T) - 1), rel=1e-7)


def test_the_slope_of_saturation_stands_in_the_difference():
    device = fet("mosfet", "M1", "g", "d", "gnd", k="100 uA/V²", V_t="1 V", **{"lambda": "0.05 1/V"})
    parts = (
        resistor("R_1", "3M", "vcc", "g"),
        resistor("R_2", "1M", "g", "gnd"),
        device,
        resistor("R_D", "10k", "vcc", "d"),
    )
    point = checked(parts)
    # 0.2 mA·(1 + 0.05·(12 - 10k·I)) = I
    expected = 0.2e-3 * 1.6 / (1 + 0.2e-3 * 0.05 * 10e3)
    (check,) = point.newton
    assert float(point.devices[0].current) == 0.2e-3
    assert check.current == pytest.approx(expected, rel=1e-9)
    assert not check.passed


def test_a_search_without_end_is_said_not_hidden(monkeypatch):
    monkeypatch.setattr(newton, "MOST_STEPS", 0)
    point = checked(DIVIDER)
    (check,) = point.newton
    assert isnan(check.current)
    assert not check.passed
    assert "did not converge" in check.limit
    assert not point.passed


def test_a_singular_or_endless_balance_gives_nothing():
    def balance(matrix, constant):
        size = len(constant)
        nothing = np.zeros((size, 0))
        return newton.Balance(
            np.array(matrix, float), np.array(constant, float), nothing, nothing.T, np.zeros(0), (), V_T
        )

    assert newton.search(balance([[0.0]], [1.0]), np.zeros(1)) is None
    assert newton.search(balance([[1.0]], [np.inf]), np.zeros(1)) is None


def region(parts, supplies=TWO_RAILS[:1]):
    (check,) = checked(parts, supplies).regions
    return check


def test_forward_active_stages_say_their_voltages():
    check = region(DIVIDER)
    assert check.passed
    assert check.measured == "V_CE = 6.352 V, V_BC = −5.652 V"
    assert "200 mV" in check.limit
    assert "400 mV" in check.limit
    assert region(PNP, TWO_RAILS).measured.startswith("V_EC = ")


@pytest.mark.parametrize(("load", "passes"), [("9k", True), ("11k", False), ("22k", False)])
def test_a_transistor_whose_collector_comes_too_low_fails(load, passes):
    check = region((*DIVIDER[:3], resistor("R_C", load, "vcc", "c"), DIVIDER[4]))
    # I_C = 0.98921 mA, V_E = 0.99910 V.
    v_ce = 12 - 0.98921e-3 * float(load[:-1]) * 1e3 - 0.99910
    assert (v_ce > 0.3) == passes
    assert check.passed == passes
    assert not passes or f"V_CE = {v_ce:.4g} V" in check.measured


def test_a_collector_junction_forward_by_more_than_its_limit_fails():
    # V_CE is 0.27 V: above saturation, but the collector junction is forward by 0.43 V.
    load = (12 - 0.99910 - 0.27) / 0.98921e-3
    check = region((*DIVIDER[:3], resistor("R_C", f"{load:.1f} Ω", "vcc", "c"), DIVIDER[4]))
    assert check.measured.startswith("V_CE = 270")
    assert not check.passed


def test_a_pnp_out_of_its_region_fails():
    parts = (*PNP[:3], resistor("R_C", "47k", "c", "vee"), PNP[4])
    assert not region(parts, TWO_RAILS).passed


def test_fets_below_their_overdrive_fail():
    assert region(MOSFET, TEN).passed
    low = region((*MOSFET[:4], resistor("R_D", "3k", "vcc", "d")), TEN)
    assert not low.passed
    assert low.measured.startswith("V_GS = 2.562 V, V_DS = ")
    assert region(JFET).passed
    assert not region((*JFET[:3], resistor("R_D", "5k", "vcc", "d"))).passed


def test_a_given_current_that_the_circuit_contradicts_fails():
    follower = (npn("Q2", "c", "vcc", "e2", I_C="3 mA"), resistor("R_E2", "5k", "e2", "gnd"))
    point = checked((*DIVIDER, *follower))
    one, other = point.regions
    assert one.passed
    assert not other.passed
    assert "3 mA given" in other.measured
    agreeing = (npn("Q2", "c", "vcc", "e2", I_C="1.3 mA"), follower[1])
    assert checked((*DIVIDER, *agreeing)).passed


def test_a_pnp_may_be_given_its_saturation_current():
    point = checked((*PNP[:2], pnp("Q1", "b", "c", "e", I_S="1 fA"), *PNP[3:]), TWO_RAILS)
    assert all(check.passed for check in point.newton)


@pytest.mark.parametrize(
    ("load", "given", "passes", "words"),
    [
        ("4k7", {"V_ov": "0.5 V"}, True, "V_ov = 500 mV"),
        ("11k9", {"V_ov": "0.5 V"}, False, "V_ov = 500 mV"),
        ("11k9", {"k": "8 mA/V²"}, True, "not judged"),
        ("15k", {"k": "8 mA/V²"}, False, "not judged"),
    ],
)
def test_a_fet_whose_current_is_given_stands_by_its_overdrive(load, given, passes, words):
    parts = (
        *DIVIDER,
        fet("mosfet", "M1", "c", "d", "gnd", I_D="1 mA", **given),
        resistor("R_D", load, "vcc", "d"),
    )
    point = checked(parts)
    check = point.regions[1]
    assert check.passed == passes
    assert words in check.limit
    assert float(dict(point.nodes)["d"]) == pytest.approx(12 - float(load.replace("k", ".")))

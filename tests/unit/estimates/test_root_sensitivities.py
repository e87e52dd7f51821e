"""Sensitivities of roots: by theory where there is one, else by differences of numpy's roots."""

import numpy as np
import pytest
from estimated import COMMON_EMITTER, SERIES_RLC, said_of, sections


def of(said, kind, index=0):
    (found,) = [root for root in said.sensitivities if (root.of, root.index) == (kind, index)]
    return dict(found.by_symbol)


def test_one_section_follows_r_and_c_inversely():
    assert of(said_of(sections(1)), "pole") == {"R_1": pytest.approx(-1), "C_1": pytest.approx(-1)}


def test_symbols_stand_in_the_order_of_the_circuit():
    said = said_of(COMMON_EMITTER)
    assert list(of(said, "pole")) == ["R_S", "r_pi", "C_pi", "C_mu", "g_m", "R_L"]
    assert of(said, "zero")["g_m"] == pytest.approx(1)
    assert of(said, "zero")["C_mu"] == pytest.approx(-1)
    # The gain holds all others, the zero none of them.
    assert list(of(said, "zero")) == ["C_mu", "g_m"]


def test_a_complex_pair_follows_theory():
    # p = ω_0·(−1/2Q ± j·√(1 − 1/4Q²)), ω_0 = 1/√(LC): worked by hand from s²LC + sRC + 1 = 0.
    said = said_of(SERIES_RLC % "500 ohm")
    r, ind, c = 500.0, 1e-3, 1e-9
    for root in said.sensitivities:
        p = root.root
        slope = 2 * p * ind * c + r * c
        exact = {
            "R_1": -(p * r * c) / (p * slope),
            "L_1": -(p * p * ind * c) / (p * slope),
            "C_1": -(p * p * ind * c + p * r * c) / (p * slope),
        }
        for name, value in root.by_symbol:
            assert value == pytest.approx(exact[name], rel=1e-12)
    assert len(said.sensitivities) == 2


def test_a_common_emitter_stage_follows_its_parts_as_differences_of_numpys_roots_show():
    values = {"R_S": 1e3, "r_pi": 2.5e3, "C_pi": 12e-12, "C_mu": 2e-12, "g_m": 0.04, "R_L": 4.7e3}

    def poles(v):
        r = v["R_S"] * v["r_pi"] / (v["R_S"] + v["r_pi"])
        b_1 = r * v["C_pi"] + (r * (1 + v["g_m"] * v["R_L"]) + v["R_L"]) * v["C_mu"]
        b_2 = r * v["R_L"] * v["C_pi"] * v["C_mu"]
        return np.sort(np.roots([b_2 * 1e18, b_1 * 1e9, 1]).real)[::-1] * 1e9

    said, h = said_of(COMMON_EMITTER), 1e-5
    for index in (0, 1):
        for name, value in of(said, "pole", index).items():
            ends = [poles(values | {name: values[name] * (1 + side * h)})[index] for side in (1, -1)]
            assert value.real == pytest.approx(
                (ends[0] - ends[1]) / (2 * h * poles(values)[index]), abs=1e-6
            )
            assert value.imag == 0


def test_a_multiple_root_has_no_sensitivity():
    assert said_of(sections(1, 1)).sensitivities == ()
    assert len(said_of(sections(1, 2)).sensitivities) == 2


def test_close_roots_cost_no_digits():
    # Poles 1e-9 apart: those of independent sections follow their own parts and nothing else.
    parts = sections(1, 1).replace('R_2 = { resistor = "1k"', 'R_2 = { resistor = "1.000000001k"')
    said = said_of(parts)
    assert of(said, "pole", 1) == pytest.approx({"R_1": -1, "C_1": -1}, abs=1e-9)


def test_coupled_coils_are_left_out():
    parts = """
    R_1 = { resistor = "1k", between = ["in", "a"] }
    L_1 = { inductor = "1 mH", between = ["a", "gnd"] }
    L_2 = { inductor = "1 mH", between = ["out", "gnd"] }
    K_1 = { coupling = "0.5", coils = ["L_1", "L_2"] }
    R_2 = { resistor = "1k", between = ["out", "gnd"] }
    """
    said = said_of(parts)
    assert said.sensitivities == ()
    assert said.bandwidth is not None


def test_q_of_a_series_circuit_follows_its_parts_as_the_textbook_s_does():
    # Q = (1/R)·√(L/C): −1, +1/2 and −1/2.
    said = said_of(SERIES_RLC % "500 ohm")
    for root in said.sensitivities:
        found = dict(root.quality)
        assert found["R_1"] == pytest.approx(-1)
        assert found["L_1"] == pytest.approx(0.5)
        assert found["C_1"] == pytest.approx(-0.5)


def test_real_roots_have_no_sensitivity_of_q():
    said = said_of(COMMON_EMITTER)
    assert said.sensitivities
    assert all(root.quality == () for root in said.sensitivities)

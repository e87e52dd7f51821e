"""Circuits on which a derivation often stumbles: every one must hold, with every check passed."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
from holding import GAIN, held, same, stage
from ledger_arithmetic import RATIONALS, LedgerResult


def test_two_drives_with_weights_superpose():
    drives = 'V_1 = { voltage = ["a", "gnd"] }\nV_2 = { voltage = ["b", "gnd"] }'
    parts = (
        'R_1 = { resistor = "1k", between = ["a", "out"] }\n'
        'R_2 = { resistor = "3k", between = ["b", "out"] }\n'
        'R_3 = { resistor = "2k", between = ["out", "gnd"] }'
    )
    results = held(
        stage(
            parts,
            'A_1: voltage = "out"; per = "V_1"',
            'A_2: voltage = "out"; per = "V_2"',
            'A_d: voltage = "out"; per = { V_1 = "1/2", V_2 = "-1/2" }',
            'A_c: voltage = "out"; per = { V_1 = "1", V_2 = "1" }',
            drives=drives,
        )
    )
    share = "par(R_1,R_2,R_3)"
    same(results, "A_1", f"{share}/R_1")
    same(results, "A_2", f"{share}/R_2")
    same(results, "A_d", f"({share}/R_1 - {share}/R_2)/2")
    same(results, "A_c", f"{share}/R_1 + {share}/R_2")


def test_two_current_drives_with_weights_superpose():
    drives = 'I_1 = { current = ["gnd", "a"] }\nI_2 = { current = ["a", "out"] }'
    parts = (
        'R_1 = { resistor = "1k", between = ["a", "out"] }\n'
        'R_2 = { resistor = "3k", between = ["out", "gnd"] }'
    )
    find = 'Z: voltage = ["a", "out"]; per = { I_1 = "1/2", I_2 = "3" }'
    # I_1 comes in at a and goes through R_1; I_2 takes current out of a and brings it to out.
    same(held(stage(parts, find, drives=drives)), "Z", "R_1/2 - 3*R_1")


def test_currents_flow_from_first_node_to_second():
    parts = (
        'R_1 = { resistor = "10R", between = ["in", "a"] }\n'
        'L_1 = { inductor = "1 mH", between = ["a", "out"] }\n'
        'C_1 = { capacitor = "1u", between = ["gnd", "out"] }'
    )
    finds = [f'Y_{part}: current = "{part}"; per = "V_s"' for part in ("R_1", "L_1", "C_1", "V_s")]
    results = held(stage(parts, *finds))
    through = "1/(R_1 + s*L_1 + 1/(s*C_1))"
    same(results, "Y_R_1", through)
    same(results, "Y_L_1", through)
    # C_1 is drawn from ground up, and the source's own current goes down through it.
    same(results, "Y_C_1", f"-{through}")
    same(results, "Y_V_s", f"-{through}")


def test_currents_of_controlled_sources():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "gnd"] }\n'
        'R_L = { resistor = "2k", between = ["out", "gnd"] }\n'
        'F_1 = { current_gain = "5", flows = ["gnd", "out"], senses = "R_1" }\n'
        'H_1 = { transresistance = "3k", output = ["x", "gnd"], senses = "R_1" }\n'
        'R_x = { resistor = "2k", between = ["x", "gnd"] }\n'
        'g_1 = { transconductance = "1 mS", flows = ["gnd", "y"], senses = ["in", "gnd"] }\n'
        'R_y = { resistor = "2k", between = ["y", "gnd"] }'
    )
    results = held(
        stage(
            parts,
            'Y_F: current = "F_1"; per = "V_s"',
            'Y_H: current = "H_1"; per = "V_s"',
            'Y_g: current = "g_1"; per = "V_s"',
            'A_F: voltage = "out"; per = "V_s"',
            'A_H: voltage = "x"; per = "V_s"',
            'A_g: voltage = "y"; per = "V_s"',
        )
    )
    same(results, "Y_F", "F_1/R_1")
    # The source lifts x; what R_x takes comes up through the source, against its count.
    same(results, "Y_H", "-H_1/(R_1*R_x)")
    same(results, "Y_g", "g_1")
    same(results, "A_F", "F_1*R_L/R_1")
    same(results, "A_H", "H_1/R_1")
    same(results, "A_g", "g_1*R_y")


def test_impedance_between_two_nodes_of_a_bridge():
    names = ["R_1", "R_2", "R_3", "R_4", "R_5"]
    ends = [("a", "c"), ("c", "b"), ("a", "d"), ("d", "b"), ("c", "d")]
    parts = "\n".join(
        f'{name} = {{ resistor = "{index + 1}k", between = ["{one}", "{other}"] }}'
        for index, (name, (one, other)) in enumerate(zip(names, ends, strict=True))
    )
    parts += '\nR_6 = { resistor = "7k", between = ["b", "gnd"] }'
    results = held(stage(parts, 'Z: impedance = ["a", "b"]', drives=""))
    # Star for the delta R_1, R_3, R_5; R_6 carries nothing.
    star = "(R_1 + R_3 + R_5)"
    same(
        results,
        "Z",
        f"R_1*R_3/{star} + par(R_1*R_5/{star} + R_2, R_3*R_5/{star} + R_4)",
    )


TRANSFORMER = (
    'L_1 = {{ inductor = "1 mH", between = ["p", "gnd"] }}\n'
    'L_2 = {{ inductor = "4 mH", between = ["out", "gnd"] }}\n'
    'k_1 = {{ coupling = "{k}", coils = ["L_1", "L_2"] }}\n'
    'R_L = {{ resistor = "100R", between = ["out", "gnd"] }}\n'
    'R_S = {{ resistor = "50R", between = ["in", "p"] }}'
)
TRANSFORMER_FINDS = (
    GAIN,
    'A_p: voltage = ["out", "p"]; per = "V_s"',
    'Y_2: current = "L_2"; per = "V_s"',
    'Z_in: impedance = "p"',
)


# Z_in = s·L_1 - s²M²/(s·L_2 + R_L): textbook, common practice.
@pytest.mark.parametrize("k", ["0.5", "-0.5", "1"])
def test_coupled_coils_follow_the_transformer_equations(k):
    results = held(stage(TRANSFORMER.format(k=k), *TRANSFORMER_FINDS), undecided=("estimates",))
    primary = "(s*L_1 - s**2*M**2/(s*L_2 + R_L))"
    gain = f"{primary}/(R_S + {primary})*M*R_L/(L_1*(s*L_2 + R_L) - s*M**2)"
    same(results, "A_v", gain)
    same(results, "A_p", f"{gain} - {primary}/(R_S + {primary})")
    # R_L's current comes up through the coil, against its count.
    same(results, "Y_2", f"-({gain})/R_L")
    same(results, "Z_in", f"par(R_S, {primary})")


def test_perfect_coupling_is_an_ideal_transformer_beside_the_primary_inductance():
    results = held(stage(TRANSFORMER.format(k="1"), *TRANSFORMER_FINDS))
    same(results, "Z_in", "par(R_S, s*L_1, R_L*L_1/L_2)", ties=("k_1 = 1",))
    # L_1 to L_2 as 1 to 4: two volts out per volt at the primary, and one pole only.
    assert len(results["A_v"]["poles"]) == 1
    values = {"R_L": 100, "R_S": 50, "L_1": Fraction(1, 1000), "L_2": Fraction(4, 1000), "k_1": 1}
    values = {name: Fraction(value) for name, value in values.items()}
    response = LedgerResult(results["A_v"]).at(values, RATIONALS)
    high = response.numerator[-1] if len(response.numerator) > 1 else Fraction(1)
    assert response.power_of_s == 1
    # Far above the corner: 2·(R_L/4)/(R_S + R_L/4).
    slope = next(c for c in reversed(response.denominator) if c)
    assert response.gain * high / slope == Fraction(2, 3)


def test_dots_turned_round_turn_the_sign():
    straight = stage(TRANSFORMER.format(k="0.5"), GAIN)
    turned = straight.replace('"4 mH", between = ["out", "gnd"]', '"4 mH", between = ["gnd", "out"]')
    one, other = held(straight)["A_v"], held(turned)["A_v"]
    assert one["gain"]["value"] == -other["gain"]["value"] != 0
    assert one["denominator"] == other["denominator"]


def test_floating_voltage_gain_stands_on_what_it_stands_on():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "a"] }\n'
        'R_2 = { resistor = "2k", between = ["a", "gnd"] }\n'
        'A_1 = { voltage_gain = "10", output = ["out", "a"], senses = ["in", "a"] }\n'
        'R_L = { resistor = "3k", between = ["out", "gnd"] }'
    )
    results = held(stage(parts, GAIN, 'A_a: voltage = "a"; per = "V_s"'))
    # a: (in - a)/R_1 = a/R_2 + out/R_L with out = a + A·(in - a).
    at_a = "((1/R_1 - A_1/R_L)/(1/R_1 + 1/R_2 + (1 - A_1)/R_L))"
    same(results, "A_a", at_a)
    same(results, "A_v", f"{at_a} + A_1*(1 - {at_a})")


INVERTER = (
    'R_1 = { resistor = "1k", between = ["in", "m"] }\n'
    'R_2 = { resistor = "10k", between = ["m", "out"] }\n'
    'O_1 = { ideal_opamp = true, output = "out", inputs = ["p", "m"] }\n'
    'R_3 = { resistor = "1k", between = ["p", "gnd"] }'
)


def test_inputs_of_an_ideal_op_amp_differ_by_nothing_and_that_is_no_failure():
    results = held(
        stage(INVERTER, GAIN, 'A_d: voltage = ["p", "m"]; per = "V_s"', 'Z_out: impedance = "out"')
    )
    same(results, "A_v", "-R_2/R_1")
    for find in ("A_d", "Z_out"):
        assert results[find]["gain"] == {"exact": "0", "value": 0.0}
        assert results[find]["numerator"] == results[find]["denominator"] == ["1"]
        assert results[find]["zeros"] == results[find]["poles"] == []


def test_swapped_inputs_of_an_ideal_op_amp_make_no_difference():
    swapped = INVERTER.replace('inputs = ["p", "m"]', 'inputs = ["m", "p"]')
    same(held(stage(swapped, GAIN)), "A_v", "-R_2/R_1")


def test_identically_zero_responses_are_no_failure():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "a"] }\n'
        'R_2 = { resistor = "1k", between = ["a", "gnd"] }\n'
        'R_3 = { resistor = "1k", between = ["out", "gnd"] }\n'
        'C_3 = { capacitor = "1n", between = ["out", "gnd"] }'
    )
    results = held(stage(parts, GAIN, 'Y_3: current = "C_3"; per = "V_s"', 'Z_in: impedance = "in"'))
    for find in ("A_v", "Y_3", "Z_in"):
        assert results[find]["gain"]["exact"] == "0"
        assert results[find]["power_of_s"] == 0


@pytest.mark.parametrize(
    ("first", "second", "form", "power"),
    [
        ("R_1", "C_1", "-1/(s*R_1*C_1)", -1),
        ("C_1", "R_1", "-s*R_1*C_1", 1),
        ("L_1", "C_1", "-1/(s**2*L_1*C_1)", -2),
        ("C_1", "L_1", "-s**2*L_1*C_1", 2),
    ],
    ids=["integrator", "differentiator", "double integrator", "double differentiator"],
)
def test_integrators_and_differentiators(first, second, form, power):
    values = {"R_1": 'resistor = "1k"', "C_1": 'capacitor = "1n"', "L_1": 'inductor = "1 mH"'}
    parts = (
        f'{first} = {{ {values[first]}, between = ["in", "m"] }}\n'
        f'{second} = {{ {values[second]}, between = ["m", "out"] }}\n'
        'O_1 = { ideal_opamp = true, output = "out", inputs = ["gnd", "m"] }'
    )
    results = held(stage(parts, GAIN))
    same(results, "A_v", form)
    assert results["A_v"]["power_of_s"] == power
    assert results["A_v"]["numerator"] == results["A_v"]["denominator"] == ["1"]


def test_impedance_of_a_capacitor_and_of_an_inductor():
    parts = (
        'C_1 = { capacitor = "1n", between = ["a", "gnd"] }\n'
        'L_1 = { inductor = "1 mH", between = ["b", "gnd"] }\n'
        'R_1 = { resistor = "1k", between = ["b", "gnd"] }'
    )
    results = held(stage(parts, 'Z_C: impedance = "a"', 'Z_L: impedance = "b"', drives=""))
    same(results, "Z_C", "1/(s*C_1)")
    same(results, "Z_L", "par(s*L_1, R_1)")


def test_lossless_resonator_has_its_poles_on_the_axis():
    parts = (
        'L_1 = { inductor = "1 mH", between = ["in", "out"] }\n'
        'C_1 = { capacitor = "1n", between = ["out", "gnd"] }'
    )
    # Without loss the peak is infinite, and so no sensitivity of it can be worked.
    results = held(stage(parts, GAIN), undecided=("estimates",))
    same(results, "A_v", "1/(1 + s**2*L_1*C_1)")
    for real, imaginary in results["A_v"]["poles"]:
        assert abs(real) < 1e-6
        assert abs(imaginary) == pytest.approx(1e6)


def test_op_amp_of_one_pole_in_every_form():
    for parameters, gain in (
        ('A_0 = "1000"', "A_0"),
        ('w_unity = "1e6 rad/s"', "(w_u/s)"),
        ('A_0 = "1000", w_unity = "1e6 rad/s"', "(A_0/(1 + s*A_0/w_u))"),
    ):
        parts = (
            'R_1 = { resistor = "1k", between = ["m", "gnd"] }\n'
            'R_2 = { resistor = "9k", between = ["m", "out"] }\n'
            f'U1 = {{ opamp = true, output = "out", inputs = ["in", "m"], {parameters} }}'
        )
        results = held(stage(parts, GAIN))
        same(results, "A_v", f"{gain}/(1 + {gain}*R_1/(R_1 + R_2))")


def test_two_op_amps_have_symbols_of_their_own():
    parts = (
        'U1 = { opamp = true, output = "a", inputs = ["in", "a"], f_unity = "1 MHz" }\n'
        'U2 = { opamp = true, output = "out", inputs = ["a", "out"], f_unity = "2 MHz" }'
    )
    results = held(stage(parts, GAIN))
    same(results, "A_v", "1/((1 + s/w_u1)*(1 + s/w_u2))")
    assert [root[0] for root in results["A_v"]["poles"]] == [
        pytest.approx(-2e6 * math.pi),
        pytest.approx(-4e6 * math.pi),
    ]

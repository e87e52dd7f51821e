"""Values that hide or upset things: equal, far apart, cancelling, left open."""

from __future__ import annotations

import pytest
from holding import GAIN, RC, held, same, stage
from ledger_arithmetic import RESIDUES, calculate


def test_equal_values_do_not_swap_symbols():
    parts = "\n".join(
        f'R_{n} = {{ resistor = "1k", between = ["{a}", "{b}"] }}\n'
        f'C_{n} = {{ capacitor = "1n", between = ["{b}", "gnd"] }}'
        for n, a, b in ((1, "in", "a"), (2, "a", "b"), (3, "b", "out"))
    )
    results = held(stage(parts, GAIN))
    same(
        results,
        "A_v",
        "1/((1 + s*R_3*C_3)*((1 + s*R_2*C_2)*(1 + s*R_1*C_1) + s*R_1*C_2)"
        " + s*C_3*(R_2*(1 + s*R_1*C_1) + R_1))",
    )
    # Source: the phase-shift network 1/(1 + 6x + 5x² + x³), x = s·R·C; common practice.
    ones = dict.fromkeys(results["symbols"], 1)
    assert [calculate(text, ones, RESIDUES) for text in results["A_v"]["denominator"]] == [1, 6, 5, 1]


def test_values_over_fifteen_decades():
    parts = (
        'R_1 = { resistor = "1 mΩ", between = ["in", "a"] }\n'
        'C_1 = { capacitor = "1 F", between = ["a", "gnd"] }\n'
        'R_2 = { resistor = "1 TΩ", between = ["a", "out"] }\n'
        'C_2 = { capacitor = "1 fF", between = ["out", "gnd"] }\n'
        'L_1 = { inductor = "1 pH", between = ["a", "b"] }\n'
        'R_3 = { resistor = "1 GΩ", between = ["b", "gnd"] }'
    )
    results = held(stage(parts, GAIN), undecided=("nominal values",))
    divider = "par(1/(s*C_1), s*L_1 + R_3, R_2 + 1/(s*C_2))"
    same(results, "A_v", f"{divider}/(R_1 + {divider})/(1 + s*R_2*C_2)")
    # The loops are far apart: 1/(R_1·C_1), 1/(R_2·C_2) and R_3/L_1, to within a part in a thousand.
    assert [root[0] for root in results["A_v"]["poles"]] == [
        pytest.approx(-1000, rel=3e-3),
        pytest.approx(-1000, rel=3e-3),
        pytest.approx(-1e21, rel=1e-3),
    ]


def test_compensated_divider_cancels_at_its_values_only():
    parts = (
        'R_1 = { resistor = "9M", between = ["in", "out"] }\n'
        'C_1 = { capacitor = "10p", between = ["in", "out"] }\n'
        'R_2 = { resistor = "1M", between = ["out", "gnd"] }\n'
        'C_2 = { capacitor = "90p", between = ["out", "gnd"] }'
    )
    results = held(stage(parts, GAIN))
    same(results, "A_v", "R_2/(R_1 + R_2)*(1 + s*R_1*C_1)/(1 + s*par(R_1,R_2)*(C_1 + C_2))")
    # Symbols keep both roots; at these values they lie on one another.
    assert results["A_v"]["poles"] == results["A_v"]["zeros"] == [[pytest.approx(-1 / 90e-6), 0.0]]


def test_cascade_of_identical_buffered_sections_has_a_multiple_pole():
    parts = []
    for n in (1, 2, 3):
        source = "in" if n == 1 else f"b{n - 1}"
        out = "out" if n == 3 else f"b{n}"
        parts.append(f'R_{n} = {{ resistor = "1k", between = ["{source}", "a{n}"] }}')
        parts.append(f'C_{n} = {{ capacitor = "1u", between = ["a{n}", "gnd"] }}')
        parts.append(
            f'A_{n} = {{ voltage_gain = "1", output = ["{out}", "gnd"], senses = ["a{n}", "gnd"] }}'
        )
    results = held(stage("\n".join(parts), GAIN))
    same(results, "A_v", "A_1*A_2*A_3/((1 + s*R_1*C_1)*(1 + s*R_2*C_2)*(1 + s*R_3*C_3))")
    assert results["A_v"]["poles"] == [[-1000.0, 0.0]] * 3


def test_lag_then_lead_of_equal_time_constants_keeps_both():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "a"] }\n'
        'C_1 = { capacitor = "1n", between = ["a", "gnd"] }\n'
        'A_1 = { voltage_gain = "1", output = ["b", "gnd"], senses = ["a", "gnd"] }\n'
        'R_2 = { resistor = "1k", between = ["b", "out"] }\n'
        'C_2 = { capacitor = "1n", between = ["b", "out"] }\n'
        'R_3 = { resistor = "1k", between = ["out", "gnd"] }'
    )
    results = held(stage(parts, GAIN))
    tail = "(R_3/(R_2 + R_3)*(1 + s*R_2*C_2)/(1 + s*par(R_2,R_3)*C_2))"
    same(results, "A_v", f"A_1/(1 + s*R_1*C_1)*{tail}")
    assert len(results["A_v"]["poles"]) == 2
    assert len(results["A_v"]["zeros"]) == 1


def test_loop_of_three_capacitors_gives_two_poles():
    parts = (
        'R_S = { resistor = "1k", between = ["in", "a"] }\n'
        'C_1 = { capacitor = "1n", between = ["a", "gnd"] }\n'
        'C_2 = { capacitor = "2n", between = ["a", "out"] }\n'
        'C_3 = { capacitor = "3n", between = ["out", "gnd"] }\n'
        'R_L = { resistor = "2k", between = ["out", "gnd"] }'
    )
    results = held(stage(parts, GAIN))
    assert len(results["A_v"]["poles"]) == 2
    assert results["A_v"]["power_of_s"] == 1
    b_2 = calculate(results["A_v"]["denominator"][2], dict.fromkeys(results["symbols"], 1), RESIDUES)
    assert b_2 == 3  # R_S·R_L·(C_1·C_2 + C_1·C_3 + C_2·C_3)


def test_cut_set_of_three_inductors_gives_two_poles():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "a"] }\n'
        'L_1 = { inductor = "1 mH", between = ["a", "m"] }\n'
        'L_2 = { inductor = "2 mH", between = ["m", "out"] }\n'
        'L_3 = { inductor = "3 mH", between = ["m", "b"] }\n'
        'R_2 = { resistor = "1k", between = ["out", "gnd"] }\n'
        'R_3 = { resistor = "1k", between = ["b", "gnd"] }'
    )
    assert len(held(stage(parts, GAIN))["A_v"]["poles"]) == 2


def test_bridge_in_balance_vanishes_at_its_values_only():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "a"] }\n'
        'R_2 = { resistor = "2k", between = ["a", "gnd"] }\n'
        'R_3 = { resistor = "10k", between = ["in", "b"] }\n'
        'R_4 = { resistor = "20k", between = ["b", "gnd"] }'
    )
    results = held(stage(parts, 'A_d: voltage = ["a", "b"]; per = "V_s"'))
    same(results, "A_d", "R_2/(R_1 + R_2) - R_4/(R_3 + R_4)")
    assert results["A_d"]["gain"]["value"] == 0.0
    assert results["A_d"]["gain"]["exact"] != "0"


@pytest.mark.parametrize("opened", ["1k", "1n", "both"])
def test_open_values_leave_numbers_out_and_symbols_in(opened):
    text = stage(RC, GAIN, 'Z_o: impedance = "out"')
    for value in ("1k", "1n") if opened == "both" else (opened,):
        text = text.replace(f'"{value}"', '"?"')
    results = held(text, undecided=("nominal values",))
    same(results, "A_v", "1/(1 + s*R_1*C_1)")
    same(results, "Z_o", "R_1/(1 + s*R_1*C_1)")
    assert results["Z_o"]["gain"]["value"] is None
    assert results["A_v"]["poles"] == []


# Floating point loses what is small beside what it stands in; a right result must not fail for that.
LOST_IN_ROUNDING = {
    "a network that hangs from ground by 1 MΩ and by capacitors": stage(
        """L_1 = { inductor = "22 mH", between = ["n3", "n2"] }
C_1 = { capacitor = "10p", between = ["n1", "gnd"] }
C_3 = { capacitor = "100n", between = ["gnd", "n3"] }
R_3 = { resistor = "1M", between = ["n3", "gnd"] }
R_2 = { resistor = "1k", between = ["n3", "n2"] }
R_1 = { resistor = "33k", between = ["n2", "n1"] }
C_2 = { capacitor = "470 pF", between = ["n3", "n1"] }""",
        'X_1: voltage = "n3"; per = "V_s2"',
        'X_2: voltage = "n3"; per = "V_s1"',
        drives='V_s1 = { voltage = ["n1", "n3"] }\nV_s2 = { voltage = ["n2", "n1"] }',
    ),
    "coupled coils between capacitors, at millihertz": stage(
        """C_2 = { capacitor = "100n", between = ["n4", "gnd"] }
C_4 = { capacitor = "100n", between = ["n4", "n3"] }
L_2 = { inductor = "10 uH", between = ["n5", "n4"] }
C_1 = { capacitor = "10p", between = ["n2", "n1"] }
k_1 = { coupling = "0.98", coils = ["L_1", "L_2"] }
R_2 = { resistor = "33k", between = ["n3", "n2"] }
C_5 = { capacitor = "100n", between = ["n4", "n1"] }
R_1 = { resistor = "470R", between = ["n1", "gnd"] }
C_3 = { capacitor = "4u7", between = ["n5", "n2"] }
L_1 = { inductor = "470u", between = ["n1", "n5"] }""",
        'X_1: voltage = ["n5", "n2"]; per = "V_s1"',
        'X_2: voltage = "n1"; per = { V_s1 = "-1" }',
        drives='V_s1 = { voltage = ["n4", "n3"] }',
    ),
    "a transresistance equal to the resistor that it senses": stage(
        """L_1 = { inductor = "1 mH", between = ["n1", "gnd"] }
R_1 = { resistor = "4.7 kΩ", between = ["n2", "gnd"] }
C_2 = { capacitor = "1n", between = ["n4", "n1"] }
C_1 = { capacitor = "2p2", between = ["gnd", "n2"] }
H_1 = { transresistance = "4.7 kΩ", output = ["n2", "n1"], senses = "R_1" }
L_2 = { inductor = "10 uH", between = ["n3", "gnd"] }
k_1 = { coupling = "0.5", coils = ["L_3", "L_2"] }
L_3 = { inductor = "10 uH", between = ["n4", "gnd"] }
L_4 = { inductor = "1u", between = ["n2", "n1"] }""",
        'X_1: impedance = "n3"',
        'X_2: current = "C_1"; per = "I_s"',
        drives='I_s = { current = ["n4", "n2"] }',
    ),
}


# Windings coupled perfectly, equal and in parallel: (L_1·L_2 - M²)/(L_1 + L_2 - 2·M) is nothing over
# nothing at these values, and L_1 in the limit.
def test_result_of_nothing_over_nothing_at_its_values_is_left_open_and_has_not_failed():
    parts = (
        'R_2 = { resistor = "100R", between = ["in", "out"] }\n'
        'L_1 = { inductor = "1u", between = ["out", "gnd"] }\n'
        'L_2 = { inductor = "1u", between = ["out", "gnd"] }\n'
        'k_1 = { coupling = "1", coils = ["L_1", "L_2"] }'
    )
    results = held(stage(parts, GAIN), undecided=("nominal values",))
    both = "s*(L_1*L_2 - M**2)/(L_1 + L_2 - 2*M)"
    same(results, "A_v", f"{both}/(R_2 + {both})")
    assert results["A_v"]["gain"]["value"] is None


@pytest.mark.parametrize("name", LOST_IN_ROUNDING)
def test_right_result_does_not_fail_for_what_rounding_loses(name):
    held(LOST_IN_ROUNDING[name], undecided=("nominal values",))

"""The equations of circuits against those that a textbook would write down, sign for sign."""

import pytest
from road import DRIVE, equation, says_the_same, system_of

from derive.expressions.text import to_text
from derive.expressions.walk import names_of

LOAD = 'R_L = { resistor = "1k", between = ["out", "gnd"] }'
SOURCE = 'R_S = { resistor = "1k", between = ["in", "out"] }'


def written(parts, **more):
    return [entry.equation for entry in system_of(parts, **more).equations]


# One element of each kind beside R_S from the drive to node out and R_L from there to ground.
CASES = {
    "resistor": (
        'R_1 = { resistor = "1k", between = ["gnd", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L + v_out/R_1 = 0"],
    ),
    "capacitor": (
        'C_1 = { capacitor = "1n", between = ["in", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L + s*C_1*(v_out - V_s) = 0"],
    ),
    "inductor": (
        'L_1 = { inductor = "1m", between = ["in", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L - i_L_1 = 0", "V_s - v_out = s*L_1*i_L_1"],
    ),
    "transconductance into the node": (
        'g_m = { transconductance = "1m", flows = ["gnd", "out"], senses = ["in", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L - g_m*(V_s - v_out) = 0"],
    ),
    "transconductance out of the node": (
        'g_m = { transconductance = "1m", flows = ["out", "gnd"], senses = ["gnd", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L + g_m*(0 - v_out) = 0"],
    ),
    "current gain": (
        'k = { current_gain = "5", flows = ["out", "gnd"], senses = "R_S" }',
        ["(v_out - V_s)/R_S + v_out/R_L + k*(V_s - v_out)/R_S = 0"],
    ),
    "voltage gain": (
        'A = { voltage_gain = "5", output = ["x", "gnd"], senses = ["out", "in"] }\n'
        'R_x = { resistor = "1k", between = ["x", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L + (v_out - v_x)/R_x = 0", "v_x = A*(v_out - V_s)"],
    ),
    "transresistance": (
        'r_m = { transresistance = "5 Ω", output = ["gnd", "x"], senses = "R_L" }\n'
        'R_x = { resistor = "1k", between = ["x", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L + (v_out - v_x)/R_x = 0", "0 - v_x = r_m*v_out/R_L"],
    ),
    "ideal op amp": (
        'U = { ideal_opamp = true, output = "x", inputs = ["gnd", "out"] }\n'
        'R_x = { resistor = "1k", between = ["x", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L + (v_out - v_x)/R_x = 0", "0 = v_out"],
    ),
    "op amp with one pole": (
        'U = { opamp = true, output = "x", inputs = ["in", "out"], A_0 = "1e5", f_unity = "1 MHz" }\n'
        'R_x = { resistor = "1k", between = ["x", "out"] }',
        [
            "(v_out - V_s)/R_S + v_out/R_L + (v_out - v_x)/R_x = 0",
            "(1 + s*A_0/w_u)*v_x = A_0*(V_s - v_out)",
        ],
    ),
    "op amp as an integrator": (
        'U = { opamp = true, output = "x", inputs = ["in", "out"], w_unity = "1e6 rad/s" }\n'
        'R_x = { resistor = "1k", between = ["x", "out"] }',
        ["(v_out - V_s)/R_S + v_out/R_L + (v_out - v_x)/R_x = 0", "s/w_u*v_x = V_s - v_out"],
    ),
    "op amp with a gain and resistances": (
        'U = { opamp = true, output = "out", inputs = ["in", "out"], '
        'A_0 = "1e5", R_in = "1M", R_out = "50 Ω" }',
        [
            "(v_out - V_s)/R_S + v_out/R_L + (v_out - V_s)/R_in + (v_out - v_U_open)/R_out = 0",
            "v_U_open = A_0*(V_s - v_out)",
        ],
    ),
}


@pytest.mark.parametrize("kind", CASES)
def test_a_law_is_the_textbooks(kind):
    parts, expected = CASES[kind]
    found = written(f"{SOURCE}\n{LOAD}\n{parts}")
    assert len(found) == len(expected)
    for one, other in zip(found, expected, strict=True):
        assert says_the_same(one, equation(other)), (to_text(one), other)


def test_a_wrong_sign_would_be_seen():
    parts, _ = CASES["inductor"]
    found = written(f"{SOURCE}\n{LOAD}\n{parts}")
    assert not says_the_same(found[0], equation("(v_out - V_s)/R_S + v_out/R_L + i_L_1 = 0"))
    assert not says_the_same(found[1], equation("v_out - V_s = s*L_1*i_L_1"))


def test_coupled_coils_induce_in_each_other_dots_at_first_nodes():
    found = written(
        f"{SOURCE}\n{LOAD}\n"
        'L_1 = { inductor = "1m", between = ["out", "gnd"] }\n'
        'L_2 = { inductor = "2m", between = ["gnd", "x"] }\n'
        'R_x = { resistor = "1k", between = ["x", "gnd"] }\n'
        'K_12 = { coupling = "0.9", coils = ["L_1", "L_2"] }'
    )
    expected = [
        "(v_out - V_s)/R_S + v_out/R_L + i_L_1 = 0",
        "0 - i_L_2 + v_x/R_x = 0",
        "v_out = s*L_1*i_L_1 + s*M_K_12*i_L_2",
        "0 - v_x = s*L_2*i_L_2 + s*M_K_12*i_L_1",
    ]
    for one, other in zip(found, expected, strict=True):
        assert says_the_same(one, equation(other)), (to_text(one), other)


def test_a_chain_of_current_gains_keeps_each_current_as_an_unknown():
    found = written(
        f"{SOURCE}\n{LOAD}\n"
        'k_1 = { current_gain = "2", flows = ["gnd", "x"], senses = "R_S" }\n'
        'R_x = { resistor = "1k", between = ["x", "gnd"] }\n'
        'k_2 = { current_gain = "3", flows = ["gnd", "out"], senses = "k_1" }'
    )
    expected = [
        "(v_out - V_s)/R_S + v_out/R_L - k_2*i_k_1 = 0",
        "v_x/R_x - i_k_1 = 0",
        "i_k_1 = k_1*(V_s - v_out)/R_S",
    ]
    for one, other in zip(found, expected, strict=True):
        assert says_the_same(one, equation(other)), (to_text(one), other)


def test_nodes_joined_by_a_floating_source_share_one_law():
    system = system_of(
        f"{SOURCE}\n{LOAD}\n"
        'A = { voltage_gain = "5", output = ["x", "out"], senses = ["in", "gnd"] }\n'
        'R_x = { resistor = "1k", between = ["x", "gnd"] }'
    )
    law, gain = system.equations
    assert law.nodes == ("out", "x")
    assert law.meaning == "currents leaving nodes out and x together through R_S, R_L and R_x"
    assert says_the_same(law.equation, equation("(v_out - V_s)/R_S + v_out/R_L + v_x/R_x = 0"))
    assert says_the_same(gain.equation, equation("v_x - v_out = A*V_s"))


FLOATING = 'V_s = { voltage = ["in", "gnd"] }\nV_f = { voltage = ["out", "x"] }'
TWO_NODES = f'{SOURCE}\n{LOAD}\nR_x = {{ resistor = "1k", between = ["x", "gnd"] }}'


def test_a_floating_drive_ties_its_nodes_by_its_value():
    system = system_of(TWO_NODES, drives=FLOATING, find='voltage = "out"\nper = "V_f"')
    (law, *_) = system.equations
    # V_s is at zero, but node in is still tied to ground by it.
    assert [unknown.name for unknown in system.unknowns if unknown.quantity == "voltage"][:1] == ["v_out"]
    assert says_the_same(law.equation, equation("v_out/R_S + v_out/R_L + (v_out - V_f)/R_x = 0"))
    assert system.input == "V_f"


def test_a_drive_at_zero_still_ties_its_nodes():
    system = system_of(TWO_NODES, drives=FLOATING)
    (law, *_) = system.equations
    assert "V_f" not in names_of(law.equation)
    assert says_the_same(law.equation, equation("(v_out - V_s)/R_S + v_out/R_L + v_out/R_x = 0"))


def test_known_nodes_are_given_as_drives_make_them():
    stacked = 'V_s = { voltage = ["in", "gnd"] }\nV_2 = { voltage = ["y", "in"] }'
    parts = f'{SOURCE}\n{LOAD}\nR_y = {{ resistor = "1k", between = ["y", "out"] }}'
    both = 'voltage = "out"\nper = { V_s = "1", V_2 = "-1/3" }'
    system = system_of(parts, drives=stacked, find=both)
    assert {node: to_text(value) for node, value in system.known} == {"in": "V_s", "y": "V_s + V_2"}
    assert [(name, str(weight)) for name, weight in system.weights] == [("V_s", "1"), ("V_2", "-1/3")]
    assert system.input == "v"
    (law,) = system.equations
    expected = "(v_out - V_s)/R_S + v_out/R_L + (v_out - V_s - V_2)/R_y = 0"
    assert says_the_same(law.equation, equation(expected))


def test_weighted_current_drives_are_taken_from_a_common_current():
    drives = 'I_1 = { current = ["gnd", "out"] }\nI_2 = { current = ["out", "gnd"] }'
    system = system_of(LOAD, drives=drives, find='voltage = "out"\nper = { I_1 = "1/2", I_2 = "1/2" }')
    assert system.input == "i"
    (law,) = system.equations
    assert says_the_same(law.equation, equation("v_out/R_L - I_1 + I_2 = 0"))
    assert law.meaning == "currents leaving node out through R_L, I_1 and I_2"


def test_a_current_drive_at_zero_is_an_open_branch():
    drives = f'{DRIVE}\nI_n = {{ current = ["gnd", "out"] }}'
    (law,) = system_of(f"{SOURCE}\n{LOAD}", drives=drives).equations
    assert law.meaning == "currents leaving node out through R_S and R_L"
    assert "I_n" not in names_of(law.equation)


HYBRID_PI = """
R_g = { resistor = "600 Ω", between = ["in", "b"] }
r_pi = { resistor = "4.7k", between = ["b", "e"] }
C_pi = { capacitor = "8 pF", between = ["b", "e"] }
C_mu = { capacitor = "2 pF", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "e"], senses = ["b", "e"] }
R_E = { resistor = "100 Ω", between = ["e", "gnd"] }
R_C = { resistor = "2k2", between = ["out", "gnd"] }
"""


def test_the_words_of_a_law_name_its_node_and_every_part_at_it():
    base, emitter, collector = system_of(HYBRID_PI).equations
    assert base.meaning == "currents leaving node b through R_g, r_pi, C_pi and C_mu"
    assert emitter.meaning == "currents leaving node e through r_pi, C_pi, g_m and R_E"
    assert collector.meaning == "currents leaving node out through C_mu, g_m and R_C"
    assert [term.part for term in emitter.terms] == ["r_pi", "C_pi", "g_m", "R_E"]


def test_the_common_emitter_stage_is_the_textbooks():
    expected = [
        "(v_b - V_s)/R_g + (v_b - v_e)/r_pi + s*C_pi*(v_b - v_e) + s*C_mu*(v_b - v_out) = 0",
        "(v_e - v_b)/r_pi + s*C_pi*(v_e - v_b) - g_m*(v_b - v_e) + v_e/R_E = 0",
        "s*C_mu*(v_out - v_b) + g_m*(v_b - v_e) + v_out/R_C = 0",
    ]
    for one, other in zip(written(HYBRID_PI), expected, strict=True):
        assert says_the_same(one, equation(other)), to_text(one)


def test_passive_terms_begin_with_the_nodes_own_voltage():
    first = to_text(system_of(HYBRID_PI).equations[1].equation)
    assert first == "(v_e - v_b)/r_pi + s*C_pi*(v_e - v_b) - g_m*(v_b - v_e) + v_e/R_E = 0"

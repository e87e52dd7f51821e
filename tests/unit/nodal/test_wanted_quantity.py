"""What is sought: a node, a pair, a current or an impedance, and the equation that it may need."""

import pytest
from road import equation, says_the_same, system_of

from derive.expressions.text import to_text
from derive.nodal.matrix import matrix_form

PARTS = """
R_1 = { resistor = "1k", between = ["in", "a"] }
R_2 = { resistor = "2k", between = ["a", "b"] }
C_2 = { capacitor = "1n", between = ["b", "gnd"] }
L_1 = { inductor = "1m", between = ["b", "gnd"] }
"""


def test_a_node_that_is_unknown_anyway_needs_no_further_equation():
    system = system_of(PARTS, find='voltage = "b"\nper = "V_s"')
    assert system.wanted == "v_b"
    assert len(system.equations) == len(system.unknowns) == 3


@pytest.mark.parametrize(
    ("find", "wanted", "law"),
    [
        ('voltage = ["a", "b"]', "v_a_b", "v_a_b = v_a - v_b"),
        ('voltage = ["b", "in"]', "v_b_in", "v_b_in = v_b - V_s"),
        ('voltage = "in"', "v_in", "v_in = V_s"),
        ('current = "R_2"', "i_R_2", "i_R_2 = (v_a - v_b)/R_2"),
        ('current = "C_2"', "i_C_2", "i_C_2 = s*C_2*v_b"),
    ],
)
def test_a_quantity_that_is_no_unknown_yet_is_defined(find, wanted, law):
    system = system_of(PARTS, find=f'{find}\nper = "V_s"')
    assert system.wanted == wanted
    assert system.unknowns[-1].name == wanted
    assert says_the_same(system.equations[-1].equation, equation(law))
    assert len(system.equations) == len(system.unknowns) == 4


def test_the_current_of_a_coil_is_an_unknown_already():
    system = system_of(PARTS, find='current = "L_1"\nper = "V_s"')
    assert system.wanted == "i_L_1"
    assert len(system.equations) == 3


def test_the_current_of_a_tying_source_is_counted_through_it():
    system = system_of(
        'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
        'R_L = { resistor = "1k", between = ["out", "gnd"] }\n'
        'A = { voltage_gain = "2", output = ["x", "gnd"], senses = ["in", "gnd"] }\n'
        'R_x = { resistor = "1k", between = ["x", "out"] }\n'
        'r_m = { transresistance = "2 Ω", output = ["y", "gnd"], senses = "A" }\n'
        'R_y = { resistor = "1k", between = ["y", "out"] }'
    )
    law = next(entry for entry in system.equations if entry.nodes == ("x",))
    assert says_the_same(law.equation, equation("(v_x - v_out)/R_x + i_A = 0"))
    last = system.equations[-1]
    assert says_the_same(last.equation, equation("v_y = r_m*i_A"))


def test_an_impedance_is_seen_by_a_test_current_with_all_drives_at_zero():
    system = system_of(PARTS, find='impedance = ["a", "b"]')
    assert system.input == "I_t"
    assert [(name, str(weight)) for name, weight in system.weights] == [("I_t", "1")]
    first, second, *_ = system.equations
    # The test current enters node a and leaves from node b; node in is at ground.
    assert says_the_same(first.equation, equation("v_a/R_1 + (v_a - v_b)/R_2 - I_t = 0"))
    expected = "(v_b - v_a)/R_2 + s*C_2*v_b + i_L_1 + I_t = 0"
    assert says_the_same(second.equation, equation(expected))


def test_a_name_that_a_part_bears_gets_an_underscore():
    system = system_of(
        'v_b = { resistor = "1k", between = ["in", "a"] }\n'
        'I_t = { resistor = "2k", between = ["a", "gnd"] }',
        find='impedance = "a"',
    )
    assert system.wanted == "v_a"
    assert system.input == "I_t_"


def test_the_matrix_is_symmetrical_for_passive_parts_and_shows_admittances():
    form = matrix_form(system_of(PARTS, find='voltage = "b"\nper = "V_s"'))
    rows = [[to_text(entry) for entry in row] for row in form.rows]
    assert rows == [
        ["1/R_1 + 1/R_2", "-1/R_2", "0"],
        ["-1/R_2", "1/R_2 + s*C_2", "1"],
        ["0", "1", "-s*L_1"],
    ]
    assert [to_text(name) for name in form.unknowns] == ["v_a", "v_b", "i_L_1"]
    assert [to_text(entry) for entry in form.right] == ["1/R_1*V_s", "0", "0"]

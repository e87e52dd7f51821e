"""Parts, drives, nodes and wanted quantities may bear any name, that of a function among them."""

from __future__ import annotations

from fractions import Fraction

import pytest
from holding import RC, V_S, held, same, stage
from ledger_arithmetic import RATIONALS, LedgerResult

NAMES = [
    *("GF", "E", "I", "S", "Q", "O", "C", "N", "K", "a_1", "b_1", "b_2", "v_out", "i_x"),
    *("pi_1", "pi", "lambda", "sqrt", "oo", "zoo", "nan", "inf", "e", "j", "if", "None", "True", "exp"),
    *("H", "A_v2", "D", "M_1", "omega", "beta", "gamma_x", "tau", "R", "per", "kHz", "x__y", "R_"),
]


@pytest.mark.parametrize("name", NAMES)
def test_a_part_may_bear_any_name(name):
    parts = (
        f'{name} = {{ resistor = "1k", between = ["in", "x"] }}\n'
        'C_1 = { capacitor = "1n", between = ["x", "gnd"] }\n'
        'R_9 = { resistor = "2k", between = ["x", "gnd"] }'
    )
    results = held(stage(parts, 'A_v: voltage = "x"; per = "V_s"', 'Z_o: impedance = "x"'))
    values = {name: 11, "C_1": 13, "R_9": 17}
    values = {key: Fraction(value) for key, value in values.items()}
    together = 1 / (Fraction(1, 11) + Fraction(1, 17) + 13 * 19)
    for find, expected in (("A_v", together / 11), ("Z_o", together)):
        response = LedgerResult(results[find]).at(values, RATIONALS)
        assert response.at(Fraction(19)) == expected


@pytest.mark.parametrize("name", ["K", "N", "D", "a_1", "b_1", "E", "I", "lambda", "V", "H", "gain"])
def test_a_find_and_a_drive_may_bear_any_name(name):
    text = stage(RC, f'{name}: voltage = "out"; per = "V_s"')
    same(held(text), name, "1/(1 + s*R_1*C_1)")
    text = stage(RC, f'A_v: voltage = "out"; per = "{name}"', drives=V_S.replace("V_s", name))
    same(held(text), "A_v", "1/(1 + s*R_1*C_1)")


@pytest.mark.parametrize("node", ["N", "K", "E", "I", "lambda", "s1", "b_1", "in", "x_1", "pi"])
def test_a_node_may_bear_any_name(node):
    parts = RC.replace('"out"', f'"{node}"')
    drives = V_S if node != "in" else V_S.replace('"in"', '"src"')
    parts = parts if node != "in" else RC.replace('"in"', '"src"').replace('"out"', '"in"')
    text = stage(parts, f'A_v: voltage = "{node}"; per = "V_s"', drives=drives)
    same(held(text), "A_v", "1/(1 + s*R_1*C_1)")

"""The printed matrix is held against the circuit: a wrong entry anywhere is found."""

from dataclasses import replace

import pytest

from derive.bands.restrict import restrict
from derive.check.roads import steps
from derive.devices.linearise import linearise
from derive.expressions.tree import ZERO, Negative
from derive.pipeline import solve
from derive.reading.read import parse

STAGE = """
[sheet]
title = "Degenerated stage"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S  = { resistor = "1k", between = ["in", "b"] }
r_pi = { resistor = "5k", between = ["b", "e"] }
C_mu = { capacitor = "3p0", between = ["b", "c"] }
g_m  = { transconductance = "40 mS", flows = ["c", "e"], senses = ["b", "e"] }
R_E  = { resistor = "100R", between = ["e", "gnd"] }
R_C  = { resistor = "4k7", between = ["c", "gnd"] }
[find.A_v]
voltage = "c"
per = "V_s"
"""


@pytest.fixture(scope="module")
def solution():
    circuit = linearise(parse(STAGE, "stage.toml"))
    return solve(restrict(circuit, "full"), circuit.topology.finds[0])


def with_matrix(solution, matrix):
    system = replace(solution.derivation.system, matrix=matrix)
    return replace(solution, derivation=replace(solution.derivation, system=system))


def test_right_matrix_passes(solution):
    assert solution.derivation.system.matrix is not None
    assert steps.judge(solution).passed is True


def test_sign_turned_in_any_entry_is_found(solution):
    matrix = solution.derivation.system.matrix
    turned = 0
    for i, row in enumerate(matrix.rows):
        for j, entry in enumerate(row):
            if entry == ZERO:
                continue
            changed = (*row[:j], Negative(entry), *row[j + 1 :])
            rows = (*matrix.rows[:i], changed, *matrix.rows[i + 1 :])
            verdict = steps.judge(with_matrix(solution, replace(matrix, rows=rows)))
            assert verdict.passed is False
            assert verdict.measured == f"row {i + 1} of the matrix is not true of the circuit"
            turned += 1
    assert turned >= 7


def test_wrong_right_side_is_found(solution):
    matrix = solution.derivation.system.matrix
    right = (Negative(matrix.right[0]), *matrix.right[1:])
    assert steps.judge(with_matrix(solution, replace(matrix, right=right))).passed is False

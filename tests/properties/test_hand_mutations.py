"""Slips in true lines of the cases: what changes a value is refused, what does not is accepted, most are mended."""

from __future__ import annotations

import random

from hand_mutations import (
    Exactly,
    hand_file,
    same_claim,
    slips,
    solutions,
    true_lines,
    with_other_node,
)

from derive.handcheck.check_lines import check_lines

COUNT = 60
CASES = ("trio_follower", "level_averager")


def test_a_slip_in_a_true_line_is_refused_and_nine_in_ten_are_mended():
    chance = random.Random(11)
    lines = [(s, line) for case in CASES for s in solutions(case) for line in true_lines(s)]
    for solution, line in lines:
        assert check_lines(solution, hand_file(line)).verdicts[0].passed is True
    made = mended = 0
    while made < COUNT:
        solution, line = chance.choice(lines)
        slip = with_other_node(line, solution, chance) if chance.random() < 0.1 else None
        slip = slip or next(slips(line, solution, chance), None)
        if slip is None:
            continue
        exact = Exactly(solution, made)
        away = exact.difference(slip.line)
        if away is None:
            continue
        verdict = check_lines(solution, hand_file(slip.line)).verdicts[0]
        assert verdict.passed is (away == 0)
        if away:
            made += 1
            mended += bool(verdict.edits) and same_claim(exact, verdict.edits[0].line, line)
    assert mended >= 0.9 * COUNT

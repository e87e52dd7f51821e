"""How the checks went, in words: what has nothing to judge counts neither as passed nor as left open."""

from __future__ import annotations

from dataclasses import replace

from sheet_stages import HEAD, LOW_PASS, outcome_of, shown, view_of

from derive.check.roads import estimates, miller, readable, time_constants
from derive.check.verdict import NOT_ASKED, Verdict
from derive.sheet.plain import line_text
from derive.sheet.sections import checks
from derive.sheet.tally import kind_of, tally_of

DIVIDER = (
    HEAD
    + 'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
    + 'R_2 = { resistor = "3k", between = ["out", "gnd"] }\n'
    + '[find.A_v]\nvoltage = "out"\nper = "V_s"\n'
)


def verdict(passed, measured="", *, applies=True, name="a check"):
    return Verdict(name, "by hand", passed, measured, "", applies)


def test_each_kind_of_verdict_has_its_word():
    kinds = (
        verdict(True),
        verdict(False),
        verdict(None),
        verdict(None, NOT_ASKED),
        verdict(None, applies=False),
    )
    assert [kind_of(each) for each in kinds] == ["pass", "fail", "open", "not asked", "n/a"]
    tally = tally_of(kinds)
    assert tally.words == "1 check passed, 1 failed, 1 left open; a check not asked"
    assert tally.brief == "1 passed, 1 failed, 1 left open"


def test_a_check_that_failed_is_never_put_aside_as_one_that_does_not_apply():
    assert kind_of(verdict(False, NOT_ASKED, applies=False)) == "fail"
    assert tally_of([verdict(False, NOT_ASKED, applies=False)]).failed == 1


def test_roads_say_where_they_have_nothing_to_judge():
    solution = view_of(DIVIDER).result.solution
    bare = replace(solution, time_constants=None, miller=(), estimates=None, readable=None)
    for road in (time_constants, miller, readable, estimates):
        found = road.judge(bare)
        assert (found.passed, found.applies) == (None, False)
    whole = view_of(LOW_PASS).result.solution
    assert all(road.judge(whole).applies for road in (time_constants, readable, estimates))


def test_a_constant_counts_the_checks_that_it_has():
    # Seven of the eleven roads need no reactance and no other engine; the estimates have limits to judge.
    passed = sum(v.passed is True for v in outcome_of(DIVIDER).results[0].verdicts)
    assert f"\n{passed} checks passed; another engine not asked\n" in shown(DIVIDER)
    assert "left open" not in shown(DIVIDER)
    assert "  – time constants: n/a, none were given\n" in shown(DIVIDER)


def test_the_table_of_checks_marks_them():
    (section,) = checks.compose(outcome_of(DIVIDER))
    rows = {line_text(row[0]): line_text(row[-1]) for row in section.blocks[1].rows}
    assert rows["time constants"] == rows["Miller's theorem"] == "n/a"
    assert rows["another engine"] == "not asked"
    assert rows["every step"] == "pass"

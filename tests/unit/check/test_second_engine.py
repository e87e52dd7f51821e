"""The second engine: what is asked, and what becomes of it where it does not answer."""

import re
import sys
import time
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

from hand_solutions import CIRCUITS, solution_of, system_of

from derive.check import child as child_module
from derive.check.child import Child, answers_of, ask
from derive.check.excitation import excite
from derive.check.judge import check, check_all, find_roads
from derive.check.netlist import write_netlist
from derive.check.points import Stream, values_exact
from derive.check.roads import other_engine
from derive.devices.elements import Coupling, Resistor

WORDS = re.compile(r"[A-Z]+\d+( ([A-Z]*\d+|s|A|\{-?\d+/\d+\}|\{\d\}))+")

# The place of the other engine among the roads.
ENGINE = [road.key for road in find_roads()].index("other_engine")


def test_a_netlist_holds_numbers_and_its_own_names_only():
    for name, circuit in CIRCUITS.items():
        system = system_of(circuit, name)
        values = values_exact(system.small_signal, Stream(name))
        netlist = write_netlist(system.small_signal, excite(system), values)
        for line in netlist.lines:
            assert WORDS.fullmatch(line), line
        names = [line.split()[0] for line in netlist.lines]
        assert len(set(names)) == len(names)


def test_hostile_names_never_reach_the_engine():
    solution = solution_of("low-pass")
    circuit = solution.derivation.system.small_signal
    elements = (
        Resistor("exit", "exit", ("in", "__class__"), "R_1"),
        replace(circuit.elements[1], between=("__class__", "gnd")),
    )
    system = replace(solution.derivation.system, small_signal=replace(circuit, elements=elements))
    values = {"R_1": Fraction(2), "C_1": Fraction(3)}
    find = replace(system.find, nodes=("__class__", "gnd"))
    system = replace(system, find=find)
    text = "\n".join(write_netlist(system.small_signal, excite(system), values).lines)
    assert "class" not in text
    assert "exit" not in text


def test_an_engine_that_is_too_slow_leaves_the_check_undecided():
    verdict = check(solution_of("low-pass"), lcapy_seconds=0.02)[ENGINE]
    assert verdict.passed is None
    assert verdict.measured == "not finished in 0.02 s"


def test_a_process_that_does_not_answer_is_ended(monkeypatch, tmp_path):
    script = tmp_path / "sleeper.py"
    script.write_text(
        'import time\nprint(\'{"top": ["1"], "bottom": ["1"]}\', flush=True)\ntime.sleep(60)\n'
    )
    monkeypatch.setattr(child_module, "SCRIPT", script)
    monkeypatch.setattr(child_module, "GRACE_SECONDS", 0.5)
    began = time.monotonic()
    child = ask([{}, {}], 0.25)
    assert answers_of(child) == [{"top": ["1"], "bottom": ["1"]}, {"late": True}]
    assert time.monotonic() - began < 20
    assert child.process.returncode is not None


def test_a_late_question_does_not_take_the_next_one_with_it():
    child = ask([{"lines": ["R1 1 0 {1}"], "node": "1"}] * 2, 0.02)
    assert answers_of(child) == [{"late": True}, {"late": True}]
    assert child.process.returncode == 0


def test_a_process_that_breaks_is_reported_in_words(monkeypatch, tmp_path):
    script = tmp_path / "breaker.py"
    script.write_text("raise SystemExit(3)\n")
    monkeypatch.setattr(child_module, "SCRIPT", script)
    verdict = check(solution_of("low-pass"), lcapy_seconds=5)[ENGINE]
    assert verdict.passed is None
    assert verdict.measured == "not finished: the engine ended without an answer"


def test_an_answer_that_is_no_json_is_no_answer(monkeypatch, tmp_path):
    script = tmp_path / "babbler.py"
    script.write_text("print('hello')\n")
    monkeypatch.setattr(child_module, "SCRIPT", script)
    answer = answers_of(ask([{}], 5))[0]
    assert answer == {"error": "the engine ended without an answer"}


def test_a_circuit_that_cannot_be_written_is_not_tried_and_spoils_no_other():
    good = solution_of("low-pass")
    system = good.derivation.system
    lost = Coupling("k", "k", ("L_1", "L_2"), "k", "M")
    circuit = replace(system.small_signal, elements=(*system.small_signal.elements, lost))
    bad = replace(good, derivation=replace(good.derivation, system=replace(system, small_signal=circuit)))
    verdicts = check_all([bad, good], lcapy_seconds=60)
    assert verdicts[0][ENGINE].passed is None
    assert verdicts[0][ENGINE].measured.startswith("not tried: ")
    assert verdicts[0][0].passed is False  # the tableau cannot be written either
    assert verdicts[1][ENGINE].passed is True


def test_an_engine_that_cannot_be_started_is_a_failed_check_and_no_crash(monkeypatch):
    monkeypatch.setattr(sys, "executable", "/nowhere/python")
    verdict = check(solution_of("low-pass"))[ENGINE]
    assert verdict.passed is False
    assert verdict.measured.startswith("could not be worked: ")


def test_the_engine_is_an_undecided_check_where_a_coefficient_cannot_be_formed():
    solution = solution_of("low-pass")
    verdict = other_engine.compare(
        solution,
        {"R_1": Fraction(2), "C_1": Fraction(3)},
        {"top": ["1"], "bottom": ["1", "6"]},
    )
    assert verdict.passed is True
    verdict = other_engine.compare(
        solution,
        {"R_1": Fraction(2), "C_1": Fraction(3)},
        {"top": ["2", "12"], "bottom": ["2", "24", "72"]},  # the same after cancelling 2 + 12·s
    )
    assert verdict.passed is True


def test_the_child_process_imports_nothing_of_its_package():
    text = Path(child_module.SCRIPT).read_text(encoding="utf-8")
    assert "from derive" not in text
    assert "import derive" not in text


def test_nothing_is_begun_for_no_solutions():
    assert check_all([]) == ()
    assert isinstance(other_engine.start([]).child, Child | None)
    assert find_roads()[ENGINE].start is not None

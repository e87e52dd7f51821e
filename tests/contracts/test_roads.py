"""What every road of checking must do, whoever wrote it."""

import ast
import importlib.util
import sys
from dataclasses import replace
from pathlib import Path

import pytest

import derive.check
from derive.bands.restrict import restrict
from derive.check.protocol import find_roads, refuse_duplicates
from derive.check.verdict import Verdict
from derive.devices.linearise import linearise
from derive.expressions.tree import Name, Product
from derive.pipeline import solve
from derive.reading.read import parse

HAND = Path(__file__).parents[1] / "unit" / "check" / "hand_solutions.py"


def load_hand_solutions():
    if "hand_solutions" not in sys.modules:
        spec = importlib.util.spec_from_file_location("hand_solutions", HAND)
        module = importlib.util.module_from_spec(spec)
        sys.modules["hand_solutions"] = module
        spec.loader.exec_module(module)
    return sys.modules["hand_solutions"]


hand = load_hand_solutions()
ROADS = find_roads()


# These judge what is said of a result beyond the result itself; each is made to fail in its own tests.
WORDS = ("readable", "time_constants", "miller", "estimates", "assumptions", "short_forms")
AMPLIFIER = """
[sheet]
title = "Common-emitter stage"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S = { resistor = "1k", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
C_pi = { capacitor = "12p", between = ["b", "gnd"] }
C_mu = { capacitor = "2p", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_L = { resistor = "4k7", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
[[assume]]
that = "g_m*R_L >> 1"
[budget]
simplify = true
"""


def amplifier():
    circuit = linearise(parse(AMPLIFIER, "stage.toml"), {})
    return solve(restrict(circuit, "full"), circuit.topology.finds[0])


class Untouchable:
    """Stands where a road must not look: any use of it is an error."""

    def __getattribute__(self, name):
        raise AssertionError(f"a road looked at what the derivation computed: {name}")


def sealed(solution):
    derivation = replace(solution.derivation, numerator=Untouchable(), denominator=Untouchable())
    system = replace(derivation.system, ring=Untouchable())
    return replace(solution, derivation=replace(derivation, system=system))


@pytest.fixture(params=ROADS, ids=[road.key for road in ROADS])
def road(request):
    return request.param


# What judges the result itself.
of_results = pytest.mark.parametrize(
    "judging", [road for road in ROADS if road.key not in WORDS], ids=lambda road: road.key
)


def test_the_roads_are_found():
    assert [road.key for road in ROADS] == [
        "identity",
        "generic",
        "nominal",
        "asymptotes",
        "dimensions",
        "steps",
        "other_engine",
        *WORDS,
    ]


def test_two_roads_of_one_name_or_place_are_refused(road):
    others = [other for other in ROADS if other is not road]
    with pytest.raises(ValueError, match=road.key):
        refuse_duplicates([*others, road, replace(road, order=999)])
    with pytest.raises(ValueError, match=road.key):
        refuse_duplicates([*others, road, replace(road, name="another name")])


def test_a_right_solution_passes_without_a_look_at_the_solvers_polynomials(road):
    by_hand = "emitter follower at high frequency"
    right = amplifier() if road.key in WORDS else hand.solution_of(by_hand)
    verdict = road.judge(sealed(right))
    assert isinstance(verdict, Verdict)
    assert (verdict.name, verdict.method) == (road.name, road.method)
    assert verdict.passed is True
    assert verdict.measured
    assert verdict.limit


@pytest.mark.parametrize("key", WORDS)
def test_where_nothing_more_is_said_there_is_nothing_to_judge(key):
    road = next(road for road in ROADS if road.key == key)
    verdict = road.judge(sealed(hand.solution_of("emitter follower at high frequency")))
    assert (verdict.passed, verdict.applies) == (None, False)
    assert verdict.measured


@of_results
def test_a_wrong_gain_fails(judging):
    right = hand.solution_of("emitter follower at high frequency")
    form = replace(right.form, gain=Product((right.form.gain, Name("R_S"))))
    assert judging.judge(sealed(replace(right, form=form))).passed is False


@of_results
def test_a_response_of_zero_is_judged_like_any_other(judging):
    zero = hand.solution_of("node that the drive does not reach")
    assert judging.judge(sealed(zero)).passed is True


def test_a_road_that_works_beside_the_others_can_be_begun_and_ended(road):
    assert (road.start is None) == (road.finish is None)


def test_no_check_uses_what_the_solution_was_made_with():
    allowed = {"derive.nodal.system", "derive.eliminate.derivation"}
    for path in sorted(Path(derive.check.__file__).parent.rglob("*.py")):
        if path.name == "verdict.py":
            continue
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            modules = [node.module or ""] if isinstance(node, ast.ImportFrom) else []
            if isinstance(node, ast.Import):
                modules = [alias.name for alias in node.names]
            for module in modules:
                forbidden = ("derive.nodal", "derive.eliminate", "derive.algebra")
                assert module in allowed or not module.startswith(forbidden), (path.name, module)

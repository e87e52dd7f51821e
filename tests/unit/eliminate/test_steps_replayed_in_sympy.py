"""Every rule of the derivation, on a circuit that calls for it, replayed as an identity in SymPy."""

from dataclasses import replace
from fractions import Fraction

import pytest
import sympy
from road import derivation_of, solution_of, system_of

from derive.eliminate import rows
from derive.eliminate.derivation import Certificate, Nested
from derive.eliminate.nested import eliminate_nested
from derive.eliminate.plan import plan
from derive.expressions.tree import ONE, Equation, Name, Number, Sum
from derive.expressions.walk import evaluate, names_of
from derive.sheet.wording import SENTENCES

DIVIDER = """
R_1 = { resistor = "1k", between = ["in", "out"] }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
"""
STAGE = """
R_g = { resistor = "600 Ω", between = ["in", "b"] }
r_pi = { resistor = "4.7k", between = ["b", "e"] }
C_mu = { capacitor = "2 pF", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "e"], senses = ["b", "e"] }
R_E = { resistor = "100 Ω", between = ["e", "gnd"] }
R_C = { resistor = "2k2", between = ["out", "gnd"] }
"""
LADDER = """
R_1 = { resistor = "1k", between = ["in", "a"] }
C_1 = { capacitor = "1n", between = ["a", "gnd"] }
R_2 = { resistor = "1k", between = ["a", "b"] }
C_2 = { capacitor = "1n", between = ["b", "gnd"] }
R_3 = { resistor = "1k", between = ["b", "out"] }
C_3 = { capacitor = "1n", between = ["out", "gnd"] }
"""
# A second branch from the drive to ground: what it does to node c never reaches the output's ratio.
COMMON = """
A = { voltage_gain = "2", output = ["b", "gnd"], senses = ["a", "gnd"] }
R_1 = { resistor = "1k", between = ["in", "a"] }
R_2 = { resistor = "1k", between = ["a", "gnd"] }
C_1 = { capacitor = "1n", between = ["a", "c"] }
R_3 = { resistor = "1k", between = ["c", "out"] }
R_4 = { resistor = "1k", between = ["out", "gnd"] }
C_4 = { capacitor = "1n", between = ["b", "c"] }
"""
INVERTING = """
R_1 = { resistor = "1k", between = ["in", "m"] }
R_2 = { resistor = "10k", between = ["m", "out"] }
U = { ideal_opamp = true, output = "out", inputs = ["gnd", "m"] }
"""
COILS = """
R_1 = { resistor = "1k", between = ["in", "a"] }
L_1 = { inductor = "1m", between = ["a", "gnd"] }
L_2 = { inductor = "2m", between = ["out", "gnd"] }
K_1 = { coupling = "0.9", coils = ["L_1", "L_2"] }
R_L = { resistor = "50 Ω", between = ["out", "gnd"] }
"""
BRIDGE = """
R_1 = { resistor = "1k", between = ["in", "a"] }
R_2 = { resistor = "1k", between = ["a", "gnd"] }
R_3 = { resistor = "1k", between = ["in", "b"] }
R_4 = { resistor = "1k", between = ["b", "gnd"] }
R_5 = { resistor = "1k", between = ["a", "b"] }
"""
PAIR = 'V_s = { voltage = ["in", "gnd"] }\nV_2 = { voltage = ["in2", "gnd"] }'
SUMMING = """
R_1 = { resistor = "1k", between = ["in", "out"] }
R_2 = { resistor = "1k", between = ["in2", "out"] }
"""
# No current flows in the feedback branch, whose admittance so cancels from the ratio.
BUFFER = """
R_f = { resistor = "1k", between = ["m", "out"] }
C_f = { capacitor = "1n", between = ["m", "out"] }
U = { ideal_opamp = true, output = "out", inputs = ["in", "m"] }
R_L = { resistor = "1k", between = ["out", "gnd"] }
"""
WITNESSES = {
    "buffer": (BUFFER, {}),
    "low-pass": (DIVIDER, {}),
    "amplifying stage": (STAGE, {}),
    "ladder": (LADDER, {}),
    "two ways to one node": (COMMON, {}),
    "inverting op amp": (INVERTING, {}),
    "transformer": (COILS, {}),
    "bridge, between its arms": (BRIDGE, {"find": 'voltage = ["a", "b"]\nper = "V_s"'}),
    "bridge, impedance": (BRIDGE, {"find": 'impedance = ["a", "b"]'}),
    "current of a ladder": (LADDER, {"find": 'current = "C_2"\nper = "V_s"'}),
    "weighted drives": (
        SUMMING,
        {"drives": PAIR, "find": 'voltage = "out"\nper = { V_s = "1/2", V_2 = "-1/3" }'},
    ),
}


def sympy_of(expression):
    symbols = {name: sympy.Symbol(name) for name in names_of(expression)}
    rational = evaluate(
        expression, symbols, lambda value: sympy.Rational(value.numerator, value.denominator)
    )
    return sympy.sympify(rational)


def gap(equation):
    return sympy_of(equation.left) - sympy_of(equation.right)


def follows(step, derivation):
    """Whether the step's certificate is an identity, once names are replaced by their definitions."""
    equations = {earlier.number: earlier.equation for earlier in derivation.steps}
    total = sum(
        sympy_of(multiplier) * gap(equations[number]) for number, multiplier in step.certificate.uses
    )
    difference = total - sympy_of(step.certificate.divisor) * gap(step.equation)
    defined = [earlier for earlier in derivation.steps if earlier.defines is not None]
    for definition in reversed(defined):
        name = sympy.Symbol(definition.defines)
        difference = difference.subs(name, sympy_of(definition.equation.right))
    return sympy.expand(sympy.numer(sympy.together(difference))) == 0


@pytest.fixture(params=WITNESSES, scope="module")
def derived(request):
    parts, more = WITNESSES[request.param]
    return solution_of(parts, **more)[1]


def test_every_certificate_is_an_identity(derived):
    certified = [step for step in derived.steps if step.certificate is not None]
    assert len(certified) >= 3
    for step in certified:
        assert all(number < step.number for number, _ in step.certificate.uses)
        assert follows(step, derived), (step.number, step.rule)
        assert sympy.simplify(sympy_of(step.certificate.divisor)) != 0


def test_every_certificate_breaks_when_its_equation_is_altered(derived):
    for step in derived.steps:
        if step.certificate is not None:
            more = Sum((step.equation.left, Name("V_wrong")))
            wrong = replace(step, equation=Equation(more, step.equation.right))
            assert not follows(wrong, derived), (step.number, step.rule)


def test_every_certificate_breaks_when_a_multiplier_or_divisor_is_altered(derived):
    equations = {step.number: step.equation for step in derived.steps}
    for step in derived.steps:
        if step.certificate is None or gap(step.equation) == 0:
            continue
        uses, divisor = step.certificate.uses, step.certificate.divisor
        two = Sum((divisor, Number(Fraction(7, 3))))
        assert not follows(replace(step, certificate=Certificate(uses, two)), derived)
        (number, multiplier), *rest = uses
        if gap(equations[number]) != 0:
            other = (number, Sum((multiplier, Number(Fraction(7, 3)))))
            assert not follows(replace(step, certificate=Certificate((other, *rest), divisor)), derived)


def test_every_divisor_that_is_no_number_is_stated_not_to_be_zero(derived):
    for step in derived.steps:
        if step.rule in ("solve for one unknown", "form the ratio", "cancel a common factor"):
            divisor = sympy_of(step.certificate.divisor)
            inner = divisor.subs(sympy.Symbol(derived.system.input), 1)
            assert (step.nonzero is not None) == bool(inner.free_symbols)
            if step.nonzero is not None:
                assert sympy.simplify(sympy_of(step.nonzero) / inner).is_number


def test_the_steps_number_from_one_and_end_with_what_is_sought(derived):
    assert [step.number for step in derived.steps] == list(range(1, len(derived.steps) + 1))
    assert derived.steps[-1].equation.left == Name(derived.system.find.name)


def test_numerator_and_denominator_are_the_whole_systems_solution_in_sympy(derived):
    system = derived.system
    names = [sympy.Symbol(unknown.name) for unknown in system.unknowns]
    given = {
        sympy.Symbol(name): sympy.Rational(weight.numerator, weight.denominator)
        for name, weight in system.weights
    }
    drives = {
        sympy.Symbol(drive.name): 0
        for drive in system.small_signal.drives
        if sympy.Symbol(drive.name) not in given
    }
    laws = [gap(entry.equation).subs({**given, **drives}) for entry in system.equations]
    solved = sympy.solve(laws, names, dict=True)[0][sympy.Symbol(system.wanted)]
    ring = system.ring.plain()
    ratio = 1
    for polynomial, sign in ((derived.numerator, 1), (derived.denominator, -1)):
        total = 0
        for exponents, value in polynomial.to_dict().items():
            term = sympy.Integer(int(value))
            for name, power in zip(ring.names, map(int, exponents), strict=True):
                term *= sympy.Symbol(name) ** power
            total += term
        ratio *= total**sign
    assert sympy.simplify(ratio - solved) == 0
    assert sympy.gcd(*sympy.fraction(ratio)) == 1


def test_a_factor_not_sought_in_long_rows_is_cancelled_at_the_end(monkeypatch):
    monkeypatch.setattr(rows, "FACTOR_LIMIT", 0)
    derivation = derivation_of(BUFFER)
    last = derivation.steps[-1]
    assert last.rule == "reduce the ratio"
    assert follows(last, derivation)
    assert last.equation.right == ONE
    assert names_of(derivation.steps[-2].equation.right) == ("s", "R_f", "C_f")


def test_every_rule_occurs_in_some_witness(monkeypatch):
    seen = {
        step.rule for parts, more in WITNESSES.values() for step in solution_of(parts, **more)[1].steps
    }
    monkeypatch.setattr(rows, "FACTOR_LIMIT", 0)
    seen |= {step.rule for step in derivation_of(BUFFER).steps}
    system = system_of(LADDER)
    seen |= {step.rule for step in eliminate_nested(system, plan(system), Nested(None)).steps}
    assert sorted(set(SENTENCES) - seen) == []


def test_a_zero_response_still_ends_in_a_ratio():
    derivation = derivation_of(
        'R_1 = { resistor = "1k", between = ["in", "gnd"] }\n'
        'R_2 = { resistor = "1k", between = ["out", "gnd"] }\n'
        'R_3 = { resistor = "1k", between = ["out", "x"] }\n'
        'R_4 = { resistor = "1k", between = ["x", "gnd"] }'
    )
    assert derivation.numerator == 0
    assert derivation.denominator == 1

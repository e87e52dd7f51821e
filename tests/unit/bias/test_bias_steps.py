"""The steps of the bias replayed as identities in SymPy, and by the bias's own replay."""

from dataclasses import replace
from fractions import Fraction

import pytest
import sympy
from biased import topology
from stages import STAGES

from derive.bias.currents import by_constant_voltages
from derive.bias.dc_circuit import dc_circuit
from derive.bias.replay import Residue, broken_steps
from derive.bias.response import current_of
from derive.bias.solve import operating_point
from derive.bias.steps import ROOT, SENTENCES
from derive.eliminate.derivation import Certificate
from derive.expressions.tree import ONE, Equation, Name, Number, Sum
from derive.expressions.walk import evaluate, names_of
from derive.sheet import wording

STAGE_NAMES = sorted(STAGES)


def point_of(name):
    return operating_point(topology(*STAGES[name]))


def in_sympy(expression):
    symbols = {name: sympy.Symbol(name, positive=True) for name in names_of(expression)}
    return evaluate(expression, symbols, lambda n: sympy.Rational(n.numerator, n.denominator), sympy.sqrt)


def gap(equation):
    return in_sympy(equation.left) - in_sympy(equation.right)


def follows(step, steps):
    """Whether a step's certificate is an identity, definitions being equations like any other."""
    total = -in_sympy(step.certificate.divisor) * gap(step.equation)
    for number, multiplier in step.certificate.uses:
        total += in_sympy(multiplier) * gap(steps[number - 1].equation)
    definitions = {
        sympy.Symbol(other.defines, positive=True): in_sympy(other.equation.right)
        for other in steps
        if other.defines is not None
    }
    for _ in definitions:
        total = total.subs(definitions)
    return sympy.simplify(total) == 0


@pytest.mark.parametrize("name", STAGE_NAMES)
def test_every_step_follows_from_those_that_it_uses(name):
    for found in point_of(name).derivations:
        assert found.steps
        assert [step.number for step in found.steps] == list(range(1, len(found.steps) + 1))
        for step in found.steps:
            if step.certificate is None:
                assert step.row is not None or step.defines is not None
            else:
                assert all(number < step.number for number, _ in step.certificate.uses)
                assert follows(step, found.steps), step


@pytest.mark.parametrize("name", STAGE_NAMES)
def test_a_step_with_another_number_in_it_does_not_follow(name):
    for found in point_of(name).derivations:
        for step in found.steps:
            if step.certificate is not None:
                wrong = Equation(step.equation.left, Sum((step.equation.right, Number(Fraction(1)))))
                assert not follows(replace(step, equation=wrong), found.steps)


@pytest.mark.parametrize("name", STAGE_NAMES)
def test_the_last_step_gives_the_current_at_the_nominal_values(name):
    file = topology(*STAGES[name])
    point = operating_point(file)
    values = {symbol.name: symbol.value for symbol in dc_circuit(file).circuit.symbols}
    for found, device in zip(point.derivations, point.devices, strict=True):
        symbols = found.derivation.system.small_signal.symbols
        values |= {symbol.name: symbol.value for symbol in symbols}
        for step in found.steps:
            if step.defines is not None and set(names_of(step.equation.right)) <= {
                name for name, value in values.items() if value is not None
            }:
                values[step.defines] = evaluate(step.equation.right, values, Fraction)
        floats = {name: float(value) for name, value in values.items() if value is not None}
        assert found.result.left == Name(found.symbol)
        result = evaluate(found.result.right, floats, float)
        assert result == pytest.approx(float(device.current), rel=1e-12)


@pytest.mark.parametrize("name", STAGE_NAMES)
def test_the_input_of_the_road_is_not_shown(name):
    file = topology(*STAGES[name])
    known = {symbol.name for symbol in dc_circuit(file).circuit.symbols}
    for found in operating_point(file).derivations:
        known |= {symbol.name for symbol in found.derivation.system.small_signal.symbols}
        known |= {unknown.name for unknown in found.derivation.system.unknowns}
        known |= {step.defines for step in found.steps} | {found.symbol}
        for step in found.steps:
            shown = set(names_of(step.equation))
            if step.certificate is not None:
                shown |= set(names_of(step.certificate.divisor))
            assert shown <= known | {"V_ov"}
            assert "u" not in shown


@pytest.mark.parametrize("name", STAGE_NAMES)
def test_no_step_is_broken(name):
    assert not any(found.broken for found in point_of(name).derivations)


def divider_values():
    dc = dc_circuit(topology(*STAGES["divider"]))
    (found,) = by_constant_voltages(dc).derivations
    values = current_of(dc, dc.devices[0]).shown_values({})
    assert broken_steps(found, values) == ()
    return found, values


def altered(found, number, **changes):
    steps = list(found.steps)
    steps[number - 1] = replace(steps[number - 1], **changes)
    return replace(found, steps=tuple(steps))


@pytest.mark.parametrize("place", range(1, 17))
def test_the_replay_sees_any_altered_equation(place):
    found, values = divider_values()
    equation = found.steps[place - 1].equation
    wrong = Equation(equation.left, Sum((equation.right, Name("V_BE"))))
    broken = dict(broken_steps(altered(found, place, equation=wrong), values))
    # A definition may say anything; what is written with it is then wrong.
    assert (len(found.steps) if found.steps[place - 1].defines else place) in broken


def test_the_replay_sees_a_step_without_reason_a_false_one_and_one_out_of_order():
    found, values = divider_values()
    last = found.steps[-1]
    nothing = broken_steps(altered(found, last.number, certificate=None), values)
    assert nothing == ((last.number, "it gives no reason"),)
    by_zero = Certificate(last.certificate.uses, Sum((ONE, Number(Fraction(-1)))))
    assert dict(broken_steps(altered(found, last.number, certificate=by_zero), values)) == {
        last.number: "its divisor is zero"
    }
    ahead = Certificate(((last.number, ONE),), ONE)
    why = dict(broken_steps(altered(found, 4, certificate=ahead), values))
    assert "does not come before it" in why[4]
    assert broken_steps(replace(found, steps=found.steps[:-1][::-1]), values)
    other = dict(broken_steps(replace(found, symbol="I_X"), values))
    assert other == {last.number: "it does not give I_X"}


def test_a_definition_must_define_its_name():
    found, values = divider_values()
    step = next(step for step in found.steps if step.defines == "R_B")
    wrong = altered(found, step.number, defines="R_X")
    assert step.number in dict(broken_steps(wrong, values))


def test_a_value_that_is_not_that_of_the_circuit_is_seen():
    found, values = divider_values()
    assert broken_steps(found, {**values, "V_b": values["V_b"] + Fraction(1, 10**9)})


def test_the_other_root_does_not_follow():
    (found,) = point_of("mosfet").derivations
    step = next(step for step in found.steps if step.rule == ROOT)
    top = step.equation.right.numerator
    other = replace(
        step,
        equation=Equation(
            step.equation.left,
            replace(step.equation.right, numerator=Sum((*top.terms[1:], *top.terms[1:]))),
        ),
    )
    assert follows(step, found.steps)
    assert not follows(other, found.steps)


def test_residues_have_roots_of_squares_only():
    nine = Residue(9)
    root = nine.root()
    assert (root * root).value == 9
    # -1 is no square modulo a prime that is 3 modulo 4.
    with pytest.raises(ZeroDivisionError):
        (-Residue(1)).root()
    with pytest.raises(ZeroDivisionError):
        Residue(1) / Residue(0)
    assert (Residue.of(Fraction(1, 3)) * Residue(3)).value == 1


def test_every_rule_has_its_sentence():
    rules = {
        step.rule for name in STAGE_NAMES for found in point_of(name).derivations for step in found.steps
    }
    assert rules - set(wording.SENTENCES) == set(SENTENCES)

"""Every case against the closed forms that are published for it, exactly, at random values.

What the product printed in its ledger is read back as text: nothing of its algebra is used here.
"""

from __future__ import annotations

import random
import tomllib
from dataclasses import fields, is_dataclass
from fractions import Fraction
from functools import cache
from pathlib import Path

import pytest

import derive
from derive.errors import InputError
from derive.expressions.parse import parse_expression
from derive.expressions.tree import (
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Sum,
)

CASES = Path(__file__).parents[2] / "cases"
NAMES = sorted(folder.name for folder in CASES.iterdir() if (folder / "expected.toml").is_file())
POINTS = 3


@cache
def expected(name):
    return tomllib.loads((CASES / name / "expected.toml").read_text(encoding="utf-8"))


@cache
def ledger(name):
    topology = derive.read(CASES / name / "topology.toml")
    return derive.derive(topology, other_engine=False).ledger()


CLAIMS = [(name, place) for name in NAMES for place in range(len(expected(name)["claim"]))]


def exact(expression, values):
    """Evaluate in rationals; written here anew so that no evaluator of the product is trusted."""
    match expression:
        case Number(value):
            return value
        case Name(text):
            return values[text]
        case Sum(terms):
            return sum((exact(term, values) for term in terms), Fraction(0))
        case Product(factors):
            product = Fraction(1)
            for factor in factors:
                product *= exact(factor, values)
            return product
        case Quotient(top, bottom):
            return exact(top, values) / exact(bottom, values)
        case Power(base, exponent):
            return exact(base, values) ** exponent
        case Negative(operand):
            return -exact(operand, values)
        case Parallel(branches):
            return 1 / sum(1 / exact(branch, values) for branch in branches)
    raise AssertionError(f"{expression} has no exact value")


def result_of(name, claim):
    """Give the ledger's result that a claim is about; where no band is named there is but one."""
    (result,) = [
        entry
        for entry in ledger(name)["results"]
        if entry["find"] == claim["find"] and claim.get("band", entry["band"]) == entry["band"]
    ]
    return result


def values_for(name, claim, point):
    """Draw a value for every symbol, honour the ties, and work the definitions, in order.

    Merged parts go by the ledger's definitions for the claim's band; a word of [define] that needs a
    name which this band does not have is left out, and no claim of the band can use it.
    """
    draw = random.Random(f"{name} {claim['find']} {claim.get('band')} {claim['quantity']} {point}")
    values = {
        symbol: Fraction(draw.randint(2, 999), draw.randint(2, 99)) for symbol in ledger(name)["symbols"]
    }
    values["s"] = Fraction(draw.randint(2, 999), draw.randint(2, 99))
    for tie in claim.get("requires", []):
        left, right = tie.split("=")
        values[left.strip()] = exact(parse_expression(right), values)
    for word, text in result_of(name, claim)["definitions"]:
        values[word] = exact(parse_expression(text), values)
    for word, text in expected(name).get("define", {}).items():
        expression = parse_expression(text)
        if names_of(expression) <= values.keys():
            value = exact(expression, values)
            # The program's own words, β and its like, must mean what the source means by them.
            assert values.get(word, value) == value
            values[word] = value
    return values


def names_of(expression):
    """Give the names in an expression."""
    if isinstance(expression, Name):
        return {expression.text}
    inner = [getattr(expression, field.name) for field in fields(expression)]
    flat = [part for item in inner for part in (item if isinstance(item, tuple) else (item,))]
    return set().union(*(names_of(part) for part in flat if is_dataclass(part)))


def printed(result, quantity, values):
    """Give what the ledger says the quantity is: K, a_k, b_k, a ratio of two, or the response H."""
    if "/" in quantity:
        above, below = quantity.split("/")
        return printed(result, above, values) / printed(result, below, values)

    def worked(text):
        return exact(parse_expression(text), values)

    if quantity == "K":
        return worked(result["gain"]["exact"])
    if quantity == "H":
        s = values["s"]
        top, bottom = (
            sum(worked(text) * s**power for power, text in enumerate(result[key]))
            for key in ("numerator", "denominator")
        )
        return worked(result["gain"]["exact"]) * s ** result["power_of_s"] * top / bottom
    key = {"a": "numerator", "b": "denominator"}[quantity[0]]
    return worked(result[key][int(quantity[2:])])


def differences(name, claim):
    """Give printed minus published at every point."""
    result = result_of(name, claim)
    found = []
    for point in range(POINTS):
        values = values_for(name, claim, point)
        published = exact(parse_expression(claim["equals"]), values)
        found.append(printed(result, claim["quantity"], values) - published)
    return found


def words(value):
    if isinstance(value, tuple):
        name, place = value
        claim = expected(name)["claim"][place]
        quantity = claim["quantity"].replace("/", "-over-")
        return f"{name}-{claim['find']}-{claim.get('band', 'full')}-{quantity}-{place}"
    return None


@pytest.mark.parametrize("which", CLAIMS, ids=words)
def test_what_is_printed_equals_the_published_form_exactly(which):
    name, place = which
    claim = expected(name)["claim"][place]
    assert differences(name, claim) == [0] * POINTS


@pytest.mark.parametrize("which", CLAIMS, ids=words)
def test_a_published_form_with_one_slip_in_it_is_found_out(which):
    name, place = which
    claim = expected(name)["claim"][place]
    slip = f"({claim['equals']})*1000000001/1000000000"
    assert 0 not in differences(name, {**claim, "equals": slip})


def test_ties_are_needed_where_they_are_stated():
    for name, place in CLAIMS:
        claim = expected(name)["claim"][place]
        if "requires" in claim:
            assert 0 not in differences(name, {**claim, "requires": []})


def test_beta_for_beta_plus_one_is_found_out():
    (claim,) = [
        c for c in expected("cable_receiver")["claim"] if (c["find"], c["quantity"]) == ("Z_in", "b_1")
    ]
    assert differences("cable_receiver", claim) == [0] * POINTS
    assert 0 not in differences("cable_receiver", {**claim, "equals": "(R_E || (r_pi/beta))*C_pi"})


def test_a_claim_that_is_made_of_another_band_is_found_out():
    (claim,) = [c for c in expected("gate_buffer")["claim"] if c["band"] == "low"]
    assert differences("gate_buffer", claim) == [0] * POINTS
    assert 0 not in differences("gate_buffer", {**claim, "band": "high"})


def test_a_part_is_not_its_merged_name():
    (claim,) = [
        c for c in expected("limiter_stage")["claim"] if (c["band"], c["quantity"]) == ("mid", "K")
    ]
    assert "R_L" in claim["equals"]
    wrong = claim["equals"].replace("R_L", "R_D")
    assert 0 not in differences("limiter_stage", {**claim, "equals": wrong})


@pytest.mark.parametrize("name", NAMES)
def test_every_claim_names_a_source_that_is_told(name):
    told = (CASES / name / "SOURCE.md").read_text(encoding="utf-8")
    for claim in expected(name)["claim"]:
        assert f"**{claim['source']}**" in told
        assert set(claim) <= {"find", "band", "quantity", "equals", "requires", "source"}


@pytest.mark.parametrize("folder", sorted(CASES.iterdir()), ids=lambda folder: folder.name)
def test_every_case_has_a_topology_and_passes_its_own_checks(folder):
    topology = derive.read(folder / "topology.toml")
    results = derive.derive(topology, other_engine=False)
    assert results.passed
    assert all(
        check["passed"] is not False for entry in results.ledger()["results"] for check in entry["checks"]
    )


def test_a_form_that_is_no_expression_is_refused():
    with pytest.raises(InputError):
        parse_expression("__import__('os').getcwd()")


def test_no_two_cases_bear_one_number():
    files = sorted(CASES.glob("*/topology.toml"))
    numbers = [tomllib.loads(file.read_text(encoding="utf-8"))["sheet"]["number"] for file in files]
    assert len(files) > 10
    assert len(set(numbers)) == len(numbers)

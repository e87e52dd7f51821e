"""Exact values, digests and gains as the ledger writes them."""

import hashlib
from fractions import Fraction

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from derive.normalise.form import NominalNumbers
from derive.sheet.ledger import digest, exact_text, gain_value


@settings(max_examples=300, deadline=None, derandomize=True)
@given(st.fractions())
@example(Fraction(10**9))
@example(Fraction(-(10**9) - 1))
@example(Fraction(1, 1000))
@example(Fraction(999_999_999, 1000))
@example(Fraction(0))
def test_an_exact_value_reads_back_as_itself(value):
    assert Fraction(exact_text(value)) == value


@settings(max_examples=200, deadline=None, derandomize=True)
@given(st.integers(-(10**12), 10**12), st.integers(-30, 30))
def test_decimals_read_back_as_themselves_and_never_as_a_quotient(mantissa, exponent):
    value = Fraction(mantissa) * Fraction(10) ** exponent
    text = exact_text(value)
    assert Fraction(text) == value
    assert "/" not in text


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (Fraction(600), "600"),
        (Fraction(4700), "4700"),
        (Fraction(47, 10**13), "4.7e-12"),
        (Fraction(1, 100), "0.01"),
        (Fraction(-33, 10), "-3.3"),
        (Fraction(1, 3), "1/3"),
        (Fraction(-2, 7), "-2/7"),
        (Fraction(10**9), "1e9"),
        (Fraction(1, 8), "0.125"),
    ],
)
def test_values_are_written_as_an_engineer_would(value, text):
    assert exact_text(value) == text


def test_a_digest_is_the_sha_256_of_the_text_as_utf_8():
    # The digest of "abc" is the example of FIPS 180-2, appendix B.1 (from memory).
    expected = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    assert digest("abc") == expected
    assert digest("Ω") == hashlib.sha256(b"\xce\xa9").hexdigest() != digest("Ω ")


def numbers(gain):
    return NominalNumbers(gain, (), (), (), (), ())


def test_a_gain_without_a_finite_number_is_none():
    assert gain_value(None) is None
    assert gain_value(numbers(None)) is None
    assert gain_value(numbers(Fraction(10**400))) is None
    assert gain_value(numbers(Fraction(1, 3))) == 1 / 3

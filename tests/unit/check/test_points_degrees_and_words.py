import pytest
from hand_solutions import CIRCUITS, form_of, solution_of, system_of
from sympy import isprime

from derive.check.degree import degree_of_circuit, degree_of_form, degrees, weights_of
from derive.check.points import Stream, stream, values_exact, values_modulo
from derive.check.words import at_most, frequency
from derive.errors import DeriveError
from derive.expressions.parse import parse_expression


def test_a_prime_drawn_is_prime_and_has_61_bits():
    numbers = Stream("any")
    primes = [numbers.prime() for _ in range(5)]
    assert all(isprime(prime) and prime.bit_length() == 61 for prime in primes)
    assert len(set(primes)) == 5


def test_the_same_circuit_draws_the_same_numbers_and_another_find_others():
    def first(name, road="identity"):
        return stream(solution_of(name), road).below(10**18)

    assert first("low-pass") == first("low-pass")
    assert first("low-pass") != first("coupled coils")
    assert first("low-pass") != first("low-pass", "generic")


def test_distinct_numbers_are_distinct_even_in_a_narrow_range():
    drawn = Stream("any").distinct(300, 2, 301)
    assert len(set(drawn)) == 300
    assert min(drawn) >= 2


def test_coupled_coils_obey_their_law_in_both_rings():
    circuit = system_of(CIRCUITS["coupled coils"], "x").small_signal
    exact = values_exact(circuit, Stream("a"))
    assert exact["M"] ** 2 == exact["k"] ** 2 * exact["L_1"] * exact["L_2"]
    assert 0 < exact["k"] < 1
    assert exact["L_1"] != exact["L_2"]
    prime = Stream("b").prime()
    residues = values_modulo(circuit, Stream("c"), prime)
    product = residues["k"] ** 2 * residues["L_1"] * residues["L_2"]
    assert (residues["M"] ** 2 - product) % prime == 0


def test_uncoupled_values_are_pairwise_distinct():
    circuit = system_of(CIRCUITS["twin-T notch with its null inside the band"], "x").small_signal
    values = values_exact(circuit, Stream("a"))
    assert len(set(values.values())) == len(values) == 6


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("a*b + c", (2, 0)),
        ("(a*b + c)/d", (2, 1)),
        ("a/b + c/d", (2, 2)),
        ("a^3", (3, 0)),
        ("(a/b)^-2", (2, 2)),
        ("a || b", (2, 1)),  # a·b/(a + b)
        ("7", (0, 0)),
        ("-a", (1, 0)),
    ],
)
def test_degrees_of_small_trees(text, expected):
    top, bottom = degrees(parse_expression(text), {})
    # A bound: never below the true degrees.
    assert top >= expected[0]
    assert bottom >= expected[1]
    assert top + bottom <= sum(expected) + 2


def test_a_root_has_no_degree():
    with pytest.raises(DeriveError, match="no degree"):
        degrees(parse_expression("sqrt(a)"), {})


def test_degrees_of_a_low_pass():
    circuit = CIRCUITS["low-pass"]
    # 1/(1 + s·R·C): degree 3 below; the tableau's laws of R and s·C: degree 1 + 2.
    assert degree_of_form(form_of(circuit), {}) == (0, 3)
    assert degree_of_circuit(system_of(circuit, "x").small_signal) == 3


def test_coupled_coils_weigh_more_in_the_degree():
    circuit = system_of(CIRCUITS["coupled coils"], "x").small_signal
    assert weights_of(circuit) == {"M": 4, "L_1": 3, "L_2": 3}


@pytest.mark.parametrize(
    ("value", "words"),
    [(2.3e-17, "3·10⁻¹⁷"), (1e-9, "10⁻⁹"), (9.5e-5, "10⁻⁴"), (0.2, "2·10⁻¹"), (0, "0")],
)
def test_small_numbers_are_rounded_up_to_one_digit(value, words):
    assert at_most(value) == words


@pytest.mark.parametrize(
    ("hertz", "words"),
    [(159.15494, "159 Hz"), (1.2345e6, "1.23 MHz"), (0.05, "50 mHz"), (999999, "1 MHz"), (1e3, "1 kHz")],
)
def test_frequencies_are_written_with_their_prefix(hertz, words):
    assert frequency(hertz) == words

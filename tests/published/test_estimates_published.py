"""Published figures on poles and corners, from the estimates of circuits that have them."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from published_checks import published

from derive.estimates.estimates import Estimates
from derive.expressions.text import to_text
from derive.pipeline import derive
from derive.reading.read import parse

CHECKS = {check.id: check for check in published()}
TWO_PI = 2 * np.pi

ZVEREV = (
    "Zverev, Handbook of Filter Synthesis (Wiley 1967); Williams and Taylor; Weinberg 1962; from memory"
)
THOMSON = "Thomson, Proc. IEE 96 III (1949) 487-490; coefficients confirmed by search for orders 2 and 3"
BOND = "C. Bond, Bessel Filters: Polynomials, Poles and Circuit Elements (2003); confirmed by search"


@dataclass(frozen=True)
class Table:
    """A tabulated denominator, highest power first, and its half-power frequency in rad/s."""

    source: str
    denominator: tuple[float, ...]
    half_power: float
    half_power_source: str
    tolerance: float


def chebyshev(order: int, ripple_db: float) -> float:
    """Give cosh(acosh(1/ε)/n): where a Chebyshev response has fallen by half (Zverev; from memory)."""
    return float(np.cosh(np.arccosh(1 / np.sqrt(10 ** (ripple_db / 10) - 1)) / order))


NORMALISED = "by definition of the Butterworth response"
FORMULA = "cosh(acosh(1/ε)/n); Zverev, from memory"
TABLES = {
    "butter_2": Table(ZVEREV, (1, 1.41421356, 1), 1.0, NORMALISED, 1e-7),
    "butter_3": Table(ZVEREV, (1, 2, 2, 1), 1.0, NORMALISED, 1e-9),
    "butter_4": Table(ZVEREV, (1, 2.61312593, 3.41421356, 2.61312593, 1), 1.0, NORMALISED, 1e-7),
    "butter_5": Table(
        ZVEREV, (1, 3.23606798, 5.23606798, 5.23606798, 3.23606798, 1), 1.0, NORMALISED, 1e-7
    ),
    "butter_6": Table(
        ZVEREV,
        (1, 3.86370331, 7.46410162, 9.14162017, 7.46410162, 3.86370331, 1),
        1.0,
        NORMALISED,
        1e-7,
    ),
    "cheb_3_0p5dB": Table(ZVEREV, (1, 1.252913, 1.534895, 0.715694), chebyshev(3, 0.5), FORMULA, 1e-5),
    "cheb_3_1dB": Table(ZVEREV, (1, 0.988341, 1.238409, 0.491307), chebyshev(3, 1), FORMULA, 1e-5),
    "bessel_2": Table(THOMSON, (1, 3, 3), 1.36165412871613, BOND, 1e-9),
    "bessel_3": Table(THOMSON, (1, 6, 15, 15), 1.75567236868121, BOND, 1e-9),
    "bessel_4": Table(THOMSON, (1, 10, 45, 105, 105), 2.11391767490422, BOND, 1e-9),
    "bessel_5": Table(THOMSON, (1, 15, 105, 420, 945, 945), 2.42741070215263, BOND, 1e-9),
}


def said_of(text: str) -> Estimates:
    """Give what the product says, checked by its own road."""
    results = derive(parse(text, "published.toml"), other_engine=False)
    (result,) = results.outcome.results
    verdicts = {verdict.name: verdict for verdict in result.verdicts}
    assert verdicts["estimates"].passed is True
    assert result.solution.estimates is not None
    return result.solution.estimates


@cache
def circuit(check: str) -> Estimates:
    return said_of(CHECKS[check].topology)


def ladder_of(denominator: tuple[float, ...]) -> str:
    """Write a chain of integrators with feedback, which has any denominator: the state-variable form.

    Each integrator is a transconductance of 1 S into 1 F; the first one's node is fed back from each.
    """
    monic = [value / denominator[0] for value in denominator]
    order = len(monic) - 1
    lines = [
        f'g_in = {{ transconductance = "{monic[-1]!r} S", flows = ["gnd", "x1"], senses = ["in", "gnd"] }}'
    ]
    for k in range(1, order + 1):
        node = "out" if k == order else f"x{k}"
        before = f"x{k - 1}"
        lines.append(f'C_{k} = {{ capacitor = "1 F", between = ["{node}", "gnd"] }}')
        if k > 1:
            lines.append(
                f'g_{k} = {{ transconductance = "1 S", flows = ["gnd", "{node}"], senses = ["{before}", "gnd"] }}'
            )
        lines.append(
            f'f_{k} = {{ transconductance = "{monic[k]!r} S", flows = ["x1", "gnd"], senses = ["{node}", "gnd"] }}'
        )
    return (
        "[sheet]\ntitle = 'Table'\n[drives]\nV_1 = { voltage = ['in', 'gnd'] }\n[parts]\n"
        + "\n".join(lines)
        + "\n[find.H]\nvoltage = 'out'\nper = 'V_1'\n"
    )


@pytest.mark.parametrize("name", TABLES)
def test_tabulated_filters_fall_by_half_where_their_source_says(name):
    table = TABLES[name]
    said = said_of(ladder_of(table.denominator))
    assert said.bandwidth is not None
    assert said.bandwidth.high_hz is not None
    assert said.bandwidth.high_hz * TWO_PI == pytest.approx(table.half_power, rel=table.tolerance)
    assert said.bandwidth.reference == pytest.approx(1)
    # Far from a single dominant pole, the sum is wrong, and the sheet must not call it usable unless it is not.
    (found,) = [one for one in said.estimates if one.name == "bandwidth by time constants"]
    constant = table.denominator[-1] / table.denominator[-2]
    assert found.error == pytest.approx(constant / table.half_power - 1, abs=10 * table.tolerance)
    assert found.usable is (abs(found.error) <= 0.1)


def test_two_identical_buffered_poles_shrink_the_bandwidth_by_the_published_factor():
    # shrink2: textbook; Valley and Wallman, Vacuum Tube Amplifiers (1948), from memory.
    parts = """
    [sheet]
    title = "Two sections"
    [drives]
    V_1 = { voltage = ["in", "gnd"] }
    [parts]
    R_1 = { resistor = "1k", between = ["in", "a"] }
    C_1 = { capacitor = "1 nF", between = ["a", "gnd"] }
    A_1 = { voltage_gain = "1", output = ["m", "gnd"], senses = ["a", "gnd"] }
    R_2 = { resistor = "1k", between = ["m", "out"] }
    C_2 = { capacitor = "1 nF", between = ["out", "gnd"] }
    [find.H]
    voltage = "out"
    per = "V_1"
    """
    said = said_of(parts)
    assert said.bandwidth is not None
    assert said.bandwidth.high_hz == pytest.approx(0.643594252906 * 1e6 / TWO_PI, rel=1e-10)


def test_the_second_pole_of_a_common_emitter_stage_by_pole_splitting():
    # Gray, Hurst, Lewis, Meyer, Analysis and Design of Analog Integrated Circuits; from memory.
    check = CHECKS["ce_p2_approx"]
    (second,) = [one for one in circuit("ce_p2_approx").estimates if one.name == "second pole"]
    assert second.value == pytest.approx(check.expected.real, rel=1e-11)
    assert abs(second.error) < check.relative
    assert second.usable


def test_the_zero_of_a_two_stage_amplifier_lies_in_the_right_half_plane():
    (zero,) = [one for one in circuit("ts_zero").closed_forms if one.of == "zero"]
    assert to_text(zero.readable) == "gm2/Cc"
    assert zero.says == "right half-plane zero"
    assert zero.value == pytest.approx(-1 / CHECKS["ts_zero"].expected.real, rel=1e-9)


def test_the_corner_of_a_bypassed_emitter_is_its_published_pole():
    (pole,) = [one for one in circuit("bypass_pole").closed_forms if one.of == "pole"]
    assert pole.value == pytest.approx(1 / CHECKS["bypass_pole"].expected.real, rel=1e-9)


def test_a_doubly_terminated_butterworth_ladder_falls_by_half_at_1_rad_per_s():
    # Zverev, Handbook of Filter Synthesis (1967); element values 1, 2, 1; from memory.
    said = circuit("butter_lc3")
    assert said.bandwidth is not None
    assert said.bandwidth.reference == pytest.approx(0.5)
    assert said.bandwidth.high_hz == pytest.approx(1 / TWO_PI, rel=1e-14)


def test_a_unity_gain_sallen_key_butterworth_is_a_pair_of_q_1_over_root_2():
    # Sallen and Key, IRE Trans. CT-2 (1955) 74-85; citation confirmed by search.
    said = circuit("sk_lp_butter")
    found = {one.name: one for one in said.closed_forms}
    assert to_text(found["omega_0"].readable) == "1/sqrt(R1*R2*C1*C2)"
    assert found["Q"].value == pytest.approx(0.5**0.5)
    assert said.bandwidth is not None
    assert said.bandwidth.high_hz == pytest.approx(7071.06781187 / TWO_PI, rel=1e-11)


def test_the_tables_here_are_those_of_the_published_data():
    # The circuits of these sources stand in the data folder; the tables of coefficients have none.
    with (Path(__file__).parent / "data" / "filters.toml").open("rb") as stream:
        circuits = {check["id"] for check in tomllib.load(stream)["check"]}
    assert {"butter_lc3", "sk_lp_butter"} <= circuits
    assert not circuits & set(TABLES)

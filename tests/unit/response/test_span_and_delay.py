"""Spans over tolerances and group delay, against closed forms and brute force."""

import cmath
import math
from fractions import Fraction
from itertools import product

import numpy as np
import pytest

from derive.bands.restrict import find_in, restrict
from derive.devices.linearise import linearise
from derive.normalise.exact_response import ExactResponse
from derive.reading.read import parse
from derive.response.delay import group_delay
from derive.response.tolerance import MOST_FULL, tolerance_span

DIVIDER = """
[sheet]
title = "Divider"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "out"], tol = "10 %" }
R_2 = { resistor = "1k", between = ["out", "gnd"], tol = "5 %" }
C_1 = { capacitor = "1u", between = ["out", "gnd"], tol = "20 %" }
[find.H]
voltage = "out"
per = "V_s"
"""


def circuit_of(text):
    topology = parse(text, "divider.toml")
    full = restrict(linearise(topology), "full")
    return full.unmerged, find_in(full, topology.finds[0])


def divider(r_1, r_2, c_1, hertz):
    admittance = 1 / r_2 + 2j * math.pi * hertz * c_1
    return 1 / (1 + r_1 * admittance)


def ladder(count):
    parts = []
    nodes = ["in", *(f"n{k}" for k in range(1, count + 1))]
    for k in range(1, count + 1):
        parts.append(
            f'R_{k} = {{ resistor = "{k}k", between = ["{nodes[k - 1]}", "{nodes[k]}"], tol = "5 %" }}'
        )
        parts.append(
            f'C_{k} = {{ capacitor = "{10 * k}n", between = ["{nodes[k]}", "gnd"], tol = "10 %" }}'
        )
    text = DIVIDER[: DIVIDER.index("R_1")] + "\n".join(parts)
    return text + f'\n[find.H]\nvoltage = "{nodes[-1]}"\nper = "V_s"\n'


def test_a_span_is_that_of_all_corners_worked_by_hand():
    span = tolerance_span(*circuit_of(DIVIDER), (1.0, 300.0, 20e3))
    assert "8 corners" in span.says
    for point in span.points:
        corners = [
            divider(1e3 * (1 + a), 1e3 * (1 + b), 1e-6 * (1 + c), point.hertz)
            for a, b, c in product((-0.1, 0.1), (-0.05, 0.05), (-0.2, 0.2))
        ]
        levels = [20 * math.log10(abs(value)) for value in corners]
        angles = [math.degrees(cmath.phase(value)) for value in corners]
        assert point.decibels == pytest.approx((min(levels), max(levels)), abs=1e-9)
        assert point.degrees == pytest.approx((min(angles), max(angles)), abs=1e-9)


def test_directed_corners_hold_all_that_chance_finds():
    circuit, find = circuit_of(ladder(4))
    hertz = (200.0, 2e3, 9e3)
    span = tolerance_span(circuit, find, hertz)
    assert MOST_FULL < 2 * 4
    assert "directed" in span.says
    chance = np.random.default_rng(5)
    for point in span.points:
        low, high = point.decibels
        for _ in range(300):
            level = 20 * math.log10(abs(ladder_response(chance, point.hertz)))
            assert low - 1e-9 <= level <= high + 1e-9
        assert high - low > 0.1


def ladder_response(chance, hertz):
    """Solve the ladder of four sections from its end, with values anywhere within their tolerances."""
    voltage, current = 1 + 0j, 0j
    for k in range(4, 0, -1):
        r = 1e3 * k * (1 + chance.uniform(-0.05, 0.05))
        c = 10e-9 * k * (1 + chance.uniform(-0.1, 0.1))
        current += voltage * 2j * math.pi * hertz * c
        voltage += current * r
    return 1 / voltage


def test_without_tolerances_or_with_open_values_there_is_no_span():
    bare = (
        DIVIDER.replace(', tol = "10 %"', "").replace(', tol = "5 %"', "").replace(', tol = "20 %"', "")
    )
    assert tolerance_span(*circuit_of(bare), (1.0,)) is None
    assert tolerance_span(*circuit_of(DIVIDER.replace('"1u"', '"?"')), (1.0,)) is None


def test_the_delay_of_one_pole_is_its_closed_form():
    tau = 1e-3
    response = ExactResponse((Fraction(1),), (Fraction(1), Fraction(1, 1000)))
    for hertz in (0.0, 50.0, 159.15, 4e3):
        omega = 2 * math.pi * hertz
        assert group_delay(response, hertz) == pytest.approx(tau / (1 + (omega * tau) ** 2), rel=1e-12)


def test_the_delay_is_minus_the_slope_of_the_phase():
    response = ExactResponse(
        tuple(map(Fraction, ("2", "-3e-4"))), tuple(map(Fraction, ("1", "2e-3", "1e-6", "4e-11")))
    )

    def phase(hertz):
        s = 2j * math.pi * hertz
        above = sum(float(c) * s**k for k, c in enumerate(response.top))
        return cmath.phase(above / sum(float(c) * s**k for k, c in enumerate(response.bottom)))

    step = 1e-3
    slope = (phase(100 + step) - phase(100 - step)) / (4 * math.pi * step)
    assert group_delay(response, 100.0) == pytest.approx(-slope, rel=1e-6)


def test_where_the_response_vanishes_there_is_no_delay():
    notch = ExactResponse(tuple(map(Fraction, (0, 0, 1))), tuple(map(Fraction, (1, 1, 1))))
    assert group_delay(notch, 0.0) is None

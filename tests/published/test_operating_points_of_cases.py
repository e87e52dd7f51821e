"""The operating points of the cases against their bias equations, written here by hand and bisected.

One equation in one current describes each bias. With a constant V_BE (or without the slope of saturation)
its root is the current that the sheet derives; with the exponential law (or with the slope) it is the
current that the sheet finds by Newton's method; and the two give the difference that it prints.
"""

from __future__ import annotations

import math
from functools import cache
from pathlib import Path

import pytest

import derive

CASES = Path(__file__).parents[2] / "cases"
# Boltzmann's constant over the elementary charge (CODATA 2018, exact), at 27 °C.
THERMAL_VOLTAGE = 1.380649e-23 * 300.15 / 1.602176634e-19


def bisected(excess, low=1e-7, high=1e-2):
    """Give the current at which a growing function is zero."""
    assert excess(low) < 0 < excess(high)
    for _ in range(200):
        middle = (low + high) / 2
        low, high = (middle, high) if excess(middle) < 0 else (low, middle)
    return low


def constant(current):
    """Give V_BE as hand calculation has it."""
    return 0.65


def exponential(current):
    """Give V_BE of the exponential law, 0.65 V at 1 mA."""
    return 0.65 + THERMAL_VOLTAGE * math.log(current / 1e-3)


def on_a_divider(supply, upper, lower, emitter, beta, v_be):
    """Give I_C of a transistor with a base divider and an emitter resistor."""
    source, resistance = supply * lower / (upper + lower), upper * lower / (upper + lower)
    return bisected(lambda i: v_be(i) + i * (emitter * (1 + 1 / beta) + resistance / beta) - source)


def cascode(v_be):
    def excess(i):
        base = v_be(i) + 1e3 * i * (1 + 1 / 180)
        lower_chain = base / 18e3 + i / 180
        upper_base = base + 22e3 * lower_chain
        # All of the lower transistor's I_C is the upper one's I_E.
        return upper_base + 82e3 * (lower_chain + i / 181) - 12

    lower = bisected(excess)
    return {"Q1": lower, "Q2": lower * 180 / 181}


def pair(v_be):
    current = bisected(lambda i: 220 * i / 180 + v_be(i) + 11.3e3 * 2 * i * (1 + 1 / 180) - 12)
    return {"Q1": current, "Q2": current}


def two_stages(v_be):
    first = on_a_divider(12, 82e3, 22e3, 1.8e3, 180, v_be)
    second = bisected(lambda i: v_be(i) + 1.5e3 * i * (1 + 1 / 150) - 2.2e3 * (first - i / 150))
    return {"Q1": first, "Q2": second}


def square(factor, gate, threshold, source, loop, supply, slope):
    """Give I_D of k/2·V_ov²·(1 + λ·V_DS); `loop` is the resistance from the supply to ground."""

    def excess(i):
        overdrive = max(gate - source * i - threshold, 0.0)
        return i - factor / 2 * overdrive**2 * (1 + slope * (supply - loop * i))

    return bisected(excess, high=supply / loop)


BIPOLAR = {
    "line_buffer": lambda v_be: {"Q1": on_a_divider(9, 68e3, 82e3, 1.8e3, 180, v_be)},
    "detector_follower": lambda v_be: {"Q1": on_a_divider(9, 330e3, 470e3, 1.2e3, 180, v_be)},
    "echo_preamp": lambda v_be: {"Q1": on_a_divider(7.2, 68e3, 22e3, 1047, 180, v_be)},
    "cable_receiver": lambda v_be: {"Q1": on_a_divider(12, 82e3, 22e3, 1.8e3, 180, v_be)},
    "echo_cascode": cascode,
    "line_receiver": pair,
    "two_stage_preamp": two_stages,
    "trio_common_emitter": lambda v_be: {"Q1": on_a_divider(12, 82e3, 22e3, 1.8e3, 180, v_be)},
    "trio_common_base": lambda v_be: {"Q1": on_a_divider(12, 82e3, 22e3, 1.8e3, 180, v_be)},
    "trio_follower": lambda v_be: {"Q1": on_a_divider(12, 82e3, 22e3, 1.8e3, 180, v_be)},
}
# For each square-law stage its current, given the slope; and the slope that its model has.
FIELD_EFFECT = {
    "limiter_stage": (
        lambda slope: {"M1": square(4e-3, 12 * 330 / 1330, 1, 1e3, 5.7e3, 12, slope)},
        0.01,
    ),
    "gate_buffer": (lambda slope: {"M1": square(4e-3, 12 * 2.2 / 3.2, 1, 4.7e3, 4.7e3, 12, slope)}, 0),
    "transducer_buffer": (
        lambda slope: {"J1": square(2 * 4.5e-3 / 4, 0, -2, 330, 2530, 12, slope)},
        0.01,
    ),
}


@cache
def point_of(case):
    return derive.derive(derive.read(CASES / case / "topology.toml"), other_engine=False).outcome.point


def currents(case):
    """Give the currents by hand and by the devices' own laws."""
    if case in BIPOLAR:
        return BIPOLAR[case](constant), BIPOLAR[case](exponential)
    stage, slope = FIELD_EFFECT[case]
    return stage(0), stage(slope)


NAMES = [*BIPOLAR, *FIELD_EFFECT]


def test_every_case_with_a_bias_has_its_equation_here():
    with_supplies = {
        folder.name
        for folder in CASES.iterdir()
        if "\n[supplies]" in (folder / "topology.toml").read_text(encoding="utf-8")
    }
    assert with_supplies == set(NAMES)


@pytest.mark.parametrize("case", NAMES)
def test_current_that_is_derived_solves_the_bias_equation(case):
    by_hand, _ = currents(case)
    found = {device.part: float(device.current) for device in point_of(case).devices}
    assert found == pytest.approx(by_hand, rel=1e-9)


@pytest.mark.parametrize("case", NAMES)
def test_current_by_newtons_method_solves_the_equation_with_the_devices_own_law(case):
    _, own = currents(case)
    found = {check.part: check.current for check in point_of(case).newton}
    assert found == pytest.approx(own, rel=1e-6)


@pytest.mark.parametrize("case", NAMES)
def test_difference_that_is_printed_is_that_of_the_two_equations(case):
    by_hand, own = currents(case)
    for check in point_of(case).newton:
        expected = by_hand[check.part] / own[check.part] - 1
        assert check.difference == pytest.approx(expected, abs=1e-6)
        assert check.passed


@pytest.mark.parametrize("case", NAMES)
def test_devices_work_in_their_active_region(case):
    point = point_of(case)
    assert [region.part for region in point.regions] == [device.part for device in point.devices]
    assert all(region.passed for region in point.regions)
    assert point.passed

import math
from dataclasses import replace
from fractions import Fraction

import pytest
from band_circuits import C, R, circuit, common_emitter, gain, with_value

from derive.devices.elements import VoltageGain
from derive.normalise.separation import separation
from derive.quantities.dimension import RATIO
from derive.quantities.symbol import Symbol

VALUES = {"R_S": "1000", "C_1": "1/1000000", "R_L": "3000", "C_L": "1/50000000"}
ROLES = (("C_1", "coupling"), ("C_L", "parasitic"))


def interstage(roles=ROLES, values=VALUES):
    """Give a coupling capacitor between a source and a load with a stray capacitance."""
    elements = (
        R("R_S", "gen", "a"),
        C("C_1", "a", "out"),
        R("R_L", "out", "gnd"),
        C("C_L", "out", "gnd"),
    )
    return circuit(elements, values, roles)


def test_the_worst_error_is_that_of_the_two_denominators():
    """By hand: 1 + s(C_1(R_S+R_L) + C_L R_L) + s²(...) against C_L (R_S || R_L) for C_L R_L."""
    stage = interstage()
    found = separation(stage, gain("out"))
    r_s, c_1, r_l, c_l = (float(Fraction(text)) for text in VALUES.values())
    full = c_1 * (r_s + r_l) + c_l * r_l
    product = c_1 * (r_s + r_l) + c_l * r_s * r_l / (r_s + r_l)
    # The terms in s² are the same and meet the constant where both cancel: there the error is greatest.
    worst = 20 * math.log10(full / product)
    assert found.worst_decibels.decibels == pytest.approx(worst, rel=1e-3)
    centre = 1 / (2 * math.pi * math.sqrt(c_1 * c_l * r_s * r_l))
    assert found.worst_decibels.hertz == pytest.approx(centre, rel=0.05)
    corners = 1 / (2 * math.pi * c_1 * (r_s + r_l)), (r_s + r_l) / (2 * math.pi * c_l * r_s * r_l)
    assert found.range_hz == pytest.approx((corners[0] / 100, corners[1] * 100))
    assert (found.at_low_corner.hertz, found.at_high_corner.hertz) == pytest.approx(corners)
    s = 2j * math.pi * corners[0]
    error = (1 + s * full + s * s * c_1 * c_l * r_s * r_l) / (
        1 + s * product + s * s * c_1 * c_l * r_s * r_l
    )
    assert found.at_low_corner.decibels == pytest.approx(20 * math.log10(abs(error)), rel=1e-9)
    assert found.at_low_corner.degrees == pytest.approx(
        math.degrees(math.atan2(error.imag, error.real)), rel=1e-9
    )
    assert found.points == 400


def test_bands_that_do_not_meet_separate_without_error():
    elements = (
        C("C_1", "gen", "a"),
        R("R_1", "a", "gnd"),
        VoltageGain("A_1", "A_1", ("b", "gnd"), ("a", "gnd"), "A_1"),
        R("R_2", "b", "out"),
        C("C_2", "out", "gnd"),
    )
    values = {"C_1": "1/1000000", "R_1": "1000", "R_2": "1000", "C_2": "1/1000000000"}
    stage = circuit(elements, values, (("C_1", "coupling"), ("C_2", "parasitic")))
    stage = replace(stage, symbols=(*stage.symbols, Symbol("A_1", RATIO, Fraction(10), "part A_1")))
    found = separation(stage, gain("out"))
    assert (found.worst_decibels.decibels, found.worst_degrees.degrees) == (0, 0)


def test_bands_too_close_show_it():
    near = interstage(values=VALUES | {"C_L": "1/1000000"})
    assert separation(near, gain("out")).worst_decibels.decibels > 1
    far = separation(interstage(values=VALUES | {"C_L": "1/1000000000000"}), gain("out"))
    assert abs(far.worst_decibels.decibels) < 1e-4


def test_the_common_emitter_stage_separates_well():
    found = separation(common_emitter(), gain("out"))
    assert abs(found.worst_decibels.decibels) < 0.01
    assert abs(found.worst_degrees.degrees) < 0.1


def test_there_is_none_without_a_value_a_response_or_a_corner():
    assert separation(with_value(interstage(), "R_L", None), gain("out")) is None
    assert separation(interstage(), gain("gnd")) is None
    assert separation(interstage(roles=()), gain("out")) is not None
    plain = circuit((R("R_1", "gen", "out"), R("R_2", "out", "gnd")), {"R_1": "10", "R_2": "10"})
    assert separation(plain, gain("out")) is None

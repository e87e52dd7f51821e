"""What is compared: the first gain or the one named, and only what is of one kind."""

import pytest
from compared_stages import LOW_PASS, TRANSIMPEDANCE, compared

from derive.errors import InputError

TWO = LOW_PASS.replace("[find.H]", '[find.Z]\nimpedance = "out"\n[find.H]') + (
    '[find.I]\ncurrent = "C_1"\nper = "V_s"\n'
)


def refused(*texts, find=None):
    with pytest.raises(InputError) as caught:
        compared(*texts, find=find)
    return caught.value


def test_the_first_gain_is_taken_and_impedances_before_it_are_passed_over():
    assert compared(TWO).stages[0].find.name == "H"
    assert compared(TWO, find="I").stages[0].find.name == "I"


def test_a_name_that_a_topology_lacks_is_answered_with_those_it_has():
    error = refused(TWO, LOW_PASS, find="I")
    assert (error.where, error.what) == ("stage_1.toml", 'nothing named "I" is wanted in this topology')
    assert error.cure == "it has H"
    assert refused(TWO, find="").what == 'nothing named "" is wanted in this topology'
    assert refused(TWO, find="h").cure == 'did you mean "H"?'


def test_a_topology_that_asks_for_impedances_alone_has_no_gain():
    error = refused(LOW_PASS.replace('voltage = "out"\nper = "V_s"', 'impedance = "out"'))
    assert error.where == "stage_0.toml"
    assert "only H" in error.what
    assert "--find" in error.cure


def test_what_is_not_of_one_kind_is_refused_with_its_line():
    error = refused(LOW_PASS, TRANSIMPEDANCE)
    assert error.where == "stage_1.toml:9"
    assert "Z_m is a voltage per current, but H of stage_0.toml is a voltage per voltage" in error.what
    assert error.cure

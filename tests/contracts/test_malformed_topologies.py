"""Every malformed topology is refused with its line, what is wrong, and a cure."""

from __future__ import annotations

import malformed_assumptions
import malformed_bias
import malformed_devices
import malformed_topologies
import pytest

from derive.bias.solve import operating_point
from derive.devices.linearise import linearise
from derive.errors import InputError
from derive.pipeline import derive
from derive.reading.read import parse

ROWS = (
    *malformed_topologies.ROWS,
    *malformed_devices.READ,
    *malformed_bias.CONTRADICTED,
    *malformed_assumptions.READ,
)


def judge(error, row):
    # Faults of the file as a whole have no line (0 in the table).
    assert error.where == (f"bad.toml:{row.line}" if row.line else "bad.toml"), str(error)
    for word in row.words:
        assert word in str(error)
    assert error.cure
    assert error.what
    assert "\n" not in str(error)
    assert len(str(error)) < 600


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row.name.replace(" ", "-"))
def test_malformed_topology_is_refused_with_line_words_and_cure(row):
    with pytest.raises(InputError) as caught:
        parse(row.text, "bad.toml")
    judge(caught.value, row)


@pytest.mark.parametrize("row", malformed_devices.WORKED, ids=lambda row: row.name.replace(" ", "-"))
def test_data_that_disagree_are_refused_once_they_are_worked_out(row):
    topology = parse(row.text, "bad.toml")
    with pytest.raises(InputError) as caught:
        linearise(topology)
    judge(caught.value, row)


@pytest.mark.parametrize("row", malformed_assumptions.WORKED, ids=lambda row: row.name.replace(" ", "-"))
def test_assumptions_that_cannot_be_made_are_refused_once_the_circuit_is_worked(row):
    topology = parse(row.text, "bad.toml")
    with pytest.raises(InputError) as caught:
        derive(topology, other_engine=False)
    judge(caught.value, row)


def biased(topology):
    """Give the small-signal circuit at the operating point."""
    point = operating_point(topology)
    return linearise(topology, {device.part: device for device in point.devices} if point else {})


@pytest.mark.parametrize("row", malformed_bias.BIASED, ids=lambda row: row.name.replace(" ", "-"))
def test_bias_that_cannot_be_worked_is_refused_as_the_operating_point_is_sought(row):
    topology = parse(row.text, "bad.toml")
    with pytest.raises(InputError) as caught:
        biased(topology)
    judge(caught.value, row)


@pytest.mark.parametrize("text", [malformed_bias.GOOD_STAGE, malformed_bias.GOOD_MOSFET])
def test_the_sound_stages_behind_the_table_have_an_operating_point(text):
    point = operating_point(parse(text, "good.toml"))
    assert point is not None
    assert point.passed


def test_the_sound_file_behind_the_table_is_accepted():
    good = parse(malformed_topologies.GOOD, "good.toml")
    assert [part.name for part in good.parts] == ["R_1", "C_1"]


def test_the_sound_transistor_behind_the_table_is_accepted():
    text = malformed_devices.bipolar(', I_C = "1 mA", beta = 180, g_m = "38.66 mS"')
    assert [part.name for part in linearise(parse(text, "good.toml")).topology.parts][-1] == "Q1"


def test_table_has_at_least_250_rows_of_different_names():
    worked = (*malformed_devices.WORKED, *malformed_bias.BIASED, *malformed_assumptions.WORKED)
    names = [row.name for row in (*ROWS, *worked)]
    assert len(names) >= 280
    assert len(set(names)) == len(names)

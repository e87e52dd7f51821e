"""Every malformed topology is refused with its line, what is wrong, and a cure."""

from __future__ import annotations

import importlib.util
from pathlib import Path

import pytest

from derive.errors import InputError
from derive.topology.read import parse

_spec = importlib.util.spec_from_file_location(
    "malformed_topologies", Path(__file__).with_name("malformed_topologies.py")
)
assert _spec
assert _spec.loader
_table = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(_table)


@pytest.mark.parametrize("row", _table.ROWS, ids=lambda row: row.name.replace(" ", "-"))
def test_malformed_topology_is_refused_with_line_words_and_cure(row):
    with pytest.raises(InputError) as caught:
        parse(row.text, "bad.toml")
    error = caught.value
    # Faults of the file as a whole have no line (0 in the table).
    assert error.where == (f"bad.toml:{row.line}" if row.line else "bad.toml"), str(error)
    for word in row.words:
        assert word in str(error)
    assert error.cure
    assert error.what
    assert "\n" not in str(error)
    assert len(str(error)) < 600


def test_the_sound_file_behind_the_table_is_accepted():
    assert [part.name for part in parse(_table.GOOD, "good.toml").parts] == ["R_1", "C_1"]


def test_table_has_at_least_110_rows_of_different_names():
    names = [row.name for row in _table.ROWS]
    assert len(names) >= 110
    assert len(set(names)) == len(names)

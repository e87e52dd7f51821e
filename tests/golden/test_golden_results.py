"""The final results of every case, compared to the letter with files that are kept.

`python tests/golden/renew.py` writes them anew.
"""

from __future__ import annotations

import importlib.util
import json
from pathlib import Path

import pytest

HERE = Path(__file__).parent

_spec = importlib.util.spec_from_file_location("renew_golden_files", HERE / "renew.py")
assert _spec
assert _spec.loader
renew = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(renew)


@pytest.mark.parametrize("name", renew.names())
def test_results_are_those_that_were_kept(name):
    kept = json.loads((HERE / f"{name}.json").read_text(encoding="utf-8"))
    assert renew.final_results(name) == kept


@pytest.mark.parametrize("name", renew.names())
def test_keys_of_a_golden_file_stand_in_their_order(name):
    assert renew.text(name) == (HERE / f"{name}.json").read_text(encoding="utf-8")


def test_no_golden_file_is_left_over_from_a_case_that_is_gone():
    assert sorted(path.stem for path in HERE.glob("*.json")) == renew.names()


def test_rounding_hides_the_last_bits_and_nothing_else():
    assert renew.rounded([-312.8910000000001, 0.0]) == renew.rounded([-312.891, 0.0])
    assert renew.rounded([-3.1e-37, 312.891]) == ["0", "312.891"]
    assert renew.rounded([-312.8911, 0.0]) != renew.rounded([-312.891, 0.0])

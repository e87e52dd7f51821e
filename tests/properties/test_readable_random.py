"""Readable forms of random circuits: identical to the expanded ones, and never longer."""

from __future__ import annotations

from dataclasses import replace
from random import Random

import pytest
from readable_stages import faults, stages, value_of

# Most circuits are small, so that there can be many; `campaign.py --of readable` runs more.
COUNT, BATCH, LARGER = 200, 100, 50
SEED = 4_000_000


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_readable_form_is_identical_and_never_longer(batch):
    shorter = 0
    for found, wrong in stages(SEED + batch, BATCH, LARGER):
        assert wrong == [], found.text
        shorter += sum(after < before for before, after in found.leaves)
    # The property means nothing where nothing was rewritten.
    assert shorter >= BATCH // 2


def test_a_form_that_is_wrong_in_one_entry_or_longer_is_seen():
    found = next(one for one, _ in stages(SEED, BATCH, LARGER) if len(one.readable) > 2)
    twice = replace(found, readable=(f"2*({found.readable[0]})", *found.readable[1:]))
    assert any(fault.startswith("differs") for fault in faults(twice, Random(1)))
    before, _ = found.leaves[0]
    longer = replace(found, leaves=((before, before + 1), *found.leaves[1:]))
    assert any(fault.startswith("longer") for fault in faults(longer, Random(1)))


def test_comparison_sees_a_form_that_is_wrong_in_one_sign():
    values = {"R_1": 3, "R_2": 5}
    assert value_of("R_1 || R_2", values) == value_of("R_1*R_2/(R_1 + R_2)", values)
    assert value_of("R_1 || R_2", values) != value_of("R_1*R_2/(R_1 - R_2)", values)

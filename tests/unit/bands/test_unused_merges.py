"""A name of [merge] that no band can use is refused; one that some band can use is not."""

import pytest

from derive.errors import InputError
from derive.pipeline import derive
from derive.reading.read import parse

STAGE = """
[sheet]
title = "Loaded divider"
[drives]
V_s = {{ voltage = ["in", "gnd"] }}
[parts]
R_1 = {{ resistor = "1k", between = ["in", "out"] }}
R_2 = {{ resistor = "2k", between = ["out", "gnd"] }}
R_3 = {{ resistor = "3k", between = ["x", "gnd"] }}
C_1 = {{ capacitor = "1u", between = ["out", "x"], role = "coupling" }}
[merge]
R_p = {parts}
[find.A_v]
voltage = "out"
per = "V_s"
"""


def test_merge_of_parts_that_no_band_brings_together_is_refused_at_its_line():
    with pytest.raises(InputError) as caught:
        derive(parse(STAGE.format(parts='["R_1", "R_2"]'), "stage.toml"), other_engine=False)
    assert caught.value.where == "stage.toml:12"
    assert "R_p" in caught.value.what
    assert caught.value.cure


def test_merge_that_one_band_can_use_is_used_there():
    text = STAGE.format(parts='["R_2", "R_3"]')
    results = derive(parse(text, "stage.toml"), other_engine=False).ledger()["results"]
    used = {result["band"]: [name for name, _ in result["definitions"]] for result in results}
    assert used == {"low": [], "mid": ["R_p"]}

"""Reading of devices, supplies, roles, bands, temperature and merges."""

from fractions import Fraction

import pytest

from derive.errors import InputError
from derive.reading.kinds import KINDS
from derive.reading.read import parse
from derive.topology.topology import ROOM_TEMPERATURE

STAGE = """bands = ["low", "mid", "high"]
[sheet]
title = "Common emitter"
[supplies]
V_CC = { node = "vcc", dc = "12 V" }
V_EE = { node = "vee", dc = "-12 V" }
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
C_1 = { capacitor = "10u", between = ["in", "b"], role = "coupling" }
R_1 = { resistor = "100k", between = ["vcc", "b"] }
R_2 = { resistor = "22k", between = ["b", "vee"] }
Q1 = { bipolar = "small", base = "b", collector = "c", emitter = "e", V_A = "100 V" }
R_C = { resistor = "4k7", between = ["vcc", "c"] }
R_E = { resistor = "1k", between = ["e", "vee"] }
C_E = { capacitor = "100u", between = ["e", "gnd"], role = "bypass" }
C_L = { capacitor = "10p", between = ["c", "gnd"], role = "parasitic" }
[models.small]
polarity = "pnp"
V_A = "80 V"
beta = 180
[conditions]
temperature = "40 °C"
[merge]
R_B = ["R_1", "R_2"]
R_Cp = ["R_C", "r_o"]
[find.A_v]
voltage = "c"
per = "V_s"
"""
# Where a second device is added, r_o takes an index, and the merge would have to follow.
UNMERGED = STAGE.replace('R_Cp = ["R_C", "r_o"]\n', "")


@pytest.fixture(scope="module")
def topology():
    return parse(STAGE, "stage.toml")


def part(topology, name):
    return next(item for item in topology.parts if item.name == name)


def test_a_device_has_its_terminals_and_the_parameters_of_part_and_model(topology):
    found = part(topology, "Q1")
    assert found.wires == (("base", ("b",)), ("collector", ("c",)), ("emitter", ("e",)))
    assert (found.kind, found.model, found.value) == ("bipolar", "small", None)
    assert [(key, value.exact) for key, value in found.parameters] == [("beta", 180), ("V_A", 100)]
    assert found.words == (("polarity", "pnp"),)
    assert str(found.place) == "stage.toml:13"


def test_supplies_have_node_and_voltage(topology):
    assert [(s.name, s.node, s.dc.exact) for s in topology.supplies] == [
        ("V_CC", "vcc", 12),
        ("V_EE", "vee", -12),
    ]
    assert str(topology.supplies[0].place) == "stage.toml:5"


def test_roles_bands_temperature_and_merges_are_kept(topology):
    assert [(p.name, p.role) for p in topology.parts if p.role] == [
        ("C_1", "coupling"),
        ("C_E", "bypass"),
        ("C_L", "parasitic"),
    ]
    assert topology.bands == ("low", "mid", "high")
    assert topology.temperature == Fraction("313.15")
    assert [(merge.name, merge.parts) for merge in topology.merges] == [
        ("R_B", ("R_1", "R_2")),
        ("R_Cp", ("R_C", "r_o")),
    ]


def test_what_is_not_written_is_left_to_its_default():
    bare = parse(
        STAGE.replace('bands = ["low", "mid", "high"]', "").replace('temperature = "40 °C"', ""), "a.toml"
    )
    assert bare.bands == ()
    assert bare.temperature == ROOM_TEMPERATURE == Fraction("300.15")


@pytest.mark.parametrize(
    ("text", "kelvin"),
    [
        ("27 °C", "300.15"),
        ("300 K", "300"),
        ("-40°C", "233.15"),
        ("−40 °C", "233.15"),
        ("85.5 ℃", "358.65"),
    ],
)
def test_a_temperature_is_in_degrees_celsius_or_kelvin(text, kelvin):
    assert parse(STAGE.replace("40 °C", text), "a.toml").temperature == Fraction(kelvin)


def test_a_band_may_be_asked_for_that_no_role_calls_for():
    plain = STAGE.replace('bands = ["low", "mid", "high"]', 'bands = ["full"]')
    assert parse(plain.replace(', role = "coupling"', ""), "a.toml").bands == ("full",)


def test_one_model_may_serve_parts_of_two_kinds():
    both = UNMERGED.replace('polarity = "pnp"\nV_A = "80 V"\nbeta = 180', 'f_T = "1 GHz"')
    line = 'M1 = { mosfet = "small", gate = "b", drain = "c", source = "e", bulk = "vee" }\n'
    found = parse(both.replace("[models", line + "[models"), "a.toml")
    assert [dict(part(found, name).parameters)["f_T"].exact for name in ("Q1", "M1")] == [10**9] * 2
    assert part(found, "M1").nodes("bulk") == ("vee",)


def test_one_model_of_two_kinds_may_hold_no_key_that_one_of_them_lacks():
    line = 'M1 = { mosfet = "small", gate = "b", drain = "c", source = "e" }\n'
    text = UNMERGED.replace('polarity = "pnp"\nV_A = "80 V"\n', "")
    with pytest.raises(InputError, match='model small of a mosfet: the key "beta" is not known here'):
        parse(text.replace("[models", line + "[models"), "a.toml")


@pytest.mark.parametrize(
    "line",
    [
        # A transistor as a diode, a gate at its drain, a JFET as a current source.
        'X1 = { bipolar = true, base = "c", collector = "c", emitter = "e", I_C = "1 mA" }',
        'X1 = { mosfet = true, gate = "c", drain = "c", source = "e", g_m = "1 mS" }',
        'X1 = { jfet = true, gate = "e", drain = "c", source = "e", I_D = "1 mA" }',
        'X1 = { diode = true, anode = "c", cathode = "e", I_D = "1 mA" }',
        'X1 = { opamp = true, output = "y", inputs = ["b", "y"] }\n'
        'R_9 = { resistor = "1k", between = ["y", "c"] }',
    ],
)
def test_sound_ways_to_wire_a_device_are_accepted(line):
    assert parse(UNMERGED.replace("[models", f"{line}\n[models"), "a.toml").parts


def test_supplies_hold_their_nodes_so_that_nothing_there_floats():
    island = 'R_8 = { resistor = "1k", between = ["p", "q"] }\n'
    island += 'C_8 = { capacitor = "1u", between = ["p", "q"] }\n'
    text = STAGE.replace("[models", f"{island}[models")
    with pytest.raises(InputError, match='nodes "p" and "q" float'):
        parse(text, "a.toml")
    held = text.replace("[drives]", 'V_P = { node = "p", dc = "5 V" }\n[drives]')
    assert len(parse(held, "a.toml").supplies) == 3


def test_a_merge_follows_the_index_that_a_symbol_takes():
    line = 'M2 = { mosfet = "small", gate = "b", drain = "c", source = "e", r_o = "1k" }\n'
    text = STAGE.replace('polarity = "pnp"\nV_A = "80 V"\nbeta = 180', 'f_T = "1 GHz"')
    text = text.replace("[models", line + "[models")
    with pytest.raises(InputError, match='nothing to merge by the name "r_o"'):
        parse(text, "a.toml")
    assert parse(text.replace('"r_o"]', '"r_o1"]'), "a.toml").merges[1].parts == ("R_C", "r_o1")


def test_kinds_are_those_of_the_device_models():
    assert {"bipolar", "mosfet", "jfet", "diode", "opamp", "resistor"} <= set(KINDS)
    assert next(iter(KINDS)) == "resistor"


def test_the_one_key_that_a_table_knows_is_named_in_the_singular():
    with pytest.raises(InputError) as raised:
        parse(STAGE.replace('temperature = "40 °C"', 'colour = "red"'), "stage.toml")
    assert raised.value.cure == "the key is temperature"

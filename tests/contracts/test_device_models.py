"""What every device model must do, whoever wrote it."""

import pkgutil

import pytest

from derive.devices import models as folder
from derive.devices.elements import Element
from derive.devices.linearise import linearise
from derive.devices.registry import models
from derive.topology.kinds import KINDS
from derive.topology.read import parse

# One line of [parts] for each kind, at a node x between a source and a load.
WITNESSES = {
    "capacitor": 'P = { capacitor = "1n", between = ["x", "gnd"] }',
    "coupling": 'L_1 = { inductor = "1m", between = ["x", "gnd"] }\n'
    'L_2 = { inductor = "1m", between = ["y", "gnd"] }\n'
    'R_y = { resistor = "1k", between = ["y", "gnd"] }\n'
    'P = { coupling = "0.5", coils = ["L_1", "L_2"] }',
    "current_gain": 'P = { current_gain = "2", flows = ["x", "gnd"], senses = "R_1" }',
    "ideal_opamp": 'P = { ideal_opamp = true, output = "y", inputs = ["x", "y"] }\n'
    'R_y = { resistor = "1k", between = ["y", "gnd"] }',
    "inductor": 'P = { inductor = "1m", between = ["x", "gnd"] }',
    "opamp": 'P = { opamp = true, output = "y", inputs = ["x", "y"], A_0 = "1e5", f_unity = "1 MHz" }\n'
    'R_y = { resistor = "1k", between = ["y", "gnd"] }',
    "resistor": 'P = { resistor = "1k", between = ["x", "gnd"] }',
    "transconductance": 'P = { transconductance = "1 mS", flows = ["x", "gnd"], senses = ["x", "gnd"] }',
    "transresistance": 'P = { transresistance = "1k", output = ["y", "gnd"], senses = "R_1" }\n'
    'R_y = { resistor = "1k", between = ["y", "x"] }',
    "voltage_gain": 'P = { voltage_gain = "2", output = ["y", "gnd"], senses = ["x", "gnd"] }\n'
    'R_y = { resistor = "1k", between = ["y", "x"] }',
}
SHEET = """
[sheet]
title = "Contract"
[drives]
V_s = {{ voltage = ["in", "gnd"] }}
[parts]
R_1 = {{ resistor = "1k", between = ["in", "x"] }}
R_2 = {{ resistor = "1k", between = ["x", "gnd"] }}
{}
[find.H]
voltage = "x"
per = "V_s"
"""


@pytest.fixture(params=sorted(models()), ids=str)
def kind(request):
    return request.param


def test_every_file_of_the_folder_is_a_model_of_the_kind_of_its_name():
    files = sorted(module.name for module in pkgutil.iter_modules(folder.__path__))
    assert files == sorted(models())
    assert all(name == models()[name].KIND for name in files)


def test_every_model_is_of_a_kind_that_a_topology_may_name(kind):
    assert kind in KINDS


def test_a_models_docstring_states_its_law(kind):
    words = models()[kind].__doc__ or ""
    assert ":" in words.splitlines()[0] or "=" in words
    assert models()[kind].linearise.__doc__


def test_a_model_gives_elements_that_name_their_part_and_symbols_with_origin(kind):
    circuit = linearise(parse(SHEET.format(WITNESSES[kind]), "contract.toml"))
    own = [element for element in circuit.elements if element.part == "P"]
    assert own
    assert all(isinstance(element, Element) for element in own)
    assert len({element.name for element in circuit.elements}) == len(circuit.elements)
    for symbol in circuit.symbols:
        assert symbol.origin.startswith("part ")
        assert symbol.text


def test_a_missing_witness_would_be_seen():
    assert set(WITNESSES) == set(models())

"""What every device model must do, whoever wrote it."""

import pkgutil
import random
from fractions import Fraction

import pytest
from road_response import derivation_of, value_at

from derive.devices import models as folder
from derive.devices.elements import Element
from derive.devices.linearise import linearise
from derive.devices.registry import biased_device, device, models
from derive.errors import InputError
from derive.expressions.parse import parse_expression
from derive.expressions.walk import evaluate, names_of
from derive.quantities.units import unit_of
from derive.reading.kinds import KINDS
from derive.reading.read import parse

DEVICES = sorted(kind for kind in models() if device(kind))

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


def test_a_model_states_its_kind_and_an_example_that_reads_as_one(kind):
    spec = models()[kind].SPEC
    assert spec.name == kind
    assert spec.example.startswith(f"{{ {kind} = ")
    for key in spec.keys:
        assert f"{key} = " in spec.example
    terminals = {"gnd", *dict(spec.wires), *dict(spec.optional_wires)}
    pairs = [*spec.joins, *(pair for _, pair in spec.joins_if), *spec.apart]
    pairs += [pair for control in spec.controls for pair in control]
    assert terminals.issuperset(key for pair in pairs for key in pair)
    named = {parameter.name for parameter in spec.parameters}
    assert named.issuperset(name for names, _ in spec.joins_if for name in names)


@pytest.mark.parametrize("kind", sorted(WITNESSES))
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
    assert set(WITNESSES) | set(DEVICES) == set(models())


def witness_text(witness):
    parts = witness.parts
    drive = '[drives]\nV_s = { voltage = ["in", "gnd"] }\n'
    return f'[sheet]\ntitle = "Witness"\n{drive}[parts]\n{parts}\n[find.H]\n{witness.find}\n'


def differs(derivation, answer):
    """Whether the response is another than the answer, as a function of all symbols and s."""
    formula = parse_expression(answer)
    names = {*derivation.system.ring.names, *names_of(formula)}
    chance = random.Random(answer)
    for _ in range(4):
        values = {name: Fraction(chance.randint(2, 999), chance.randint(2, 99)) for name in sorted(names)}
        if value_at(derivation, values) != evaluate(formula, values, Fraction):
            return True
    return False


@pytest.mark.parametrize("kind", DEVICES)
def test_a_devices_witness_gives_the_answer_that_its_source_gives(kind):
    witness = device(kind).WITNESS
    assert witness.source
    derivation = derivation_of(witness_text(witness))
    assert not differs(derivation, witness.answer)
    assert differs(derivation, f"{witness.answer}*(1 + 1/1000)")


@pytest.mark.parametrize("kind", DEVICES)
def test_a_device_says_every_parameter_with_its_origin_or_why_it_is_left_out(kind):
    circuit = linearise(parse(witness_text(device(kind).WITNESS), "witness.toml"))
    (found,) = circuit.devices
    assert found.lines
    assert all(line.says and line.value for line in found.lines)
    assert all(item.why for item in found.left_out)
    assert all((line.equation is None) == (line.origin == "given") for line in found.lines)
    elements = [element for element in circuit.elements if element.part == found.part]
    assert elements
    assert all(element.name.split(".")[0] == found.part for element in elements)
    symbols = {symbol.name: symbol for symbol in circuit.symbols}
    for line in found.lines:
        assert symbols[line.symbol].value == line.value
        assert symbols[line.symbol].dimension == line.dimension
    assert {name for name, role in circuit.roles if role == "parasitic"} == {
        f"{found.part}.{line.key}" for line in found.lines if line.role
    }


@pytest.mark.parametrize("kind", DEVICES)
def test_a_devices_docstring_names_its_parameters_units_sign_and_source(kind):
    words = models()[kind].__doc__
    for parameter in models()[kind].SPEC.parameters:
        assert parameter.name in words
        unit = "Hz" if parameter.cycles else unit_of(parameter.dimension)
        assert unit in words
    assert "Sign" in words
    assert "Source: " in words


@pytest.mark.parametrize("kind", [kind for kind in DEVICES if biased_device(kind)])
def test_a_device_of_which_nothing_is_known_is_refused_with_what_would_settle_it(kind):
    model = biased_device(kind)
    witness = model.WITNESS
    lines = [line.split(model.CURRENT + " = ")[0].rstrip(", ") for line in witness.parts.split("\n")]
    text = witness_text(witness).replace(witness.parts, "\n".join([*lines[:-1], lines[-1] + " }"]))
    part = parse(text, "bare.toml").parts[-1]
    assert not model.is_settled(part)
    with pytest.raises(InputError, match="is not known") as told:
        linearise(parse(text, "bare.toml"))
    assert model.CURRENT in told.value.cure
    assert told.value.where == f"bare.toml:{part.place.line}"


@pytest.mark.parametrize("kind", [kind for kind in DEVICES if biased_device(kind)])
def test_a_biased_devices_currents_cancel_and_change_their_sign_with_its_polarity(kind):
    model = biased_device(kind)
    part = parse(witness_text(model.WITNESS), "witness.toml").parts[-1]
    values = {"beta": 100.0, "k": 0.002, "V_t": 0.7, "I_DSS": 0.008, "V_P": 2.0, "lambda": 0.01}
    values |= {key: float(value) for key, value in model.dc_values(part).items()}
    volts = {"base": 0.65, "collector": 5, "emitter": 0, "gate": 1, "drain": 5, "source": 0}
    volts |= {"anode": 0.65, "cathode": 0}
    terminals = {key: float(volts[key]) for key, _ in model.SPEC.wires}
    found = model.currents(terminals, values, 0.02585)
    assert set(found) == set(terminals)
    assert max(found.values()) > 5e-5
    assert abs(sum(found.values())) < 1e-12
    if model.SPEC.choices:
        mirrored = {key: -value for key, value in terminals.items()}
        other = model.currents(mirrored, values | {"polarity": -values["polarity"]}, 0.02585)
        assert other == {key: -value for key, value in found.items()}

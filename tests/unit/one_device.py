"""One device in a circuit, for the tests of device models."""

from road import topology_of

from derive.devices.linearise import device_parameters, linearise

AROUND = """
R_1 = { resistor = "1k", between = ["in", "b"] }
R_2 = { resistor = "1k", between = ["out", "gnd"] }
R_3 = { resistor = "1k", between = ["x", "gnd"] }
R_4 = { resistor = "1k", between = ["b", "out"] }
"""
WIRED = {
    "bipolar": 'base = "b", collector = "out", emitter = "x"',
    "mosfet": 'gate = "b", drain = "out", source = "x"',
    "jfet": 'gate = "b", drain = "out", source = "x"',
    "diode": 'anode = "b", cathode = "x"',
}
NAMES = {"bipolar": "Q1", "mosfet": "M1", "jfet": "J1", "diode": "D1"}


def topology_with(kind, more, wires="", rest=""):
    """Give a topology whose last part is the device with these keys."""
    line = f"{NAMES[kind]} = {{ {kind} = true, {wires or WIRED[kind]}, {more} }}"
    return topology_of(AROUND + line + "\n" + rest)


def parameters_of(kind, more, points=None, **rest):
    """Give the device's small-signal parameters."""
    return device_parameters(topology_with(kind, more, **rest), points or {})[0]


def elements_of(kind, more, **rest):
    """Give the elements that stand for the device."""
    circuit = linearise(topology_with(kind, more, **rest))
    return tuple(element for element in circuit.elements if element.part == NAMES[kind])


def line_of(found, key):
    """Give the line of one parameter."""
    (line,) = (line for line in found.lines if line.key == key)
    return line


def left_out(found):
    """Give what is said of each parameter that is left out."""
    return {item.symbol: item.why for item in found.left_out}


def near(value, expected, tolerance=1e-9):
    """Whether a value is the expected one."""
    return abs(float(value) - expected) <= tolerance * abs(expected)

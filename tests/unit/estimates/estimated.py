"""From parts as lines of TOML to all that is said of poles, zeros and corners, in one call."""

from __future__ import annotations

from dataclasses import replace

from road import derivation_of

from derive.check.verdict import Solution
from derive.estimates.estimate import estimate
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers
from derive.readable.vocabulary import vocabulary_of

CURRENT_DRIVE = 'I_s = { current = ["gnd", "out"] }'
PER_CURRENT = 'voltage = "out"\nper = "I_s"'

SERIES_RLC = """
R_1 = { resistor = "%s", between = ["in", "a"] }
L_1 = { inductor = "1 mH", between = ["a", "out"] }
C_1 = { capacitor = "1 nF", between = ["out", "gnd"] }
"""
COMMON_EMITTER = """
R_S = { resistor = "1k", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
C_pi = { capacitor = "12 pF", between = ["b", "gnd"] }
C_mu = { capacitor = "2 pF", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_L = { resistor = "4k7", between = ["out", "gnd"] }
"""
TWIN_T = """
R_1 = { resistor = "10k", between = ["in", "a"] }
R_2 = { resistor = "10k", between = ["a", "out"] }
C_3 = { capacitor = "20n", between = ["a", "gnd"] }
C_1 = { capacitor = "10n", between = ["in", "b"] }
C_2 = { capacitor = "10n", between = ["b", "out"] }
R_3 = { resistor = "5k", between = ["b", "gnd"] }
"""


def sections(*nanofarads, resistance="1k"):
    """Give buffered RC sections one after the other, with time constants of 1 µs per nF at 1 kΩ."""
    lines, node = [], "in"
    for index, size in enumerate(nanofarads, 1):
        last = index == len(nanofarads)
        end = "out" if last else f"n{index}"
        lines.append(f'R_{index} = {{ resistor = "{resistance}", between = ["{node}", "{end}"] }}')
        lines.append(f'C_{index} = {{ capacitor = "{size} nF", between = ["{end}", "gnd"] }}')
        if not last:
            node = f"m{index}"
            lines.append(
                f'A_{index} = {{ voltage_gain = "1", output = ["{node}", "gnd"], senses = ["{end}", "gnd"] }}'
            )
    return "\n".join(lines)


def solution_of(parts, *, band="full", time_constants=None, taken=(), **more):
    """Give the solution with its estimates."""
    form, derivation = normalise(derivation_of(parts, **more))
    numbers = nominal_numbers(derivation)
    circuit = derivation.system.small_signal
    vocabulary = vocabulary_of(circuit, (derivation.system.find.name, *taken))
    said = estimate(derivation, form, numbers, time_constants, vocabulary, band)
    return replace(Solution(derivation, form, numbers), estimates=said)


def said_of(parts, **more):
    """Give the estimates alone."""
    return solution_of(parts, **more).estimates


def rule(said, name):
    """Give the one estimate of that name."""
    (found,) = [estimate for estimate in said.estimates if estimate.name == name]
    return found

"""Circuits with bridging capacitors, for the tests of Miller's views, and the road to those views."""

from __future__ import annotations

from road import circuit_of

from derive.check.verdict import Solution
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers
from derive.reactances.find_miller import find_miller
from derive.readable.vocabulary import vocabulary_of

# A stage with transconductance: the common emitter's g_m, r_pi and two capacitors in plain parts.
STAGE = """
R_S = { resistor = "5k", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
C_pi = { capacitor = "10p", between = ["b", "gnd"] }
C_mu = { capacitor = "2p", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_L = { resistor = "2k", between = ["out", "gnd"] }
C_L = { capacitor = "5p", between = ["out", "gnd"] }
"""
FOLLOWER = """
R_S = { resistor = "1k", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "out"] }
C_pi = { capacitor = "10p", between = ["b", "out"] }
C_mu = { capacitor = "2p", between = ["b", "gnd"] }
g_m = { transconductance = "40 mS", flows = ["gnd", "out"], senses = ["b", "out"] }
R_E = { resistor = "1k", between = ["out", "gnd"] }
"""


def solved(circuit, find):
    """Go from a circuit to one quantity with its views."""
    system = write_equations(circuit, find)
    form, derivation = normalise(eliminate(system, plan(system)))
    numbers = nominal_numbers(derivation)
    views = find_miller(derivation, form, numbers, vocabulary_of(circuit))
    return Solution(derivation, form, numbers, miller=views)


def solution_of(parts, **more):
    """Go the whole road with a circuit of plain parts."""
    circuit = circuit_of(parts, **more)
    return solved(circuit, circuit.topology.finds[0])


def views_of(parts, **more):
    """Give Miller's views by their symbols."""
    return {view.symbol: view for view in solution_of(parts, **more).miller}

"""Which capacitors bridge two nodes, and which of the nodes is the near one."""

import pytest
from miller_circuits import FOLLOWER, STAGE, views_of
from road import system_of

from derive.reactances.miller_bridges import bridges


def found(parts, **more):
    return {
        bridge.capacitor.name: (bridge.near, bridge.far) for bridge in bridges(system_of(parts, **more))
    }


def test_capacitors_to_ground_bridge_nothing():
    assert found(STAGE) == {"C_mu": ("b", "out")}
    assert found(FOLLOWER) == {"C_pi": ("b", "out")}


def test_capacitor_at_a_node_that_the_drive_ties_bridges_nothing():
    assert (
        found(
            STAGE.replace(
                'C_mu = { capacitor = "2p", between = ["b", ',
                'C_mu = { capacitor = "2p", between = ["in", ',
            )
        )
        == {}
    )


def test_capacitor_written_the_other_way_round_has_the_same_near_node():
    assert found(STAGE.replace('["b", "out"]', '["out", "b"]')) == {"C_mu": ("b", "out")}


def test_near_node_is_the_one_with_fewer_elements_from_the_drive():
    driven_at_the_emitter = """
R_S = { resistor = "75R", between = ["in", "e"] }
r_b = { resistor = "100R", between = ["b", "gnd"] }
r_pi = { resistor = "2k5", between = ["b", "e"] }
C_pi = { capacitor = "10p", between = ["b", "e"] }
C_mu = { capacitor = "2p", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "e"], senses = ["b", "e"] }
R_L = { resistor = "2k", between = ["out", "gnd"] }
"""
    # The emitter is one element from the drive, base and collector two: there the base controls.
    assert found(driven_at_the_emitter) == {"C_pi": ("e", "b"), "C_mu": ("b", "out")}


def test_test_current_of_an_impedance_is_the_drive():
    assert found(FOLLOWER, find='impedance = "out"') == {"C_pi": ("out", "b")}
    assert found(FOLLOWER, find='impedance = "b"') == {"C_pi": ("b", "out")}


def test_capacitor_whose_current_is_wanted_or_sensed_stays_as_it_is():
    assert found(STAGE, find='current = "C_mu"\nper = "V_s"') == {}
    sensed = STAGE + 'k_1 = { current_gain = "2", flows = ["out", "gnd"], senses = "C_mu" }\n'
    assert found(sensed) == {}


def test_capacitor_across_an_active_device_comes_before_a_passive_one():
    passive = 'C_x = { capacitor = "1p", between = ["m", "b"] }\nR_m = { resistor = "1k", between = ["m", "out"] }\n'
    assert list(found(passive + STAGE)) == ["C_mu", "C_x"]


# Where the signal goes through the capacitor itself, the gain without it is zero: nothing is multiplied.
@pytest.mark.parametrize(
    "parts",
    [
        'R_S = { resistor = "1k", between = ["in", "x"] }\nC_1 = { capacitor = "1u", between = ["x", "out"] }\n'
        'R_L = { resistor = "10k", between = ["out", "gnd"] }',
        'R_S = { resistor = "1k", between = ["in", "x"] }\nR_1 = { resistor = "1k", between = ["x", "gnd"] }\n'
        'C_1 = { capacitor = "1u", between = ["x", "y"] }\nR_2 = { resistor = "1k", between = ["y", "gnd"] }\n'
        'g_m = { transconductance = "1 mS", flows = ["out", "gnd"], senses = ["x", "gnd"] }\n'
        'R_L = { resistor = "10k", between = ["out", "gnd"] }',
    ],
    ids=["coupling capacitor", "dead end"],
)
def test_coupling_capacitor_has_no_view(parts):
    assert views_of(parts) == {}

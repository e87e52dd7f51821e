import pytest
from band_circuits import C, L, R, circuit

from derive.bands.choose import bands_of, state_in, states

PARTS = (R("R_1", "gen", "a"), C("C_a", "a", "out"), C("C_b", "out", "gnd"), R("R_2", "out", "gnd"))
VALUES = {"R_1": "1000", "C_a": "1/1000000", "C_b": "1/1000000000", "R_2": "2200"}


@pytest.mark.parametrize(
    ("roles", "bands"),
    [
        ((), ("full",)),
        ((("C_a", "coupling"),), ("low", "mid")),
        ((("C_a", "bypass"),), ("low", "mid")),
        ((("C_b", "parasitic"),), ("mid", "high")),
        ((("C_a", "coupling"), ("C_b", "parasitic")), ("low", "mid", "high")),
    ],
)
def test_the_roles_call_for_the_bands(roles, bands):
    assert bands_of(circuit(PARTS, VALUES, roles)) == bands


def test_the_users_choice_of_bands_wins():
    chosen = circuit(PARTS, VALUES, (("C_a", "coupling"),), bands=("full", "mid"))
    assert bands_of(chosen) == ("full", "mid")


def test_capacitors_are_short_or_open_as_the_contract_says():
    table = {
        band: [state_in(role, band, inductor=False) for role in ("", "coupling", "bypass", "parasitic")]
        for band in ("low", "mid", "high", "full")
    }
    assert table == {
        "low": ["kept", "kept", "kept", "open"],
        "mid": ["kept", "short", "short", "open"],
        "high": ["kept", "short", "short", "kept"],
        "full": ["kept", "kept", "kept", "kept"],
    }


def test_an_inductor_is_the_reverse_of_a_capacitor():
    # A choke blocks what is above its band; a lead's inductance is nothing below it.
    choke = circuit((R("R_1", "gen", "out"), L("L_1", "out", "gnd")), {"R_1": "50", "L_1": "1/1000"})
    for role, band, state in (
        ("bypass", "mid", "open"),
        ("bypass", "high", "open"),
        ("parasitic", "mid", "short"),
        ("parasitic", "low", "short"),
    ):
        with_role = circuit(choke.elements, {"R_1": "50", "L_1": "1/1000"}, (("L_1", role),))
        assert states(with_role, band) == {"L_1": state}
    assert states(choke, "mid") == {}

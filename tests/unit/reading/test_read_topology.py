from __future__ import annotations

import os
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from derive.errors import InputError, NotYetSupportedError
from derive.reading.read import parse, read

SHEET = '[sheet]\ntitle = "Stage"\n'
STAGE = """[sheet]
title    = "Line buffer"
number   = "RG-310-04"
date     = 2024-05-01
notes    = \"\"\"first
second\"\"\"

[nodes]
gen = "receiver board output"

[drives]
V_s = { voltage = ["gen", "gnd"] }
I_s = { current = ["gnd", "o"] }

[parts]
R_S = { resistor = "600 Ω", between = ["gen", "x"], tol = "1 %" }
L_1 = { inductor = "10 uH", between = ["x", "gnd"] }
L_2 = { inductor = "?", between = ["o", "gnd"] }
K_1 = { coupling = 0.98, coils = ["L_1", "L_2"] }
g_m = { transconductance = "-40 mS", senses = ["x", "gnd"], flows = ["o", "gnd"], tol = "J" }
B_1 = { current_gain = "100", flows = ["o", "gnd"], senses = "R_S" }
U_1 = { opamp = "fast", output = "p", inputs = ["o", "m"], f_unity = "10 MHz" }
U_2 = { ideal_opamp = true, output = "q", inputs = ["p", "q"] }

[parts.R_F]
between = [
    "p",
    "m",
]
resistor = "4k7"

[parts.R_G]
between = ["m", "gnd"]
resistor = "1k"

[models.fast]
A_0 = "200k"
w_unity = "6 Mrad/s"
R_out = "50 Ω"

[find.A_v]
voltage = ["q", "x"]
per = { V_s = "1/2" }

[find.A_i]
current = "V_s"
per = "I_s"

[find.Z_in]
impedance = "x"
"""


@pytest.fixture(scope="module")
def topology():
    return parse(STAGE, "some/where/buffer.toml")


def test_title_block_and_words_are_kept_as_written(topology):
    block = topology.title_block
    assert (block.title, block.number, block.date) == ("Line buffer", "RG-310-04", "2024-05-01")
    assert block.notes == "first\nsecond"
    assert block.checked == ""
    assert topology.node_words == (("gen", "receiver board output"),)
    assert topology.text == STAGE


def test_topology_keeps_the_file_name_alone_and_places_keep_the_path(topology):
    assert topology.file == "buffer.toml"
    assert str(topology.parts[0].place) == "some/where/buffer.toml:16"


def test_every_part_drive_and_find_knows_its_line(topology):
    lines = {item.name: item.place.line for item in topology.parts}
    assert lines == {
        "R_S": 16,
        "L_1": 17,
        "L_2": 18,
        "K_1": 19,
        "g_m": 20,
        "B_1": 21,
        "U_1": 22,
        "U_2": 23,
        "R_F": 25,
        "R_G": 32,
    }
    assert [drive.place.line for drive in topology.drives] == [12, 13]
    assert [find.place.line for find in topology.finds] == [41, 45, 49]


def test_parts_hold_values_wires_and_tolerances(topology):
    parts = {part.name: part for part in topology.parts}
    assert parts["R_S"].value.exact == 600
    assert parts["R_S"].value.text == "600 Ω"
    assert parts["R_S"].tolerance == Fraction(1, 100)
    assert parts["L_2"].value.exact is None
    assert parts["K_1"].value.exact == Fraction(98, 100)
    assert parts["K_1"].coils == ("L_1", "L_2")
    assert parts["g_m"].value.exact == Fraction(-4, 100)
    assert parts["g_m"].wires == (("senses", ("x", "gnd")), ("flows", ("o", "gnd")))
    assert parts["g_m"].tolerance == Fraction(1, 20)
    assert parts["B_1"].senses_part == "R_S"
    assert parts["U_2"].wires == (("output", ("q",)), ("inputs", ("p", "q")))
    assert parts["U_2"].value is None
    assert parts["R_F"].nodes("between") == ("p", "m")


def test_own_parameters_override_those_of_the_model(topology):
    part = next(part for part in topology.parts if part.name == "U_1")
    assert part.model == "fast"
    assert [(key, value.exact) for key, value in part.parameters] == [
        ("A_0", 200_000),
        ("f_unity", 10**7),
        ("R_out", 50),
    ]


def test_finds_hold_pairs_parts_and_weights(topology):
    a_v, a_i, z_in = topology.finds
    assert (a_v.quantity, a_v.nodes, a_v.per) == (
        "voltage",
        ("q", "x"),
        (("V_s", Fraction(1, 2)),),
    )
    assert (a_i.quantity, a_i.part, a_i.per) == ("current", "V_s", (("I_s", Fraction(1)),))
    assert (z_in.quantity, z_in.nodes, z_in.per) == ("impedance", ("x", "gnd"), ())


def test_the_same_text_gives_the_same_topology():
    assert parse(STAGE, "a.toml") == parse(STAGE, "a.toml")


def test_line_ends_of_two_letters_change_no_value(topology):
    other = parse(STAGE.replace("\n", "\r\n"), "some/where/buffer.toml")
    assert other.parts == topology.parts
    assert other.finds == topology.finds
    assert other.title_block == topology.title_block


def test_what_is_not_yet_supported_says_so_by_its_own_error():
    with pytest.raises(NotYetSupportedError, match="return_ratio"):
        parse(STAGE + '[find.T]\nreturn_ratio = "R_1"\n', "a.toml")


def test_file_is_read_with_its_name(tmp_path):
    path = tmp_path / "buffer.toml"
    path.write_bytes(STAGE.replace("\n", "\r\n").encode())
    topology = read(path)
    assert topology.file == "buffer.toml"
    assert topology.text.count("\r\n") == STAGE.count("\n")
    assert topology.parts[0].place.file == str(path)
    assert read(str(path)) == topology


def bad_file(tmp_path, data):
    path = tmp_path / "bad.toml"
    path.write_bytes(data)
    with pytest.raises(InputError) as caught:
        read(path)
    assert caught.value.cure
    return caught.value.where.removeprefix(str(path)), caught.value.what


@pytest.mark.parametrize(
    ("data", "line", "words"),
    [
        (b"\xef\xbb\xbf[sheet]\n", ":1", "byte order mark"),
        (b"[sheet]\ntitle = '\xff'\n", ":2", "not UTF-8"),
        ("[sheet]\n".encode("utf-16"), ":1", "not UTF-8"),
        (b"[sheet]\n\ntitle = '\0'\n", ":3", "NUL"),
        (b"# x\n" * 300_000, "", "larger than 1 MB"),
        (b"\x7fELF\x02\x01\x01\x00", ":1", "NUL"),
        (b"", ":1", "no [sheet]"),
    ],
)
def test_bytes_that_are_no_topology_are_refused_with_their_line(tmp_path, data, line, words):
    where, what = bad_file(tmp_path, data)
    assert where == line
    assert words in what


def test_missing_file_directory_and_pipe_are_refused(tmp_path):
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    for path, words in (
        (tmp_path / "none.toml", "no such file"),
        (tmp_path, "directory"),
        (pipe, "not a plain file"),
        ("bad\0name.toml", "cannot be read"),
        ("x" * 5000, "cannot be read"),
        (tmp_path / "bad.toml" / "x.toml", "no such file"),
    ):
        with pytest.raises(InputError, match=words) as caught:
            read(path)
        assert caught.value.cure


def test_half_a_character_is_refused():
    with pytest.raises(InputError, match="surrogate") as caught:
        parse(SHEET + 'number = "\ud800"\n', "a.toml")
    assert caught.value.where == "a.toml:3"


PIECES = st.sampled_from(
    (
        *("[parts]\n", "[find.A]\n", '"', "{", "}", "[", "]", "=", ",", "\n", "\\", "#", "'''"),
        *("R_S", "gnd", "true", "5", "resistor", "senses", "?", "inf", "1e999", "voltage", "per"),
    )
)


@settings(max_examples=400, deadline=None)
@given(
    st.integers(0, len(STAGE)),
    st.integers(0, 40),
    st.lists(PIECES, max_size=3).map(" ".join),
)
def test_a_damaged_file_is_read_or_refused_but_never_breaks_the_reader(at, cut, new):
    try:
        parse(STAGE[:at] + new + STAGE[at + cut :], "a.toml")
    except InputError as error:
        message = str(error)
        complete = bool(error.cure) and message.startswith("a.toml")
    else:
        complete = True
    assert complete

"""One line of hand algebra, and a text of them: sides, signs, remarks, places, and what cannot be read."""

from __future__ import annotations

import pytest

from derive.expressions.parse import parse_expression
from derive.expressions.text import to_text
from derive.expressions.tree import Expression, Name
from derive.handcheck.read_line import read_line
from derive.handcheck.read_lines import read_lines
from derive.handcheck.report import HandLine


def read(text: str, above: Expression | None = None, number: int = 1) -> HandLine:
    return read_line(number, "hand.toml:7", text, "", above)[0]


def said(line: HandLine) -> str:
    assert line.fault is None, line.fault
    assert line.left is not None
    assert line.right is not None
    return f"{to_text(line.left)} {line.relation} {to_text(line.right)}"


@pytest.mark.parametrize(
    ("typed", "means", "text"),
    [
        ("v_b = a*v_out", "v_b = a*v_out", "v_b = a*v_out"),
        ("  A_v ~ 1/b_1  ", "A_v ~ 1/b_1", "A_v ~ 1/b_1"),
        ("A_v ≈ 1", "A_v ~ 1", "A_v ≈ 1"),
        (r"A_v \approx 1", "A_v ~ 1", r"A_v \approx 1"),
        (r"A_v \simeq 1", "A_v ~ 1", r"A_v \simeq 1"),
        ("A_v ~= 1", "A_v ~ 1", "A_v ~= 1"),
        ("R_Sp := R_S ∥ r_π", "R_Sp = R_S || r_pi", "R_Sp := R_S ∥ r_π"),
        ("R_p ≡ a", "R_p = a", "R_p ≡ a"),
        ("A_v(s) = K", "A_v = K", "A_v(s) = K"),
        (r"A_{v}\left(s\right) = K", "A_v = K", r"A_{v}\left(s\right) = K"),
        (r"$A_v = K$", "A_v = K", "A_v = K"),
        (r"A_v &= \frac{a}{b} \\", "A_v = a/b", r"A_v &= \frac{a}{b}"),
        ("⇒ A_v = K,", "A_v = K", "A_v = K"),
        (r"\Rightarrow A_v = K", "A_v = K", "A_v = K"),
        ("=> A_v = K", "A_v = K", "A_v = K"),
    ],
)
def test_a_claim_is_read_as_engineers_write_it(typed: str, means: str, text: str) -> None:
    line = read(typed)
    assert said(line) == means
    assert line.text == text


def test_every_place_of_a_line_stands_on_its_own_words() -> None:
    line = read(r"v_out/R_E = (v_b − v_out)·\frac{1}{r_\pi}")
    assert line.left is not None
    there = {way: line.text[span.start : span.end] for way, span in line.spans}
    assert there[()] == line.text
    assert there[0,] == "v_out/R_E"
    assert there[0, 1] == "R_E"
    assert there[1, 0] == "(v_b − v_out)"
    assert there[1, 0, 1] == "− v_out"
    assert there[1, 0, 1, 0] == "v_out"
    assert there[1, 1] == r"\frac{1}{r_\pi}"
    assert there[1, 1, 1] == r"{r_\pi}"
    # A place that is in no tree as written is that of the nearest thing round it.
    found = line.span((1, 0, 0, 5))
    assert found is not None
    assert line.text[found.start : found.end] == "v_b"


@pytest.mark.parametrize(
    ("typed", "position", "what", "cure"),
    [
        ("A_v", 3, 'expected "=" or "~"', "write LEFT = RIGHT"),
        ("A_v = a = b", 8, "a line makes one claim", 'begin a new line with the second "="'),
        ("A_v == a", 4, '"==" cannot stand here', "write LEFT = RIGHT"),
        ("A_v < a", 4, '"<" cannot stand here', "write LEFT = RIGHT"),
        ("A_v =", 5, "the right side is missing", "complete it"),
        ("= a", 0, "the left side is missing", "write LEFT = RIGHT"),
        ("A_v = R_E*", 10, "ends too early; expected", "complete it"),
        ("A_v = (a + b", 12, 'expected ")"', "close the parenthesis"),
        ("A_v = 2 R_E", 8, '"R_E" cannot stand here', 'write "*" between factors'),
        ("A_v = β·2 R_E", 10, '"R_E" cannot stand here', 'write "*" between factors'),
        (r"A_v = \foo", 6, r"\foo has no meaning here", r"\frac"),
        ("A_v(s, t) = 1", 3, '"(" cannot stand here', 'write "*"'),
        ("A_v = a;b", 7, '";" has no meaning', "use names, numbers"),
        ("A_v = __import__('os')", 6, '"_" has no meaning', "begin a name with a letter"),
    ],
)
def test_what_cannot_be_read_is_told_with_its_place_and_a_cure(
    typed: str, position: int, what: str, cure: str
) -> None:
    line = read(typed)
    assert line.left is None
    assert line.right is None
    assert line.fault is not None
    assert line.fault.position == position
    assert what in line.fault.what
    assert cure in line.fault.cure


def test_a_line_that_begins_with_its_sign_takes_the_left_side_from_above() -> None:
    first, left = read_line(1, "h:1", "A_v = a/b")
    second = read("= a*c", left, 2)
    assert said(second) == "A_v = a*c"
    assert (0,) not in dict(second.spans)
    assert second.span((0,)) == second.span(())
    third = read("≈ a", left, 3)
    assert said(third) == "A_v ~ a"
    assert first.fault is None


def test_the_left_side_goes_on_past_a_right_side_that_cannot_be_read() -> None:
    lines = read_lines("A_v = a*\n = b\n ≈ c\n 2 x = 3\n = d", "hand.toml", 1)
    assert lines[0].fault is not None
    assert lines[0].left is None
    assert said(lines[1]) == "A_v = b"
    assert said(lines[2]) == "A_v ~ c"
    fault = lines[4].fault
    assert fault is not None
    assert "it cannot be read there" in fault.what


def test_remarks_blank_lines_and_places_in_the_file() -> None:
    text = "# Follower\n\n# from the emitter\nv_b = a   # KCL\n   \n# middle\nbroken\nc = d + \\\n   e # long\n# end\n"
    lines = read_lines(text, "hand.toml", 10)
    assert [(line.number, line.where) for line in lines] == [
        (1, "hand.toml:13"),
        (2, "hand.toml:16"),
        (3, "hand.toml:17"),
    ]
    assert [line.remark for line in lines] == ["Follower\nfrom the emitter\nKCL", "middle", "long\nend"]
    assert [line.fault is None for line in lines] == [True, False, True]
    assert said(lines[2]) == "c = d + e"
    # CR LF changes nothing.
    assert read_lines(text.replace("\n", "\r\n"), "hand.toml", 10) == lines


def test_what_frames_formulas_in_latex_is_passed_over() -> None:
    text = (
        "\\begin{align*}\nZ &= \\frac{a}{b} \\\\\n &\\approx a \\nonumber\n\\end{align*}\n$$\nY = 1\n$$"
    )
    lines = read_lines(text, "h.toml", 1)
    assert [said(line) for line in lines] == ["Z = a/b", "Z ~ a", "Y = 1"]
    assert [line.where for line in lines] == ["h.toml:2", "h.toml:3", "h.toml:6"]


def test_a_line_that_ends_the_text_with_a_backslash_is_still_read() -> None:
    (line,) = read_lines("a = b \\", "h.toml", 1)
    assert said(line) == "a = b"
    assert read_lines("# nothing\n\n", "h.toml", 1) == ()


def test_a_line_of_three_hundred_terms_is_read_with_all_its_places() -> None:
    text = "D = " + " + ".join(f"s·R_{k}·C_{k}" for k in range(300))
    line = read(text)
    assert line.fault is None
    assert len(line.spans) == 3 + 300 * 4
    span = line.span((1, 299, 2))
    assert span is not None
    assert text[span.start : span.end] == "C_299"


def test_the_tree_keeps_the_form_in_which_the_line_was_written() -> None:
    line = read("Z = (a + b)/(c) * d - -e")
    assert line.right == parse_expression("(a + b)/c*d + e")
    assert line.left == Name("Z")

from __future__ import annotations

import tomllib

import pytest
from hypothesis import given
from hypothesis import strategies as st

from derive.reading.lines import index_lines

TRICKY = '''# comment with [brackets] = "and quotes"
title = "a # b"
notes = """
[not.a.table]
key = "still text" \\
  and \\""" more
"""
raw = \'\'\'
it's "raw" [x]
\'\'\'
ends = """two quotes at the end"""""
"quoted key" = 1
a.b . "c d".e = [
  1, # one
  "two",
  [3,
   4],
  { x = 5, y = { z = "}" } },
]
when = 2024-05-01 07:32:00
[ parts . R_1 ]
resistor = "1k"
between = ["in",
  "out"]

[parts.R_2]
x = 1 # [x]
[[many]]
n = 1
[[many]]
n = 2
[many.sub]
deep = true
'''


def paths(data, prefix=()):
    items = data.items() if isinstance(data, dict) else enumerate(data)
    for key, value in items:
        yield (*prefix, key)
        if isinstance(value, dict | list):
            yield from paths(value, (*prefix, key))


# Counted by eye in the text above.
WHERE = [
    (("title",), 2),
    (("notes",), 3),
    (("raw",), 8),
    (("ends",), 11),
    (("quoted key",), 12),
    (("a", "b", "c d", "e"), 13),
    (("a", "b", "c d", "e", 0), 14),
    (("a", "b", "c d", "e", 1), 15),
    (("a", "b", "c d", "e", 2, 0), 16),
    (("a", "b", "c d", "e", 2, 1), 17),
    (("a", "b", "c d", "e", 3, "y", "z"), 18),
    (("when",), 20),
    (("parts",), 21),
    (("parts", "R_1"), 21),
    (("parts", "R_1", "resistor"), 22),
    (("parts", "R_1", "between", 1), 24),
    (("parts", "R_2"), 26),
    (("parts", "R_2", "x"), 27),
    (("many", 0), 28),
    (("many", 0, "n"), 29),
    (("many", 1), 30),
    (("many", 1, "n"), 31),
    (("many", 1, "sub", "deep"), 33),
]


@pytest.mark.parametrize(("path", "line"), WHERE)
@pytest.mark.parametrize("ending", ["\n", "\r\n"])
def test_every_item_knows_its_line(path, line, ending):
    assert index_lines(TRICKY.replace("\n", ending)).line(path) == line


def test_every_path_of_the_standard_parser_has_a_line_of_its_own():
    index = index_lines(TRICKY)
    assert set(paths(tomllib.loads(TRICKY))) <= set(index.lines)
    assert index.repeats == ()


def test_unknown_path_falls_back_to_what_is_around_it():
    index = index_lines(TRICKY)
    assert index.line(("parts", "R_2", "missing", 3)) == 26
    assert index.line(("nothing",)) == 1
    assert index.line(()) == 1


def test_name_written_twice_is_told_with_both_lines():
    text = "[t]\na = 1\n\na = 2\n"
    assert index_lines(text).repeats == ((("t", "a"), 2, 4),)
    assert index_lines("[t]\na = 1\n[t]\n").repeats == ((("t",), 1, 3),)


@given(st.text(alphabet="ab[]{}=,.\"'#\\\n\r \t12", max_size=60))
def test_no_text_makes_the_index_fail_and_valid_text_is_indexed_in_full(text):
    index = index_lines(text)
    try:
        data = tomllib.loads(text)
    except (tomllib.TOMLDecodeError, RecursionError):
        return
    assert set(paths(data)) <= set(index.lines)
    assert index.repeats == ()
    last = text.count("\n") + 1
    assert all(1 <= line <= last for line in index.lines.values())

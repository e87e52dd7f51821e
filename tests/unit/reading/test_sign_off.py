"""Revisions, reviews and plots in a topology file: read as written, or refused with the line and a cure."""

import pytest

from derive.errors import InputError
from derive.reading.read import parse
from derive.topology.sign_off import Reviewed, Revision
from derive.topology.topology import PLOTS

REST = """
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "out"] }
R_2 = { resistor = "1k", between = ["out", "gnd"] }
[find.H]
voltage = "out"
per = "V_s"
"""


def read(sheet="", more=""):
    return parse(f'[sheet]\ntitle = "Divider"\n{sheet}{REST}{more}', "divider.toml")


def test_revisions_are_read_in_their_order():
    topology = read(
        'revision = "B"\n',
        '[[revision]]\nmark = "A"\nwhat = "first issue"\ndate = 2024-03-01\n'
        '[[revision]]\nmark = "B"\nwhat = "R_2 raised"\nby = "J. Example"\n',
    )
    assert topology.revisions == (
        Revision("A", "first issue", "2024-03-01"),
        Revision("B", "R_2 raised", "", "J. Example"),
    )


def test_reviews_are_read_with_their_verdicts():
    topology = read(
        more='[[review]]\nitem = "Operating point"\nby = "A. Checker"\nverdict = "accepted"\n'
        '[[review]]\nitem = "Load"\nby = "A. Checker"\nverdict = "conditional"\nremark = "below 10 m of cable"\n'
    )
    assert topology.reviews == (
        Reviewed("Operating point", "A. Checker", "accepted"),
        Reviewed("Load", "A. Checker", "conditional", "below 10 m of cable"),
    )


def test_plots_are_chosen_or_left_as_they_are():
    assert read().plots == PLOTS == ("response", "poles", "step")
    assert read('plots = ["delay", "response"]\n').plots == ("response", "delay")
    assert read("plots = []\n").plots == ()


@pytest.mark.parametrize(
    ("sheet", "more", "line", "says", "cure"),
    [
        ('revision = "C"\n', '[[revision]]\nmark = "A"\nwhat = "x"\n', 3, '"C"', "stands last"),
        ("", '[[revision]]\nwhat = "x"\n', 12, "mark is missing", "mark"),
        ("", '[[revision]]\nmark = "A"\n', 12, "what is missing", "what"),
        ("", '[[revision]]\nmark = "A"\nwhat = "x"\nwho = "me"\n', 15, '"who" is not known', "by"),
        (
            "",
            '[[revision]]\nmark = "A"\nwhat = "x"\n[[revision]]\nmark = "A"\nwhat = "y"\n',
            16,
            "twice",
            "own mark",
        ),
        ("", '[revision]\nmark = "A"\n', 12, "list of tables", "[[revision]]"),
        ("", '[[review]]\nitem = "x"\nverdict = "accepted"\n', 12, "by is missing", "[[review]]"),
        (
            "",
            '[[review]]\nitem = "x"\nby = "me"\nverdict = "acepted"\n',
            15,
            '"acepted"',
            'did you mean "accepted"',
        ),
        (
            "",
            '[[review]]\nitem = "x"\nby = "me"\nverdict = "conditional"\n',
            12,
            "does not say why",
            "remark",
        ),
        ("", '[[review]]\nitem = 3\nby = "me"\nverdict = "accepted"\n', 13, "number 3", "quotes"),
        ('plots = "step"\n', "", 3, "wants a list", "plots = []"),
        ('plots = ["steps"]\n', "", 3, 'no plot "steps"', 'did you mean "step"'),
        ("plots = [3]\n", "", 3, "number 3", "quotes"),
    ],
)
def test_what_cannot_be_used_is_refused_with_its_line_and_a_cure(sheet, more, line, says, cure):
    with pytest.raises(InputError) as refused:
        read(sheet, more)
    error = refused.value
    assert error.where == f"divider.toml:{line}"
    assert says in error.what
    assert cure in error.cure

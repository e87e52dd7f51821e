"""What every section of the sheet and every step rule must do, whoever wrote it."""

import importlib
import pkgutil
from dataclasses import replace
from pathlib import Path

import pytest

from derive.eliminate import rules
from derive.expressions.tree import Elided
from derive.expressions.walk import children_of
from derive.normalise import normalise
from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet import sections
from derive.sheet.compose import compose, section_modules
from derive.sheet.document import (
    Block,
    Display,
    Matrix,
    Section,
    Table,
    unfolded,
)
from derive.sheet.view import views
from derive.sheet.wording import SENTENCES, Wording, plain_line
from derive.topology.topology import Attached, Place

CIRCUITS = Path(__file__).parents[1] / "benchmarks" / "circuits"
CASES = Path(__file__).parents[2] / "cases"
ASSUMED = '[[assume]]\nthat = "beta >> 1"\n[budget]\nsimplify = true\n'
HAND = "find = 'A_v'\nband = 'mid'\nlines = '''\na_1 = 0\nK = \n'''\n"


@pytest.fixture(scope="module")
def outcome():
    # A stage with supplies, a device, roles and merged parts has something for every section.
    text = (CASES / "echo_preamp" / "topology.toml").read_text(encoding="utf-8")
    by_hand = Attached("hand.toml", "hand.toml", HAND, Place("topology.toml", 1))
    topology = replace(parse(text + ASSUMED, "topology.toml"), hand=by_hand)
    return derive(topology, other_engine=False).outcome


def names_in(package):
    return sorted(module.name for module in pkgutil.iter_modules(package.__path__))


def told_of(module, outcome):
    """Give what a section is about: the outcome, or the first result that it has something to say of."""
    if module.SCOPE == "sheet":
        return outcome
    return next(view for view in views(outcome) if module.compose(view))


def test_sections_are_found_by_folder_in_an_order_of_their_own():
    modules = section_modules()
    assert sorted(module.__name__.rpartition(".")[2] for module in modules) == names_in(sections)
    orders = [module.ORDER for module in modules]
    assert orders == sorted(set(orders))


@pytest.mark.parametrize("name", names_in(sections))
def test_a_section_says_its_place_and_scope_and_composes_blocks(name, outcome):
    module = importlib.import_module(f"{sections.__name__}.{name}")
    assert module.__doc__
    assert module.SCOPE in ("sheet", "result")
    given = told_of(module, outcome)
    made = module.compose(given)
    assert made
    assert made == module.compose(given)
    for section in made:
        assert isinstance(section, Section)
        assert section.title
        assert section.blocks
        for block in unfolded(section.blocks):
            assert isinstance(block, Block)
            if isinstance(block, Table):
                assert block.caption
                assert all(len(row) == len(block.columns) for row in block.rows)


def test_every_section_stands_on_the_sheet(outcome):
    titles = [section.title for section in compose(outcome, "echo_preamp").sections]
    for module in section_modules():
        given = told_of(module, outcome)
        assert {section.title for section in module.compose(given)} <= set(titles)


def rule_names():
    found = []
    for name in names_in(rules):
        module = importlib.import_module(f"{rules.__name__}.{name}")
        found += [
            value for key, value in vars(module).items() if key.isupper() and isinstance(value, str)
        ]
        assert module.__doc__, name
        assert module.NAME
    return sorted([*found, normalise.GAIN, normalise.COEFFICIENT, normalise.NORMAL])


def test_every_rule_has_a_name_of_its_own_and_a_sentence():
    assert rule_names() == sorted(set(rule_names())) == sorted(SENTENCES)


def test_every_sentence_begins_like_one_and_ends_with_a_full_stop(outcome):
    derivation = outcome.results[0].solution.derivation
    wording = Wording(derivation)
    for step in derivation.steps:
        words = plain_line(wording.says(step))
        assert words.endswith("."), words
        assert words[0].isupper() or words[0] == "(", words
        assert "  " not in words
        assert "None" not in words


def elided(expression):
    return isinstance(expression, Elided) or any(map(elided, children_of(expression)))


def test_a_short_derivation_is_shown_whole(outcome):
    for section in compose(outcome, "follower").sections:
        for block in unfolded(section.blocks):
            if isinstance(block, Display) and not isinstance(block.content, Matrix):
                content = block.content
                sides = (content.left, content.right) if hasattr(content, "left") else (content,)
                assert not any(map(elided, sides))

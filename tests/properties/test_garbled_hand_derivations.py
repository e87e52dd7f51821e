"""Derivations of garbled lines are judged and shown: on a terminal, as data, and as a sheet, without a stumble."""

from __future__ import annotations

import json
import random
import sys
from html.parser import HTMLParser
from pathlib import Path

import pytest
from garbled_lines import garbled

from derive.handcheck.check_lines import check_lines
from derive.handcheck.read_line import read_line
from derive.handcheck.report import HandFile
from derive.reading.read import parse
from derive.render.html import to_html
from derive.sheet.hand.compose import compose_hand
from derive.sheet.hand.plain import plain_report
from derive.sheet.hand.words import counts, place_of

sys.path += [str(Path(__file__).parents[1] / folder) for folder in ("support", "unit/handcheck")]

# What is shared with other tests is found once the folders above are known.
from follower import TOPOLOGY
from hand_lines import solution_of

DERIVATIONS, LINES = 25, 8


class Links(HTMLParser):
    """Notes where links lead, and what they can lead to."""

    def __init__(self) -> None:
        super().__init__()
        self.wanted: set[str] = set()
        self.there: set[str] = set()

    def handle_starttag(self, tag, attrs):
        for name, value in attrs:
            if name == "id":
                self.there.add(f"#{value}")
            if name == "href":
                self.wanted.add(value)


@pytest.fixture(scope="module")
def stage():
    return solution_of(TOPOLOGY, "A_v")


def derivation(chance: random.Random) -> HandFile:
    read, left = [], None
    for number in range(1, LINES + 1):
        text = garbled(chance).encode("utf-8", "replace").decode()
        line, left = read_line(number, f"hand.toml:{number}", text, "a remark", left)
        read.append(line)
    return HandFile("hand.toml", "a text", "stage.toml", "A_v", "full", tuple(read))


def test_whatever_is_typed_is_judged_and_shown(stage):
    chance = random.Random(20261201)
    topology = parse(TOPOLOGY, "stage.toml")
    seen: dict[str, int] = {}
    for turn in range(DERIVATIONS):
        hand = derivation(chance)
        report = check_lines(stage, hand)
        assert sum(counts(report).values()) == len(report.verdicts) == LINES
        for verdict in report.verdicts:
            seen[verdict.outcome] = seen.get(verdict.outcome, 0) + 1
            place = place_of(verdict)
            assert place is None or 0 <= place[0] < place[1] <= len(verdict.line.text) + 1
        for width in (1, 60, 120):
            shown = plain_report(report, width)
            assert all(sign.isprintable() or sign == "\n" for sign in shown)
        sheet = compose_hand(report, hand, topology, "hand")
        assert len(json.loads(sheet.ledger_text)["hand"]["lines"]) == LINES
        if turn % 8 == 0:
            links = Links()
            links.feed(to_html(sheet).decode("utf-8"))
            assert links.wanted <= links.there
    assert {"unread", "refused", "mistake", "true"} <= set(seen)

"""The HTML sheet: one file, well formed, whole, and safe with whatever a user wrote."""

import json
import re
from dataclasses import replace
from html.parser import HTMLParser

import pytest

from derive.render.html import in_script, tidy, to_html
from derive.render.maths import SheetMaths
from derive.sheet.document import Column, Display, Table, Text

VOID = {"meta", "br", "img", "link", "hr", "input", "wbr"}


class Checker(HTMLParser):
    """Parses a page, refusing what is not nested, and keeps what the tests ask for."""

    def __init__(self):
        super().__init__(convert_charrefs=True)
        self.open, self.tags, self.attributes, self.ids, self.links = [], [], [], [], []
        self.scripts, self.text = {}, []

    def handle_starttag(self, tag, attrs):
        self.tags.append(tag)
        self.attributes += attrs
        given = dict(attrs)
        if "id" in given:
            self.ids.append(given["id"])
        if tag == "a":
            self.links.append(given["href"])
        if tag not in VOID:
            self.open.append((tag, given))

    def handle_startendtag(self, tag, attrs):
        self.tags.append(tag)
        self.attributes += attrs

    def handle_endtag(self, tag):
        assert self.open.pop()[0] == tag

    def handle_data(self, data):
        tag, given = self.open[-1] if self.open else ("", {})
        if tag == "script":
            self.scripts[given.get("id")] = self.scripts.get(given.get("id"), "") + data
        elif tag != "style":
            self.text.append(data)


@pytest.fixture(scope="module")
def page(sheet):
    return to_html(sheet).decode("utf-8")


@pytest.fixture(scope="module")
def parsed(page):
    checker = Checker()
    checker.feed(page)
    checker.close()
    assert checker.open == []
    return checker


def test_the_checker_refuses_a_page_that_is_not_nested():
    with pytest.raises(AssertionError):
        Checker().feed("<div><p></div></p>")


def test_the_page_is_well_formed_and_has_one_title(parsed):
    assert parsed.tags.count("html") == parsed.tags.count("title") == parsed.tags.count("h1") == 1


def test_the_page_fetches_nothing(page, parsed):
    assert not re.search(r"https?:", page)
    assert not re.search(r"@import|url\((?!\"data:)", page)
    fetching = {"src", "srcset", "data", "action", "poster"}
    assert not [a for a in parsed.attributes if a[0] in fetching]
    assert all(link.startswith("#") for link in parsed.links)


def test_the_page_holds_a_formula_for_every_display(parsed, sheet):
    maths = SheetMaths(sheet)
    displays = [b for s in sheet.sections for b in s.blocks if isinstance(b, Display)]
    blocks = [a for a in parsed.attributes if a == ("display", "block")]
    assert len(blocks) >= sum(len(maths.display(block).pieces) for block in displays)
    assert len(displays) == 14


def test_what_a_user_wrote_is_shown_and_never_run(page, parsed, sheet):
    assert "<script>alert" not in page
    assert "<b>" not in page
    assert sheet.title in "".join(parsed.text)
    # The topology, the ledger, and the page's own; the browser is told to run that one alone.
    assert parsed.tags.count("script") == 3
    assert re.search(r"default-src &#39;none&#39;;.* script-src &#39;sha256-[\w+/=]{44}&#39;", page)


def test_every_reference_has_its_target(parsed):
    assert parsed.links
    assert {link[1:] for link in parsed.links} <= set(parsed.ids)
    assert len(parsed.ids) == len(set(parsed.ids))


def test_the_ledger_inside_reads_as_the_same_data(parsed, sheet):
    assert json.loads(parsed.scripts["ledger"]) == json.loads(sheet.ledger_text)


def test_the_topology_inside_is_the_text_to_the_letter(parsed, sheet):
    assert json.loads(parsed.scripts["topology"])["text"] == sheet.topology_text


def test_a_script_element_cannot_be_closed_from_inside():
    assert "<" not in in_script('{"a": "</script><!--"}')
    assert json.loads(in_script('{"a": "</script>&"}')) == {"a": "</script>&"}


def test_a_failed_sheet_says_which_checks_failed_at_its_head(parsed, sheet):
    text = " ".join("".join(parsed.text).split())
    head = text[: text.index("What is asked")]
    assert all(failure in head for failure in sheet.failures)
    assert "2 checks failed" in head


def test_a_passed_sheet_has_no_banner(sheet):
    page = to_html(replace(sheet, passed=True, failures=())).decode()
    assert 'class="banner"' not in page
    assert "all checks passed" in page


def test_a_sheet_whose_checks_did_not_all_end_does_not_say_that_all_passed(sheet):
    page = to_html(replace(sheet, passed=True, failures=(), left_open=2)).decode()
    assert "all checks passed" not in page
    assert "no check failed, 2 left open" in page


def test_words_among_numbers_may_take_several_lines(sheet):
    def cells(words):
        table = Table("", (Column((Text("Resistance"),), numeric=True),), (((Text(words),),),))
        section = replace(sheet.sections[0], blocks=(table,))
        return to_html(replace(sheet, sections=(section,))).decode()

    assert 'class="numeric wordy"' in cells("infinite: in series with the current drive")
    assert 'class="numeric wordy"' not in cells("−3.16456 krad/s ± j 251.557 krad/s")


def test_marks_say_their_verdict_in_signs_and_words(page):
    assert "✓\N{NO-BREAK SPACE}pass" in page
    assert "✗\N{NO-BREAK SPACE}fail" in page
    assert "–\N{NO-BREAK SPACE}not checked" in page


def test_the_digest_is_that_of_the_topology_text(page, sheet):
    import hashlib

    assert hashlib.sha256(sheet.topology_text.encode()).hexdigest() in page


def test_parentheses_round_flat_content_do_not_grow():
    flat = "<math><mrow><mo>(</mo><mi>a</mi><mo>)</mo></mrow></math>"
    tall = "<math><mrow><mo>(</mo><mfrac><mi>a</mi><mi>b</mi></mfrac><mo>)</mo></mrow></math>"
    assert tidy(flat).count('stretchy="false"') == 2
    assert "stretchy" not in tidy(tall)


def test_letters_of_formulas_are_plain_so_that_they_can_be_searched():
    assert tidy("<math><mi>𝑅</mi><mi>𝜋</mi><mi>ℎ</mi></math>") == (
        "<math><mi>R</mi><mi>π</mi><mi>h</mi></math>"
    )


def test_the_same_sheet_gives_the_same_page(page, sheet):
    assert to_html(sheet).decode("utf-8") == page


def test_a_sheet_without_any_formula_is_a_page_too(sheet):
    bare = replace(sheet, sections=(), fields=(), passed=True, failures=())
    assert b"<math" not in to_html(bare)


def test_every_font_that_the_style_names_is_inside(page):
    assert page.count("data:font/woff2;base64,") == 5
    assert len(page) < 1_000_000


def test_what_no_page_may_hold_is_shown_as_unknown(sheet):
    page = to_html(replace(sheet, title="bell \x07 and half \ud800 a pair")).decode("utf-8")
    assert "bell \N{REPLACEMENT CHARACTER} and half \N{REPLACEMENT CHARACTER} a pair" in page
    assert "\x07" not in page

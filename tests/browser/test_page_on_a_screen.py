"""The HTML sheet in a real browser, without a network: on a phone, a tablet and a wide screen."""

import re
from pathlib import Path

import pytest

AXE = Path(__file__).parent / "axe" / "axe.min.js"
WIDTHS = (400, 900, 1400)
# What reaches over the right edge of the window, or of a box that cuts it off, and cannot be scrolled to.
CUT_OFF = """() => {
  const scrolls = (element) => {
    for (let at = element; at; at = at.parentElement)
      if (['auto', 'scroll'].includes(getComputedStyle(at).overflowX)) return true;
    return false;
  };
  const shown = (element) => element.checkVisibility();
  const kinds = 'main math, main svg, main table, main pre, main p, main h2, main h3, button';
  const wide = [...document.querySelectorAll(kinds)]
    .filter((e) => shown(e) && e.getBoundingClientRect().right > innerWidth + 1 && !scrolls(e));
  const low = [...document.querySelectorAll('.formula')]
    .filter((e) => shown(e) && e.scrollHeight > e.clientHeight + 1);
  return [...wide, ...low].map((e) => e.outerHTML.slice(0, 200));
}"""
HIDDEN = """() => [...document.querySelectorAll('main math')]
  .filter((e) => e.checkVisibility())
  .filter((e) => !e.getBoundingClientRect().width || !e.getBoundingClientRect().height)
  .map((e) => e.outerHTML.slice(0, 200))"""


@pytest.mark.parametrize("width", WIDTHS)
def test_the_page_opens_without_complaint_and_asks_for_nothing(opened, address, width):
    page = opened(width)
    page.wait_for_selector(".tools:not([hidden])")
    assert page.complaints == []
    assert page.asked == [address]


@pytest.mark.parametrize("width", WIDTHS)
def test_equations_are_seen_and_nothing_is_cut_off(opened, width):
    page = opened(width)
    page.click(".fold")
    assert page.evaluate("document.querySelectorAll('main math[display=block]').length") > 20
    assert page.evaluate(HIDDEN) == []
    assert page.evaluate(CUT_OFF) == []
    assert page.evaluate("document.documentElement.scrollWidth") <= width


def test_what_is_cut_off_or_unseen_would_be_found(opened):
    page = opened(400)
    page.evaluate(
        "document.querySelectorAll('.formula, figure').forEach((e) => e.style.overflow = 'visible')"
    )
    assert page.evaluate(CUT_OFF) != []
    page.evaluate("document.querySelector('main math').style.width = '0'")
    page.evaluate("document.querySelector('main math').style.display = 'inline-block'")
    assert page.evaluate(HIDDEN) != []


def faults(page, options):
    page.evaluate(AXE.read_text(encoding="utf-8"))
    found = page.evaluate(f"axe.run({options})")
    return [
        (each["id"], [node["target"] for node in each["nodes"]][:3])
        for each in found["violations"]
        if each["impact"] in ("serious", "critical")
    ]


def test_no_serious_fault_of_access_is_found(opened):
    page = opened(400)
    # Formulas are alike: some stand for all, or the search would take minutes.
    page.evaluate(
        "[...document.querySelectorAll('main math')].slice(40).forEach((e) => e.replaceWith('…'))"
    )
    assert faults(page, "document") == []


def test_a_fault_of_access_would_be_found(opened):
    page = opened(1400)
    page.evaluate("document.querySelector('#symbol').removeAttribute('placeholder')")
    page.evaluate("document.querySelector('label[for=symbol]').remove()")
    page.evaluate("document.documentElement.removeAttribute('lang')")
    found = faults(page, "document, {runOnly: ['html-has-lang', 'label']}")
    assert {name for name, _ in found} == {"html-has-lang", "label"}


def test_steps_are_folded_and_open_by_mouse_and_by_key(opened):
    page = opened(900)
    first = page.locator("details.steps").first
    assert first.get_attribute("open") is None
    first.locator("summary").click()
    assert first.get_attribute("open") is not None
    first.locator("summary").press("Enter")
    assert first.get_attribute("open") is None


def test_all_steps_open_together_and_fold_again(opened):
    page = opened(900)
    button = page.locator(".fold")
    button.press("Enter")
    count = page.locator("details").count()
    assert page.locator("details[open]").count() == count > 3
    assert button.get_attribute("aria-pressed") == "true"
    button.click()
    assert page.locator("details[open]").count() == 0


def test_a_link_to_an_equation_opens_the_steps_that_hold_it(opened):
    page = opened(900)
    anchor = page.evaluate("document.querySelector('details.steps .step[id]').id")
    page.evaluate(f"location.hash = '{anchor}'")
    page.wait_for_function(f"document.getElementById('{anchor}').checkVisibility()")
    where = page.evaluate(f"document.getElementById('{anchor}').getBoundingClientRect().top")
    assert 0 <= where < 900


def test_contents_lead_to_every_main_section(opened):
    page = opened(900)
    links = page.locator(".contents a")
    titles = page.evaluate("[...document.querySelectorAll('main h2')].map((e) => e.textContent.trim())")
    assert [text.strip() for text in links.all_text_contents()] == titles
    links.last.press("Enter")
    page.wait_for_function("document.querySelector('main h2:last-of-type') !== null")
    assert (
        page.evaluate("[...document.querySelectorAll('main h2')].at(-1).getBoundingClientRect().top")
        < 900
    )


def test_a_symbol_is_found_by_keys_and_marked_where_it_stands(opened):
    page = opened(900)
    page.focus("#symbol")
    page.keyboard.type("R_C")
    hits = page.locator(".hit")
    assert hits.count() > 10
    texts = set(page.evaluate("[...document.querySelectorAll('.hit')].map((e) => e.textContent)"))
    assert texts <= {"RC", "R_C"}
    page.keyboard.press("Enter")
    assert page.text_content("#found") == f"1 of {hits.count()}"
    page.keyboard.press("Enter")
    page.keyboard.press("Shift+Enter")
    assert page.text_content("#found") == f"1 of {hits.count()}"
    assert page.locator(".hit.current").count() == 1
    assert page.evaluate("document.querySelector('.hit.current').getBoundingClientRect().top") < 900
    page.keyboard.press("Escape")
    assert hits.count() == 0
    assert page.evaluate("document.querySelectorAll('mark.hit').length") == 0


def test_the_last_place_of_a_symbol_is_shown_though_it_was_folded_away(opened):
    page = opened(900)
    page.fill("#symbol", "v_b")
    page.click(".next")
    for _ in range(3):
        page.click(".previous")
    assert page.evaluate("document.querySelector('.hit.current').checkVisibility()")


@pytest.mark.parametrize(("typed", "text"), [("r_pi", "rπ"), ("beta", "β"), ("β", "β"), ("C_mu", "Cμ")])
def test_greek_names_are_found_as_they_are_typed(opened, typed, text):
    page = opened(900)
    page.fill("#symbol", typed)
    assert text in page.evaluate("[...document.querySelectorAll('math .hit')].map((e) => e.textContent)")


def test_a_name_that_is_not_there_is_said_not_to_be(opened):
    page = opened(900)
    page.fill("#symbol", "R_nowhere")
    assert page.text_content("#found") == "not found"
    assert page.locator(".next").is_disabled()


def test_what_is_typed_is_never_taken_for_markup(opened):
    page = opened(900)
    page.fill("#symbol", "<img src=x onerror=alert(1)>")
    assert page.text_content("#found") == "not found"
    assert page.locator("main img").count() == 0


def test_curves_are_read_off_by_pointer(opened):
    page = opened(1400)
    plot = page.locator("svg.plot[data-across]").first
    plot.scroll_into_view_if_needed()
    box = plot.bounding_box()
    page.mouse.move(box["x"] + box["width"] * 0.5, box["y"] + box["height"] * 0.4)
    read = page.locator(".readout output").first.inner_text()
    # In the middle of the pass band: a gain of −134, which is 42.55 dB.
    assert re.search(r"whole circuit\s+42\.5\d dB\s+−1[78]\d\.\d°", read)
    assert "high band" in read
    assert page.locator("line.reading[visibility=visible]").count() >= 2


def test_curves_are_read_off_by_keys(opened):
    page = opened(1400)
    slider = page.locator(".readout input").first
    slider.focus()
    first = slider.get_attribute("aria-valuetext")
    page.keyboard.press("ArrowRight")
    page.keyboard.press("PageUp")
    second = slider.get_attribute("aria-valuetext")
    assert first != second
    assert "Hz" in second
    assert "whole circuit" in second
    page.keyboard.press("Home")
    assert slider.get_attribute("aria-valuetext").startswith("100 mHz;")


def test_every_plot_against_an_axis_has_its_reading(opened):
    page = opened(1400)
    assert page.locator("svg.plot[data-across]").count() == page.locator(".readout").count() >= 4


def test_a_printed_page_looks_like_the_pdf(opened):
    page = opened(900)
    page.emulate_media(media="print")
    assert page.evaluate("getComputedStyle(document.querySelector('.tools')).display") == "none"
    size, column = page.evaluate(
        "[getComputedStyle(document.documentElement).fontSize, "
        "document.querySelector('.step:not(.wide) .formula').getBoundingClientRect().width]"
    )
    # 10 points of text, and 114 mm for formulas, as in the PDF.
    assert float(size.removesuffix("px")) == pytest.approx(10 * 96 / 72, rel=0.01)
    assert column == pytest.approx(114 / 25.4 * 96, rel=0.02)


def test_the_page_is_whole_without_its_script(browser, address):
    context = browser.new_context(java_script_enabled=False, offline=True)
    page = context.new_page()
    page.goto(address)
    assert page.locator("main h2").count() > 10
    assert page.locator(".tools").is_hidden()
    context.close()

from __future__ import annotations

from derive.quantities.dimension import CAPACITANCE, RESISTANCE, TIME
from derive.quantities.units import dimension_words, read_unit, typed_units
from derive.quantities.words import did_you_mean, listed, nearest, quoted


def test_small_m_is_milli_and_capital_m_is_mega():
    assert read_unit("mΩ").factor * 10**9 == read_unit("MΩ").factor


def test_a_unit_wins_over_a_prefix_of_the_same_letter():
    assert read_unit("F").dimension == CAPACITANCE
    assert read_unit("f").name == ""
    assert read_unit("ms").dimension == TIME


def test_unknown_units_and_stray_prefixes_are_none():
    for text in ("", "x", "kk", "kkΩ", "mm", "m°C", "kV/V", "Ω2"):
        assert read_unit(text) is None
    assert read_unit("kΩ", prefixed=False) is None


def test_every_typed_unit_of_a_dimension_reads_as_that_dimension():
    for text in typed_units(RESISTANCE):
        assert read_unit(text).dimension == RESISTANCE


def test_dimension_without_a_name_is_told_by_its_unit():
    assert dimension_words(TIME**2) == "a quantity in s²"


def test_quoted_text_is_short_and_on_one_line():
    assert quoted("a\nb") == '"a�b"'
    assert len(quoted("x" * 1000)) < 60


def test_nearest_name_prefers_another_case_and_gives_none_where_nothing_is_near():
    assert nearest("r_1", ["R_2", "R_1"]) == "R_1"
    assert nearest("ouy", ["out", "in"]) == "out"
    assert nearest("zzz", ["out", "in"]) is None
    assert did_you_mean("zzz", ["out"], "look again") == "look again"


def test_names_are_listed_as_in_english():
    assert listed([]) == ""
    assert listed(["a"]) == "a"
    assert listed(["a", "b", "c"]) == "a, b and c"
    assert listed(["a", "b"], "or") == "a or b"

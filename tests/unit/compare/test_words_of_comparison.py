"""How a comparison reads: the table, the words of its figures, the notes, and the ledger."""

import json
import math
from fractions import Fraction

import pytest
from compared_stages import (
    BANDED,
    INVERTING,
    LOW_PASS,
    NOTCH,
    OP_AMP,
    OPEN,
    TRANSIMPEDANCE,
    compared,
    stage,
)

from derive.compare.at_mid_band import real_level
from derive.compare.comparison import Level
from derive.compare.compose import compose_comparison
from derive.compare.figures import decibel_words, impedance_words, level_words, roots_words
from derive.compare.ledger import ledger, ledger_text
from derive.compare.plain import plain_comparison
from derive.compare.plot import plot_of
from derive.compare.table import tables
from derive.normalise.form import CertifiedRoot
from derive.quantities.dimension import RATIO
from derive.sheet.document import Display, Plot, Table
from derive.sheet.plain import line_text


def cells(comparison):
    """Give the rows of the first table by their labels."""
    return {
        line_text(row[0]): [line_text(cell) for cell in row[1:]] for row in tables(comparison)[0].rows
    }


def test_rows_of_the_table():
    found = cells(compared(BANDED, LOW_PASS))
    assert found["Title"] == ["Coupled", "Low-pass"]
    assert found["Quantity"] == ["H, voltage at node out per V_s"] * 2
    assert found["Worked in"] == ["low, mid, high", "full"]
    assert found["Taken as mid band"] == ["mid band", "zero frequency"]
    assert found["Gain in the mid band"] == ["0.9", "1"]
    assert found["… in decibels"] == ["−0.92 dB", "0.00 dB"]
    assert found["−3 dB frequency, low"] == ["15.92 Hz", "–"]
    assert found["−3 dB frequency, high"] == ["176.8 kHz", "15.92 kHz"]
    assert found["Input impedance"] == ["10 kΩ", "infinite"]
    assert found["… past the series resistor"] == ["9 kΩ past R_S", "–"]
    assert found["Output impedance"] == ["900 Ω", "1 kΩ"]
    assert found["Poles, low band"] == ["15.92 Hz", "–"]
    assert found["Zeros, low band"] == ["at the origin", "–"]
    assert found["Poles, full circuit"] == ["–", "15.92 kHz"]


def test_a_band_that_the_topology_leaves_out_is_not_called_open():
    found = cells(compared('bands = ["mid", "high"]\n' + BANDED))
    assert found["−3 dB frequency, low"] == ["not asked for (no low band in the file)"]
    assert found["−3 dB frequency, high"] == ["176.8 kHz"]


def test_rows_that_say_nothing_of_a_quantity_are_left_out():
    found = cells(compared(TRANSIMPEDANCE))
    assert found["Gain in the mid band"] == ["4 kΩ"]
    assert "Gain-bandwidth product" not in found
    assert "… in decibels" not in found
    impedance = cells(compared(LOW_PASS + '[find.Z]\nimpedance = "out"\n', find="Z"))
    assert impedance["Impedance in the mid band"] == ["1 kΩ"]
    assert "Input impedance" not in impedance


def test_open_values_are_named():
    assert cells(compared(OPEN))["Gain in the mid band"] == ["left open"]


@pytest.mark.parametrize(
    ("level", "words"),
    [
        (None, "–"),
        (real_level(Fraction(-120)), "−120"),
        (Level(None, math.inf, 0.0), "infinite"),
        (Level(None, 2.0, -45.04), "2, −45°"),
        (Level(None, 2.0, 0.001), "2"),
        (Level(None, 2.0, -179.99), "−2"),
    ],
)
def test_levels_in_words(level, words):
    assert level_words(level, RATIO) == words


def test_levels_in_decibels_and_ohms():
    assert decibel_words(real_level(Fraction(-10))) == "20.00 dB"
    assert decibel_words(Level(None, 0.1, 90.0)) == "−20.00 dB"
    assert decibel_words(real_level(Fraction(0))) == "–"
    assert impedance_words(Level(None, 1234.5, 90.0)) == "1.234 kΩ, 90°"


def test_roots_in_words_name_the_right_half_plane_and_pairs():
    tau = 2 * math.pi
    roots = (
        CertifiedRoot(0.0, 0.0, 0.0, 2),
        CertifiedRoot(tau * 1e3, 0.0, 0.0, 1),
        CertifiedRoot(-tau * 3e3, -tau * 4e3, 0.0, 1),
        CertifiedRoot(-tau * 3e3, tau * 4e3, 0.0, 1),
        CertifiedRoot(0.0, tau * 7e3, 0.0, 1),
    )
    assert roots_words(roots) == (
        "at the origin (2-fold)",
        "1 kHz, right half-plane",
        "5 kHz (pair, Q = 0.833)",
        "7 kHz (pair on the imaginary axis)",
    )


def test_more_stages_than_stand_side_by_side_are_given_further_tables():
    many = compared(*(LOW_PASS.replace("Low-pass", f"Stage {k}") for k in range(6)))
    found = tables(many)
    assert [len(table.columns) - 1 for table in found] == [4, 2]
    assert [table.caption for table in found] == [
        "Figures at the nominal values, stages 1 to 4",
        "Figures at the nominal values, stages 5 to 6",
    ]
    names = [line_text(column.heading) for table in found for column in table.columns[1:]]
    assert names == [f"stage_{k}" for k in range(6)]


@pytest.mark.parametrize("width", [40, 72, 120, 300])
def test_no_line_is_wider_than_the_terminal(width):
    text = plain_comparison(compared(BANDED, LOW_PASS, NOTCH, OP_AMP, INVERTING), width)
    assert max(map(len, text.splitlines())) <= max(width, 44)
    for name in ("coupled", "low-pass", "notch", "op_amp", "inverting"):
        assert name in text
    assert text.count("Gain in the mid band") == (5 if width == 40 else text.count("Stage "))


def test_a_terminal_too_narrow_for_one_stage_is_filled_all_the_same():
    assert "15.92 kHz" in plain_comparison(compared(LOW_PASS), 5)


def test_notes_say_what_is_particular_to_a_stage():
    text = plain_comparison(compared(OP_AMP, NOTCH))
    assert "op_amp: input impedance: no part lets a current flow at node in" in text
    assert "notch: it crosses the line 2 times" in text


def test_the_plot_has_a_curve_a_stage_and_rings_on_the_curves():
    plot = plot_of(compared(BANDED, LOW_PASS, OPEN.replace("Low-pass", "Open")))
    magnitude, phase = plot.panels
    assert [curve.name for curve in magnitude.curves] == ["coupled", "low-pass"]
    assert [curve.name for curve in phase.curves] == ["coupled", "low-pass"]
    assert magnitude.guides == (0.0,)
    rings = [(spot.curve, round(spot.across), round(spot.up, 1)) for spot in magnitude.spots]
    assert rings == [("coupled", 16, -3.9), ("coupled", 176839, -3.9), ("low-pass", 15915, -3.0)]
    assert "coupled: −0.92 dB in the mid band, down by 3 dB at 15.92 Hz below it" in plot.words


def test_without_curves_there_is_no_plot():
    comparison = compared(OPEN)
    assert plot_of(comparison) is None
    blocks = [block for section in compose_comparison(comparison).sections for block in section.blocks]
    assert not any(isinstance(block, Plot) for block in blocks)


def test_decibels_of_what_is_no_ratio_name_their_unit():
    magnitude = plot_of(compared(TRANSIMPEDANCE)).panels[0]
    assert magnitude.up.unit == "dB above 1 Ω"
    assert magnitude.guides == ()
    assert magnitude.curves[0].points[0][1] == pytest.approx(20 * math.log10(4000))


def test_a_deep_notch_does_not_flatten_the_rest():
    sharp = NOTCH.replace("[find.H]", 'R_9 = { resistor = "1 nΩ", between = ["x", "y"] }\n[find.H]')
    sharp = sharp.replace(
        'C_1 = { capacitor = "10n", between = ["x"', 'C_1 = { capacitor = "10n", between = ["y"'
    )
    magnitude = plot_of(compared(sharp)).panels[0]
    assert min(up for _, up in magnitude.curves[0].points) < -200
    assert magnitude.up.ends == (-140.0, 0.0)


def test_the_sheet_carries_every_topology_and_all_sections():
    comparison = compared(BANDED, LOW_PASS)
    sheet = compose_comparison(comparison)
    assert [(source.stage, source.file) for source in sheet.sources] == [
        ("coupled", "stage_0.toml"),
        ("low-pass", "stage_1.toml"),
    ]
    assert sheet.sources[1].text == LOW_PASS
    assert sheet.title == "Comparison of coupled and low-pass"
    assert [section.title for section in sheet.sections if section.level == 1] == [
        "Side by side",
        "Response against frequency",
        "What the figures are",
        "Expressions in the mid band",
        "Scope and cautions",
    ]
    kinds = {type(block) for section in sheet.sections for block in section.blocks}
    assert {Table, Plot, Display} <= kinds


def test_a_title_that_would_be_long_counts_the_stages():
    many = compared(*(LOW_PASS.replace("Low-pass", f"A rather long name {k}") for k in range(4)))
    assert compose_comparison(many).title == "Comparison of 4 stages"


def test_expressions_at_mid_band_stand_with_their_words():
    sections = compose_comparison(compared(BANDED)).sections
    section = next(s for s in sections if s.title == "coupled: Coupled")
    shown = [line_text(block.reason) for block in section.blocks if isinstance(block, Display)]
    assert shown[0] == "Gain: voltage at node out per V_s: 0.9."
    # What is in it and what is out is told once, under what the figures are.
    assert shown[1] == "Input impedance between in and gnd: 10 kΩ."
    assert shown[2] == "Output impedance between out and gnd: 900 Ω."
    (told,) = [s for s in sections if s.title == "What the figures are"]
    words = [line_text(block.line) for block in told.blocks]
    assert sum("a source resistor and the load included" in line for line in words) == 1


def test_a_stage_tuned_to_a_frequency_is_compared_by_its_gain_there():
    # A series LCR: |V_R/V_s| is 1 at f_0 = 1/(2π·√(L·C)) = 5.0329 kHz, and nothing at zero frequency.
    tuned = (
        '[sheet]\ntitle = "Tuned"\n[drives]\nV_s = { voltage = ["in", "gnd"] }\n[parts]\n'
        'L_1 = { inductor = "1 mH", between = ["in", "a"] }\n'
        'C_1 = { capacitor = "1u", between = ["a", "out"] }\n'
        'R_1 = { resistor = "1R", between = ["out", "gnd"] }\n[find.H]\nvoltage = "out"\nper = "V_s"\n'
    )
    found = cells(compared(tuned))
    assert found["Gain in the mid band"] == ["1"]
    assert found["Taken as mid band"] == ["5.033 kHz"]


def test_the_ledger_holds_the_same_figures_and_reads_as_json():
    comparison = compared(BANDED, NOTCH, OPEN, OP_AMP)
    read = json.loads(ledger_text(comparison))
    assert read == ledger(comparison)
    banded, notch, opened, op_amp = read["stages"]
    assert read["comparison"] == 1
    assert banded["gain"] == {"exact": "0.9", "magnitude": 0.9, "degrees": 0.0}
    assert banded["per"] == "V_s"
    assert banded["mid_band"] == {"band": "mid", "hertz": 0.0}
    assert banded["bandwidth"]["high_hz"] == stage(BANDED).high_hz
    assert banded["input_impedance"]["value"]["exact"] == "10000"
    assert banded["input_impedance"]["past"]["part"] == "R_S"
    assert banded["input_impedance"]["gain"] == "R_S + R_L"
    assert [roots["band"] for roots in banded["roots"]] == ["low", "mid", "high"]
    assert banded["roots"][0]["zeros"] == [[0.0, 0.0]]
    assert len(notch["roots"][0]["zeros"]) == 2
    assert opened["gain"] is None
    assert opened["curve"]["hertz"] == []
    assert op_amp["input_impedance"]["value"]["magnitude"] == "infinite"
    assert all(check["passed"] is not False for check in banded["checks"])
    assert {check["of"] for check in banded["checks"]} >= {"H, mid band", "input impedance"}

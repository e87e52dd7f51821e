"""Plots: scales and ticks, where points land, looks told apart, words for those who do not see them."""

import io
import itertools
import math
import re
from xml.etree import ElementTree

import pikepdf
import pytest

from derive.render.html import to_html
from derive.render.pdf import to_pdf
from derive.render.plot import COLOURS, DASHES, FIELD, HEIGHTS, LEFT, plot_svg
from derive.render.plot_scale import scale_of
from derive.render.templates import read_text
from derive.sheet.document import Axis, Curve, Panel, Plot, Section, Sheet, Spot

SVG = "{http://www.w3.org/2000/svg}"
FREQUENCY = Axis("Frequency", "Hz", "decades")


def a_plot(*curves, spots=(), guides=(), phase=(), across=FREQUENCY, up=None):
    panels = [Panel(up or Axis("Magnitude", "dB"), curves, spots, guides)]
    if phase:
        panels.append(Panel(Axis("Phase", "degrees", "degrees"), phase))
    return Plot("Response", across, tuple(panels), "What is to be seen.")


def line(name, *points):
    return Curve(name, points or ((1.0, 0.0), (10.0, -20.0)))


def drawn(plot, number=1):
    return ElementTree.fromstring(str(plot_svg(plot, number)))


def curves_of(root):
    """Give the lines of the curves, those of the legend apart."""
    return [found for group in root.iter(f"{SVG}g") for found in group.iter(f"{SVG}polyline")]


def points_of(polyline):
    return [tuple(map(float, pair.split(","))) for pair in polyline.attrib["points"].split()]


def texts_of(root):
    return [element.text for element in root.iter(f"{SVG}text")]


def a_sheet(*plots):
    return Sheet("Plots", (), True, (), (Section("Plots", plots),), "a.toml", "x", "a.json", "{}")


def test_points_land_where_a_logarithmic_axis_has_them():
    root = drawn(
        a_plot(line("H", (1.0, 0.0), (10.0, 5.0), (100.0, 10.0)), up=Axis("H", ends=(0.0, 10.0)))
    )
    (curve,) = curves_of(root)
    found = points_of(curve)
    assert [x for x, _ in found] == pytest.approx([LEFT, LEFT + FIELD / 2, LEFT + FIELD], abs=0.01)
    ys = [y for _, y in found]
    assert ys[0] - ys[2] == pytest.approx(HEIGHTS[1][0], abs=0.02)
    assert ys[1] == pytest.approx((ys[0] + ys[2]) / 2, abs=0.01)


def test_decades_are_labelled_with_prefix_and_unit():
    scale = scale_of(FREQUENCY, [3.0, 4e6])
    assert [label for _, label in scale.ticks] == [
        "1 Hz", "10 Hz", "100 Hz", "1 kHz", "10 kHz", "100 kHz", "1 MHz", "10 MHz",
    ]  # fmt: skip
    assert (scale.low, scale.high) == (1.0, 1e7)
    assert scale.place(math.sqrt(1e7)) == pytest.approx(0.5)


def test_a_range_of_very_many_decades_is_labelled_to_its_end():
    scale = scale_of(FREQUENCY, [1e-9, 1e15])
    assert scale.ticks[-1][0] == pytest.approx(1e15)
    assert len(scale.ticks) <= 11


def test_decades_are_divided_within_where_there_is_room():
    assert [value for value in scale_of(FREQUENCY, [1.0, 100.0]).fine if value > 10] == [
        20.0, 30.0, 40.0, 50.0, 60.0, 70.0, 80.0, 90.0,
    ]  # fmt: skip
    many = scale_of(FREQUENCY, [1e-3, 1e12])
    assert len(many.ticks) <= 10
    assert all(math.log10(value).is_integer() for value in many.fine)


@pytest.mark.parametrize(
    ("values", "labels"),
    [
        ([-57.0, 41.0], ["−60", "−40", "−20", "0", "20", "40", "60"]),
        ([0.02, 0.11], ["0.02", "0.04", "0.06", "0.08", "0.1", "0.12"]),
        ([0.0, 1300.0], ["0", "200", "400", "600", "800", "1000", "1200", "1400"]),
    ],
)
def test_linear_axes_are_divided_at_round_numbers(values, labels):
    assert [label for _, label in scale_of(Axis("x"), values).ticks] == labels


@pytest.mark.parametrize(
    ("values", "labels"),
    [
        ([-181.0, 0.0], ["−225°", "−180°", "−135°", "−90°", "−45°", "0°"]),
        ([-360.0, 90.0], ["−360°", "−270°", "−180°", "−90°", "0°", "90°"]),
    ],
)
def test_degrees_are_divided_as_a_circle_is(values, labels):
    assert [label for _, label in scale_of(Axis("φ", "degrees", "degrees"), values).ticks] == labels


def test_a_level_line_stands_amid_its_scale():
    scale = scale_of(Axis("x"), [40.0, 40.0])
    assert scale.low < 40 < scale.high
    assert scale_of(Axis("x"), []).low < scale_of(Axis("x"), []).high


def test_a_curve_has_one_look_in_all_panels_and_in_the_legend():
    names = [f"stage_{k}" for k in range(3)]
    root = drawn(a_plot(*map(line, names), phase=tuple(map(line, names))))
    looks = {}
    for polyline in root.iter(f"{SVG}polyline"):
        looks.setdefault((polyline.attrib["stroke"], polyline.get("stroke-dasharray")), []).append(
            polyline
        )
    assert [len(found) for found in looks.values()] == [3, 3, 3]
    assert [text for text in texts_of(root) if text in names] == names


def test_one_curve_needs_no_legend():
    assert "H" not in texts_of(drawn(a_plot(line("H"))))


def test_dashes_alone_tell_as_many_curves_apart_as_there_are():
    root = drawn(a_plot(*(line(f"stage_{k}") for k in range(len(DASHES)))))
    assert len({curve.get("stroke-dasharray") for curve in curves_of(root)}) == len(DASHES) >= 6


def test_no_two_of_forty_curves_look_alike():
    root = drawn(a_plot(*(line(f"stage_{k}") for k in range(40))))
    looks = [(curve.attrib["stroke"], curve.get("stroke-dasharray")) for curve in curves_of(root)]
    assert len(set(looks)) == 40


# Machado, Oliveira and Fernandes, A physiologically-based model for simulation of color vision deficiency,
# IEEE Trans. Visualization and Computer Graphics 15 (2009), severity 1 (from memory).
NO_RED = (
    (0.152286, 1.052583, -0.204868),
    (0.114503, 0.786281, 0.099216),
    (-0.003882, -0.048116, 1.051998),
)
NO_GREEN = (
    (0.367322, 0.860646, -0.227968),
    (0.280085, 0.672501, 0.047413),
    (-0.01182, 0.04294, 0.968881),
)
ALL_SEEN = ((1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0))


def linear(colour):
    """Give linear light of an sRGB colour (IEC 61966-2-1)."""
    parts = [int(colour[k : k + 2], 16) / 255 for k in (1, 3, 5)]
    return [part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]


def luminance(colour):
    return sum(w * part for w, part in zip((0.2126, 0.7152, 0.0722), linear(colour), strict=True))


def contrast(one, other):
    """Give the contrast ratio of WCAG 2.1."""
    high, low = sorted((luminance(one), luminance(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)


def lab(colour, seen):
    """Give CIE L*a*b* of a colour as seen by an eye (white point D65)."""
    light = [max(0.0, sum(m * part for m, part in zip(row, linear(colour), strict=True))) for row in seen]
    to_xyz = ((0.4124, 0.3576, 0.1805), (0.2126, 0.7152, 0.0722), (0.0193, 0.1192, 0.9505))
    white = (0.9505, 1.0, 1.089)
    x, y, z = (
        sum(m * part for m, part in zip(row, light, strict=True)) / w
        for row, w in zip(to_xyz, white, strict=True)
    )
    fx, fy, fz = (t ** (1 / 3) if t > 0.008856 else 7.787 * t + 16 / 116 for t in (x, y, z))
    return 116 * fy - 16, 500 * (fx - fy), 200 * (fy - fz)


def nearest_pair(colours, seen):
    return min(math.dist(lab(a, seen), lab(b, seen)) for a, b in itertools.combinations(colours, 2))


def night_colours():
    return tuple(re.findall(r"svg\.plot \.c\d \{ stroke: (#[0-9a-f]{6})", read_text("style.css")))


@pytest.mark.parametrize("seen", [ALL_SEEN, NO_RED, NO_GREEN], ids=["all", "no red", "no green"])
def test_colours_are_told_apart_by_every_eye(seen):
    # A difference of 2.3 is just noticed (common practice); thin lines need several times that.
    assert nearest_pair(COLOURS, seen) > 20
    assert nearest_pair(night_colours(), seen) > 20


def test_colours_that_some_eyes_mix_up_would_be_seen():
    assert (
        nearest_pair(("#a05a00", "#5f7d00"), NO_RED) < 20 < nearest_pair(("#a05a00", "#5f7d00"), ALL_SEEN)
    )


def test_lines_stand_out_from_paper_by_day_and_by_night():
    night = night_colours()
    assert len(night) == len(COLOURS)
    # WCAG 2.1, success criterion 1.4.11: graphics need 3 to 1.
    assert min(contrast(colour, "#ffffff") for colour in COLOURS) >= 3
    assert min(contrast(colour, "#14181d") for colour in night) >= 3
    assert contrast("#9fc5e8", "#ffffff") < 3


def test_the_picture_has_a_title_and_words():
    root = drawn(a_plot(line("H")), number=4)
    assert root.attrib["role"] == "img"
    found = {element.attrib["id"]: element.text for element in root.iter() if "id" in element.attrib}
    told = [found[name] for name in root.attrib["aria-labelledby"].split()]
    assert told == ["Response", "What is to be seen."]


def test_two_plots_on_a_page_share_no_identifier():
    page = to_html(a_sheet(a_plot(line("H")), a_plot(line("G")))).decode("utf-8")
    found = re.findall(r' id="(plot-[^"]*)"', page)
    assert len(found) == len(set(found)) == 6
    assert "Figure 1 – Response" in page
    assert "Figure 2 – Response" in page


def test_words_of_users_are_text_in_the_picture():
    name = '<script>alert(1)</script> & "Ω"'
    root = drawn(a_plot(line(name), line("other")))
    assert name in texts_of(root)
    assert root.find(f".//{SVG}script") is None


def test_signs_that_no_page_may_hold_do_not_break_the_pdf():
    made = to_pdf(a_sheet(a_plot(line("a\x00b\x1f\ufffe"), line("c"))))
    with pikepdf.open(io.BytesIO(made)) as document:
        assert len(document.pages) == 1


def test_a_name_longer_than_the_picture_is_cut():
    shown = [text for text in texts_of(drawn(a_plot(line("x" * 500), line("y")))) if text[0] == "x"]
    assert len(shown) == 1
    assert shown[0].endswith("…")
    assert len(shown[0]) < 100


@pytest.mark.parametrize(
    "points",
    [
        ((1.0, 0.0),),
        ((math.nan, 0.0), (1.0, math.inf)),
        ((0.0, 1.0), (-1.0, 2.0)),
        ((1.0, math.nan), (10.0, math.nan)),
    ],
)
def test_points_that_have_no_place_draw_no_line(points):
    assert curves_of(drawn(a_plot(Curve("H", points)))) == []
    assert curves_of(drawn(a_plot(Curve("H", ())))) == []
    assert len(curves_of(drawn(a_plot(line("H"))))) == 1


def test_what_lies_beyond_the_ends_of_an_axis_is_cut_off():
    low = a_plot(line("H", (1.0, 0.0), (10.0, -500.0)), up=Axis("Magnitude", "dB", ends=(-100.0, 0.0)))
    root = drawn(low)
    (group,) = root.iter(f"{SVG}g")
    (clip,) = root.iter(f"{SVG}clipPath")
    assert group.attrib["clip-path"] == f"url(#{clip.attrib['id']})"
    assert float(clip[0].attrib["height"]) == pytest.approx(HEIGHTS[1][0] + 2)
    assert points_of(curves_of(root)[0])[1][1] > 500


def test_spots_take_the_colour_of_their_curve_and_those_beyond_the_field_are_left_out():
    spots = (
        Spot("b", 3.0, -5.0),
        Spot("b", 3.0, -5.0, "cross"),
        Spot("a", 3.0, 900.0),
        Spot("a", -1.0, 0.0),
    )
    root = drawn(a_plot(line("a"), line("b"), spots=spots))
    found = [element for element in root.iter() if element.get("class", "").startswith("spot")]
    assert [element.tag.removeprefix(SVG) for element in found] == ["circle", "path"]
    assert {element.attrib["stroke"] for element in found} == {COLOURS[1]}


def test_a_guide_goes_across_within_the_ends_only():
    root = drawn(a_plot(line("H"), guides=(-10.0, 55.0)))
    guides = [element for element in root.iter(f"{SVG}line") if element.get("class") == "guide"]
    assert len(guides) == 1


def test_on_paper_the_plot_is_vectors_with_words_and_no_picture_of_dots():
    plot = a_plot(line("low_pass"), line("high_pass"), phase=(line("low_pass"), line("high_pass")))
    with pikepdf.open(io.BytesIO(to_pdf(a_sheet(plot)))) as document:
        page = document.pages[0]
        kinds = {str(form.Subtype) for form in dict(page.Resources.get("/XObject", {})).values()}
        assert "/Image" not in kinds
        told = [
            str(item.Alt)
            for item in document.objects
            if isinstance(item, pikepdf.Dictionary) and "/Alt" in item
        ]
        assert told == ["Response. What is to be seen."]
        fonts = {str(font.BaseFont) for font in page.Resources.Font.values() if "/BaseFont" in font}
        assert fonts
        # The page's own: STIX for words, the other for the name of the file.
        assert all("STIX" in name or "JetBrains" in name for name in fonts)


def test_the_same_plot_is_the_same_text():
    plot = a_plot(*(line(f"stage_{k}") for k in range(5)))
    assert plot_svg(plot, 1) == plot_svg(plot, 1)
    assert plot_svg(plot, 1) != plot_svg(plot, 2)

"""A user's own folder of templates: taken where it is sound, refused in one message where it is not."""

import base64
import io
import re
from dataclasses import replace

import pikepdf
import pytest

from derive.cli import main
from derive.errors import InputError
from derive.render import templates
from derive.render.html import to_html
from derive.render.look import look_of
from derive.render.pdf import to_pdf

SVG = (
    '<svg xmlns="http://www.w3.org/2000/svg" width="40" height="10"><rect width="40" height="10"/></svg>'
)
PNG = base64.b64decode(
    "iVBORw0KGgoAAAANSUhEUgAAAAEAAAABCAYAAAAfFcSJAAAADUlEQVR42mP8z8BQDwAEhQGAhKmMIQAAAABJRU5ErkJggg=="
)


@pytest.fixture
def folder(tmp_path):
    def made(**files):
        for name, content in files.items():
            path = tmp_path / name.replace("__", "/").replace("_dot_", ".")
            path.parent.mkdir(exist_ok=True)
            path.write_bytes(content if isinstance(content, bytes) else content.encode())
        return tmp_path

    return made


@pytest.fixture
def small(sheet):
    return replace(sheet, sections=sheet.sections[:1])


def test_a_logo_and_a_style_stand_in_the_page(folder, small):
    look = look_of(folder(logo_dot_svg=SVG, company_dot_css="h2 { color: #aa0000; }"))
    page = to_html(small, look=look).decode()
    assert base64.b64encode(SVG.encode()).decode() in page
    assert "h2 { color: #aa0000; }" in page
    assert 'alt="Company logo"' in page
    assert "Company logo" not in to_html(small).decode()


def test_a_logo_stands_in_the_pdf_with_its_words(folder, small):
    made = to_pdf(small, look=look_of(folder(logo_dot_png=PNG)))
    with pikepdf.open(io.BytesIO(made)) as document:
        alts = [
            str(each.Alt)
            for each in document.objects
            if isinstance(each, pikepdf.Dictionary) and "/Alt" in each
        ]
        assert "Company logo" in alts
    assert made == to_pdf(small, look=look_of(folder(logo_dot_png=PNG)))


def test_a_template_of_the_same_name_takes_our_place(folder, small):
    own = "{% macro title_block(rows, digest, logo, running) %}<h1>ACME {{ rows[0][0].text }}</h1>{% endmacro %}"
    page = to_html(small, look=look_of(folder(blocks__titleblock_dot_html_dot_j2=own))).decode()
    assert "<h1>ACME " in page
    assert "<script>alert" not in page


def test_pictures_that_a_style_names_are_put_inside(folder, small):
    look = look_of(folder(company_dot_css='header { background: url("mark.png"); }', mark_dot_png=PNG))
    page = to_html(small, look=look).decode()
    assert f"data:image/png;base64,{base64.b64encode(PNG).decode()}" in page
    assert "mark.png" not in page


@pytest.mark.parametrize(
    ("files", "where", "says"),
    [
        ({"blocks__table_dot_html_dot_j2": "{% if %}"}, r"table\.html\.j2:1", "cannot be used"),
        ({"blocks__tabel_dot_html_dot_j2": "x"}, r"tabel\.html\.j2", "place of none"),
        ({"logo_dot_png": b"GIF89a"}, r"logo\.png", "no PNG picture"),
        ({"logo_dot_svg": "<svg"}, r"logo\.svg", "no SVG picture"),
        ({"company_dot_css": "@import url(x.css);"}, r"company\.css", "@import"),
        (
            {"company_dot_css": "p { background: url(https://example.org/x.png) }"},
            r"company\.css",
            "no picture or font",
        ),
        (
            {"company_dot_css": "p { background: url(../secret.png) }"},
            r"company\.css",
            "no picture or font",
        ),
        ({"company_dot_css": "</style><script>"}, r"company\.css", "</"),
        ({"company_dot_css": b"\xff\xfe"}, r"company\.css", "UTF-8"),
        ({"notes_dot_txt": "x"}, "", "no logo, no company.css and no template"),
    ],
)
def test_what_cannot_be_used_is_said_before_any_work(folder, files, where, says):
    with pytest.raises(InputError) as refused:
        look_of(folder(**files))
    assert says in str(refused.value)
    assert re.search(where, refused.value.where)
    assert refused.value.cure


def test_a_folder_that_is_not_there_is_refused(tmp_path):
    with pytest.raises(InputError, match="no folder of templates"):
        look_of(tmp_path / "none")


@pytest.mark.parametrize(
    ("template", "says"),
    [
        ("{{ nowhere }}", "undefined"),
        ("{{ ''.__class__.__mro__[1].__subclasses__() }}", "unsafe"),
        ("{{ page.sheet.__init__.__globals__ }}", "unsafe"),
        ("\n{{ 1 / 0 }}", "division by zero"),
    ],
)
def test_a_template_that_goes_wrong_is_named_and_can_reach_nothing(folder, small, template, says):
    look = look_of(folder(blocks__paragraph_dot_html_dot_j2=template))
    with pytest.raises(InputError) as refused:
        to_html(small, look=look)
    assert says in str(refused.value)
    assert re.search(r"paragraph\.html\.j2:\d", refused.value.where)


def test_the_command_refuses_a_broken_folder_with_status_2(folder, capsys, tmp_path):
    case = templates.folder().parent / "cases" / "post_filter" / "topology.toml"
    place = folder(blocks__table_dot_html_dot_j2="{% if %}")
    status = main(
        ["sheet", str(case), "--out", str(tmp_path / "out"), "--templates", str(place), "--quiet"]
    )
    assert status == 2
    told = capsys.readouterr().err
    assert "table.html.j2:1" in told
    assert "Traceback" not in told
    assert not (tmp_path / "out").exists()

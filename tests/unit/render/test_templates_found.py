"""The templates are found in a checkout and in an installed package."""

import shutil
from pathlib import Path

import pytest

from derive.errors import OutputError
from derive.render import templates

CHECKOUT = Path(__file__).resolve().parents[3]


@pytest.fixture
def moved(tmp_path, monkeypatch):
    package = tmp_path / "site" / "derive"
    package.mkdir(parents=True)
    monkeypatch.setattr(templates, "__file__", str(package / "render" / "templates.py"))
    templates.folder.cache_clear()
    yield package
    monkeypatch.undo()
    templates.folder.cache_clear()


def test_a_checkout_has_them_beside_the_package():
    assert templates.folder() == CHECKOUT / "report_templates"


def test_an_installed_package_has_them_inside(moved):
    shutil.copytree(CHECKOUT / "report_templates", moved / "report_templates")
    assert templates.folder() == moved / "report_templates"


def test_a_broken_installation_is_said_to_be_one(moved):
    with pytest.raises(OutputError, match="install the package again"):
        templates.folder()


def test_the_templates_and_fonts_stay_small():
    total = sum(p.stat().st_size for p in (CHECKOUT / "report_templates").rglob("*") if p.is_file())
    assert total < 2_500_000


def test_every_font_stands_beside_a_licence():
    fonts = CHECKOUT / "report_templates" / "fonts"
    families = {p.name.split("-")[0] for p in fonts.iterdir() if p.suffix in (".ttf", ".woff2")}
    licences = {p.stem.removeprefix("OFL-") for p in fonts.glob("OFL-*.txt")}
    assert all(any(family.startswith(licence) for licence in licences) for family in families)


def test_everything_put_into_a_template_is_escaped():
    made = templates.environment().from_string("{{ x }}").render(x="<b>&")
    assert made == "&lt;b&gt;&amp;"

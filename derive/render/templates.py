"""The page templates, style sheets and fonts, found in a checkout and in an installed package."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path
from typing import TYPE_CHECKING

from derive.errors import OutputError

if TYPE_CHECKING:
    from jinja2 import Environment


@lru_cache(maxsize=1)
def folder() -> Path:
    """Return the folder that holds the templates and the fonts.

    Raises: OutputError when neither place has it, which means a broken installation.
    """
    package = Path(__file__).resolve().parents[1]
    # In a checkout the folder stands beside the package; the wheel carries it inside.
    for place in (package.parent / "report_templates", package / "report_templates"):
        if (place / "sheet.html.j2").is_file():
            return place
    raise OutputError(
        "the page templates are missing from this installation",
        cure="install the package again",
    )


def fonts() -> Path:
    """Return the folder of the font files."""
    return folder() / "fonts"


def read_text(name: str) -> str:
    """Return the text of one file of the folder, such as "style.css"."""
    return (folder() / name).read_text(encoding="utf-8")


@lru_cache(maxsize=1)
def environment() -> Environment:
    """Return the template engine, with every value escaped unless it is marked as markup."""
    from jinja2 import Environment, FileSystemLoader, StrictUndefined

    return Environment(
        loader=FileSystemLoader(folder()),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )

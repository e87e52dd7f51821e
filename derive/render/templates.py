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
def names() -> tuple[str, ...]:
    """Return the names of the page and block templates, such as "blocks/table.html.j2"."""
    here = folder()
    return tuple(sorted(path.relative_to(here).as_posix() for path in here.rglob("*.j2")))


@lru_cache(maxsize=4)
def environment(own: Path | None = None) -> Environment:
    """Return the template engine, with every value escaped unless it is marked as markup.

    Given: a user's own folder, whose templates stand before ours. Those run in a sandbox: they see what they are given,
    and nothing else of the program or the machine.
    """
    from jinja2 import Environment, FileSystemLoader, StrictUndefined
    from jinja2.sandbox import ImmutableSandboxedEnvironment

    # Ours alone need no sandbox, which asks at every attribute.
    engine = Environment if own is None else ImmutableSandboxedEnvironment
    return engine(
        loader=FileSystemLoader([place for place in (own, folder()) if place is not None]),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )

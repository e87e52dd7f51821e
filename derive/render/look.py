"""How a sheet looks: our templates and styles, and over them those of a user's own folder.

A folder may hold templates of the same names as ours, which then take their place; further ones, whose names begin
with "company"; `company.css`, which is read after our styles; and a logo.
"""

from __future__ import annotations

import base64
import os
import re
from dataclasses import dataclass
from pathlib import Path
from typing import Any
from xml.etree import ElementTree

from markupsafe import Markup

from derive.errors import InputError
from derive.quantities.words import did_you_mean, listed
from derive.render import templates

LOGOS = {"logo.svg": "image/svg+xml", "logo.png": "image/png", "logo.jpg": "image/jpeg"}
STYLE = "company.css"
OTHER = "company"  # how the names of further templates begin
LARGEST = 2_000_000  # bytes of one file: it stands in every sheet
_SIGNATURES = {"logo.png": b"\x89PNG\r\n\x1a\n", "logo.jpg": b"\xff\xd8\xff"}
_ADDRESS = re.compile(r"""url\(\s*(["']?)([^"')]*)\1\s*\)""")
_KINDS = {".svg": "image/svg+xml", ".png": "image/png", ".jpg": "image/jpeg", ".woff2": "font/woff2"}
_KINDS |= {".ttf": "font/ttf", ".otf": "font/otf"}


@dataclass(frozen=True, slots=True)
class Look:
    """A user's own folder, looked through: its style with all that it names inside, and its logo as an address."""

    folder: Path | None = None
    style: str = ""
    logo: str = ""

    def page(self, **given: object) -> str:
        """Return the page that the templates make of what they are given.

        Raises: InputError where a template of the user's own folder goes wrong.
        """
        environment = templates.environment(self.folder)
        if self.folder is None:
            return environment.get_template("sheet.html.j2").render(look=self, **given)
        try:
            return environment.get_template("sheet.html.j2").render(look=self, **given)
        except Exception as error:  # noqa: BLE001 - a user's template can raise anything
            raise _broken(error, self.folder) from None


OURS = Look()


def look_of(folder: str | os.PathLike[str] | None) -> Look:
    """Give the look that a user's folder asks for; ours where there is no folder.

    Raises: InputError where the folder is not there, or a file in it cannot be used.
    """
    if folder is None:
        return OURS
    place = Path(folder)
    if not place.is_dir():
        raise InputError(
            "there is no folder of templates here",
            where=str(place),
            cure="name a folder that holds a logo, company.css or templates with --templates",
        )
    place = place.resolve()
    found = sorted(path for path in place.rglob("*") if path.is_file())
    used = [path for path in found if path.suffix == ".j2" or path.name in (STYLE, *LOGOS)]
    if not used:
        raise InputError(
            "the folder holds no logo, no company.css and no template",
            where=str(folder),
            cure=f"put {listed((*LOGOS, STYLE), 'or')} there, or a template of the name of one of ours",
        )
    for path in used:
        if path.suffix == ".j2":
            _try(path, place)
    return Look(place, _style(place), _logo(place))


def _try(path: Path, folder: Path) -> None:
    """Compile a template, and refuse one that takes the place of none."""
    name = path.relative_to(folder).as_posix()
    if name not in templates.names() and not path.name.startswith(OTHER):
        raise InputError(
            f"the template {name} takes the place of none of ours",
            where=str(path),
            cure=did_you_mean(
                name, templates.names(), f"further templates have names that begin with {OTHER}"
            ),
        )
    _read(path)
    try:
        templates.environment(folder).get_template(name)
    except Exception as error:  # noqa: BLE001 - what is wrong in it, its compiler decides
        raise _broken(error, folder) from None


def _broken(error: Exception, folder: Path) -> InputError:
    """Word what went wrong in a template, with the file and line where that is known."""
    name, line = getattr(error, "filename", None), getattr(error, "lineno", None)
    trace = error.__traceback__
    while trace is not None:
        # The line of the innermost template: the engine gives its frames the template's own file and lines.
        if str(trace.tb_frame.f_code.co_filename).endswith(".j2") and line is None:
            name = trace.tb_frame.f_code.co_filename
        trace = trace.tb_next
    if line is None and name is not None:
        line = _last_line(error, str(name))
    where = str(name or folder) + (f":{line}" if line else "")
    words = " ".join(str(error).split()) or type(error).__name__
    return InputError(
        f"the template cannot be used: {words}", where=where, cure="see README.md among our own templates"
    )


def _last_line(error: Exception, name: str) -> int | None:
    found, trace = None, error.__traceback__
    while trace is not None:
        if trace.tb_frame.f_code.co_filename == name:
            found = trace.tb_lineno
        trace = trace.tb_next
    return found


def _read(path: Path) -> bytes:
    try:
        data = path.read_bytes()
    except OSError as problem:
        reason = problem.strerror or str(problem)
        raise InputError(
            f"the file cannot be read: {reason}", where=str(path), cure="make it readable"
        ) from None
    if len(data) > LARGEST:
        raise InputError(
            "the file is larger than 2 MB, and would stand in every sheet",
            where=str(path),
            cure="make it smaller",
        )
    return data


def _text(path: Path) -> str:
    try:
        return _read(path).decode("utf-8")
    except UnicodeDecodeError:
        raise InputError("the file is not UTF-8 text", where=str(path), cure="save it as UTF-8") from None


def _logo(folder: Path) -> str:
    """Give the logo as an address that holds it whole; "" where there is none."""
    for name, kind in LOGOS.items():
        path = folder / name
        if not path.is_file():
            continue
        data = _read(path)
        sound = data.startswith(_SIGNATURES[name]) if name in _SIGNATURES else _is_svg(data)
        if not sound:
            raise InputError(
                f"the logo is no {path.suffix[1:].upper()} picture", where=str(path), cure="save it anew"
            )
        return _address(data, kind)
    return ""


def _is_svg(data: bytes) -> bool:
    try:
        return ElementTree.fromstring(data).tag == "{http://www.w3.org/2000/svg}svg"
    except (ElementTree.ParseError, ValueError):
        return False


def _address(data: bytes, kind: str) -> str:
    return f"data:{kind};base64,{base64.b64encode(data).decode('ascii')}"


def _style(folder: Path) -> str:
    """Give the folder's style with every file that it names inside, so that a sheet needs nothing else."""
    path = folder / STYLE
    if not path.is_file():
        return ""
    text = _text(path)
    for word in ("@import", "</"):
        if word in text:
            raise InputError(
                f"the style holds {word}", where=str(path), cure="write all of it into this one file"
            )

    def inside(found: re.Match[str]) -> str:
        name = found.group(2).strip()
        if name.startswith("data:"):
            return found.group(0)
        named = (folder / name).resolve()
        kind: Any = _KINDS.get(named.suffix.lower())
        if not named.is_relative_to(folder) or not named.is_file() or kind is None:
            raise InputError(
                f'the style names "{name}", which is no picture or font in this folder',
                where=str(path),
                cure="put the file into the folder, and name it as it stands there",
            )
        return f'url("{_address(_read(named), kind)}")'

    return Markup(_ADDRESS.sub(inside, text))

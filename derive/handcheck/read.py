"""Reads the file of a hand derivation: what it belongs to, its lines, its ties and its definitions."""

from __future__ import annotations

import os
import re
from pathlib import PurePath
from typing import Any

from derive.errors import InputError
from derive.expressions.parse import pointed
from derive.expressions.spelled import Refusal
from derive.handcheck.read_line import read_expression, read_line
from derive.handcheck.read_lines import read_lines
from derive.handcheck.report import HandDefinition, HandFile, HandLine, HandTie
from derive.quantities.words import quoted
from derive.reading.document import Document, load
from derive.reading.fields import NAME, NAME_RULE, described, known_keys, table, text
from derive.reading.files import check_text, read_text

_KEYS = ("title", "topology", "find", "band", "lines", "given", "define")
_SAMPLE = "write lines = '''...''' with one claim on each line, such as v_out = A_v*V_s"
MOST_LINES, MOST_TIES = 500, 40
_LINES = re.compile(r"^([ \t]*lines[ \t]*=[ \t]*)(\"\"\"|''')", re.MULTILINE)


def read_hand(path: str | os.PathLike[str]) -> HandFile:
    """Give the hand derivation that a file holds; lines that cannot be read are in it with the reason.

    Raises: InputError, with file, line and cure, where the file itself cannot be used.
    """
    return parse_hand(read_text(path), os.fspath(path))


def parse_hand(written: str, file: str) -> HandFile:
    """Give the hand derivation that a text describes; `file` is the name that messages point to.

    Raises: InputError, with file, line and cure, where the text cannot be used.
    """
    check_text(written, file)
    document = load(_with_backslashes(written), file)
    known_keys(document, document.data, _KEYS, "the file")
    entries = {key: _entry(document, key) for key in ("title", "topology", "find", "band")}
    return HandFile(
        PurePath(file).name,
        written,
        entries["topology"],
        entries["find"],
        entries["band"],
        _lines(document, written, file),
        _ties(document),
        _definitions(document),
        entries["title"],
    )


def _with_backslashes(written: str) -> str:
    r"""Let the backslashes of `lines` stand for themselves, whichever quotes are about them.

    Between three double quotes TOML would make tabs and other signs of the beginnings of \times and \beta.
    """
    found = _LINES.search(written)
    if found is None or found[2] != '"""':
        return written
    end = written.find('"""', found.end())
    body = written[found.end() : end]
    if end < 0 or "\\" not in body or "'''" in body:
        return written
    return f"{written[: found.end(1)]}'''{body}'''{written[end + 3 :]}"


def _entry(document: Document, key: str) -> str:
    if key not in document.data:
        return ""
    return text(document, document.data[key], key, key).strip()


def _lines(document: Document, written: str, file: str) -> tuple[HandLine, ...]:
    if "lines" not in document.data:
        raise document.error("the file has no lines", cure=_SAMPLE)
    raw = document.data["lines"]
    if not isinstance(raw, str):
        raise document.error(f"lines: a text is wanted, not {described(raw)}", "lines", cure=_SAMPLE)
    first = document.place("lines").line
    found = _LINES.search(written)
    # TOML takes away a line end that follows the quotes.
    if found and written[found.end() :].startswith(("\n", "\r\n")):
        first += 1
    claims = read_lines(raw, PurePath(file).name, first)
    if not claims:
        raise document.error("there is no claim in lines", "lines", cure=_SAMPLE)
    if len(claims) > MOST_LINES:
        raise document.error(
            f"there are more than {MOST_LINES} lines", "lines", cure="make two derivations of it"
        )
    return claims


def _ties(document: Document) -> tuple[HandTie, ...]:
    cure = 'write given = ["g_m2 = g_m1"]'
    raw = document.data.get("given", [])
    if not isinstance(raw, list):
        raise document.error(f"given: a list is wanted, not {described(raw)}", "given", cure=cure)
    if len(raw) > MOST_TIES:
        raise document.error(
            f"there are more than {MOST_TIES} ties", "given", cure="keep those that matter"
        )
    return tuple(_tie(document, item, place, cure) for place, item in enumerate(raw))


def _tie(document: Document, raw: Any, place: int, cure: str) -> HandTie:
    item = f"given, tie {place + 1}"
    where = str(document.place("given", place))
    written = text(document, raw, item, "given", place, longest=1000)
    line, _ = read_line(1, where, written)
    if line.fault is not None:
        fault = line.fault
        raise _unreadable(item, where, line.text, Refusal(fault.position, fault.what, fault.cure))
    if line.relation != "=" or line.left is None or line.right is None:
        raise InputError(f"{item}: {quoted(written)} is no equation", where=where, cure=cure)
    return HandTie(_short(document, "given", place), line.text, line.left, line.right)


def _definitions(document: Document) -> tuple[HandDefinition, ...]:
    cure = 'write [define] and under it R_Sp = "R_S || r_pi"'
    raw = table(document, document.data.get("define", {}), "define", "define", cure=cure)
    found = []
    for key, meaning in raw.items():
        where = str(document.place("define", key))
        if not isinstance(meaning, str):
            what = f"define: {quoted(key)} wants an expression, not {described(meaning)}"
            known = key in _KEYS
            raise InputError(what, where=where, cure=f"write {key} above [define]" if known else cure)
        written = text(document, meaning, f"define: {key}", "define", key, longest=10_000)
        plain = _name(key)
        if not NAME.fullmatch(plain):
            raise InputError(f"define: {quoted(key)} is not a name", where=where, cure=NAME_RULE)
        try:
            expression = read_expression(written)
        except Refusal as refusal:
            raise _unreadable(f"define: {plain}", where, written, refusal) from None
        found.append(HandDefinition(_short(document, "define", key), plain, written, expression))
    return tuple(found)


def _name(key: str) -> str:
    """Give the name that a key is, in plain letters; "" where it is none."""
    try:
        return getattr(read_expression(key), "text", "")
    except Refusal:
        return ""


def _short(document: Document, *path: str | int) -> str:
    """Give the place of an item with the file's name alone, as it is printed on a sheet."""
    return f"{PurePath(document.file).name}:{document.place(*path).line}"


def _unreadable(item: str, where: str, written: str, refusal: Refusal) -> InputError:
    shown = pointed(written, refusal.position)
    return InputError(f"{item} cannot be read\n{shown}\n{refusal.what}", where=where, cure=refusal.cure)

"""Opens an issued sheet, of whatever kind, and takes out what it carries."""

from __future__ import annotations

import os
import stat
from dataclasses import replace
from pathlib import Path
from typing import Any

from derive.errors import InputError
from derive.review.issued import Carried, Issued, Kind
from derive.review.json_text import CURE, read_any, read_object
from derive.sheet.hand.names import stems

LARGEST_SHEET = 64_000_000
NO_SHEET = "name a sheet that nodeledger wrote: a .pdf, .html or .json file"


def open_sheet(path: str | os.PathLike[str]) -> Issued:
    """Give an issued sheet with the source and the ledger that it carries.

    Raises: InputError, in one message, where the file is none or is damaged.
    """
    return open_bytes(read_bytes(os.fspath(path)), os.fspath(path))


def open_bytes(data: bytes, file: str) -> Issued:
    """Give the issued sheet that these bytes are; `file` is the name that messages point to.

    Raises: InputError, in one message, where they are none or are damaged.
    """
    kind = kind_of(data)
    if kind is None:
        raise InputError("this is no sheet", where=file, cure=NO_SHEET)
    if kind == "pdf":
        return _pdf(data, file)
    text = _text(data, file)
    return _html(data, text, file) if kind == "html" else _json(data, text, file)


def kind_of(data: bytes) -> Kind | None:
    """Give the kind of file that bytes begin; None for no kind that sheets have."""
    start = data[:1024].lstrip()
    if start.startswith(b"%PDF-"):
        return "pdf"
    if start.startswith(b"{"):
        return "json"
    return "html" if start[:20].lower().startswith((b"<!doctype html", b"<html")) else None


def read_bytes(name: str) -> bytes:
    """Give the bytes of a file.

    Raises: InputError for a file that is missing, is no plain file, or is larger than any sheet.
    """
    try:
        mode = os.stat(name).st_mode
        if not stat.S_ISREG(mode):
            what = "a directory" if stat.S_ISDIR(mode) else "not a plain file"
            raise InputError(f"this is {what}", where=name, cure=NO_SHEET)
        with Path(name).open("rb") as file:
            data = file.read(LARGEST_SHEET + 1)
    except FileNotFoundError:
        raise InputError(
            "there is no such file", where=name, cure="check the name and the directory"
        ) from None
    except PermissionError:
        raise InputError("the file may not be read", where=name, cure="change its permissions") from None
    except (OSError, ValueError) as error:
        if isinstance(error, InputError):
            raise
        shown = ascii(name)[1:-1][:200]
        raise InputError("the file cannot be read", where=shown, cure="check its name") from None
    if len(data) > LARGEST_SHEET:
        raise InputError("the file is larger than 64 MB, as no sheet is", where=name, cure=NO_SHEET)
    return data


def _text(data: bytes, file: str) -> str:
    try:
        return data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise InputError("the file is not UTF-8 text", where=f"{file}:{line}", cure=CURE) from None


def _json(data: bytes, text: str, file: str) -> Issued:
    ledger = _ledger(text, file)
    return Issued(file, "json", data, tuple(sources_of(ledger)), Path(file).name, text, ledger)


def _html(data: bytes, text: str, file: str) -> Issued:
    from derive.review.html_text import carried

    scripts = carried(text)
    if "ledger" not in scripts or not {"topology", "topologies"} & scripts.keys():
        raise InputError(
            "this page carries no source and ledger, so it is no sheet", where=file, cure=NO_SHEET
        )
    ledger = _ledger(scripts["ledger"], file)
    source = read_any(scripts.get("topology", scripts.get("topologies", "")), "the source in it", file)
    found = tuple(_source(entry, file) for entry in (source if isinstance(source, list) else [source]))
    name = source.get("ledger", "") if isinstance(source, dict) else ""
    if not isinstance(name, str):
        raise InputError("the topology in this sheet is damaged", where=file, cure=NO_SHEET)
    return Issued(file, "html", data, found, name, scripts["ledger"], ledger)


def _pdf(data: bytes, file: str) -> Issued:
    from derive.review.pdf import read_pdf

    carried = read_pdf(data, file).carried
    ledgers = [(name, text) for name, relation, text in carried if relation == "/Data"]
    sources = [(name, text) for name, relation, text in carried if relation == "/Source"]
    if len(ledgers) != 1 or not sources:
        raise InputError(
            "this PDF carries no source and ledger, so it is no sheet", where=file, cure=NO_SHEET
        )
    (name, text) = ledgers[0]
    several = len(sources) > 1
    found = tuple(Carried(Path(n).stem if several else "", n, source) for n, source in sources)
    return Issued(file, "pdf", data, found, name, text, _ledger(text, file))


def _ledger(text: str, file: str) -> dict[str, Any]:
    """Give a ledger that has the shape of one: what made it, and its topology or stages."""
    ledger = read_object(text, "the ledger", file)
    made_by = ledger.get("made_by")
    maker = made_by if isinstance(made_by, dict) else {}
    shaped = isinstance(maker.get("version"), str)
    kinds = [kind for kind in ("ledger", "comparison", "redline", "handcheck") if kind in ledger]
    if not shaped or len(kinds) != 1:
        raise InputError("this is no ledger of a sheet", where=file, cure=NO_SHEET)
    if maker.get("name") != "nodeledger":
        raise InputError("this ledger was not made by nodeledger", where=file, cure=NO_SHEET)
    sources_of(ledger, file)
    return ledger


def sources_of(ledger: dict[str, Any], where: str = "ledger") -> list[Carried]:
    """Give the topologies that a ledger itself holds; `where` is what messages point to.

    Raises: InputError where it holds none.
    """
    if "redline" in ledger:
        return [_stage(ledger.get(side), side, where) for side in ("old", "new")]
    if "handcheck" in ledger:
        found = [_source(ledger.get(key), where) for key in ("hand", "topology")]
        names = stems(*(each.file for each in found))
        return [replace(each, stage=stem) for each, stem in zip(found, names, strict=True)]
    if "comparison" not in ledger:
        return [_source(ledger.get("topology"), where)]
    stages = ledger.get("stages")
    if not isinstance(stages, list) or not stages:
        raise InputError("this comparison has no stages", where=where, cure=NO_SHEET)
    return [
        _stage(stage, stage.get("name") if isinstance(stage, dict) else None, where) for stage in stages
    ]


def _stage(stage: Any, name: Any, where: str) -> Carried:
    entry = stage.get("topology") if isinstance(stage, dict) else None
    return _source(entry | {"stage": name} if isinstance(entry, dict) else None, where)


def _source(entry: Any, where: str) -> Carried:
    if not isinstance(entry, dict):
        raise InputError("a topology is missing from this sheet", where=where, cure=NO_SHEET)
    stage, file, text = entry.get("stage", ""), entry.get("file"), entry.get("text")
    digest = entry.get("sha256")
    if not all(isinstance(value, str) for value in (stage, file, text, digest)):
        raise InputError("the topology in this sheet is damaged", where=where, cure=NO_SHEET)
    return Carried(stage, str(file), str(text), str(digest))

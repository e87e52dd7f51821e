"""A file's bytes as text, or one clear reason why not."""

from __future__ import annotations

import os
import stat
from pathlib import Path

from derive.errors import InputError

LARGEST_FILE = 1_000_000
LONGEST_LINE = 20_000


def read_text(path: str | os.PathLike[str]) -> str:
    """Give the text of the file, line ends as they stand.

    Raises: InputError for a file that is missing, is no plain file, is too large, or is not UTF-8.
    """
    name = os.fspath(path)
    data = _bytes(name)
    if data.startswith(b"\xef\xbb\xbf"):
        raise InputError(
            "the file begins with a byte order mark",
            where=f"{name}:1",
            cure="save it as UTF-8 without a byte order mark",
        )
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise InputError(
            "the file is not UTF-8 text", where=f"{name}:{line}", cure="save it as UTF-8"
        ) from error
    return text


def check_text(text: str, file: str) -> None:
    """Refuse a text that no topology needs: too large, with NUL characters, with endless lines."""
    if len(text) > LARGEST_FILE:
        raise _too_large(file)
    _check_characters(text, file)
    for number, line in enumerate(text.split("\n"), start=1):
        where = f"{file}:{number}"
        if "\0" in line:
            raise InputError(
                "the line holds a NUL character", where=where, cure="save the file as plain text"
            )
        if len(line) > LONGEST_LINE:
            raise InputError(
                f"the line is longer than {LONGEST_LINE} characters",
                where=where,
                cure="break it into several lines",
            )


def _check_characters(text: str, file: str) -> None:
    try:
        text.encode("utf-8")
    except UnicodeEncodeError as error:
        raise InputError(
            "the line holds half a character (a surrogate)",
            where=f"{file}:{text.count(chr(10), 0, error.start) + 1}",
            cure="save the file as UTF-8",
        ) from error


def _bytes(name: str) -> bytes:
    try:
        mode = os.stat(name).st_mode
        if stat.S_ISDIR(mode):
            raise InputError("this is a directory", where=name, cure="name a topology file (.toml) in it")
        if not stat.S_ISREG(mode):
            raise InputError("this is not a plain file", where=name, cure="name a topology file (.toml)")
        with Path(name).open("rb") as file:
            data = file.read(LARGEST_FILE + 1)
    except FileNotFoundError as error:
        raise InputError(
            "there is no such file", where=name, cure="check the name and the directory"
        ) from error
    except PermissionError as error:
        raise InputError("the file may not be read", where=name, cure="change its permissions") from error
    except (OSError, ValueError) as error:
        if isinstance(error, InputError):
            raise
        raise InputError(
            "the file cannot be read", where=ascii(name)[1:-1][:200], cure="check its name"
        ) from error
    if len(data) > LARGEST_FILE:
        raise _too_large(name)
    return data


def _too_large(name: str) -> InputError:
    return InputError(
        "the file is larger than 1 MB",
        where=name,
        cure="a topology file describes one stage: check that this is one",
    )

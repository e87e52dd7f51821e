"""Writes a commented topology file to begin from: a small amplifier, or a case that is like what is wanted."""

from __future__ import annotations

import re
from functools import lru_cache
from pathlib import Path, PurePath

from derive.errors import InputError, OutputError
from derive.quantities.words import did_you_mean, quoted
from derive.start.explain import explained

DEFAULT = Path(__file__).with_name("common_emitter.toml")
_TITLE = re.compile(r'^(\s*title\s*=\s*)".*"', re.MULTILINE)
LONGEST_NAME = 100


def start(name: str, like: str | None = None) -> Path:
    """Write NAME.toml, and give its path.

    Given: a case to begin from; a small common-emitter stage where none is named.
    Raises: InputError for a name that no file can have or a case that there is not; OutputError where the file
    cannot be written. A file that is there is never written over.
    """
    path = _path(name)
    text = beginning(path.stem, like)
    try:
        with path.open("x", encoding="utf-8", newline="\n") as file:
            file.write(text)
    except FileExistsError:
        raise OutputError(
            "there is a file of this name, which is left as it is",
            where=str(path),
            cure="choose another name",
        ) from None
    except OSError as error:
        raise OutputError(
            f"the file cannot be written: {error.strerror or error}",
            where=str(path),
            cure="choose a name in a folder that is there and may be written to",
        ) from None
    return path


def beginning(title: str, like: str | None = None) -> str:
    """Give the text of the file that `start` writes for a stage of this title."""
    words = title.replace("_", " ")
    if like is None:
        text = DEFAULT.read_text(encoding="utf-8").replace("@TITLE@", words)
        origin = "a small common-emitter amplifier"
    else:
        text = _TITLE.sub(lambda found: f'{found.group(1)}"{words}"', case_text(like), count=1)
        origin = f"the case {like}"
    head = (
        f"# {words}: begun from {origin}.",
        "# Change what is here into your stage, then: nodeledger sheet FILE",
        "# or see it in the browser as you write: nodeledger watch FILE",
    )
    return "\n".join(head) + "\n\n" + explained(text)


def case_text(name: str) -> str:
    """Give the topology of a case.

    Raises: InputError where there is none of that name.
    """
    known = case_names()
    if name not in known:
        raise InputError(
            f"there is no case {quoted(name)}",
            cure=did_you_mean(name, known, f"there are {', '.join(known)}"),
        )
    return (cases() / name / "topology.toml").read_text(encoding="utf-8")


def case_names() -> tuple[str, ...]:
    """Give the names of all cases."""
    return tuple(sorted(path.parent.name for path in cases().glob("*/topology.toml")))


@lru_cache(maxsize=1)
def cases() -> Path:
    """Give the folder of the cases.

    Raises: OutputError when there is none, which means a broken installation.
    """
    package = Path(__file__).resolve().parents[1]
    # The wheel carries the folder inside; in a checkout it stands beside the package.
    for place in (package / "cases", package.parent / "cases"):
        if any(place.glob("*/topology.toml")):
            return place
    raise OutputError("the cases are missing from this installation", cure="install the package again")


def _path(name: str) -> Path:
    stem = name.removesuffix(".toml")
    last = PurePath(stem).name
    plain = not stem.endswith("/") and last.isprintable() and not set(last) & set('"\\<>:|?*')
    if not last or last.startswith((".", "-")) or not plain or len(last) > LONGEST_NAME:
        raise InputError(
            f"{quoted(name)} is no name for a topology file",
            cure='take letters and digits, such as "preamp"',
        )
    return Path(f"{stem}.toml")

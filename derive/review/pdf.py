"""Reads an issued PDF, in a process of its own with limits: a file may be made to fill any memory."""

from __future__ import annotations

import json
import subprocess
import sys
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from typing import Any

from derive.errors import InputError
from derive.review.issued import Aspect, Item
from derive.review.json_text import CURE

SECONDS = 90.0
MEGABYTES = 2000
SCRIPT = Path(__file__).with_name("pdf_child.py")
_ASPECTS: dict[str, Aspect] = {"words": "words", "equation": "equation", "drawing": "drawing"}


@dataclass(frozen=True, slots=True)
class PdfContents:
    """What is in a PDF: attached files as (name, relation, text), digests by place, items of pages read out."""

    pages: int
    carried: tuple[tuple[str, str, str], ...]
    digests: dict[str, str]
    items: dict[int, tuple[Item, ...]]


def read_pdf(data: bytes, where: str, pages: Sequence[int] = ()) -> PdfContents:
    """Give what is in a PDF, the pages asked for read out.

    Raises: InputError where it is damaged, locked, or larger than a sheet can be.
    """
    answer = _ask(data, where, tuple(pages))
    if "error" in answer:
        raise InputError(f"the PDF cannot be read: {answer['error']}", where=where, cure=CURE)
    carried = tuple((file["name"], file["relation"], file["text"]) for file in answer["carried"])
    items = {
        int(number): _placed(found, int(number), answer["headings"])
        for number, found in answer["items"].items()
    }
    return PdfContents(answer["pages"], carried, answer["digests"], items)


def _placed(found: list[list[Any]], page: int, headings: list[list[Any]]) -> tuple[Item, ...]:
    """Give the items of a page, each under the heading that stands above it."""
    before = next((title for title, number, _ in reversed(headings) if 0 < number < page), "")
    own = [(top, title) for title, number, top in headings if number == page]
    return tuple(
        Item(
            _ASPECTS[aspect],
            text,
            raw,
            next((title for top, title in reversed(own) if top > height), before),
            page,
            height,
        )
        for aspect, text, raw, height in found
    )


# A file is opened, then compared: its contents are asked for more than once.
@lru_cache(maxsize=4)
def _ask(data: bytes, where: str, pages: tuple[int, ...]) -> dict[str, Any]:
    asked = ",".join(map(str, pages))
    limits = [str(MEGABYTES), str(int(SECONDS) + 1), asked]
    with subprocess.Popen(
        # -P: the folder of the script must not shadow modules of the libraries.
        [sys.executable, "-P", str(SCRIPT), *limits],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
    ) as process:
        try:
            answer, _ = process.communicate(data, SECONDS)
        except subprocess.TimeoutExpired:
            answer = b""
        finally:
            # Ended by itself or not: nothing stays behind, whatever went wrong here.
            process.kill()
    if process.returncode or not answer:
        words = "the PDF cannot be read within the time and memory that a sheet needs"
        raise InputError(words, where=where, cure=CURE)
    found: dict[str, Any] = json.loads(answer)
    return found

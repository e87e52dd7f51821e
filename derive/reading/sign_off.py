"""The [[revision]] and [[review]] tables: how the sheet came to be, and who looked at what."""

from __future__ import annotations

import datetime
from typing import Any

from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import described, known_keys, table, text
from derive.topology.sign_off import Reviewed, ReviewVerdict, Revision
from derive.topology.topology import TitleBlock

MOST = 100
_LONGEST = 600
_VERDICTS: tuple[ReviewVerdict, ...] = ("accepted", "conditional", "rejected")
_REVISION_CURE = 'write [[revision]] and under it mark = "A" and what = "first issue"'
_REVIEW_CURE = 'write [[review]] and under it item = "...", by = "..." and verdict = "accepted"'


def read_revisions(document: Document, block: TitleBlock) -> tuple[Revision, ...]:
    """Give the revisions in the order in which they are written, the newest last.

    Raises: InputError where one has no mark or says nothing, or where the last is not that of the title block.
    """
    found: list[Revision] = []
    for place, entries in enumerate(_tables(document, "revision", _REVISION_CURE)):
        path, item = ("revision", place), f"revision {place + 1}"
        known_keys(document, entries, ("mark", "what", "date", "by"), item, *path)
        words = {key: _entry(document, raw, item, *path, key) for key, raw in entries.items()}
        for key, cure in (("mark", 'write mark = "A"'), ("what", 'write what = "first issue"')):
            if not words.get(key, "").strip():
                raise document.error(f"{item}: {key} is missing", *path, cure=cure)
        if any(words["mark"] == earlier.mark for earlier in found):
            what = f"{item}: the mark {quoted(words['mark'])} is given twice"
            raise document.error(what, *path, "mark", cure="give every revision its own mark")
        found.append(Revision(**words))
    if found and block.revision and found[-1].mark != block.revision:
        raise document.error(
            f"sheet: the revision is {quoted(block.revision)}, but the last [[revision]] is {quoted(found[-1].mark)}",
            "sheet",
            "revision",
            cure="make the two agree: the newest revision stands last",
        )
    return tuple(found)


def read_reviews(document: Document) -> tuple[Reviewed, ...]:
    """Give what was looked at, in the order in which it is written.

    Raises: InputError where an item has no name, nobody looked at it, or the verdict is none.
    """
    found = []
    for place, entries in enumerate(_tables(document, "review", _REVIEW_CURE)):
        path, item = ("review", place), f"review {place + 1}"
        known_keys(document, entries, ("item", "by", "verdict", "remark", "date"), item, *path)
        words = {key: _entry(document, raw, item, *path, key) for key, raw in entries.items()}
        for key in ("item", "by", "verdict"):
            if not words.get(key, "").strip():
                raise document.error(f"{item}: {key} is missing", *path, cure=_REVIEW_CURE)
        verdict = _verdict(document, words.pop("verdict"), item, *path)
        if verdict != "accepted" and not words.get("remark", "").strip():
            what = f"{item}: {verdict}, but the remark does not say why"
            raise document.error(what, *path, cure='write remark = "..."')
        found.append(Reviewed(verdict=verdict, **words))
    return tuple(found)


def _verdict(document: Document, written: str, item: str, *path: str | int) -> ReviewVerdict:
    for verdict in _VERDICTS:
        if written == verdict:
            return verdict
    what = f"{item}: there is no verdict {quoted(written)}"
    cure = did_you_mean(written, _VERDICTS, f"write {listed(map(quoted, _VERDICTS), 'or')}")
    raise document.error(what, *path, "verdict", cure=cure)


def _tables(document: Document, key: str, cure: str) -> list[dict[str, Any]]:
    raw = document.data.get(key, [])
    if not isinstance(raw, list):
        raise document.error(f"{key}: a list of tables is wanted, not {described(raw)}", key, cure=cure)
    if len(raw) > MOST:
        raise document.error(
            f"there are more than {MOST} tables [[{key}]]", key, MOST, cure="keep the newest"
        )
    return [
        table(document, item, f"{key} {place + 1}", key, place, cure=cure)
        for place, item in enumerate(raw)
    ]


def _entry(document: Document, raw: Any, item: str, *path: str | int) -> str:
    if path[-1] == "date" and type(raw) is datetime.date:
        return raw.isoformat()
    return text(document, raw, f"{item}: {path[-1]}", *path, longest=_LONGEST)

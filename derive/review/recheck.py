"""Rechecks an issued sheet: derives it anew from its own source, and holds all that is printed against that."""

from __future__ import annotations

import json
from collections.abc import Iterator

from derive.errors import DeriveError, OutputError
from derive.render.look import OURS, Look
from derive.review.earlier import compare_with_earlier
from derive.review.issued import Carried, Difference, Issued, Recheck, Standing
from derive.review.ledgers import changes
from derive.review.open import sources_of
from derive.review.places import compare_items, quoted
from derive.review.remake import Fresh, Tell, remake
from derive.version import VERSION

# Versions before this one: sheets that say so were made by them, and may look another way.
EARLIER: tuple[str, ...] = ()
LOOKS = "only its looks differ: was it issued with a folder of templates, give the same with --templates"
PACKED = "the file was packed anew by another program; all that is in it is the same"


def recheck(issued: Issued, tell: Tell = lambda stage: None, look: Look = OURS) -> Recheck:
    """Say whether everything that an issued sheet shows still holds.

    Given: the user's own `look`, where it was issued with one.
    Raises: OutputError where a sheet of its kind cannot be made here.
    """
    carried = tuple(_carried_differences(issued))
    try:
        fresh = remake(issued, tell, look)
    except OutputError:
        raise
    except DeriveError as error:
        why = Difference(
            "derivation", "its source cannot be derived here", "", " ".join(str(error).split())
        )
        return Recheck(issued, "differs", (*carried, why))
    tell("comparing")
    if issued.version != VERSION and issued.version in EARLIER:
        found = compare_with_earlier(issued, fresh)
        standing: Standing = "differs" if carried or found.lost else "newer"
        remarks = (*fresh.remarks, *found.remarks)
        return Recheck(issued, standing, (*carried, *found.lost, *found.reworded), remarks, fresh.passed)
    differences, remarks = _differences(issued, fresh)
    return Recheck(
        issued,
        "differs" if carried or differences else "same",
        (*carried, *differences),
        (*fresh.remarks, *remarks, *_looks((*carried, *differences))),
        fresh.passed,
    )


def _looks(differences: tuple[Difference, ...]) -> tuple[str, ...]:
    looks = {"markup", "drawing", "file"}
    return (LOOKS,) if differences and all(found.aspect in looks for found in differences) else ()


def _carried_differences(issued: Issued) -> Iterator[Difference]:
    """Give what does not agree among the source, its digests and the ledger."""
    within = sources_of(issued.ledger)
    if len(within) != len(issued.sources):
        yield Difference("source", "the sources attached", str(len(issued.sources)), str(len(within)))
    for attached, own in zip(issued.sources, within, strict=False):
        name = f"source {attached.file}"
        if attached.text != own.text:
            yield Difference(
                "source", f"{name}, attached and in the ledger", *_parting(attached.text, own.text)
            )
        yield from _digest_differences(name, attached)
        if issued.kind != "json":
            yield from _digest_differences(f"{name}, in the ledger", own)
    canonical = json.dumps(issued.ledger, ensure_ascii=False, indent=1) + "\n"
    own_text = issued.ledger_text.replace("\\u003c", "<").replace("\\u003e", ">").replace("\\u0026", "&")
    if issued.kind != "html" and issued.ledger_text != canonical:
        yield Difference("ledger", "how the ledger is written", *_parting(issued.ledger_text, canonical))
    elif issued.kind == "html" and own_text != canonical:
        yield Difference("ledger", "how the ledger is written", *_parting(own_text, canonical))


def _digest_differences(name: str, source: Carried) -> Iterator[Difference]:
    if source.digest is not None and source.true_digest != source.digest:
        yield Difference("source", f"SHA-256 of {name}", source.digest, source.true_digest)


def _differences(issued: Issued, fresh: Fresh) -> tuple[tuple[Difference, ...], tuple[str, ...]]:
    """Give all that differs from the fresh file of the same version, and remarks."""
    if issued.data == fresh.data:
        return (), ()
    found: list[Difference] = []
    if issued.version != VERSION:
        words = f"this is {VERSION}, which knows of no such version before it"
        found.append(Difference("ledger", "the version that made the sheet", issued.version, words))
    found += [c.difference() for c in changes(issued.ledger, json.loads(fresh.sheet.ledger_text))]
    if issued.kind == "html":
        found += _page_differences(issued, fresh)
    elif issued.kind == "pdf":
        from derive.review.pdf_pages import pdf_differences

        found += pdf_differences(issued, fresh.data)
        return tuple(found), () if found else (PACKED,)
    if not found:
        at = _parting(issued.data.decode("utf-8"), fresh.data.decode("utf-8"))
        found.append(Difference("file", "letters that are neither shown nor read", *at))
    return tuple(found), ()


def _page_differences(issued: Issued, fresh: Fresh) -> list[Difference]:
    from derive.review.html_text import items

    old, new = issued.data.decode("utf-8"), fresh.data.decode("utf-8")
    return list(compare_items(items(old), items(new)))


def _parting(old: str, new: str) -> tuple[str, str]:
    """Give the lines at which two texts part, with their number."""
    left, right = old.split("\n"), new.split("\n")
    shorter = min(len(left), len(right))
    line = next((i for i in range(shorter) if left[i] != right[i]), shorter)
    shown = [lines[line] if line < len(lines) else "nothing more" for lines in (left, right)]
    old, new = quoted(*shown)
    return f"line {line + 1}: {old}", f"line {line + 1}: {new}"

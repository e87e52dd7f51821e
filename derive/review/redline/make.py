"""Makes a redline from files, and its sheet where one is wanted: all is worked before any is written."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from pathlib import Path

from derive.review.redline.ledger import NAME
from derive.review.redline.nouns import Redline
from derive.review.redline.redline import Tell, redline


def make_redline(
    old: str, new: str, folder: Path | None, kinds: Sequence[str], tell: Tell
) -> tuple[Redline, tuple[Path, ...]]:
    """Compare two revisions, write the sheet into a folder where one is named, and give what was written.

    Raises: InputError before any work; OutputError.
    """
    found = redline(old, new, tell)
    if folder is None:
        return found, ()
    # Imported here because a table in the terminal needs no page.
    from derive.render.files import write_sheet
    from derive.review.redline.compose import compose_redline

    sheet = compose_redline(found)
    return found, write_sheet(sheet, folder, NAME, kinds, progress=partial(tell, NAME))

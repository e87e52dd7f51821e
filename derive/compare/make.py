"""Makes a comparison from files, and its sheet where one is wanted: all is worked before any is written."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import partial
from pathlib import Path

from derive.batch import sheet_names
from derive.compare.compare import compare
from derive.compare.comparison import Comparison
from derive.reading.read import read

NAME = "comparison"


def make_comparison(
    files: Sequence[str],
    find: str | None,
    folder: Path | None,
    kinds: Sequence[str],
    tell: Callable[[str, str], None],
) -> tuple[Comparison, tuple[Path, ...]]:
    """Compare topology files, write the sheet into a folder where one is named, and give what was written.

    Raises: InputError before any work; OutputError.
    """
    names = sheet_names(files)
    comparison = compare([read(file) for file in files], names, find, tell)
    if folder is None:
        return comparison, ()
    # Imported here because a table in the terminal needs no page.
    from derive.compare.compose import compose_comparison
    from derive.render.files import write_sheet

    sheet = compose_comparison(comparison)
    return comparison, write_sheet(sheet, folder, NAME, kinds, progress=partial(tell, NAME))

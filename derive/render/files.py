"""The three files of a sheet, written whole or not at all."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from pathlib import Path

from derive.errors import OutputError
from derive.render.html import to_html
from derive.render.look import OURS, Look
from derive.render.maths import SheetMaths
from derive.render.write import write_all
from derive.sheet.document import Sheet

KINDS = ("html", "pdf", "json")


def prepare(sheet: Sheet, kinds: Sequence[str]) -> SheetMaths | None:
    """Set the maths of a sheet whose verdicts are still to come, and load what writing will need."""
    if not {"html", "pdf"} & set(kinds):
        return None
    maths = SheetMaths(sheet)
    if "html" in kinds:
        _ = maths.marked_up
    if "pdf" in kinds:
        from derive.render.pdf import load

        _ = maths.drawn
        load()
    return maths


def write_sheet(
    sheet: Sheet,
    folder: Path,
    name: str,
    kinds: Sequence[str] = KINDS,
    *,
    maths: SheetMaths | None = None,
    look: Look = OURS,
    progress: Callable[[str], None] = lambda stage: None,
) -> tuple[Path, ...]:
    """Write NAME.html, NAME.pdf and NAME.json, or those asked for, into a folder.

    Given: the `maths` prepared for this sheet, where they were; the user's own `look`.
    Raises: InputError where a template of the user's goes wrong; OutputError;
    where only the PDF cannot be made, the other files are written first.
    """
    if {"html", "pdf"} & set(kinds) and (maths is None or not maths.covers(sheet)):
        maths = SheetMaths(sheet)
    made: dict[Path, bytes] = {}
    failure: OutputError | None = None
    if "html" in kinds:
        progress("writing HTML")
        made[folder / f"{name}.html"] = to_html(sheet, maths, look)
    if "pdf" in kinds:
        progress("writing PDF")
        from derive.render.pdf import to_pdf

        try:
            made[folder / f"{name}.pdf"] = to_pdf(sheet, maths, look)
        except OutputError as error:
            failure = error
    if "json" in kinds:
        made[folder / f"{name}.json"] = sheet.ledger_text.encode("utf-8")
    make_folder(folder)
    write_all(made)
    if failure is not None:
        raise failure
    return tuple(made)


def make_folder(folder: Path) -> None:
    """Make the folder that files go to.

    Raises: OutputError where that is not possible.
    """
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise OutputError(
            f"the folder cannot be made: {error.strerror or error}",
            where=str(folder),
            cure="name another folder with --out",
        ) from None

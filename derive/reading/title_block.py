"""The [sheet] table: what goes into the title block."""

from __future__ import annotations

import datetime
from typing import Any

from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import described, known_keys, table, text
from derive.topology.topology import PLOTS, PlotKind, SheetForm, TitleBlock

_KEYS = (
    "title",
    "number",
    "revision",
    "prepared",
    "checked",
    "approved",
    "date",
    "project",
    "notes",
)
# Keys of the table that do not go into the title block.
_OTHER_KEYS = ("form", "plots", "hand")
_PLOTS: tuple[PlotKind, ...] = ("response", "poles", "step", "delay")
_FORMS: tuple[SheetForm, ...] = ("nested", "expanded")
_LONGEST_NOTES = 4000
_TITLE_CURE = 'write [sheet] with title = "..." at the top'


def read_title_block(document: Document) -> TitleBlock:
    """Give the title block as the user wrote it.

    Raises: InputError where the title is missing or an entry is no text.
    """
    if "sheet" not in document.data:
        raise document.error("the file has no [sheet] table with a title", cure=_TITLE_CURE)
    sheet = table(document, document.data["sheet"], "sheet", "sheet", cure=_TITLE_CURE)
    known_keys(document, sheet, (*_KEYS, *_OTHER_KEYS), "sheet", "sheet")
    if "title" not in sheet:
        raise document.error("sheet: the title is missing", "sheet", cure='write title = "..."')
    entries = {key: _entry(document, raw, key) for key, raw in sheet.items() if key in _KEYS}
    if not entries["title"].strip():
        raise document.error("sheet: the title is empty", "sheet", "title", cure="say what the stage is")
    return TitleBlock(**entries)


def read_form(document: Document) -> SheetForm:
    """Give the form in which results are to be derived; "" where the user left that open.

    Raises: InputError for a form that there is not.
    """
    sheet = document.data.get("sheet", {})
    if "form" not in sheet:
        return ""
    written = text(document, sheet["form"], "sheet: form", "sheet", "form")
    for form in _FORMS:
        if written == form:
            return form
    raise document.error(
        f'sheet: there is no form "{written}"',
        "sheet",
        "form",
        cure='write form = "nested" or form = "expanded", or leave it out',
    )


def read_plots(document: Document) -> tuple[PlotKind, ...]:
    """Give what the sheet is to plot, in the sheet's own order.

    Raises: InputError for a plot that there is not.
    """
    raw = document.data.get("sheet", {}).get("plots", list(PLOTS))
    if not isinstance(raw, list):
        raise document.error(
            f"sheet: plots wants a list, not {described(raw)}",
            "sheet",
            "plots",
            cure='write plots = ["response", "step"], or plots = [] for none',
        )
    for place, name in enumerate(raw):
        written = text(document, name, "sheet: plots", "sheet", "plots", place)
        if written not in _PLOTS:
            raise document.error(
                f"sheet: there is no plot {quoted(written)}",
                "sheet",
                "plots",
                place,
                cure=did_you_mean(written, _PLOTS, f"there is {listed(_PLOTS)}"),
            )
    return tuple(kind for kind in _PLOTS if kind in raw)


def _entry(document: Document, raw: Any, key: str) -> str:
    if key == "date" and type(raw) is datetime.date:
        return raw.isoformat()
    if key == "notes":
        return text(document, raw, "sheet: notes", "sheet", key, longest=_LONGEST_NOTES, lines=True)
    return text(document, raw, f"sheet: {key}", "sheet", key)

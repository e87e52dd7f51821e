"""Sheets to be rechecked, and a recheck that makes each fresh sheet once: it comes out the same every time.

The other engine is asked neither for the one nor for the other: it takes longer than all the rest.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial

import derive.review.recheck as station
import derive.review.remake as making
from derive.pipeline import derive
from derive.reading.read import parse
from derive.review.issued import Recheck
from derive.review.open import open_bytes
from derive.review.remake import Fresh, write
from derive.review.remake import remake as made_anew
from derive.sheet.compose import compose

DIVIDER = """[sheet]
title = "Divider"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor  = "4k7",   between = ["in", "out"], tol = "F" }
C_1 = { capacitor = "100n",  between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per     = "V_s"
"""


def issue(
    text: str = DIVIDER, name: str = "divider", kinds: Sequence[str] = ("json", "html", "pdf")
) -> dict[str, bytes]:
    """Give the files of a topology's sheet, by their kind."""
    sheet = compose(derive(parse(text, f"{name}.toml"), other_engine=False).outcome, name)
    return {kind: write(sheet, kind) for kind in kinds}


class Rechecker:
    """Rechecks files; of one source and kind the fresh sheet is made once."""

    def __init__(self) -> None:
        self._made: dict[object, Fresh] = {}

    def remake(self, issued: object, *more: object) -> Fresh:
        texts = tuple(source.text for source in issued.sources)
        key = (issued.kind, texts, issued.ledger_name, issued.holds)
        if key not in self._made:
            held, making.derive = making.derive, partial(derive, other_engine=False)
            try:
                self._made[key] = made_anew(issued, *more)
            finally:
                making.derive = held
        return self._made[key]

    def __call__(self, data: bytes, file: str = "sheet") -> Recheck:
        held, station.remake = station.remake, self.remake
        try:
            return station.recheck(open_bytes(data, file))
        finally:
            station.remake = held

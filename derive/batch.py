"""Makes the sheets of several topologies.

All are read before any is worked, and all are worked before any is written.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from functools import partial
from pathlib import Path

from derive.approximate.questions import with_short_forms
from derive.check.verdict import Outcome
from derive.errors import InputError
from derive.pipeline import Results, derive
from derive.reading.read import read
from derive.render.files import prepare, write_sheet
from derive.render.look import OURS, Look
from derive.render.maths import SheetMaths
from derive.sheet.compose import compose
from derive.topology.topology import Topology

Tell = Callable[[str, str], None]


@dataclass(frozen=True, slots=True)
class Made:
    """A sheet that was written: its name, its results and its files."""

    name: str
    results: Results
    files: tuple[Path, ...]


def make_sheets(
    files: Sequence[str],
    folder: Path,
    kinds: Sequence[str],
    tell: Tell,
    *,
    simplify: bool = False,
    look: Look = OURS,
) -> tuple[Made, ...]:
    """Derive, check and write the sheet of each topology file.

    Given: `tell`, which is told the sheet's name and each stage that begins; whether short forms are wanted
    of those too that do not ask for them; the user's own `look`.
    Raises: InputError before anything is written, but for templates that go wrong on a sheet; OutputError.
    """
    names = sheet_names(files)
    topologies = [with_short_forms(read(file)) if simplify else read(file) for file in files]
    worked = [
        (name, *_work(name, topology, kinds, tell))
        for name, topology in zip(names, topologies, strict=True)
    ]
    made = []
    for name, results, maths in worked:
        sheet = compose(results.outcome, name)
        written = write_sheet(
            sheet, folder, name, kinds, maths=maths, look=look, progress=partial(tell, name)
        )
        made.append(Made(name, results, written))
    return tuple(made)


def sheet_names(files: Sequence[str]) -> tuple[str, ...]:
    """Give each sheet's name: the file's stem, or its folder's name where the stem is `topology`.

    Raises: InputError where two files would be written under one name.
    """
    names: dict[str, str] = {}
    for file in files:
        path = Path(file)
        name = path.resolve().parent.name if path.stem == "topology" else path.stem
        if name in names:
            raise InputError(
                f"{names[name]} and {file} would both be written as {name}",
                cure="rename one of the files, or make the sheets into two folders",
            )
        names[name] = file
    return tuple(names)


def _work(
    name: str, topology: Topology, kinds: Sequence[str], tell: Tell
) -> tuple[Results, SheetMaths | None]:
    """Derive one topology; its maths are set while the other engine works, as no verdict is in them."""
    prepared: list[SheetMaths | None] = []

    def set_maths(outcome: Outcome) -> None:
        prepared.append(prepare(compose(outcome, name, with_ledger=False), kinds))

    results = derive(topology, progress=partial(tell, name), meanwhile=set_maths)
    return results, prepared[0]

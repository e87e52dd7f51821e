"""Checks the file of a hand derivation, and writes its sheet where one is wanted.

Nothing is written before all is worked.
"""

from __future__ import annotations

import os
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path, PurePath

from derive.bands.choose import bands_of
from derive.bands.restrict import restrict
from derive.bias.solve import operating_point
from derive.devices.linearise import linearise
from derive.errors import InputError
from derive.handcheck.check_lines import check_lines
from derive.handcheck.choose import choose, place_of
from derive.handcheck.read import read_hand
from derive.handcheck.report import HandFile, HandReport
from derive.pipeline import solve
from derive.reading.read import read
from derive.topology.topology import Topology


@dataclass(frozen=True, slots=True)
class Checked:
    """A hand derivation with the topology that it belongs to and what came of its lines."""

    hand: HandFile
    topology: Topology
    report: HandReport


def check_hand_file(
    file: str | os.PathLike[str],
    tell: Callable[[str], None] = lambda stage: None,
    *,
    exact: bool = False,
) -> Checked:
    """Check every line of a hand derivation against the topology that its file names.

    Given: `tell`, which is told each stage that begins; `exact`, whether true lines are also multiplied out.
    Raises: InputError where the file or its topology cannot be used.
    """
    name = os.fspath(file)
    hand = read_hand(name)
    return check_hand(hand, read(_topology_of(hand, name)), name, tell, exact=exact)


def check_hand(
    hand: HandFile,
    topology: Topology,
    name: str,
    tell: Callable[[str], None] = lambda stage: None,
    *,
    exact: bool = False,
) -> Checked:
    """Check every line of a hand derivation against its topology; `name` is what messages point to.

    Raises: InputError where it is of no result of the topology.
    """
    point = operating_point(topology)
    circuit = linearise(topology, {device.part: device for device in point.devices} if point else {})
    find, band = choose(hand, topology, bands_of(circuit), name)
    tell(f"deriving {find.name}, {band} band")
    solution = solve(restrict(circuit, band), find, explain=False)
    tell("checking the lines")
    return Checked(hand, topology, check_lines(solution, hand, exact=exact))


def write_hand(
    checked: Checked,
    name: str,
    folder: Path,
    kinds: Sequence[str],
    tell: Callable[[str], None] = lambda stage: None,
) -> tuple[Path, ...]:
    """Write the sheet of a checked derivation into a folder, and give what was written.

    Raises: OutputError.
    """
    # Imported here because a table in the terminal needs no page.
    from derive.render.files import write_sheet
    from derive.sheet.hand.compose import compose_hand

    sheet = compose_hand(checked.report, checked.hand, checked.topology, name)
    return write_sheet(sheet, folder, name, kinds, progress=tell)


def hand_name(file: str) -> str:
    """Give the name of the files of a sheet: the stem, or FOLDER_hand where the stem is `hand`."""
    path = Path(file)
    return f"{path.resolve().parent.name}_hand" if path.stem == "hand" else path.stem


def _topology_of(hand: HandFile, file: str) -> str:
    where = place_of(hand, "topology", file)
    if not hand.topology:
        raise InputError(
            "the file names no topology", where=where, cure='write topology = "buffer.toml" at the top'
        )
    if PurePath(hand.topology).is_absolute():
        raise InputError(
            "topology: the name of a file beside this one is wanted",
            where=where,
            cure='write topology = "buffer.toml"',
        )
    path = os.fspath(PurePath(file).parent / hand.topology)
    if not os.path.exists(path):
        raise InputError(
            f"topology: there is no file {path}", where=where, cure="check the name and the directory"
        )
    return path

"""The command line: reads arguments, runs the journey, prints, and sets the exit status.

0: all well. 1: the work was done and a check failed. 2: the input could not be used, or a result could
not be written. Results go to standard output; progress and messages to standard error.
"""

from __future__ import annotations

import argparse
import contextlib
import io
import os
import shutil
import sys
from collections.abc import Sequence
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from derive.errors import DeriveError, InputError
from derive.version import VERSION

if TYPE_CHECKING:
    from derive.batch import Made

WELL, FAILED, UNUSABLE = 0, 1, 2
KINDS = ("html", "pdf", "json")
SHORT_FORMS = "find short forms within the budget of error"


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command and give the exit status."""
    _open_closed_streams()
    # The matrices are small: threads of the linear algebra library cost more than they bring.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    options = _parser().parse_args(arguments)
    _never_stumble_over_letters()
    try:
        status = int(options.run(options))
        sys.stdout.flush()
        return status
    except DeriveError as error:
        print(f"nodeledger: {error}", file=sys.stderr)
    except (RecursionError, MemoryError):
        print("nodeledger: the circuit is too large to be worked on this machine", file=sys.stderr)
    except BrokenPipeError:
        _turn_output_away()
    except OSError as error:
        _turn_output_away()
        reason = error.strerror or str(error)
        print(f"nodeledger: the results cannot be printed: {reason}; print elsewhere", file=sys.stderr)
    except KeyboardInterrupt:
        print("nodeledger: stopped", file=sys.stderr)
    except Exception as error:  # noqa: BLE001 - a defect of ours must not show a user a traceback
        print(f"nodeledger: internal error: {type(error).__name__}: {error}", file=sys.stderr)
        print("nodeledger: this is a defect of the program, not of your file", file=sys.stderr)
    return UNUSABLE


def _open_closed_streams() -> None:
    """Give a stream that was closed before we began somewhere to go, so that nothing trips over it."""
    if sys.stdout is None:
        sys.stdout = Path(os.devnull).open("w", encoding="utf-8")  # noqa: SIM115 - kept to the end
    if sys.stderr is None:
        sys.stderr = Path(os.devnull).open("w", encoding="utf-8")  # noqa: SIM115 - kept to the end


def _turn_output_away() -> None:
    """Point standard output elsewhere when its reader is gone, so that closing it is quiet."""
    with contextlib.suppress(OSError, ValueError):
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _never_stumble_over_letters() -> None:
    """Let a terminal that lacks our letters show question marks in their place."""
    if isinstance(sys.stdout, io.TextIOWrapper):
        sys.stdout.reconfigure(errors="replace")


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="nodeledger", description="Exact, checked derivations of analog circuits."
    )
    parser.add_argument("--version", action="version", version=f"nodeledger {VERSION}")
    commands = parser.add_subparsers(required=True, metavar="COMMAND")
    sheet = commands.add_parser("sheet", help="derive, check, and write the sheet of each topology")
    sheet.add_argument("files", nargs="+", metavar="FILE", help="topology file")
    sheet.add_argument(
        "--out", default="sheets", metavar="DIR", help="folder to write to (default sheets)"
    )
    sheet.add_argument("--only", default=",".join(KINDS), metavar="KINDS", help="of html,pdf,json")
    sheet.add_argument("--simplify", action="store_true", help=SHORT_FORMS)
    sheet.add_argument("--quiet", action="store_true", help="no progress on standard error")
    sheet.set_defaults(run=_sheet)
    show = commands.add_parser("show", help="print a topology's results in the terminal")
    show.add_argument("file", metavar="FILE", help="topology file")
    show.add_argument("--find", metavar="NAME", help="one wanted quantity only")
    show.add_argument("--band", metavar="BAND", help="one band only")
    show.add_argument("--steps", action="store_true", help="the whole derivation")
    show.add_argument("--all-checks", action="store_true", help="ask the other engine as well")
    show.add_argument("--simplify", action="store_true", help=SHORT_FORMS)
    show.add_argument("--quiet", action="store_true", help="no progress on standard error")
    show.set_defaults(run=_show)
    _add_compare(commands)
    return parser


def _add_compare(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    compare = commands.add_parser("compare", help="set several stages side by side")
    compare.add_argument("files", nargs="+", metavar="FILE", help="topology file")
    compare.add_argument(
        "--find", metavar="NAME", help="the quantity to compare (default: the first gain)"
    )
    compare.add_argument("--out", metavar="DIR", help="folder to write a comparison sheet to")
    compare.add_argument("--only", metavar="KINDS", help="of html,pdf,json")
    compare.add_argument("--quiet", action="store_true", help="no progress on standard error")
    compare.set_defaults(run=_compare)


def _sheet(options: argparse.Namespace) -> int:
    # Imported here so that `show` does not pay for typesetting.
    from derive.batch import make_sheets
    from derive.progress import Progress

    kinds = _kinds(options.only)
    with Progress(len(options.files), 2 + len(kinds), quiet=options.quiet) as progress:
        made = make_sheets(
            options.files, Path(options.out), kinds, progress.tell, simplify=options.simplify
        )
    _summary(made)
    return WELL if all(sheet.results.passed for sheet in made) else FAILED


def _show(options: argparse.Namespace) -> int:
    from derive.approximate.questions import with_short_forms
    from derive.pipeline import derive
    from derive.progress import Progress
    from derive.reading.read import read
    from derive.sheet.plain import plain_outcome

    topology = read(options.file)
    if options.simplify:
        topology = with_short_forms(topology)
    names = [find.name for find in topology.finds]
    if options.find is not None and options.find not in names:
        raise InputError(
            f'nothing named "{options.find}" is wanted in this topology',
            where=options.file,
            cure=f"it has {', '.join(names)}",
        )
    with Progress(1, 1 + 3 * len(names), quiet=options.quiet) as progress:
        results = derive(
            topology,
            other_engine=options.all_checks,
            only=options.find,
            band=options.band,
            progress=partial(progress.tell, topology.file),
        )
    sys.stdout.write(plain_outcome(results.outcome, steps=options.steps))
    return WELL if results.passed else FAILED


def _compare(options: argparse.Namespace) -> int:
    from derive.compare.make import make_comparison
    from derive.compare.plain import plain_comparison
    from derive.progress import Progress

    if options.only is not None and options.out is None:
        raise InputError(
            "--only says which files to write, and none are written", cure="name a folder with --out"
        )
    only = ",".join(KINDS) if options.only is None else options.only
    kinds = () if options.out is None else _kinds(only)
    folder = None if options.out is None else Path(options.out)
    with Progress(len(options.files), 4, quiet=options.quiet) as progress:
        comparison, written = make_comparison(options.files, options.find, folder, kinds, progress.tell)
    width = shutil.get_terminal_size().columns if sys.stdout.isatty() else 120
    sys.stdout.write(plain_comparison(comparison, width))
    if written:
        sys.stdout.write(f"\n{', '.join(str(path) for path in written)}\n")
    return WELL if comparison.passed else FAILED


def _kinds(text: str) -> tuple[str, ...]:
    asked = [kind.strip() for kind in text.split(",") if kind.strip()]
    unknown = [kind for kind in asked if kind not in KINDS]
    if unknown or not asked:
        raise InputError(
            f'--only: "{unknown[0] if unknown else text}" is no kind of file that is written',
            cure="choose of html, pdf and json, with commas between",
        )
    return tuple(kind for kind in KINDS if kind in asked)


def _summary(made: Sequence[Made]) -> None:
    from rich.console import Console
    from rich.table import Table

    from derive.sheet.plain import summary_rows

    table = Table(box=None, pad_edge=False)
    for heading in ("Sheet", "Sought", "Gain", "Checks", "Files"):
        table.add_column(heading, overflow="fold")
    for sheet in made:
        files = ", ".join(file.name for file in sheet.files)
        for place, cells in enumerate(summary_rows(sheet.results.outcome)):
            table.add_row(sheet.name if place == 0 else "", *cells, files if place == 0 else "")
    width = None if sys.stdout.isatty() else 120
    Console(width=width, highlight=False).print(table)

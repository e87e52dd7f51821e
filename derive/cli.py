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
    sheet.add_argument("--templates", metavar="DIR", help="your own logo, style and templates")
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
    _add_handcheck(commands)
    _add_compare(commands)
    _add_review(commands)
    _add_at_the_desk(commands)
    return parser


def _add_handcheck(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    handcheck = commands.add_parser("handcheck", help="check a derivation by hand, line by line")
    handcheck.add_argument("file", metavar="FILE", help="file of the derivation")
    handcheck.add_argument(
        "--exact", action="store_true", help="prove true lines by exact algebra as well"
    )
    handcheck.add_argument("--out", metavar="DIR", help="folder to write a sheet of it to")
    handcheck.add_argument("--only", metavar="KINDS", help="of html,pdf,json")
    handcheck.add_argument("--quiet", action="store_true", help="no progress on standard error")
    handcheck.set_defaults(run=_handcheck)


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


def _add_review(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    recheck = commands.add_parser("recheck", help="derive an issued sheet anew from what it carries")
    recheck.add_argument("file", metavar="SHEET", help="issued sheet: .pdf, .html or .json")
    recheck.add_argument("--templates", metavar="DIR", help="the folder that it was issued with")
    recheck.add_argument("--quiet", action="store_true", help="no progress on standard error")
    recheck.set_defaults(run=_recheck)
    redline = commands.add_parser("redline", help="say what changed between two revisions")
    redline.add_argument("old", metavar="OLD", help="topology file or issued sheet")
    redline.add_argument("new", metavar="NEW", help="topology file or issued sheet")
    redline.add_argument("--out", metavar="DIR", help="folder to write the redline's sheet to")
    redline.add_argument("--only", metavar="KINDS", help="of html,pdf,json")
    redline.add_argument("--quiet", action="store_true", help="no progress on standard error")
    redline.set_defaults(run=_redline)


def _add_at_the_desk(commands: argparse._SubParsersAction[argparse.ArgumentParser]) -> None:
    start = commands.add_parser("start", help="write a commented topology file to begin from")
    start.add_argument("name", metavar="NAME", help="name of the stage; NAME.toml is written")
    start.add_argument("--like", metavar="CASE", help="begin from a case instead of a small amplifier")
    start.set_defaults(run=_start)
    watch = commands.add_parser("watch", help="show a topology's sheet in the browser, anew on each save")
    watch.add_argument("file", metavar="FILE", help="topology file")
    watch.add_argument(
        "--port", type=int, default=8642, help="port on 127.0.0.1 (default 8642; 0: any that is free)"
    )
    watch.set_defaults(run=_watch)


def _sheet(options: argparse.Namespace) -> int:
    # Imported here so that `show` does not pay for typesetting.
    from derive.batch import make_sheets
    from derive.progress import Progress
    from derive.render.look import look_of

    kinds = _kinds(options.only)
    look = look_of(options.templates)
    with Progress(len(options.files), 2 + len(kinds), quiet=options.quiet) as progress:
        made = make_sheets(
            *(options.files, Path(options.out), kinds, progress.tell),
            simplify=options.simplify,
            look=look,
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


def _handcheck(options: argparse.Namespace) -> int:
    from derive.hand import check_hand_file, hand_name, write_hand
    from derive.progress import Progress
    from derive.sheet.hand.plain import plain_report

    folder, kinds = _folder_and_kinds(options)
    name = hand_name(options.file)
    with Progress(1, 2 + len(kinds), quiet=options.quiet) as progress:
        tell = partial(progress.tell, name)
        checked = check_hand_file(options.file, tell, exact=options.exact)
        written = () if folder is None else write_hand(checked, name, folder, kinds, tell)
    sys.stdout.write(plain_report(checked.report, _width(), colour=_may_colour()))
    _tell_written(written)
    return WELL if checked.report.passed else FAILED


def _width() -> int:
    return shutil.get_terminal_size().columns if sys.stdout.isatty() else 120


def _may_colour() -> bool:
    plain = os.environ.get("NO_COLOR") or os.environ.get("TERM") == "dumb"
    return sys.stdout.isatty() and not plain


def _compare(options: argparse.Namespace) -> int:
    from derive.compare.make import make_comparison
    from derive.compare.plain import plain_comparison
    from derive.progress import Progress

    folder, kinds = _folder_and_kinds(options)
    with Progress(len(options.files), 4, quiet=options.quiet) as progress:
        comparison, written = make_comparison(options.files, options.find, folder, kinds, progress.tell)
    sys.stdout.write(plain_comparison(comparison, _width()))
    _tell_written(written)
    return WELL if comparison.passed else FAILED


def _recheck(options: argparse.Namespace) -> int:
    from derive.progress import Progress
    from derive.render.look import look_of
    from derive.review.open import open_sheet
    from derive.review.recheck import recheck
    from derive.review.report import plain_recheck

    look = look_of(options.templates)
    issued = open_sheet(options.file)
    stages = 5 + len(issued.ledger.get("results", ()))
    with Progress(1, stages, quiet=options.quiet) as progress:
        found = recheck(issued, partial(progress.tell, Path(options.file).name), look)
    sys.stdout.write(plain_recheck(found))
    return WELL if found.holds else FAILED


def _redline(options: argparse.Namespace) -> int:
    from derive.progress import Progress
    from derive.review.redline.make import make_redline
    from derive.review.redline.plain import plain_redline

    folder, kinds = _folder_and_kinds(options)
    with Progress(2, 4, quiet=options.quiet) as progress:
        found, written = make_redline(options.old, options.new, folder, kinds, progress.tell)
    sys.stdout.write(plain_redline(found, _width()))
    _tell_written(written)
    return WELL


def _start(options: argparse.Namespace) -> int:
    from derive.start.start import start

    path = start(options.name, options.like)
    print(f"{path} is written; next: nodeledger sheet {path}")
    return WELL


def _watch(options: argparse.Namespace) -> int:
    from derive.watch.watch import watch

    def say(words: str) -> None:
        print(words, flush=True)

    watch(options.file, options.port, say)
    return WELL


def _folder_and_kinds(options: argparse.Namespace) -> tuple[Path | None, tuple[str, ...]]:
    """Give where a sheet is wanted and of which kinds; None and none where no folder is named."""
    if options.only is not None and options.out is None:
        raise InputError(
            "--only says which files to write, and none are written", cure="name a folder with --out"
        )
    if options.out is None:
        return None, ()
    return Path(options.out), _kinds(",".join(KINDS) if options.only is None else options.only)


def _tell_written(written: Sequence[Path]) -> None:
    if written:
        sys.stdout.write(f"\n{', '.join(str(path) for path in written)}\n")


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

"""Prints how long a long sheet takes, beside what WeasyPrint alone takes for the same page, and how large it is.

    python tests/benchmarks/long_sheet.py [--repeats N]

Three quantities in three bands. Two ratios are taken in turn on one machine: the setting of the PDF from a sheet that
is there, and the whole command with derivation, checks, HTML and ledger. It ends with 1 where a target is missed.
"""

from __future__ import annotations

import argparse
import io
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path
from unittest import mock

ROOT = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(ROOT))

import pikepdf  # noqa: E402 - the checkout's own package comes first
import weasyprint  # noqa: E402

from derive.pipeline import derive  # noqa: E402
from derive.reading.read import parse  # noqa: E402
from derive.render.maths import SheetMaths  # noqa: E402
from derive.render.pdf import to_pdf  # noqa: E402
from derive.sheet.compose import compose  # noqa: E402

TARGET, MOST_BYTES, FEWEST_PAGES = 2.5, 1_000_000, 40
THIRD = '\n[find.Z_in]\nimpedance = "gen"\n'


def topology_text() -> str:
    """Give the line buffer with a third quantity."""
    return (ROOT / "cases" / "line_buffer" / "topology.toml").read_text(encoding="utf-8") + THIRD


class Clock:
    """Adds up what a function of WeasyPrint's takes."""

    def __init__(self) -> None:
        self.seconds = 0.0

    def around(self, function):
        """Give the function, its time counted."""

        def timed(*given, **named):
            begun = time.perf_counter()
            try:
                return function(*given, **named)
            finally:
                self.seconds += time.perf_counter() - begun

        return timed


def set_pdf(sheet) -> tuple[float, float, bytes]:
    """Give the time of the whole PDF, formulas included, the share of WeasyPrint in it, and the file."""
    clock = Clock()
    html, document = weasyprint.HTML, weasyprint.document.Document
    with (
        mock.patch.object(html, "render", clock.around(html.render)),
        mock.patch.object(document, "write_pdf", clock.around(document.write_pdf)),
    ):
        begun = time.perf_counter()
        made = to_pdf(sheet, SheetMaths(sheet))
        return time.perf_counter() - begun, clock.seconds, made


def command(text: str) -> float:
    """Give the wall time of the whole command, from the file to three files."""
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder) / "long.toml"
        file.write_text(text, encoding="utf-8")
        begun = time.perf_counter()
        subprocess.run(
            [sys.executable, "-m", "derive", "sheet", str(file), "--out", folder, "--quiet"],
            cwd=ROOT,
            check=True,
            capture_output=True,
        )
        return time.perf_counter() - begun


def main() -> int:
    """Print the figures; the exit status is 1 where a target is missed."""
    parser = argparse.ArgumentParser(description="Prints how long a long sheet takes.")
    parser.add_argument("--repeats", type=int, default=3)
    options = parser.parse_args()
    text = topology_text()
    sheet = compose(derive(parse(text, "long.toml"), other_engine=False).outcome, "long")
    set_pdf(sheet)  # warms up
    wholes, owns, commands = [], [], []
    for _ in range(options.repeats):
        whole, own, made = set_pdf(sheet)
        wholes.append(whole)
        owns.append(own)
        commands.append(command(text))
    with pikepdf.open(io.BytesIO(made)) as document:
        pages = len(document.pages)
    own = statistics.median(owns)
    rows = [
        ("pages", pages, f">= {FEWEST_PAGES}", pages >= FEWEST_PAGES),
        ("bytes", len(made), f"< {MOST_BYTES}", len(made) < MOST_BYTES),
        ("WeasyPrint alone, s", round(own, 2), "", True),
    ]
    for name, times in (("PDF with its formulas", wholes), ("whole command", commands)):
        ratio = statistics.median(times) / own
        rows.append((f"{name}, times WeasyPrint", round(ratio, 2), f"<= {TARGET}", ratio <= TARGET))
    for name, value, target, met in rows:
        sys.stdout.write(f"{name:<42}{value:>10}  {target:<12}{'' if met else 'missed'}\n")
    return 0 if all(met for *_, met in rows) else 1


if __name__ == "__main__":
    sys.exit(main())

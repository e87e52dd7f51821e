"""Look through issued PDF sheets for what a reader would stumble over: `python pages_campaign.py FILE ...`.

A campaign, not a test: it wants the sheets of all cases, which take minutes to make, and the Debian packages
qpdf and poppler-utils. Each fault is printed with its file; the exit status says whether there was one.
"""

from __future__ import annotations

import subprocess
import sys
import tempfile
from pathlib import Path

import pikepdf
from PIL import Image, ImageChops

sys.path[:0] = [str(Path(__file__).parents[2])]

from tests.support.issued_pages import (  # noqa: E402 - the path comes first
    faults_of_document,
    final_equations,
    unfound,
)

DPI = 50
# The part of the page in mm that may carry ink: text block, head and foot, and half a millimetre for slanted letters.
INKED = (19.5, 8.0, 194.5, 289.0)


def faults_of(path: Path) -> list[str]:
    """Say everything that is wrong with an issued PDF."""
    with pikepdf.open(path) as document:
        found = faults_of_document(document)
        wanted = final_equations(document)
    text = subprocess.run(
        ["pdftotext", "-raw", path, "-"], capture_output=True, text=True, check=True
    ).stdout
    found += [f"not found in the text: {equation}" for equation in unfound(wanted, text)]
    return [*found, *_syntax_faults(path), *_margin_faults(path)]


def _syntax_faults(path: Path) -> list[str]:
    done = subprocess.run(["qpdf", "--check", path], capture_output=True, text=True)
    clean = done.returncode == 0 and "No syntax or stream encoding errors found" in done.stdout
    return [] if clean else [f"qpdf: {done.stdout[-300:]}{done.stderr[-300:]}"]


def _margin_faults(path: Path) -> list[str]:
    found = []
    left, top, right, bottom = (round(length / 25.4 * DPI) for length in INKED)
    with tempfile.TemporaryDirectory() as folder:
        subprocess.run(["pdftoppm", "-r", str(DPI), "-gray", path, f"{folder}/p"], check=True)
        for page in sorted(Path(folder).iterdir()):
            with Image.open(page) as image:
                inked = ImageChops.invert(image).point(lambda shade: 255 if shade > 24 else 0).getbbox()
            if inked and (inked[0] < left or inked[1] < top or inked[2] > right or inked[3] > bottom):
                places = [round(length / DPI * 25.4, 1) for length in inked]
                found.append(f"{page.stem}: ink reaches over the margins: {places} mm")
    return found


def main() -> int:
    """Print the faults of the files named, and give 1 where there is one."""
    files = [Path(name) for name in sys.argv[1:]]
    found = [f"{file.name}: {fault}" for file in files for fault in faults_of(file)]
    for fault in found:
        sys.stdout.write(f"{fault}\n")
    sys.stdout.write(f"{len(files)} files, {len(found)} faults\n")
    return 1 if found or not files else 0


if __name__ == "__main__":
    sys.exit(main())

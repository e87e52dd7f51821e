"""Writes the golden files anew: `python tests/golden/renew.py`, from the project's folder.

Look at what changed (`git diff tests/golden`) before keeping it: a golden file changes only when a result
is meant to be written differently.
"""

from __future__ import annotations

import json
import math
import sys
from pathlib import Path

HERE = Path(__file__).resolve().parent
CASES = HERE.parents[1] / "cases"
DIGITS = 10


def names():
    """Give the cases, in the order of their names."""
    return sorted(folder.name for folder in CASES.iterdir() if (folder / "topology.toml").is_file())


def final_results(name):
    """Give what a case comes to: the exact expressions, and its numbers to ten digits."""
    import derive

    topology = derive.read(CASES / name / "topology.toml")
    ledger = derive.derive(topology, other_engine=False).ledger()
    return {
        f"{result['find']}, {result['band']} band": {
            "per": result["per"],
            "gain": result["gain"]["exact"],
            "power_of_s": result["power_of_s"],
            "definitions": result["definitions"],
            "numerator": result["numerator"],
            "denominator": result["denominator"],
            "readable": result["readable"],
            "gain_value": f"{result['gain']['value']:.{DIGITS}g}",
            "zeros": [rounded(root) for root in result["zeros"]],
            "poles": [rounded(root) for root in result["poles"]],
        }
        for result in ledger["results"]
    }


def rounded(root):
    """Write a root to ten digits of its magnitude, so that the machine's last bits do not show."""
    size = math.hypot(*root)
    unit = 10.0 ** (math.floor(math.log10(size)) - DIGITS + 1) if size else 1.0
    return [f"{round(part / unit) * unit + 0.0:.{DIGITS}g}" for part in root]


def text(name):
    """Give the golden file of a case."""
    return json.dumps(final_results(name), indent=1, ensure_ascii=False) + "\n"


def main():
    """Write every file, and take away those whose case is gone."""
    wanted = {HERE / f"{name}.json": name for name in names()}
    for path in sorted(set(HERE.glob("*.json")) - set(wanted)):
        path.unlink()
    for path, name in wanted.items():
        path.write_text(text(name), encoding="utf-8")
        sys.stdout.write(f"{path.name}\n")


if __name__ == "__main__":
    # A file that is run by its path has its own folder to import from, not the project's.
    sys.path.insert(0, str(HERE.parents[1]))
    main()

"""Compares many random circuits and prints the totals.

Run as `python tests/properties/campaign.py --count 1000 --seed 1`: results against the independent solver;
with `--of readable`, readable forms against the expanded ones; with `--of assumptions`, registers of random
assumptions against matrices stamped for the purpose.
"""

from __future__ import annotations

import argparse
import sys
import time
from collections import Counter
from contextlib import suppress
from itertools import islice
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path[:0] = [str(HERE), str(HERE.parent / "support"), str(HERE.parents[1])]

from assumed_comparison import differences, disputed, drawn_stages  # noqa: E402 - as below
from comparison import compare  # noqa: E402 - the folders above must be known first
from readable_stages import stages  # noqa: E402 - as above

SHOWN = 10
LARGER = 20


def main() -> int:
    """Run the campaign; the exit status is 1 where something differs."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--of", choices=tuple(CAMPAIGNS), default="results")
    parser.add_argument("--count", type=int, default=1000)
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args()
    begun = time.perf_counter()
    failed = CAMPAIGNS[options.of](options)
    print(f"{time.perf_counter() - begun:8.0f}  seconds")  # noqa: T201 - its job
    return 1 if failed else 0


def readable(options: argparse.Namespace) -> bool:
    """Compare readable forms with expanded ones; whether any is wrong or longer."""
    totals: Counter[str] = Counter()
    with suppress(KeyboardInterrupt):
        for found, wrong in stages(options.seed, options.count, LARGER):
            totals["circuits"] += 1
            totals["entries"] += len(found.raw)
            totals["entries made shorter"] += sum(after < before for before, after in found.leaves)
            totals["WRONG OR LONGER"] += bool(wrong)
            if wrong and totals["WRONG OR LONGER"] <= SHOWN:
                print(f"{wrong}\n{found.text}")  # noqa: T201 - its job
    show(totals)
    return bool(totals["WRONG OR LONGER"])


def assumptions(options: argparse.Namespace) -> bool:
    """Compare registers of assumptions with matrices stamped anew; whether any differs."""
    totals: Counter[str] = Counter()
    with suppress(KeyboardInterrupt):
        for stage, solution in islice(drawn_stages(f"campaign {options.seed}"), options.count):
            entries = solution.register.entries
            totals["circuits"] += 1
            totals["assumptions"] += len(entries)
            totals.update(f"  that {entry.status}" for entry in entries)
            wrong = [*differences(stage, solution), *filter(None, [disputed(solution)])]
            totals["DIFFERENT"] += bool(wrong)
            if wrong and totals["DIFFERENT"] <= SHOWN:
                print(f"{wrong}\n{stage.text}")  # noqa: T201 - its job
    show(totals)
    return bool(totals["DIFFERENT"])


def show(*tables: Counter[str]) -> None:
    """Print totals."""
    for table in tables:
        for name, count in sorted(table.items()):
            print(f"{count:8d}  {name}")  # noqa: T201 - its job


def results(options: argparse.Namespace) -> bool:
    """Compare results with the independent solver; whether product and solver differ, or a check failed."""
    totals: Counter[str] = Counter()
    kinds: Counter[str] = Counter()
    opened: Counter[str] = Counter()
    shown = 0
    # An interrupted campaign still prints what it has.
    with suppress(KeyboardInterrupt):
        for index in range(options.count):
            seed = options.seed * 10**9 + index
            outcome = compare(seed)
            totals["circuits"] += 1
            totals["results"] += outcome.results
            totals["without a unique solution"] += outcome.singular
            totals["too large"] += outcome.too_large
            totals["drafts refused by the reader"] += outcome.drafts_refused
            kinds.update(outcome.kinds)
            opened.update(outcome.left_open)
            totals["DIFFERENT"] += bool(outcome.differences)
            totals["CHECKS FAILED"] += bool(outcome.failed)
            if (outcome.differences or outcome.failed) and shown < SHOWN:
                shown += 1
                print(f"seed {seed}: {outcome.differences} {outcome.failed}\n{outcome.text}")  # noqa: T201 - its job
    show(totals, kinds, opened)
    return bool(totals["DIFFERENT"] or totals["CHECKS FAILED"])


CAMPAIGNS = {"results": results, "readable": readable, "assumptions": assumptions}


if __name__ == "__main__":
    raise SystemExit(main())

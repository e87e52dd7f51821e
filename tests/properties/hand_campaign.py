"""Makes many slips in true lines of the cases and prints how many were caught and how many were mended.

Run as `python tests/properties/hand_campaign.py --count 2000 --seed 1`; `--case NAME` takes one case alone.
"""

from __future__ import annotations

import argparse
import random
import sys
import time
from collections import Counter
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path[:0] = [str(HERE), str(HERE.parent / "support"), str(HERE.parents[1])]

from hand_mutations import (  # noqa: E402 - the folders above must be known first
    CASES,
    Exactly,
    hand_file,
    same_claim,
    slips,
    solutions,
    true_lines,
    with_other_node,
)

from derive.expressions.text import to_text  # noqa: E402 - as above
from derive.handcheck.check_lines import check_lines  # noqa: E402 - as above


def main() -> int:
    """Run the campaign; the exit status is 1 where a changed value passed or a true line was refused."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=2000)
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--case", default="")
    options = parser.parse_args()
    totals: Counter[str] = Counter()
    begun = time.perf_counter()
    names = (
        [options.case] if options.case else sorted(p.parent.name for p in CASES.glob("*/topology.toml"))
    )
    found = [(case, solution) for case in names for solution in solutions(case)]
    lines = [(case, s, line) for case, s in found for line in true_lines(s)]
    chance = random.Random(options.seed)
    for case, solution, line in lines:
        totals["true lines"] += 1
        if check_lines(solution, hand_file(line)).verdicts[0].passed is not True:
            totals["TRUE LINES REFUSED"] += 1
            print(case, to_text(line))  # noqa: T201 - its job
    kinds: Counter[str] = Counter()
    while totals["changed"] < options.count:
        case, solution, line = chance.choice(lines)
        slip = with_other_node(line, solution, chance) if chance.random() < 0.1 else None
        slip = slip or next(slips(line, solution, chance), None)
        if slip is None:
            continue
        exact = Exactly(solution, chance.randrange(10**9))
        away = exact.difference(slip.line)
        verdict = check_lines(solution, hand_file(slip.line)).verdicts[0]
        if away == 0:
            totals["changed nothing"] += 1
            totals["CHANGED NOTHING BUT REFUSED"] += verdict.passed is False
            continue
        if away is None:
            totals["without a value"] += 1
            continue
        totals["changed"] += 1
        if totals["changed"] % 100 == 0:
            done = f"{totals['changed']} changed, {totals['mended by the first proposal']} mended"
            print(done, flush=True)  # noqa: T201 - its job
        totals["CHANGED BUT ACCEPTED"] += verdict.passed is True
        kinds[f"{slip.kind}: made"] += 1
        mended = bool(verdict.edits) and same_claim(exact, verdict.edits[0].line, line)
        totals["mended by the first proposal"] += mended
        kinds[f"{slip.kind}: mended"] += mended
        totals["without a proposal"] += not verdict.edits
        if not mended:
            shown = [(e.kind, e.says) for e in verdict.edits[:2]]
            print(case, slip.kind, "|", to_text(slip.line), "| was", to_text(line), shown)  # noqa: T201
    for table in (totals, kinds):
        for name, count in sorted(table.items()):
            print(f"{count:8d}  {name}")  # noqa: T201 - its job
    print(f"{time.perf_counter() - begun:8.0f}  seconds")  # noqa: T201 - its job
    return 1 if any(count for name, count in totals.items() if name.isupper()) else 0


if __name__ == "__main__":
    sys.exit(main())

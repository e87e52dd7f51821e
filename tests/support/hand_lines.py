"""Hand derivations for tests, from plain text, without a file and without the reader's forgiveness."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from derive.bands.choose import bands_of
from derive.bands.restrict import restrict
from derive.bias.solve import operating_point
from derive.check.verdict import Solution
from derive.devices.linearise import linearise
from derive.expressions.parse import parse_expression
from derive.handcheck.check_lines import check_lines
from derive.handcheck.report import HandDefinition, HandFile, HandLine, HandReport, HandTie
from derive.pipeline import solve
from derive.reading.read import parse


def solution_of(text: str, find: str = "", band: str = "") -> Solution:
    """Derive one quantity of a topology in one band: the first, in the last band, where none is told."""
    topology = parse(text, "stage.toml")
    point = operating_point(topology)
    circuit = linearise(topology, {d.part: d for d in point.devices} if point else {})
    chosen = next((name for name in bands_of(circuit) if name == band), bands_of(circuit)[-1])
    wanted = next(f for f in topology.finds if find in ("", f.name))
    return solve(restrict(circuit, chosen), wanted, explain=False)


def hand(
    lines: Iterable[str], define: Mapping[str, str] | None = None, given: Iterable[str] = ()
) -> HandFile:
    """Give a hand derivation with these lines."""
    read = []
    for number, text in enumerate(lines, 1):
        relation = "~" if "~" in text else "="
        left, right = text.split(relation)
        sides = parse_expression(left), parse_expression(right)
        read.append(HandLine(number, f"hand.toml:{number}", text, relation, *sides))
    ties = [HandTie("hand.toml:1", tie, *map(parse_expression, tie.split("="))) for tie in given]
    names = [
        HandDefinition("hand.toml:1", n, text, parse_expression(text))
        for n, text in (define or {}).items()
    ]
    text = "\n".join(line.text for line in read)
    return HandFile("hand.toml", text, "stage.toml", "", "", tuple(read), tuple(ties), tuple(names))


def judged(
    solution: Solution,
    *lines: str,
    define: Mapping[str, str] | None = None,
    given: Iterable[str] = (),
    exact: bool = False,
) -> HandReport:
    """Check lines against a solution."""
    return check_lines(solution, hand(lines, define, given), exact=exact)

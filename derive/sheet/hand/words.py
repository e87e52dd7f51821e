"""What came of a hand derivation in words: a verdict, a sentence for what fails, and the count of all."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from derive.expressions.tree import Equation
from derive.handcheck.report import HandLine, HandReport, LineVerdict, Outcome
from derive.quantities.words import listed

VERDICTS: Mapping[Outcome, str] = {
    "true": "right",
    "leap": "right",
    "definition": "new name",
    "within": "near enough",
    "beyond": "too far off",
    "mistake": "wrong",
    "carried": "carried on",
    "unread": "cannot be read",
    "refused": "cannot be judged",
    "undecided": "not decided",
}
# Two verdicts share a word; where they are explained they are told apart.
FURTHER: Mapping[Outcome, str] = {"leap": ", but not from the line above"}
MEANINGS: Mapping[Outcome, str] = {
    "true": "the line holds in this circuit for all values, and follows from what it names",
    "leap": "the line holds for all values, though it does not come from the lines above in one move",
    "definition": "the line gives a name that the circuit does not have; there is nothing to judge",
    "within": "an approximation, and its errors stay within the budget of the topology",
    "beyond": "an approximation whose errors are beyond the budget",
    "mistake": "the line does not hold, and the mistake is in it",
    "carried": "the line does not hold, but it follows from wrong lines above: mend those",
    "unread": "the line is not an equation in the language of expressions; the others were judged without it",
    "refused": "the line names something that this circuit, band or derivation does not have",
    "undecided": "it could not be decided whether the line holds",
}
# What is counted together, in the order in which it is told.
_COUNTED: tuple[tuple[tuple[Outcome, ...], str, str], ...] = (
    (("true", "leap", "definition", "within"), "right", "right"),
    (("mistake", "beyond"), "wrong", "wrong"),
    (("carried",), "follows from a wrong one", "follow from wrong ones"),
    (("unread",), "cannot be read", "cannot be read"),
    (("refused", "undecided"), "cannot be judged", "cannot be judged"),
)
# Faults of a line by itself.
FAULTS: Mapping[Outcome, str] = {
    "mistake": "is wrong",
    "beyond": "is too far off",
    "unread": "cannot be read",
    "refused": "cannot be judged",
    "undecided": "is not decided",
}


def verdict_word(verdict: LineVerdict) -> str:
    """Give the verdict in a word or two."""
    return VERDICTS[verdict.outcome]


def counts(report: HandReport) -> dict[str, int]:
    """Give how many lines are right, wrong, carried on, not read and not judged."""
    outcomes = [verdict.outcome for verdict in report.verdicts]
    names = ("right", "wrong", "carried_on", "not_read", "not_judged")
    found = [sum(outcomes.count(each) for each in kinds) for kinds, _, _ in _COUNTED]
    return dict(zip(names, found, strict=True))


def summary(report: HandReport) -> str:
    """Count the lines in words: "15 lines: 12 right, 1 wrong, 2 follow from wrong ones"."""
    total = len(report.verdicts)
    parts = []
    for number, (_, one, many) in zip(counts(report).values(), _COUNTED, strict=True):
        if number == total > 1:
            return f"{total} lines: all {many}"
        if number:
            parts.append(f"{number} {one if number == 1 else many}")
    return f"{total} line{'' if total == 1 else 's'}: {', '.join(parts)}"


def short_failures(report: HandReport) -> tuple[str, ...]:
    """Name in a few words what does not stand, for the note on a first page."""
    found = []
    for kinds, one, many in _COUNTED[1:]:
        numbers = [v.line.number for v in report.verdicts if v.outcome in kinds]
        verb = one if len(numbers) == 1 else many
        verb = f"{'is' if len(numbers) == 1 else 'are'} wrong" if verb == "wrong" else verb
        found += [f"{lines_of(numbers)} {verb}"] if numbers else []
    refused = [tie.text for tie, _ in report.refused_ties] + [
        d.name for d, _ in report.refused_definitions
    ]
    return (*found, *(f"{each} cannot be used" for each in refused))


def failures(report: HandReport) -> tuple[str, ...]:
    """Say in a sentence each what does not stand: every line with a fault of its own, ties and definitions."""
    found = [f"the tie {tie.text} cannot be used: {why}" for tie, why in report.refused_ties]
    found += [
        f"the definition of {d.name} cannot be used: {why}" for d, why in report.refused_definitions
    ]
    found += [fault(verdict) for verdict in report.verdicts if verdict.outcome in FAULTS]
    carried = [verdict.line.number for verdict in report.verdicts if verdict.outcome == "carried"]
    if carried:
        verb = "follows from what is wrong" if len(carried) == 1 else "follow from what is wrong"
        found.append(f"{lines_of(carried)} {verb}")
    return tuple(found)


def fault(verdict: LineVerdict) -> str:
    """Say what is wrong with one line and what would mend it."""
    said = verdict.finding if verdict.outcome == "mistake" else verdict.why
    told = f"line {verdict.line.number} {FAULTS[verdict.outcome]}"
    told += f": {said}" if said else ""
    return told + (f"; {verdict.cure}" if verdict.cure else "")


def lines_of(numbers: Sequence[int]) -> str:
    """Name lines by their numbers: "line 7", "lines 8 to 10 and 12"."""
    runs: list[list[int]] = []
    for number in sorted(numbers):
        if runs and number == runs[-1][-1] + 1:
            runs[-1].append(number)
        else:
            runs.append([number])
    words: list[str] = []
    for run in runs:
        words += [f"{run[0]} to {run[-1]}"] if len(run) > 2 else [str(number) for number in run]
    return f"line{'' if len(numbers) == 1 else 's'} {listed(words)}"


def claim(line: HandLine) -> Equation | None:
    """Give what a line claims, as it was written; None where it could not be read."""
    if line.left is None or line.right is None:
        return None
    return Equation(line.left, line.right, line.relation)


def place_of(verdict: LineVerdict) -> tuple[int, int] | None:
    """Give where in its text a line goes wrong, from a sign to before another; None for no single place."""
    if verdict.line.fault is not None:
        return verdict.line.fault.position, verdict.line.fault.position + 1
    if verdict.passed or not verdict.way:
        return None
    span = verdict.line.span(verdict.way)
    return None if span is None else (span.start, max(span.end, span.start + 1))

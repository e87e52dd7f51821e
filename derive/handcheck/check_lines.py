"""The whole check of a hand derivation: truth, origin, cure and price of every line."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from derive.check.verdict import Solution
from derive.errors import InputError
from derive.handcheck.causes import Causes
from derive.handcheck.differ import difference_of
from derive.handcheck.dimensions import dimension_remarks
from derive.handcheck.judge_truth import Judged, Truth
from derive.handcheck.mend import Mender
from derive.handcheck.names import Names
from derive.handcheck.points import UndecidedError
from derive.handcheck.price import Pricer
from derive.handcheck.prove import DIFFERENT, proved_exactly
from derive.handcheck.report import (
    Edit,
    HandDefinition,
    HandFile,
    HandReport,
    LineVerdict,
)
from derive.handcheck.solved import Solved
from derive.handcheck.ties import Ties
from derive.quantities.words import listed
from derive.readable.vocabulary import vocabulary_of

TRUE = "true of the circuit, and follows from"
LEAP = "true of the circuit, not from the line above"


def check_lines(
    solution: Solution, hand: HandFile, *, exact: bool = False, mend: bool = True
) -> HandReport:
    """Judge every line of a hand derivation against the circuit.

    Given: the solution of the quantity and band that the derivation is of; whether true lines are to be proved by
    exact algebra as well; whether changes that mend wrong lines are to be looked for.
    Raises: InputError where the circuit has no solution under the ties.
    """
    define, refused = _definitions(solution, hand)
    names = Names(solution, [(each.name, each.meaning) for each in define])
    ties = Ties(names, hand.given)
    solved = Solved(names, ties)
    try:
        truth = Truth(names, ties, hand.text, solved)
    except UndecidedError as error:
        raise InputError(str(error), where=hand.file, cure="look at the ties under given") from None
    judged = [truth.judge(line) for line in hand.lines]
    causes = Causes(truth, judged, hand.text)
    work = _Work(names, truth, causes, solved, judged, hand, exact, mend)
    return HandReport(
        hand.file,
        hand.topology,
        names.system.find.name,
        solution.band_name,
        work.verdicts(),
        hand.given,
        tuple(define),
        tuple(ties.refused),
        tuple(refused),
        hand.title,
    )


def _definitions(
    solution: Solution, hand: HandFile
) -> tuple[list[HandDefinition], list[tuple[HandDefinition, str]]]:
    """Keep the definitions of names that are the user's to give; refuse those of the circuit's own."""
    bare = Names(solution, ())
    kept: list[HandDefinition] = []
    refused: list[tuple[HandDefinition, str]] = []
    for each in hand.define:
        if bare.knows(each.name) and bare.look(each.name).kind not in ("meaning", "coefficient"):
            refused.append((each, f"{each.name} is a name of the circuit; choose another"))
        elif any(each.name == other.name for other in kept):
            refused.append((each, f"{each.name} is defined twice"))
        else:
            kept.append(each)
    return kept, refused


@dataclass(slots=True)
class _Work:
    """One derivation on the bench."""

    names: Names
    truth: Truth
    causes: Causes
    solved: Solved
    judged: Sequence[Judged]
    hand: HandFile
    exact: bool
    mend: bool

    def verdicts(self) -> tuple[LineVerdict, ...]:
        """Give the verdicts in order."""
        mender = Mender(self.truth, self.causes, self.judged, self.hand)
        pricer = Pricer(self.names, self.solved)
        found: list[LineVerdict] = []
        for item in self.judged:
            line = item.line
            if item.state in ("unread", "refused", "undecided"):
                outcome = item.state
                found.append(LineVerdict(line, outcome, item.why, item.cure))
            elif item.state == "definition":
                found.append(
                    LineVerdict(line, "definition", f"this is what {item.name} stands for from here on")
                )
            elif item.state == "approximate":
                found.append(pricer.verdict(line, *item.sides))
            elif item.state == "true":
                found.append(self._true(item))
            else:
                found.append(self._false(item, mender))
        return tuple(found)

    def _true(self, item: Judged) -> LineVerdict:
        left, right = item.sides
        sources = self.causes.sources(left, right, item.line.number, wrong=False)
        proof = item.proof
        if self.exact:
            exactly = proved_exactly(self.solved, left, right)
            proof = f"{proof}; {exactly}"
            if exactly == DIFFERENT:
                return LineVerdict(
                    item.line, "mistake", "its sides differ when multiplied out", proof=proof
                )
        if sources is None:
            why = (
                LEAP
                if item.line.number > 1
                else "true of the circuit; nothing stands above it to come from"
            )
            return LineVerdict(item.line, "leap", why, proof=proof)
        origin = f"{_lines(sources)}" if sources else "the circuit itself"
        return LineVerdict(item.line, "true", f"{TRUE} {origin}", proof=proof, sources=sources)

    def _false(self, item: Judged, mender: Mender) -> LineVerdict:
        left, right = item.sides
        number = item.line.number
        vocabulary = vocabulary_of(self.names.system.small_signal)
        finding = difference_of(self.solved, vocabulary, left, right)
        if not finding.says:
            finding = mender.differ(left, right, number)
        remarks = dimension_remarks(self.names, left, right)
        sources = self.causes.sources(left, right, number, wrong=True)
        if sources is not None:
            wrong = [n for n in sources if self._is_wrong(n)]
            right_ones = [n for n in sources if n not in wrong]
            why = f"wrong, but it follows from {_lines(wrong)}, which {'is' if len(wrong) == 1 else 'are'} wrong"
            cure = f"mend {_lines(wrong)}, and work from there"
            edits: tuple[Edit, ...] = ()
            ordered = (*wrong, *right_ones)
            return LineVerdict(
                item.line,
                "carried",
                why,
                cure,
                item.proof,
                finding.says,
                finding.ratio,
                finding.difference,
                finding.definitions,
                ordered,
                (),
                edits,
                remarks,
            )
        edits = mender.edits(left, right, number) if self.mend else ()
        cure = edits[0].says if edits else ""
        way = edits[0].way if edits else remarks[0].way if remarks else ()
        why = "the mistake is in this line" + (f": {finding.says}" if finding.says else "")
        return LineVerdict(
            item.line,
            "mistake",
            why,
            cure,
            item.proof,
            finding.says,
            finding.ratio,
            finding.difference,
            finding.definitions,
            (),
            way,
            edits,
            remarks,
        )

    def _is_wrong(self, number: int) -> bool:
        return any(item.line.number == number and item.state == "false" for item in self.judged)


def _lines(numbers: Sequence[int]) -> str:
    return f"line{'' if len(numbers) == 1 else 's'} {listed([str(number) for number in numbers])}"

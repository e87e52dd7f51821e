"""How the checks on a result went, in words: what passed, what failed, what was left open, what was not asked."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from derive.check.verdict import NOT_ASKED, Verdict
from derive.quantities.words import listed

WORDS = {True: "pass", False: "fail", None: "open"}
NOTHING_TO_JUDGE, UNASKED = "n/a", "not asked"


@dataclass(frozen=True, slots=True)
class Tally:
    """Verdicts counted; those on which there is nothing to judge are left out.

    `unasked` names the checks that nobody asked for.
    """

    passed: int
    failed: int
    left_open: int
    unasked: tuple[str, ...]

    @property
    def words(self) -> str:
        """Say it in one line: "9 checks passed, 1 left open; another engine not asked"."""
        found = f"{self.passed} check{'' if self.passed == 1 else 's'} passed"
        return found + self._rest(f"; {listed(self.unasked)} not asked" if self.unasked else "")

    @property
    def brief(self) -> str:
        """Say it for the cell of a table: "9 passed, 1 left open"."""
        return f"{self.passed} passed" + self._rest("")

    def _rest(self, tail: str) -> str:
        found = f", {self.failed} failed" if self.failed else ""
        return found + (f", {self.left_open} left open" if self.left_open else "") + tail


def tally_of(verdicts: Sequence[Verdict]) -> Tally:
    """Count verdicts."""
    kinds = [kind_of(verdict) for verdict in verdicts]
    unasked = (v.name for v, kind in zip(verdicts, kinds, strict=True) if kind == UNASKED)
    passed, failed, left_open = (kinds.count(WORDS[way]) for way in (True, False, None))
    return Tally(passed, failed, left_open, tuple(dict.fromkeys(unasked)))


def kind_of(verdict: Verdict) -> str:
    """Give the verdict in a word: pass, fail, open, not asked or n/a."""
    if verdict.passed is None and not verdict.applies:
        return NOTHING_TO_JUDGE
    if verdict.passed is None and verdict.measured == NOT_ASKED:
        return UNASKED
    return WORDS[verdict.passed]

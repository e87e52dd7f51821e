"""Makes a sheet anew from what an issued one carries."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import partial
from pathlib import Path

from derive.approximate.questions import with_short_forms
from derive.check.verdict import Outcome, Result, Verdict
from derive.compare.compare import compare
from derive.errors import InputError
from derive.pipeline import ENGINE_SECONDS, derive
from derive.reading.read import parse
from derive.render.look import OURS, Look
from derive.review.issued import Issued, Kind
from derive.review.open import sources_of
from derive.sheet.compose import compose
from derive.sheet.document import Sheet
from derive.topology.topology import Topology

# A slow machine gets this much longer where an issued sheet has the other engine's answer.
PATIENCE = 6.0
UNFINISHED = "not finished"
ENGINE = "another engine"
Tell = Callable[[str], None]


@dataclass(frozen=True, slots=True)
class Fresh:
    """A sheet as it comes out today: as data and as a file of the issued one's kind."""

    sheet: Sheet
    data: bytes
    passed: bool
    remarks: tuple[str, ...] = ()


def remake(issued: Issued, tell: Tell = lambda stage: None, look: Look = OURS) -> Fresh:
    """Derive an issued sheet anew from its source, and write it as a file of the same kind.

    Given: the user's own `look`, where it was issued with one.
    Raises: InputError and its kin where the source cannot be derived; OutputError.
    """
    remarks: tuple[str, ...] = ()
    if issued.holds == "comparison":
        sheet = _comparison(issued, tell)
    elif issued.holds == "redline":
        sheet = _redline(issued, tell)
    elif issued.holds == "handcheck":
        sheet = _hand(issued, tell)
    else:
        sheet, remarks = _sheet(issued, tell)
    tell("writing it again")
    return Fresh(sheet, write(sheet, issued.kind, look), sheet.passed, remarks)


def write(sheet: Sheet, kind: Kind, look: Look = OURS) -> bytes:
    """Give the bytes of a sheet as a file of this kind."""
    if kind == "json":
        return sheet.ledger_text.encode("utf-8")
    if kind == "html":
        from derive.render.html import to_html

        return to_html(sheet, look=look)
    from derive.render.pdf import to_pdf

    return to_pdf(sheet, look=look)


def name_of(issued: Issued) -> str:
    """Give the name of a sheet's files: that of its ledger, or its own where it does not say."""
    return Path(issued.ledger_name or issued.file).stem


def _sheet(issued: Issued, tell: Tell) -> tuple[Sheet, tuple[str, ...]]:
    source = issued.sources[0]
    topology = parse(source.text, source.file, beside=partial(_carried_hand, issued))
    if any(isinstance(r, dict) and "simplified" in r for r in issued.ledger.get("results", [])):
        # The short forms may have been asked for on the command line: then no file says so.
        topology = with_short_forms(topology)
    results = derive(topology, progress=tell)
    verdicts = _engine_verdicts(issued)
    if any(v is not None and v.passed is not None for v in verdicts) and _undecided(results.outcome):
        results = derive(topology, engine_seconds=ENGINE_SECONDS * PATIENCE, progress=tell)
    outcome, remarks = settled(results.outcome, verdicts)
    return compose(outcome, name_of(issued)), remarks


def _several(issued: Issued) -> tuple[list[str], list[Topology]]:
    """Give the stages of a sheet on several topologies, and what each describes."""
    within = sources_of(issued.ledger)
    if len(within) != len(issued.sources):
        raise InputError("the sources attached are not as many as the stages of the ledger")
    pairs = zip(issued.sources, within, strict=True)
    return [own.stage for own in within], [
        parse(source.text, own.file, beside=None) for source, own in pairs
    ]


def _redline(issued: Issued, tell: Tell) -> Sheet:
    from derive.review.redline.compose import compose_redline
    from derive.review.redline.redline import redline_of

    names, (old, new) = _several(issued)
    found = redline_of((names[0], old), (names[1], new), lambda _, stage: tell(stage))
    return compose_redline(found)


def _comparison(issued: Issued, tell: Tell) -> Sheet:
    from derive.compare.compose import compose_comparison

    names, topologies = _several(issued)
    find = issued.ledger.get("find")
    wanted = find if isinstance(find, str) else None
    return compose_comparison(compare(topologies, names, wanted, lambda _, stage: tell(stage)))


def _hand(issued: Issued, tell: Tell) -> Sheet:
    from derive.hand import check_hand
    from derive.handcheck.prove import IDENTICAL
    from derive.handcheck.read import parse_hand
    from derive.sheet.hand.compose import compose_hand

    hand_source, source = issued.sources
    own_hand, own = sources_of(issued.ledger)
    hand = parse_hand(hand_source.text, own_hand.file)
    topology = parse(source.text, own.file, beside=None)
    lines = issued.ledger["hand"].get("lines", [])
    exact = any(IDENTICAL in str(line.get("proof")) for line in lines if isinstance(line, dict))
    checked = check_hand(hand, topology, own_hand.file, tell, exact=exact)
    return compose_hand(checked.report, hand, topology, name_of(issued))


def _carried_hand(issued: Issued, path: str) -> str:
    """Give the text of the hand derivation that a sheet carries in its ledger.

    Raises: InputError where it carries none.
    """
    hand = issued.ledger.get("hand")
    text = hand.get("text") if isinstance(hand, dict) else None
    if not isinstance(text, str):
        raise InputError("the sheet does not carry it", where=path, cure="issue the sheet again")
    return text


def _engine(result: Result) -> Verdict | None:
    return next((verdict for verdict in result.verdicts if verdict.name == ENGINE), None)


def _undecided(outcome: Outcome) -> bool:
    found = [_engine(result) for result in outcome.results]
    return any(v is not None and v.passed is None and v.measured.startswith(UNFINISHED) for v in found)


def _engine_verdicts(issued: Issued) -> list[Verdict | None]:
    """Give what an issued sheet says of the other engine, result by result."""
    found: list[Verdict | None] = []
    for result in issued.ledger.get("results", []):
        checks = result.get("checks", []) if isinstance(result, dict) else []
        named = [c for c in checks if isinstance(c, dict) and c.get("name") == ENGINE]
        words = [named[0].get(key) for key in ("method", "measured", "limit")] if named else []
        passed = named[0].get("passed") if named else None
        whole = len(named) == 1 and all(isinstance(word, str) for word in words)
        if whole and (passed is None or isinstance(passed, bool)):
            found.append(Verdict(ENGINE, str(words[0]), passed, str(words[1]), str(words[2])))
        else:
            found.append(None)
    return found


def settled(outcome: Outcome, issued: list[Verdict | None]) -> tuple[Outcome, tuple[str, ...]]:
    """Take over the issued word on the other engine where one side ran out of time, and say so.

    How long an engine takes hangs on the machine: that is no difference between the sheets.
    """
    results, remarks = [], []
    for place, result in enumerate(outcome.results):
        theirs = issued[place] if place < len(issued) else None
        ours = _engine(result)
        if theirs is None or ours is None or (theirs.passed is None) == (ours.passed is None):
            results.append(result)
            continue
        late = ours if ours.passed is None else theirs
        good = theirs.passed is not False and ours.passed is not False
        if not late.measured.startswith(UNFINISHED) or not good:
            results.append(result)
            continue
        find = result.solution.derivation.system.find.name
        side = "here" if late is ours else "when it was issued"
        remarks.append(
            f"{find}, {result.solution.band_name} band: the other engine did not finish {side}"
        )
        verdicts = tuple(theirs if verdict is ours else verdict for verdict in result.verdicts)
        results.append(replace(result, verdicts=verdicts))
    return replace(outcome, results=tuple(results)), tuple(remarks)

"""Compose the sheet of an outcome from the sections found in their folder."""

from __future__ import annotations

import importlib
import pkgutil
from functools import cache
from typing import Any

from derive.check.verdict import Outcome
from derive.handcheck.report import HandReport
from derive.sheet import sections as folder
from derive.sheet.appendix import appendix
from derive.sheet.assumed import failed_assumptions
from derive.sheet.document import Field, Section, Sheet
from derive.sheet.hand.words import short_failures
from derive.sheet.ledger import ledger_text
from derive.sheet.sections.sign_off import newest_mark
from derive.sheet.tally import tally_of
from derive.sheet.view import views

SIGNED = ("Prepared", "Checked", "Approved")


@cache
def section_modules() -> tuple[Any, ...]:
    """Give the section modules by their ORDER.

    Raises: RuntimeError where two claim one place.
    """
    names = sorted(module.name for module in pkgutil.iter_modules(folder.__path__))
    modules = [importlib.import_module(f"{folder.__name__}.{name}") for name in names]
    if len({module.ORDER for module in modules}) < len(modules):
        raise RuntimeError("two sections of the sheet claim one place")
    return tuple(sorted(modules, key=lambda module: module.ORDER))


def compose(outcome: Outcome, name: str, *, with_ledger: bool = True) -> Sheet:
    """Give the sheet as data; `name` is that of its files, without ending."""
    topology = outcome.circuit.topology
    ledger = ledger_text(outcome) if with_ledger else ""
    return Sheet(
        title=topology.title_block.title,
        fields=_fields(outcome),
        passed=outcome.passed,
        failures=_failures(outcome),
        sections=(*_sections(outcome), appendix(outcome, f"{name}.json", ledger)),
        topology_name=topology.file,
        topology_text=topology.text,
        ledger_name=f"{name}.json",
        ledger_text=ledger,
        left_open=sum(tally_of(result.verdicts).left_open for result in outcome.results),
    )


def _sections(outcome: Outcome) -> tuple[Section, ...]:
    modules = section_modules()
    own = [module for module in modules if module.SCOPE == "result"]
    first = min(module.ORDER for module in own)
    before = [module for module in modules if module.SCOPE == "sheet" and first > module.ORDER]
    after = [module for module in modules if module.SCOPE == "sheet" and first < module.ORDER]
    sections: list[Section] = []
    for module in before:
        sections += module.compose(outcome)
    for view in views(outcome):
        sections += view.headline
        for module in own:
            sections += module.compose(view)
    for module in after:
        sections += module.compose(outcome)
    return tuple(sections)


def _fields(outcome: Outcome) -> tuple[Field, ...]:
    topology = outcome.circuit.topology
    block = topology.title_block
    entries = (
        ("Number", block.number),
        ("Revision", block.revision or newest_mark(topology)),
        ("Project", block.project),
        ("Prepared", block.prepared),
        ("Checked", block.checked),
        ("Approved", block.approved),
        ("Date", block.date),
        ("Notes", block.notes),
    )
    # Who has signed is of interest even where nobody has.
    return tuple(Field(label, text) for label, text in entries if text or label in SIGNED)


def _failures(outcome: Outcome) -> tuple[str, ...]:
    names = _bias_failures(outcome)
    for view in views(outcome):
        result, find = view.result, view.title
        names += [f"{find}: {verdict.name}" for verdict in result.verdicts if verdict.passed is False]
        if result.broken_steps:
            numbers = ", ".join(str(number) for number, _ in result.broken_steps)
            names.append(f"{find}: proof of step {numbers}")
        names += [f"{find}: {words}" for words in failed_assumptions(result)]
    if isinstance(outcome.hand, HandReport):
        names += [f"by hand: {words}" for words in short_failures(outcome.hand)]
    return tuple(names)


def _bias_failures(outcome: Outcome) -> list[str]:
    point = outcome.point
    if point is None:
        return []
    names = [
        f"operating point: {region.part} is out of its region ({region.measured})"
        for region in point.regions
        if not region.passed
    ]
    names += [
        f"operating point: current of {check.part} by Newton's method"
        for check in point.newton
        if not check.passed
    ]
    names += [f"operating point: proof of {found.symbol}" for found in point.derivations if found.broken]
    return names

"""The check of a hand derivation as data for machines."""

from __future__ import annotations

import json
from typing import Any

from derive.expressions.text import to_text
from derive.expressions.tree import Expression
from derive.handcheck.report import Edit, HandFile, HandReport, LineVerdict, Pricing, Way
from derive.sheet.approximations import errors_data, rounded, worst_data
from derive.sheet.digest import digest
from derive.sheet.hand.words import counts, place_of
from derive.topology.topology import Topology
from derive.version import VERSION

FORMAT = 1


def hand_ledger(report: HandReport, hand: HandFile, topology: Topology) -> dict[str, Any]:
    """Give the check of a derivation as plain data, with both files that it came from."""
    return {
        "handcheck": FORMAT,
        "made_by": {"name": "nodeledger", "version": VERSION},
        "topology": {
            "file": topology.file,
            "sha256": digest(topology.text),
            "text": topology.text,
        },
        "hand": hand_data(report, hand.text),
    }


def hand_ledger_text(report: HandReport, hand: HandFile, topology: Topology) -> str:
    """Give the data as they are written to a file."""
    data = hand_ledger(report, hand, topology)
    return json.dumps(data, ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def hand_data(report: HandReport, text: str) -> dict[str, Any]:
    """Give a report as plain data, keys in their stable order; `text` is that of the hand file."""
    return {
        "file": report.file,
        "sha256": digest(text),
        "text": text,
        "title": report.title,
        "find": report.find,
        "band": report.band,
        "passed": report.passed,
        "counts": counts(report),
        "given": [
            {"left": to_text(tie.left), "right": to_text(tie.right), "where": tie.where}
            for tie in report.given
        ],
        "define": [
            {"name": each.name, "meaning": to_text(each.meaning), "where": each.where}
            for each in report.define
        ],
        "refused": [
            *({"what": tie.text, "where": tie.where, "why": why} for tie, why in report.refused_ties),
            *({"what": d.name, "where": d.where, "why": why} for d, why in report.refused_definitions),
        ],
        "lines": [_line(verdict) for verdict in report.verdicts],
    }


def _line(verdict: LineVerdict) -> dict[str, Any]:
    line = verdict.line
    place = place_of(verdict)
    return {
        "n": line.number,
        "where": line.where,
        "text": line.text,
        "remark": line.remark,
        "relation": line.relation,
        "left": _text(line.left),
        "right": _text(line.right),
        "verdict": verdict.outcome,
        "passed": verdict.passed,
        "why": verdict.why,
        "cure": verdict.cure,
        "proof": verdict.proof,
        "follows_from": list(verdict.sources),
        "place": None if place is None else list(place),
        "finding": verdict.finding,
        "ratio": _text(verdict.ratio),
        "difference": _text(verdict.difference),
        "definitions": [[name, to_text(value)] for name, value in verdict.definitions],
        "edits": [_edit(verdict, edit) for edit in verdict.edits],
        "units": [
            {"says": remark.says, "place": _span(verdict, remark.way)} for remark in verdict.dimensions
        ],
        "price": _price(verdict.pricing),
    }


def _edit(verdict: LineVerdict, edit: Edit) -> dict[str, Any]:
    return {
        "kind": edit.kind,
        "says": edit.says,
        "line": to_text(edit.line),
        "before": _text(edit.before),
        "after": _text(edit.after),
        "place": _span(verdict, edit.way),
        "makes": edit.makes,
    }


def _span(verdict: LineVerdict, way: Way) -> list[int] | None:
    span = verdict.line.span(way)
    return None if span is None else [span.start, span.end]


def _price(pricing: Pricing | None) -> dict[str, Any] | None:
    if pricing is None:
        return None
    return {
        "relative": rounded(pricing.relative),
        "errors": errors_data(pricing.errors),
        "worst_corner": worst_data(pricing.worst),
        "corners": pricing.corners,
        "limits_broken": list(pricing.limits),
        "neglected": [
            {
                "of": item.of,
                "term": to_text(item.term),
                "against": to_text(item.against),
                "ratio": rounded(item.ratio),
            }
            for item in pricing.neglected
        ],
        "definitions": [[name, to_text(value)] for name, value in pricing.definitions],
    }


def _text(expression: Expression | None) -> str | None:
    return None if expression is None else to_text(expression)

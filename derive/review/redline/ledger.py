"""The ledger of a redline: the same changes for machines."""

from __future__ import annotations

import json
from typing import Any

from derive.expressions.ledger_text import to_ledger
from derive.review.redline.nouns import Change, Redline, Side
from derive.sheet.document import Line, Maths
from derive.sheet.ledger import digest
from derive.sheet.plain import line_text
from derive.version import VERSION

FORMAT = 1
NAME = "redline"


def ledger(found: Redline) -> dict[str, Any]:
    """Give the redline as plain data, keys in their stable order."""
    return {
        "redline": FORMAT,
        "made_by": {"name": "nodeledger", "version": VERSION},
        "old": _side(found.old),
        "new": _side(found.new),
        "changes": [_change(change) for change in found.changes],
        "remarks": list(found.remarks),
    }


def ledger_text(found: Redline) -> str:
    """Give the ledger as it is written to a file."""
    return json.dumps(ledger(found), ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def _side(side: Side) -> dict[str, Any]:
    topology = side.topology
    return {
        "topology": {"file": topology.file, "sha256": digest(topology.text), "text": topology.text},
        "title": topology.title_block.title,
        "revision": topology.title_block.revision,
        "passed": side.outcome.passed,
    }


def _change(change: Change) -> dict[str, Any]:
    return {
        "sign": change.sign,
        "group": change.group,
        "subject": change.subject,
        "aspect": change.aspect,
        "before": _words(change.before),
        "after": _words(change.after),
    }


def _words(line: Line) -> str | None:
    """Give a line; one that is an expression alone in the language of ledgers."""
    if len(line) == 1 and isinstance(line[0], Maths):
        return to_ledger(line[0].content)
    return line_text(line) if line else None

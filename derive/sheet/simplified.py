"""Short forms found by the tool: their place in the ledger, and their words."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from derive.approximate.questions import Price, Question, Simplified
from derive.expressions.ledger_text import to_ledger
from derive.expressions.text import to_text
from derive.sheet.approximations import rounded
from derive.sheet.figures import hertz, signed_percent

# Beyond so many, assumptions are counted and not listed.
MOST_LISTED = 60


def simplified(found: Sequence[Simplified]) -> list[dict[str, Any]]:
    """Give every answer with what was assumed for it and its price, in the order asked."""
    return [_answer(each) for each in found]


def _answer(found: Simplified) -> dict[str, Any]:
    question = found.question
    return {
        "question": question.kind,
        "range_hz": None if question.range_hz is None else [rounded(end) for end in question.range_hz],
        "status": found.status,
        "reason": found.reason,
        "name": found.left,
        "form": None if found.form is None else to_text(found.form),
        "definitions": [[name, to_ledger(value)] for name, value in found.definitions],
        "meanings": {name: words for name, words in found.says if words},
        "value": rounded(found.value),
        "original": rounded(found.original),
        "errors": _price(found.price),
        "assumptions": [
            {"that": made.assumption.that, "because": made.assumption.because, "by": made.assumption.by}
            for made in found.assumptions[:MOST_LISTED]
        ],
        "further_assumptions": max(0, len(found.assumptions) - MOST_LISTED) + found.unlisted,
        "no_longer_matter": list(found.idle),
        "sampling": found.sampling,
        "beyond_the_budget": None if found.beyond is None else _answer(found.beyond),
    }


def _price(price: Price | None) -> dict[str, Any] | None:
    if price is None:
        return None
    return {
        "relative": rounded(price.relative),
        "magnitude_db": rounded(price.magnitude_db),
        "magnitude_at_hz": rounded(price.magnitude_at_hz),
        "phase_deg": rounded(price.phase_deg),
        "phase_at_hz": rounded(price.phase_at_hz),
        "part_of_budget": rounded(price.used),
    }


def title_of(question: Question) -> str:
    """Name a question: "dominant pole", "response from 1 kHz to 1 MHz"."""
    if question.range_hz is None:
        return question.kind
    low, high = question.range_hz
    return f"response from {hertz(low, 3)} to {hertz(high, 3)}"


def price_words(price: Price) -> str:
    """Say what a short form is off by."""
    if price.relative is not None:
        return f"off by {signed_percent(price.relative)}" if price.relative else "exact"
    if price.magnitude_db is None or price.phase_deg is None:
        return "off by any amount"
    # Signs of the trade, as in the rest of the sheet.
    loud = f"{price.magnitude_db:+.2g} dB at {hertz(price.magnitude_at_hz or 0.0, 3)}"
    turned = f"{price.phase_deg:+.2g}° at {hertz(price.phase_at_hz or 0.0, 3)}"
    return f"off by {loud} and {turned} at worst".replace("-", "−")

"""A redline as plain text, for a terminal."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator

from derive.review.redline.nouns import Change, Redline, Sign
from derive.sheet.plain import line_text

SIGNS: dict[Sign, str] = {"added": "+", "removed": "−", "changed": "~"}
LEAST = 60
SAME = "nothing changed: same circuit, same questions, same results"


def plain_redline(found: Redline, width: int = 100) -> str:
    """Give the changes under their headings, each with its sign and word, no line wider than asked for."""
    lines = [f"from  {title(found.old.file, found)}", f"to    {title(found.new.file, found)}", ""]
    lines += [] if found.changes else [SAME]
    for group, changes in found.groups:
        lines.append(group)
        label = max(len(_label(change)) for change in changes)
        for change in changes:
            lines += _change(change, min(label, 44), max(width, LEAST))
        lines.append("")
    for remark in found.remarks:
        lines += textwrap.wrap(remark, max(width, LEAST))
    if found.changes:
        lines.append(count_words(found))
    return "\n".join(lines).rstrip() + "\n"


def title(file: str, found: Redline) -> str:
    """Give a revision as its file and what its title block says."""
    side = found.old if file == found.old.file else found.new
    block = side.topology.title_block
    revision = f", revision {block.revision}" if block.revision else ""
    return f"{file} ({block.title}{revision})"


def count_words(found: Redline) -> str:
    """Count the changes by their sign: "1 added, 2 removed, 5 changed"."""
    counts = {sign: sum(change.sign == sign for change in found.changes) for sign in SIGNS}
    return ", ".join(f"{count} {sign}" for sign, count in counts.items() if count)


def _label(change: Change) -> str:
    return f"{change.subject} {change.aspect}".strip()


def _change(change: Change, label: int, width: int) -> Iterator[str]:
    before, after = line_text(change.before), line_text(change.after)
    shown = f"{before or 'nothing'} → {after}" if change.sign == "changed" and before else before or after
    lead = f"  {SIGNS[change.sign]} {change.sign:<8}{_label(change):<{label}}  "
    room = max(24, width - len(lead))
    first, *more = textwrap.wrap(shown, room) or [""]
    yield lead + first
    yield from (" " * len(lead) + line for line in more)

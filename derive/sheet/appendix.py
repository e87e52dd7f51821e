"""The appendix: the source to the letter, what the files inside are and their digests, and how to derive it again."""

from __future__ import annotations

import hashlib

from derive.check.verdict import Outcome
from derive.sheet.document import Block, Column, Line, Paragraph, Section, SourceText, Table, Text
from derive.version import VERSION

TITLE = "Appendix: the source, and how to derive it again"
AGAIN = (
    "To derive it again: take the topology out of this sheet (in the PDF it is an attached file, in the HTML the "
    "script element named topology, in the ledger the entry topology.text), and run “nodeledger sheet” on it. The "
    "same version of the program writes the same bytes. “nodeledger recheck” on the issued sheet does all of this, and "
    "compares every printed equation and number with the fresh ones."
)


def appendix(outcome: Outcome, ledger_name: str, ledger_text: str) -> Section:
    """Give the section; the ledger's digest is left out where there is no ledger yet."""
    topology = outcome.circuit.topology
    files = [(topology.file, "topology, the source of this sheet", topology.text)]
    if ledger_text:
        files.append((ledger_name, "ledger, the results for programs", ledger_text))
    rows: list[tuple[Line, ...]] = [
        (
            (Text(name),),
            (Text(what),),
            (Text(f"{len(text.encode('utf-8', 'replace')):,}"),),
            (Text(hashlib.sha256(text.encode("utf-8", "replace")).hexdigest()),),
        )
        for name, what, text in files
    ]
    columns = (
        Column((Text("File"),)),
        Column((Text("What it is"),)),
        Column((Text("Bytes"),), numeric=True),
        Column((Text("SHA-256"),)),
    )
    blocks: tuple[Block, ...] = (
        Paragraph((Text(f"Made by nodeledger {VERSION}. {AGAIN}"),)),
        Table("Files that this sheet carries", columns, tuple(rows)),
        Paragraph((Text(f"The topology {topology.file}, to the letter:"),)),
        SourceText(topology.text),
    )
    return Section(TITLE, blocks)

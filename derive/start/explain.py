"""Says in comments what each table of a topology file is for."""

from __future__ import annotations

import re

# A table is explained where it first stands; what is told is the contract, in words for the bench.
EXPLAINED: dict[str, tuple[str, ...]] = {
    "sheet": (
        "The title block. Only the title is needed; number, revision, project, prepared, checked, approved, date",
        "and notes are printed where they are given.",
    ),
    "nodes": ("Words for nodes, where a name alone says too little. Nodes need not be declared.",),
    "conditions": ("The temperature of the junctions; 27 °C where nothing is said.",),
    "supplies": (
        "Supplies hold their node: signal ground in every band. The DC value is used for the operating point.",
    ),
    "drives": (
        "Independent small-signal sources. A voltage names its plus and its minus node; the current of",
        'I_s = { current = ["gnd", "in"] } flows from the first node through the source to the second.',
    ),
    "parts": (
        "One line a part; its name is its symbol, so that R_E prints as R with subscript E. The ground is gnd.",
        'Values: 4k7, 100n, R47 (IEC 60062), or a number with prefix and unit ("4.7 kΩ"); "?" leaves one open.',
        'tol: "5 %" or a letter (F is 1 %, J 5 %). role: coupling and bypass are shorts from mid band up,',
        "parasitic is open up to mid band; a capacitor without a role is kept in every band.",
    ),
    "models": (
        "What parts of one type have in common. Give small-signal values (g_m, r_pi, …), or the operating point",
        "(I_C with beta, V_A, f_T), or neither: then the DC circuit is solved for it.",
        "What is not given is left out of the model, and the sheet says so.",
    ),
    "merge": ("One name for parts in parallel or in series, so that results are shorter to read.",),
    "find": (
        "What is wanted, one table for each. voltage = a node or a pair of nodes; current = a part; both per a",
        "drive. impedance = a node or a pair, looked into with all drives at zero and everything in place.",
    ),
    "assume": (
        "Approximations in the order in which they are made, each with its reason; the sheet says what they cost.",
        'Forms: "x -> inf", "x -> 0", "x >> y", "x << y", "x = y".',
    ),
    "budget": ("What approximations may cost: errors of gain, magnitude and phase, and where.",),
    "bands": ("The bands to work in, where not those that the parts' roles call for.",),
    "revision": (
        "A line of the revision table: its mark, what changed, and where known date and by whom.",
    ),
    "review": (
        "An item that somebody has looked at: item, by, and a verdict (accepted, conditional, rejected).",
    ),
    "drawing": ("Hints for the drawing of the circuit; it is drawn without them as well.",),
}
OTHER = ("See the guide for what this table takes.",)
_HEADER = re.compile(r"\s*\[\[?\s*([A-Za-z_]+)")
_LIST = re.compile(r"(bands)\s*=")


def explained(text: str) -> str:
    """Give the text of a topology with a comment over each table, where one first stands."""
    told: set[str] = set()
    lines: list[str] = []
    for line in text.split("\n"):
        found = _HEADER.match(line) or _LIST.match(line)
        name = found.group(1) if found else ""
        if name and name not in told:
            told.add(name)
            lines += [f"# {words}" for words in EXPLAINED.get(name, OTHER)]
        lines.append(line)
    return "\n".join(lines)

"""What changed between two topologies: parts, their wiring and values, supplies, drives, and what is asked."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import fields
from fractions import Fraction
from typing import Any, TypeVar

from derive.devices.registry import models
from derive.quantities.dimension import VOLTAGE, Dimension
from derive.quantities.symbol import Value
from derive.quantities.units import unit_of
from derive.review.redline.nouns import ASKED, ASSUMED, CIRCUIT, TITLE, Change, Sign
from derive.sheet.document import Line, Text
from derive.topology.topology import Assumption, Budget, Drive, Find, Merge, Part, Supply, Topology

T = TypeVar("T")
Aspects = dict[str, str]
# Compared by name here; every other field of a topology is compared as a whole.
_OWN = frozenset(
    {
        *("file", "text", "title_block", "node_words", "drives", "parts", "finds", "supplies", "bands"),
        *("temperature", "merges", "assumptions", "budget", "form"),
    }
)
_FORMS = {"": "as the size asks", "nested": "nested", "expanded": "expanded"}


def topology_changes(old: Topology, new: Topology) -> Iterator[Change]:
    """Give each change between two topologies; what is only written otherwise is none."""
    yield from _aspects(TITLE, "", _title(old), _title(new))
    yield from _named(CIRCUIT, "part", old.parts, new.parts, part_aspects)
    yield from _named(CIRCUIT, "supply", old.supplies, new.supplies, _supply_aspects)
    yield from _named(CIRCUIT, "drive", old.drives, new.drives, _drive_aspects)
    yield from _named(CIRCUIT, "merged parts", old.merges, new.merges, _merge_aspects)
    yield from _aspects(CIRCUIT, "", _nodes(old), _nodes(new))
    yield from _named(ASKED, "quantity", old.finds, new.finds, _find_aspects)
    yield from _aspects(ASKED, "", _settings(old), _settings(new))
    yield from _assumption_changes(old.assumptions, new.assumptions)


def _named(
    group: str, kind: str, old: Sequence[T], new: Sequence[T], aspects: Callable[[T], Aspects]
) -> Iterator[Change]:
    """Compare named things: gone, come in, or changed in some respect."""
    before: dict[str, T] = {_name(thing): thing for thing in old}
    after: dict[str, T] = {_name(thing): thing for thing in new}
    for name, thing in before.items():
        if name not in after:
            yield Change("removed", group, name, kind, before=_words(aspects(thing)))
        else:
            yield from _aspects(group, name, aspects(thing), aspects(after[name]))
    for name, thing in after.items():
        if name not in before:
            yield Change("added", group, name, kind, after=_words(aspects(thing)))


def _name(thing: Any) -> str:
    return str(thing.name)


def _aspects(group: str, name: str, old: Mapping[str, str], new: Mapping[str, str]) -> Iterator[Change]:
    for aspect in dict.fromkeys((*old, *new)):
        before, after = old.get(aspect, ""), new.get(aspect, "")
        if before != after:
            sign: Sign = "changed" if before and after else "added" if after else "removed"
            yield Change(sign, group, name, aspect, _line(before), _line(after))


def _line(words: str) -> Line:
    return (Text(words),) if words else ()


def _words(aspects: Aspects) -> Line:
    shown = (
        words if aspect == "kind" else f"{aspect} {words}" for aspect, words in aspects.items() if words
    )
    return _line(", ".join(shown))


def part_aspects(part: Part) -> Aspects:
    """Give a part in each respect; a value as its exact amount, so that 4k7 and 4.7 kΩ are one."""
    spec = models()[part.kind].SPEC
    units = {parameter.name: parameter.dimension for parameter in spec.parameters}
    found = {"kind": part.kind.replace("_", " ")}
    found |= {("nodes" if key == "between" else key): _joined(nodes) for key, nodes in part.wires}
    found["senses"] = part.senses_part or found.get("senses", "")
    found["coils"] = _joined(part.coils or ())
    found["value"] = "" if part.value is None else value_words(part.value, spec.dimension)
    found["model"] = part.model or ""
    for key, value in part.parameters:
        # The part's own come before its model's, and stand for them.
        found.setdefault(key, value_words(value, units.get(key)))
    for key, word in part.words:
        found.setdefault(key, word)
    found["tolerance"] = "" if part.tolerance is None else f"±{percent(part.tolerance)}"
    found["role"] = part.role
    return {aspect: words for aspect, words in found.items() if words}


def value_words(value: Value, dimension: Dimension | None) -> str:
    """Give a value as an exact amount."""
    if value.exact is None:
        return "left open"
    return amount(value.exact, unit_of(dimension) if dimension else "")


def amount(value: Fraction, unit: str = "") -> str:
    """Give a rational exactly, with the prefix of its size where it has a unit and a short decimal."""
    for power, prefix in _PREFIXES if unit and value else ((0, ""),):
        scaled = value / Fraction(10) ** power
        shown = f"{float(scaled):.10g}"
        if (abs(scaled) >= 1 or not unit) and "e" not in shown and Fraction(shown) == scaled:
            return f"{shown} {prefix}{unit}".strip().replace("-", "−")
    return f"{value} {unit}".strip().replace("-", "−")


_PREFIXES = (
    (9, "G"),
    (6, "M"),
    (3, "k"),
    (0, ""),
    (-3, "m"),
    (-6, "µ"),
    (-9, "n"),
    (-12, "p"),
    (-15, "f"),
)


def percent(share: Fraction) -> str:
    """Give a share of one in percent, exactly where it has a short decimal."""
    return f"{float(share * 100):.10g} %"


def _joined(names: Sequence[str]) -> str:
    return " – ".join(names)


def _supply_aspects(supply: Supply) -> Aspects:
    return {"node": supply.node, "DC value": value_words(supply.dc, VOLTAGE)}


def _drive_aspects(drive: Drive) -> Aspects:
    return {"kind": f"{drive.quantity} source", "nodes": _joined(drive.nodes)}


def _merge_aspects(merge: Merge) -> Aspects:
    return {"parts": ", ".join(merge.parts)}


def _find_aspects(find: Find) -> Aspects:
    per = ", ".join(name if weight == 1 else f"{weight} {name}" for name, weight in find.per)
    return {"kind": find.quantity, "nodes": _joined(find.nodes or ()), "of": find.part or "", "per": per}


def _title(topology: Topology) -> Aspects:
    block = topology.title_block
    return {field.name: getattr(block, field.name) for field in fields(block)}


def _nodes(topology: Topology) -> Aspects:
    return {f"node {node} stands for": words for node, words in topology.node_words}


def _settings(topology: Topology) -> Aspects:
    found = {
        "bands": ", ".join(topology.bands) or "those that roles call for",
        "temperature": f"{float(topology.temperature):.10g} K",
        "form": _FORMS[topology.form],
    }
    for field in fields(Budget):
        if field.name != "place":
            found[f"budget, {field.name}"] = _plain(getattr(topology.budget, field.name))
    for field in fields(topology):
        if field.name not in _OWN:
            found[field.name] = _plain(getattr(topology, field.name))
    return found


def _plain(value: object) -> str:
    """Give any value of a topology in words; a file's places are left out, as they are no change."""
    if value is None or value == ():
        return ""
    if isinstance(value, Fraction):
        return f"{float(value):.10g}"
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, tuple):
        return "; ".join(map(_plain, value))
    if hasattr(value, "__dataclass_fields__"):
        names = [name for name in value.__dataclass_fields__ if name != "place"]
        return ", ".join(filter(None, (_plain(getattr(value, name)) for name in names)))
    return str(value)


def _assumption_changes(old: Sequence[Assumption], new: Sequence[Assumption]) -> Iterator[Change]:
    before = {_assumed(entry): entry for entry in old}
    after = {_assumed(entry): entry for entry in new}
    for key, entry in before.items():
        if key not in after:
            yield Change("removed", ASSUMED, entry.that, "assumption", before=_line(key))
        elif entry.because != after[key].because:
            reasons = _line(entry.because), _line(after[key].because)
            yield Change("changed", ASSUMED, entry.that, "because", *reasons)
    for key, entry in after.items():
        if key not in before:
            yield Change("added", ASSUMED, entry.that, "assumption", after=_line(key))
    order = [[key for key in side if key in before and key in after] for side in (before, after)]
    if order[0] != order[1]:
        yield Change("changed", ASSUMED, "", "order", *(_line("; ".join(keys)) for keys in order))


def _assumed(entry: Assumption) -> str:
    limits = [*entry.finds, *(f"{band} band" for band in entry.bands)]
    return f"{entry.that} (for {', '.join(limits)})" if limits else entry.that

"""The [parts] table: one part a line, read by the table of kinds."""

from __future__ import annotations

from typing import Any

from derive.errors import InputError
from derive.quantities.symbol import Value
from derive.quantities.tolerance import read_tolerance
from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import (
    LONGEST_NAME,
    NAME,
    check_name,
    described,
    known_keys,
    nodes,
    table,
    value,
)
from derive.reading.kinds import KINDS
from derive.reading.models import Models, parameter_keys, parameters
from derive.reading.roles import role
from derive.topology.kind import Kind
from derive.topology.topology import Part

MOST_PARTS = 2000
_PART_CURE = f"write it as {KINDS['resistor'].example}"


def read_parts(document: Document, models: Models) -> tuple[Part, ...]:
    """Give every part of the file, in the order written.

    Raises: InputError at the first part that the table of kinds does not allow.
    """
    raw = document.data.get("parts")
    if raw is None:
        raise document.error(
            "the file has no [parts] table", cure=f"write [parts] and under it R_1 = {_example()}"
        )
    parts = table(document, raw, "parts", "parts", cure="write [parts] and one part a line")
    if not parts:
        raise document.error("[parts] names no part", "parts", cure=f"write R_1 = {_example()} under it")
    if len(parts) > MOST_PARTS:
        raise document.error(
            f"[parts] names {len(parts)} parts, more than {MOST_PARTS}",
            "parts",
            cure="describe one stage a file",
        )
    return tuple(_part(document, name, raw, models) for name, raw in parts.items())


def _example() -> str:
    return KINDS["resistor"].example


def _part(document: Document, name: str, raw: Any, models: Models) -> Part:
    path = ("parts", name)
    check_name(document, name, "part", *path)
    item = f"part {name}"
    entries = table(document, raw, item, *path, cure=_PART_CURE)
    kind = _kind(document, entries, item, *path)
    _check_keys(document, entries, kind, item, *path)
    tolerance = None
    if "tol" in entries:
        tolerance = _tolerance(document, entries["tol"], kind, item, *path, "tol")
    model: str | None = None
    if kind.written != "value":
        model = _model(document, entries[kind.name], kind, models, item, *path, kind.name)
    given = parameters(document, entries, kind, path, model, models)
    return Part(
        name=name,
        kind=kind.name,
        place=document.place(*path),
        value=_value(document, entries[kind.name], kind, item, *path, kind.name),
        model=model,
        wires=_wires(document, entries, kind, item, *path),
        senses_part=_sensed(document, entries, kind, item, *path),
        coils=_coils(document, entries, kind, item, *path),
        parameters=tuple(given.values.items()),
        words=tuple(given.words.items()),
        tolerance=tolerance,
        role=role(document, entries["role"], item, *path, "role") if "role" in entries else "",
    )


def _kind(document: Document, entries: dict[str, Any], item: str, *path: str | int) -> Kind:
    found = [key for key in entries if key in KINDS]
    if len(found) > 1:
        raise document.error(
            f"{item} has {len(found)} kinds: {listed(found)}",
            *path,
            found[1],
            cure="keep one and make another part of the other",
        )
    if found:
        return KINDS[found[0]]
    known = {"tol", "role"}
    for kind in KINDS.values():
        known |= {*kind.keys, *dict(kind.optional_wires), *parameter_keys(kind)}
    odd = [key for key in entries if key not in known]
    if odd:
        raise document.error(
            f"{item}: {quoted(odd[0])} is not a kind of part",
            *path,
            odd[0],
            cure=did_you_mean(odd[0], KINDS, f"the kinds are {listed(KINDS)}"),
        )
    raise document.error(f"{item} has no kind", *path, cure=_PART_CURE)


def _check_keys(
    document: Document, entries: dict[str, Any], kind: Kind, item: str, *path: str | int
) -> None:
    if "role" in entries and not kind.may_have_role:
        able = [name for name, other in KINDS.items() if other.may_have_role]
        raise document.error(
            f"{item}: {_article(kind.name)} has no role",
            *path,
            "role",
            cure=f"take role out; {listed(f'{name}s' for name in able)} may have one",
        )
    if "tol" in entries and kind.dimension is None:
        raise document.error(
            f"{item}: a tolerance has no value to stand on",
            *path,
            "tol",
            cure="take tol out",
        )
    more = [*dict(kind.optional_wires), *parameter_keys(kind)]
    more += ["tol"] if kind.dimension is not None else []
    more += ["role"] if kind.may_have_role else []
    known_keys(document, entries, (kind.name, *kind.keys, *more), item, *path)
    for key in kind.keys:
        if key not in entries:
            raise document.error(
                f"{item}: the key {key} is missing", *path, cure=f"write it as {kind.example}"
            )


def _value(document: Document, raw: Any, kind: Kind, item: str, *path: str | int) -> Value | None:
    if kind.dimension is None:
        return None
    found = value(document, raw, kind.dimension, item, *path)
    exact = found.exact
    if exact is None:
        return found
    wrong, cure = "", ""
    if exact == 0:
        wrong = "is zero"
        cure = _zero_cure(kind)
    elif kind.sign == "positive" and exact < 0:
        wrong = "is negative"
        cure = "write a positive value"
    elif kind.sign == "coupling" and abs(exact) > 1:
        wrong = "is outside -1 to 1"
        cure = "a coupling is M/sqrt(L_1*L_2), at most 1 in size"
    if wrong:
        raise document.error(f"{item}: the value {quoted(found.text)} {wrong}", *path, cure=cure)
    return found


def _article(word: str) -> str:
    return f"{'an' if word[0] in 'aeiou' else 'a'} {word}"


def _example_name(raw: str) -> str:
    return raw if NAME.fullmatch(raw) and len(raw) <= LONGEST_NAME else "NAME"


def _zero_cure(kind: Kind) -> str:
    if kind.name in ("resistor", "inductor"):
        return "a wire is no part: merge its two nodes into one"
    return "take the part out"


def _tolerance(document: Document, raw: Any, kind: Kind, item: str, *path: str | int) -> Any:
    where = str(document.place(*path))
    if not isinstance(raw, str):
        raise document.error(
            f"{item}: tol wants a text, not {described(raw)}", *path, cure='write tol = "5 %"'
        )
    try:
        return read_tolerance(raw, where=where)
    except InputError as error:
        raise InputError(f"{item}: {error.what}", where=where, cure=error.cure) from error


def _model(
    document: Document,
    raw: Any,
    kind: Kind,
    models: Models,
    item: str,
    *path: str | int,
) -> str | None:
    if raw is True and kind.written != "model":
        return None
    if kind.written == "true" or not isinstance(raw, str):
        others = " or the name of a model" if kind.parameters else ""
        raise document.error(
            f"{item}: {kind.name} wants true{others}, not {described(raw)}",
            *path,
            cure=f"write {kind.name} = true",
        )
    if raw not in models:
        raise document.error(
            f"{item}: there is no model {quoted(raw)}",
            *path,
            cure=did_you_mean(raw, models, f"write a table [models.{_example_name(raw)}] for it"),
        )
    return raw


def _wires(
    document: Document, entries: dict[str, Any], kind: Kind, item: str, *path: str | int
) -> tuple[tuple[str, tuple[str, ...]], ...]:
    counts = dict((*kind.wires, *kind.optional_wires))
    wires = {
        key: nodes(document, raw, counts[key], item, *path, key)
        for key, raw in entries.items()
        if key in counts
    }
    for first, second in kind.apart:
        if wires[first] == wires[second]:
            raise document.error(
                f"{item}: {first} and {second} are both at node {quoted(wires[first][0])}",
                *path,
                second,
                cure="wire them to two different nodes",
            )
    return tuple(wires.items())


def _sensed(
    document: Document, entries: dict[str, Any], kind: Kind, item: str, *path: str | int
) -> str | None:
    if not kind.senses_part:
        return None
    raw = entries["senses"]
    if not isinstance(raw, str):
        raise document.error(
            f"{item}: senses wants the name of a part, not {described(raw)}",
            *path,
            "senses",
            cure='write senses = "R_1"; the current of that part is sensed',
        )
    return raw


def _coils(
    document: Document, entries: dict[str, Any], kind: Kind, item: str, *path: str | int
) -> tuple[str, str] | None:
    if not kind.has_coils:
        return None
    raw = entries["coils"]
    if not isinstance(raw, list) or len(raw) != 2 or not all(isinstance(x, str) for x in raw):
        raise document.error(
            f"{item}: coils wants the names of two inductors",
            *path,
            "coils",
            cure='write coils = ["L_1", "L_2"]',
        )
    return raw[0], raw[1]

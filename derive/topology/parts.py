"""The [parts] table: one part a line, read by the table of kinds."""

from __future__ import annotations

from typing import Any

from derive.errors import InputError
from derive.quantities.symbol import Value
from derive.quantities.tolerance import read_tolerance
from derive.quantities.words import did_you_mean, listed, quoted
from derive.topology.document import Document
from derive.topology.fields import (
    check_name,
    described,
    known_keys,
    nodes,
    not_yet,
    table,
    value,
)
from derive.topology.kinds import DEVICES, KINDS, OPAMP_PARAMETERS, Kind
from derive.topology.models import Model, parameters
from derive.topology.topology import Part

MOST_PARTS = 2000
_PART_CURE = f"write it as {KINDS['resistor'].example}"


def read_parts(document: Document, models: dict[str, Model]) -> tuple[Part, ...]:
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


def _part(document: Document, name: str, raw: Any, models: dict[str, Model]) -> Part:
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
    own: Model = ()
    if kind.dimension is None:
        model = _model(document, entries[kind.name], kind, models, item, *path, kind.name)
    if kind.has_parameters:
        own = parameters(document, entries, item, path, models[model] if model else None)
    return Part(
        name=name,
        kind=kind.name,
        place=document.place(*path),
        value=_value(document, entries[kind.name], kind, item, *path, kind.name),
        model=model,
        wires=_wires(document, entries, kind, item, *path),
        senses_part=_sensed(document, entries, kind, item, *path),
        coils=_coils(document, entries, kind, item, *path),
        parameters=own,
        tolerance=tolerance,
    )


def _kind(document: Document, entries: dict[str, Any], item: str, *path: str | int) -> Kind:
    for key in entries:
        if key in DEVICES:
            raise not_yet(document, f"{item}: the kind {key} is", *path, key, cure=DEVICES[key])
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
    known = {key for kind in KINDS.values() for key in kind.keys} | {"tol", "role"}
    odd = [key for key in entries if key not in known]
    if odd:
        raise document.error(
            f"{item}: {quoted(odd[0])} is not a kind of part",
            *path,
            odd[0],
            cure=did_you_mean(odd[0], (*KINDS, *DEVICES), f"the kinds are {listed(KINDS)}"),
        )
    raise document.error(f"{item} has no kind", *path, cure=_PART_CURE)


def _check_keys(
    document: Document, entries: dict[str, Any], kind: Kind, item: str, *path: str | int
) -> None:
    if "role" in entries:
        raise not_yet(
            document,
            f"{item}: the key role is",
            *path,
            "role",
            cure="take it out; the part is then kept at all frequencies",
        )
    if "tol" in entries and kind.dimension is None:
        raise document.error(
            f"{item}: a tolerance has no value to stand on",
            *path,
            "tol",
            cure="take tol out",
        )
    more = ("tol",) if kind.dimension is not None else ()
    if kind.has_parameters:
        more = (*more, *OPAMP_PARAMETERS)
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
    models: dict[str, Model],
    item: str,
    *path: str | int,
) -> str | None:
    if raw is True:
        return None
    if not kind.has_parameters or not isinstance(raw, str):
        others = " or the name of a model" if kind.has_parameters else ""
        raise document.error(
            f"{item}: {kind.name} wants true{others}, not {described(raw)}",
            *path,
            cure=f"write {kind.name} = true",
        )
    if raw not in models:
        raise document.error(
            f"{item}: there is no model {quoted(raw)}",
            *path,
            cure=did_you_mean(raw, models, "write a table [models.NAME], or true for no model"),
        )
    return raw


def _wires(
    document: Document, entries: dict[str, Any], kind: Kind, item: str, *path: str | int
) -> tuple[tuple[str, tuple[str, ...]], ...]:
    counts = dict(kind.wires)
    return tuple(
        (key, nodes(document, raw, counts[key], item, *path, key))
        for key, raw in entries.items()
        if key in counts
    )


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

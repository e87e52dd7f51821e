"""The [models] tables, and how a part's own parameters override its model's.

A model serves any kind: its keys are read as the kind of the parts that name it has them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from derive.quantities.symbol import Value
from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import check_name, described, known_keys, table, value
from derive.reading.kinds import KINDS
from derive.topology.kind import Kind, Parameter
from derive.topology.topology import Part

Models = dict[str, dict[str, Any]]
_CURE = 'write [models.NAME] and under it beta = 180 or f_unity = "10 MHz"'


@dataclass(frozen=True, slots=True)
class Given:
    """What a part or model gives: values and words, by their keys."""

    values: dict[str, Value]
    words: dict[str, str]


def read_models(document: Document) -> Models:
    """Give the entries of every model by its name.

    Raises: InputError for a model that is no table, or has a key that no kind of part has.
    """
    tables = table(document, document.data.get("models", {}), "models", "models", cure=_CURE)
    known = {key for kind in KINDS.values() for key in parameter_keys(kind)}
    for name, raw in tables.items():
        path = ("models", name)
        check_name(document, name, "model", *path)
        entries = table(document, raw, f"model {name}", *path, cure=_CURE)
        known_keys(document, entries, sorted(known), f"model {name}", *path)
    return tables


def parameter_keys(kind: Kind) -> tuple[str, ...]:
    """Give the keys of a kind that a model may hold."""
    return (*(key for key, _ in kind.choices), *(item.name for item in kind.parameters))


def parameters(
    document: Document,
    entries: dict[str, Any],
    kind: Kind,
    path: tuple[str, str],
    model: str | None,
    models: Models,
) -> Given:
    """Give a part's parameters: its own, and its model's where it has none.

    Raises: InputError for a value that is none, and for a model with keys of another kind.
    """
    own = _read(document, entries, kind, f"part {path[1]}", path)
    if model is None:
        return own
    where = ("models", model)
    known_keys(document, models[model], parameter_keys(kind), f"model {model} of a {kind.name}", *where)
    merged = _read(document, models[model], kind, f"model {model}", where)
    values = dict(merged.values)
    for pair in kind.alternatives:
        # Two ways to give one parameter: either overrides both.
        if any(key in own.values for key in pair):
            values = {key: found for key, found in values.items() if key not in pair}
    values |= own.values
    ordered = {item.name: values[item.name] for item in kind.parameters if item.name in values}
    return Given(ordered, merged.words | own.words)


def check_models_used(document: Document, models: Models, parts: tuple[Part, ...]) -> None:
    """Refuse a model that no part names."""
    used = {part.model for part in parts}
    for name in models:
        if name not in used:
            raise document.error(
                f"model {name} is not used by any part",
                "models",
                name,
                cure=f'name it, as in bipolar = "{name}" or opamp = "{name}", or take it out',
            )


def _read(
    document: Document, entries: dict[str, Any], kind: Kind, item: str, path: tuple[str, str]
) -> Given:
    for first, second in kind.alternatives:
        if first in entries and second in entries:
            raise document.error(
                f"{item}: both {first} and {second} are given",
                *path,
                second,
                cure="keep one of them",
            )
    values = {
        parameter.name: _value(document, entries[parameter.name], parameter, item, path)
        for parameter in kind.parameters
        if parameter.name in entries
    }
    words = {
        key: _word(document, entries[key], allowed, item, *path, key)
        for key, allowed in kind.choices
        if key in entries
    }
    return Given(values, words)


def _value(document: Document, raw: Any, parameter: Parameter, item: str, path: tuple[str, str]) -> Value:
    place = (*path, parameter.name)
    read = value(document, raw, parameter.dimension, item, *place, cycles=parameter.cycles)
    if read.exact is None or parameter.sign == "any":
        return read
    wrong = "positive" if read.exact <= 0 and parameter.sign == "positive" else ""
    if read.exact == 0 and not wrong:
        wrong = "other than zero"
    if wrong:
        raise document.error(
            f"{item}: {parameter.name} = {quoted(read.text)} is not {wrong}",
            *place,
            cure="write a positive value, or leave the key out",
        )
    return read


def _word(document: Document, raw: Any, allowed: tuple[str, ...], item: str, *path: str | int) -> str:
    shown = listed(map(quoted, allowed), "or")
    if not isinstance(raw, str):
        raise document.error(
            f"{item}: {path[-1]} wants {shown}, not {described(raw)}", *path, cure=f"write {shown}"
        )
    if raw not in allowed:
        raise document.error(
            f"{item}: {path[-1]} {quoted(raw)} is not known: it is {shown}",
            *path,
            cure=did_you_mean(raw, allowed, f"write {shown}"),
        )
    return raw

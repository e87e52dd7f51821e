"""The [models] tables, and how a part's own parameters override its model's."""

from __future__ import annotations

from typing import Any

from derive.quantities.symbol import Value
from derive.quantities.words import quoted
from derive.topology.document import Document
from derive.topology.fields import check_name, known_keys, not_yet, table, value
from derive.topology.kinds import DEVICE_PARAMETERS, OPAMP_PARAMETERS
from derive.topology.topology import Part

Model = tuple[tuple[str, Value], ...]
_UNITIES = ("f_unity", "w_unity")


def read_models(document: Document) -> dict[str, Model]:
    """Give the parameters of every model by its name.

    Raises: InputError for a key or a value that no op amp has.
    """
    raw = document.data.get("models", {})
    cure = 'write [models.NAME] with f_unity = "10 MHz"'
    tables = table(document, raw, "models", "models", cure=cure)
    return {name: _model(document, name, raw, cure) for name, raw in tables.items()}


def _model(document: Document, name: str, raw: Any, cure: str) -> Model:
    path = ("models", name)
    check_name(document, name, "model", *path)
    item = f"model {name}"
    entries = table(document, raw, item, *path, cure=cure)
    for key in entries:
        if key in DEVICE_PARAMETERS:
            raise not_yet(
                document,
                f"{item}: the parameter {key} of a transistor or diode is",
                *path,
                key,
                cure="write the device's small-signal parts under [parts]",
            )
    known_keys(document, entries, tuple(OPAMP_PARAMETERS), item, *path)
    return _read(document, entries, item, path)


def parameters(
    document: Document,
    entries: dict[str, Any],
    item: str,
    path: tuple[str, ...],
    model: Model | None,
) -> Model:
    """Give an op amp's parameters: its own, and its model's where it has none.

    Raises: InputError where the gain is not given at all, or its unity frequency twice.
    """
    own = dict(_read(document, entries, item, path))
    merged = dict(model or ())
    # The two ways to give the unity-gain frequency are one parameter: either overrides both.
    if any(key in own for key in _UNITIES):
        merged = {key: found for key, found in merged.items() if key not in _UNITIES}
    merged |= own
    if not any(key in merged for key in ("A_0", *_UNITIES)):
        raise document.error(
            f"{item}: the op amp has no gain",
            *path,
            cure="give A_0, f_unity or w_unity, or make it an ideal_opamp",
        )
    return tuple((key, merged[key]) for key in OPAMP_PARAMETERS if key in merged)


def check_models_used(document: Document, models: dict[str, Model], parts: tuple[Part, ...]) -> None:
    """Refuse a model that no part names."""
    used = {part.model for part in parts}
    for name in models:
        if name not in used:
            raise document.error(
                f"model {name} is not used by any part",
                "models",
                name,
                cure=f'name it, as in opamp = "{name}", or take it out',
            )


def _read(document: Document, entries: dict[str, Any], item: str, path: tuple[str, ...]) -> Model:
    if all(key in entries for key in _UNITIES):
        raise document.error(
            f"{item}: both f_unity and w_unity are given",
            *path,
            "w_unity",
            cure="keep one of them; w_unity is 2π·f_unity",
        )
    found = []
    for key, parameter in OPAMP_PARAMETERS.items():
        if key not in entries:
            continue
        read = value(
            document, entries[key], parameter.dimension, item, *path, key, cycles=parameter.cycles
        )
        if read.exact is not None and read.exact <= 0:
            raise document.error(
                f"{item}: {key} = {quoted(read.text)} is not positive",
                *path,
                key,
                cure="write a positive value, or leave the key out",
            )
        found.append((key, read))
    return tuple(found)

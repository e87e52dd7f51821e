"""The [find] tables: the quantities that are wanted."""

from __future__ import annotations

from fractions import Fraction
from typing import Any, Literal

from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import (
    check_name,
    described,
    exact_ratio,
    known_keys,
    node,
    nodes,
    not_yet,
    table,
)
from derive.topology.topology import GROUND, Drive, Find

_FIND_CURE = 'write [find.A_v] and under it voltage = "out" and per = "V_s"'
_QUANTITIES: tuple[Literal["voltage", "current", "impedance"], ...] = (
    "voltage",
    "current",
    "impedance",
)


def read_finds(document: Document, drives: tuple[Drive, ...]) -> tuple[Find, ...]:
    """Give every wanted quantity, in the order written.

    Raises: InputError where nothing is wanted, or a find does not say what per what.
    """
    if "find" not in document.data:
        raise document.error("the file asks for no quantity", cure=_FIND_CURE)
    finds = table(document, document.data["find"], "find", "find", cure=_FIND_CURE)
    if not finds:
        raise document.error("[find] asks for no quantity", "find", cure=_FIND_CURE)
    names: dict[str, str] = {drive.name: drive.quantity for drive in drives}
    return tuple(_find(document, name, raw, names) for name, raw in finds.items())


def _find(document: Document, name: str, raw: Any, drives: dict[str, str]) -> Find:
    path = ("find", name)
    check_name(document, name, "find", *path)
    item = f"find {name}"
    entries = table(document, raw, item, *path, cure=_FIND_CURE)
    if "return_ratio" in entries:
        raise not_yet(
            document,
            f"{item}: return_ratio is",
            *path,
            "return_ratio",
            cure="break the loop by hand: drive the controlling node and find the voltage returned",
        )
    known_keys(document, entries, (*_QUANTITIES, "per"), item, *path)
    quantity = _quantity(document, entries, item, *path)
    per = _per(document, entries, quantity, item, drives, *path)
    pair, part = None, None
    if quantity == "current":
        part = _part(document, entries["current"], item, *path, "current")
    else:
        pair = _pair(document, entries[quantity], item, *path, quantity)
    return Find(name, document.place(*path), quantity, nodes=pair, part=part, per=per)


def _quantity(
    document: Document, entries: dict[str, Any], item: str, *path: str | int
) -> Literal["voltage", "current", "impedance"]:
    found = [quantity for quantity in _QUANTITIES if quantity in entries]
    if len(found) == 1:
        return found[0]
    what = f"asks for {listed(found)} at once" if found else "does not say what is wanted"
    raise document.error(
        f"{item} {what}", *path, cure=f"write exactly one of {listed(_QUANTITIES, 'or')}"
    )


def _part(document: Document, raw: Any, item: str, *path: str | int) -> str:
    if isinstance(raw, str):
        return raw
    raise document.error(
        f"{item}: current wants the name of a part, not {described(raw)}",
        *path,
        cure='write current = "R_L"',
    )


def _pair(document: Document, raw: Any, item: str, *path: str | int) -> tuple[str, str]:
    if isinstance(raw, list):
        plus, minus = nodes(document, raw, 2, item, *path)
        return plus, minus
    single = node(document, raw, item, *path)
    if single == GROUND:
        raise document.error(
            f"{item}: {path[-1]} of ground against ground is nothing",
            *path,
            cure="name another node",
        )
    return single, GROUND


def _per(
    document: Document,
    entries: dict[str, Any],
    quantity: str,
    item: str,
    drives: dict[str, str],
    *path: str | int,
) -> tuple[tuple[str, Fraction], ...]:
    if quantity == "impedance":
        if "per" in entries:
            raise document.error(
                f"{item}: an impedance is not per a drive",
                *path,
                "per",
                cure="take per out; all drives are at zero",
            )
        return ()
    if "per" not in entries:
        raise document.error(
            f"{item}: per is missing", *path, cure=f'write per = "{next(iter(drives), "V_s")}"'
        )
    raw = entries["per"]
    if isinstance(raw, str):
        _check_drive(document, raw, item, drives, *path, "per")
        return ((raw, Fraction(1)),)
    if not isinstance(raw, dict):
        raise document.error(
            f"{item}: per wants a drive or weights, not {described(raw)}",
            *path,
            "per",
            cure='write per = "V_s" or per = { V_1 = "1/2", V_2 = "-1/2" }',
        )
    return _weights(document, raw, item, drives, *path, "per")


def _weights(
    document: Document, raw: dict[str, Any], item: str, drives: dict[str, str], *path: str | int
) -> tuple[tuple[str, Fraction], ...]:
    for name in raw:
        _check_drive(document, name, item, drives, *path, name)
    weights = tuple(
        (name, exact_ratio(document, weight, f"{item}: per", *path, name)) for name, weight in raw.items()
    )
    if not any(weight for _, weight in weights):
        raise document.error(
            f"{item}: the weights of per are all zero",
            *path,
            cure="give one drive a weight other than 0",
        )
    if len({drives[name] for name in raw}) > 1:
        raise document.error(
            f"{item}: per mixes voltage and current drives",
            *path,
            cure="weigh drives of one kind",
        )
    return weights


def _check_drive(
    document: Document, name: str, item: str, drives: dict[str, str], *path: str | int
) -> None:
    if name not in drives:
        cure = f"the drives are {listed(drives)}" if drives else "write it under [drives]"
        raise document.error(
            f"{item}: there is no drive {quoted(name)}",
            *path,
            cure=did_you_mean(name, drives, cure),
        )

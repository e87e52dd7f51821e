"""The [supplies] and [conditions] tables: DC supplies, and the temperature of the junctions."""

from __future__ import annotations

import re
from fractions import Fraction
from typing import Any

from derive.errors import InputError
from derive.quantities.dimension import VOLTAGE
from derive.quantities.value import read_number
from derive.quantities.words import quoted
from derive.reading.document import Document
from derive.reading.fields import check_name, described, known_keys, node, table, value
from derive.topology.topology import GROUND, ROOM_TEMPERATURE, Supply

_SUPPLY_CURE = 'write it as V_CC = { node = "vcc", dc = "12 V" }'
_TEMPERATURE_CURE = 'write temperature = "27 °C" or "300 K"'
_TEMPERATURE = re.compile(r"([^\s°℃CK]+)\s*(°\s?C|℃|K)")
_ICE_POINT = Fraction("273.15")
# Beyond this no junction works; a slip of the pen is likelier.
_HOTTEST = Fraction(1000)


def read_supplies(document: Document) -> tuple[Supply, ...]:
    """Give every supply of the file, in the order written.

    Raises: InputError where a supply has no node, no voltage, ground for a node, or another's node.
    """
    tables = table(document, document.data.get("supplies", {}), "supplies", "supplies", cure=_SUPPLY_CURE)
    found: dict[str, Supply] = {}
    for name, raw in tables.items():
        supply = _supply(document, name, raw)
        if supply.node in found:
            raise document.error(
                f"supply {name}: node {quoted(supply.node)} has a supply already, "
                f"{found[supply.node].name}: one shorts the other",
                "supplies",
                name,
                "node",
                cure="take one of them out, or name its own node",
            )
        found[supply.node] = supply
    return tuple(found.values())


def _supply(document: Document, name: str, raw: Any) -> Supply:
    path = ("supplies", name)
    check_name(document, name, "supply", *path)
    item = f"supply {name}"
    entries = table(document, raw, item, *path, cure=_SUPPLY_CURE)
    known_keys(document, entries, ("node", "dc"), item, *path)
    for key in ("node", "dc"):
        if key not in entries:
            raise document.error(f"{item}: the key {key} is missing", *path, cure=_SUPPLY_CURE)
    fed = node(document, entries["node"], item, *path, "node")
    if fed == GROUND:
        raise document.error(
            f"{item} shorts itself: its node is ground",
            *path,
            "node",
            cure='name the node that it feeds, such as "vcc"',
        )
    dc = value(document, entries["dc"], VOLTAGE, item, *path, "dc")
    if dc.exact == 0:
        raise document.error(
            f"{item}: its voltage is zero", *path, "dc", cure=f'write "{GROUND}" for its node instead'
        )
    return Supply(name, document.place(*path), fed, dc)


def read_temperature(document: Document) -> Fraction:
    """Give the temperature of the junctions in kelvin, 27 °C where none is written.

    Raises: InputError for a text that is no temperature, or one below absolute zero.
    """
    cure = f"write [conditions] and under it {_TEMPERATURE_CURE[6:]}"
    entries = table(document, document.data.get("conditions", {}), "conditions", "conditions", cure=cure)
    known_keys(document, entries, ("temperature",), "conditions", "conditions")
    if "temperature" not in entries:
        return ROOM_TEMPERATURE
    path = ("conditions", "temperature")
    raw = entries["temperature"]
    if not isinstance(raw, str):
        raise document.error(
            f"conditions: temperature wants a text, not {described(raw)}", *path, cure=_TEMPERATURE_CURE
        )
    found = _TEMPERATURE.fullmatch(raw.strip())
    if not found:
        raise document.error(
            f"conditions: {quoted(raw)} is not a temperature", *path, cure=_TEMPERATURE_CURE
        )
    where = str(document.place(*path))
    try:
        number = read_number(found[1], where=where)
    except InputError as error:
        raise InputError(
            f"conditions: {quoted(raw)} is not a temperature", where=where, cure=_TEMPERATURE_CURE
        ) from error
    kelvin = number if found[2] == "K" else number + _ICE_POINT
    if kelvin <= 0:
        raise document.error(
            f"conditions: the temperature {quoted(raw)} is not above absolute zero",
            *path,
            cure=_TEMPERATURE_CURE,
        )
    if kelvin > _HOTTEST:
        raise document.error(
            f"conditions: no junction works at {quoted(raw)}", *path, cure=_TEMPERATURE_CURE
        )
    return kelvin

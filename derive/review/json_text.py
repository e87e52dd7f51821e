"""Reads the JSON that a sheet carries, strictly: what is doubtful is refused."""

from __future__ import annotations

import json
from typing import Any

from derive.errors import InputError

CURE = "take the sheet from where it was issued"


def read_object(text: str, what: str, where: str) -> dict[str, Any]:
    """Give the object that a text holds.

    Raises: InputError where it is no JSON object, or names a key twice.
    """
    found = read_any(text, what, where)
    if not isinstance(found, dict):
        raise InputError(f"{what} is no JSON object", where=where, cure=CURE)
    return found


def read_any(text: str, what: str, where: str) -> Any:
    """Give what a text holds.

    Raises: InputError where it is no JSON, or names a key twice.
    """
    try:
        return json.loads(text, object_pairs_hook=_once, parse_constant=_refuse)
    except RecursionError:
        raise InputError(f"{what} is nested too deeply", where=where, cure=CURE) from None
    except ValueError as error:
        line = getattr(error, "lineno", None)
        reason = getattr(error, "msg", str(error))
        place = f" (line {line} of it)" if line else ""
        raise InputError(
            f"{what} cannot be read as JSON: {reason}{place}", where=where, cure=CURE
        ) from None


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    found = dict(pairs)
    if len(found) < len(pairs):
        raise ValueError("a key stands twice")
    return found


def _refuse(constant: str) -> Any:
    raise ValueError(f"{constant} is no number")

"""The published results of the data folder, with what their sources leave unsaid."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ledger_arithmetic import Response, calculate

# Ties and values that a source takes for granted, as its title or circuit has them.
UNSAID_TIES = {
    "mirror_beta": "rpi2=rpi1,gm2=gm1,Rm=1e-6",
    "ladder_r": ",".join(f"R{index}=1" for index in range(1, 11)),
    "sk_lp_butter": "R2=R1,C1=2*C2,E1=1",
}
# Magnitudes given at the centre frequency only: that frequency in rad/s.
CENTRES = {
    "wien_general": "1/sqrt(R1*R2*C1*C2)",
    "sk_lp_butter": "1/sqrt(R1*R2*C1*C2)",
}


@dataclass(frozen=True)
class Published:
    """One published result."""

    id: str
    title: str
    kind: str
    index: int
    closed_form: str
    exact: bool
    definitions: tuple[tuple[str, str], ...]
    ties: tuple[tuple[str, str], ...]
    s: complex | None
    expected: complex
    relative: float
    absolute: float
    topology: str


def published() -> tuple[Published, ...]:
    """Give every published result, file by file in the order of their names."""
    found = []
    for file in sorted((Path(__file__).parent / "data").glob("*.toml")):
        with file.open("rb") as stream:
            found += [_published(check) for check in tomllib.load(stream)["check"]]
    return tuple(found)


def _published(check: dict[str, Any]) -> Published:
    expected = check["expected"]
    ties = check.get("requires") or UNSAID_TIES.get(check["id"], "")
    return Published(
        id=check["id"],
        title=check["title"],
        kind=check["quantity"]["kind"],
        index=check["quantity"].get("k", 0),
        closed_form=check["closed_form"],
        exact=check["closed_form_kind"] == "exact",
        definitions=tuple(check.get("definitions", {}).items()),
        ties=tuple(tuple(tie.split("=")) for tie in ties.split(",") if tie),
        s=complex(*check["s"]) if "s" in check else None,
        expected=complex(*expected) if isinstance(expected, list) else complex(expected),
        relative=check["tolerance"]["rel"],
        absolute=check["tolerance"]["abs"],
        topology=check["topology"],
    )


def quantity(check: Published, response: Response, s: Any) -> Any:
    """Give what the source names, from gain, powers of s and coefficients alone."""
    numerator, denominator = response.numerator, response.denominator
    zero = response.field.number(0)
    if check.kind in ("tf", "z"):
        return response.at(s)
    if check.kind in ("K", "z0"):
        assert response.power_of_s >= 0
        return response.gain if response.power_of_s == 0 else zero
    if check.kind in ("a", "b"):
        coefficients = numerator if check.kind == "a" else denominator
        return coefficients[check.index] if check.index < len(coefficients) else zero
    if check.kind == "delay":
        return response.field.subtract(denominator[1], numerator[1] if numerator[1:] else zero)
    if check.kind == "order":
        return response.field.number(len(denominator) - 1 + max(0, -response.power_of_s))
    raise AssertionError(f"no road for {check.kind}")


def closed_form(check: Published, values: dict[str, Any], field: Any) -> Any:
    """Give the value of the published form, its own definitions applied in their order."""
    known = dict(values)
    for name, text in check.definitions:
        known[name] = calculate(text, known, field)
    return calculate(check.closed_form, known, field)

"""The ledger of a comparison: the same data for machines."""

from __future__ import annotations

import json
import math
from typing import Any

from derive.check.verdict import Result
from derive.compare.comparison import Comparison, Level, PortImpedance, Stage
from derive.compare.figures import roots_of
from derive.expressions.ledger_text import to_ledger
from derive.quantities.units import ledger_unit
from derive.sheet.ledger import digest, exact_text
from derive.topology.topology import Find
from derive.version import VERSION

FORMAT = 1
LEDGER_NAME = "comparison.json"


def ledger(comparison: Comparison) -> dict[str, Any]:
    """Give the comparison as plain data, keys in their stable order."""
    return {
        "comparison": FORMAT,
        "made_by": {"name": "nodeledger", "version": VERSION},
        "find": comparison.find,
        "stages": [_stage(stage) for stage in comparison.stages],
    }


def ledger_text(comparison: Comparison) -> str:
    """Give the ledger as it is written to a file."""
    return json.dumps(ledger(comparison), ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def _stage(stage: Stage) -> dict[str, Any]:
    topology = stage.topology
    return {
        "name": stage.name,
        "topology": {"file": topology.file, "sha256": digest(topology.text), "text": topology.text},
        "title": topology.title_block.title,
        "find": stage.find.name,
        "quantity": stage.find.quantity,
        "per": _per(stage.find),
        "unit": ledger_unit(stage.dimension),
        "mid_band": {"band": stage.band, "hertz": _hertz(stage.at_hertz)},
        "gain": _level(stage.gain),
        "bandwidth": {"low_hz": stage.low_hz, "high_hz": stage.high_hz},
        "gain_bandwidth_hz": stage.gain_bandwidth_hz,
        "input_impedance": _port(stage.input)
        | {
            "past": None
            if stage.past_source is None
            else {"part": stage.past_source.resistor} | (_level(stage.past_source.level) or {})
        },
        "output_impedance": _port(stage.output),
        "roots": [
            _roots(band, result) for band, result in zip(stage.bands, stage.outcome.results, strict=True)
        ],
        "remarks": list(stage.remarks),
        "checks": [check for name, result in stage.results for check in _checks(name, result)],
        "curve": {
            "hertz": [point.hertz for point in stage.curve],
            "decibels": [point.decibels for point in stage.curve],
            "degrees": [point.degrees for point in stage.curve],
        },
    }


def _per(find: Find) -> str | dict[str, str] | None:
    """Give what a quantity is taken per, as the ledger of a sheet does."""
    if not find.per:
        return None
    if len(find.per) == 1 and find.per[0][1] == 1:
        return find.per[0][0]
    return {drive: exact_text(weight) for drive, weight in find.per}


def _hertz(hertz: float) -> float | str:
    return "infinite" if math.isinf(hertz) else hertz


def _level(level: Level | None) -> dict[str, Any] | None:
    if level is None:
        return None
    return {
        "exact": None if level.exact is None else exact_text(level.exact),
        "magnitude": _hertz(level.magnitude),
        "degrees": level.degrees,
    }


def _port(port: PortImpedance) -> dict[str, Any]:
    form = port.result.solution.form if port.result else None
    return {
        "says": port.says,
        "value": _level(port.level),
        "gain": None if form is None else to_ledger(form.gain),
        "power_of_s": None if form is None else form.power_of_s,
        "numerator": None if form is None else [to_ledger(entry) for entry in form.numerator],
        "denominator": None if form is None else [to_ledger(entry) for entry in form.denominator],
        "remark": port.remark,
    }


def _roots(band: str, result: Result) -> dict[str, Any]:
    found = {kind: roots_of(result.solution, kind) for kind in ("pole", "zero")}
    return {"band": band} | {
        f"{kind}s": None
        if roots is None
        else [[root.real, root.imaginary] for root in roots for _ in range(root.multiplicity)]
        for kind, roots in found.items()
    }


def _checks(name: str, result: Result) -> list[dict[str, Any]]:
    return [
        {
            "of": name,
            "name": verdict.name,
            "method": verdict.method,
            "passed": verdict.passed,
            "measured": verdict.measured,
            "limit": verdict.limit,
        }
        for verdict in result.verdicts
    ]

"""The device models, found by folder."""

from __future__ import annotations

import importlib
import pkgutil
from functools import cache
from typing import cast

from derive.devices import models as folder
from derive.devices.model import BiasedDevice, Device, DeviceModel, Names
from derive.topology.topology import Topology


@cache
def models() -> dict[str, DeviceModel]:
    """Give every model by its kind, in the order of the file names.

    Raises: RuntimeError where two files claim one kind.
    """
    found: dict[str, DeviceModel] = {}
    for name in sorted(module.name for module in pkgutil.iter_modules(folder.__path__)):
        model = cast(DeviceModel, importlib.import_module(f"{folder.__name__}.{name}"))
        if model.KIND in found:
            raise RuntimeError(f"two device models claim the kind {model.KIND}")
        found[model.KIND] = model
    return found


def device(kind: str) -> Device | None:
    """Give the model of a kind whose elements follow from parameters; None for any other kind."""
    model = models()[kind]
    return cast(Device, model) if hasattr(model, "parameters") else None


def biased_device(kind: str) -> BiasedDevice | None:
    """Give the model of a kind that has an operating point; None for any other kind."""
    model = models()[kind]
    return cast(BiasedDevice, model) if hasattr(model, "dc_elements") else None


def names_for(topology: Topology) -> Names:
    """Give the names of a topology, with the symbols that each kind of device may have."""
    symbols = {
        kind: frozenset(parameter.name for parameter in model.SPEC.parameters)
        for kind, model in models().items()
    }
    return Names(topology, symbols)

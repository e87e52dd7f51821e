"""The device models, found by folder."""

from __future__ import annotations

import importlib
import pkgutil
from functools import cache
from typing import cast

from derive.devices import models as folder
from derive.devices.model import DeviceModel


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

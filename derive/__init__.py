"""Nodeledger: exact derivations of analog circuits, from a topology file to a checked sheet.

`read(path)` gives a topology; `derive(topology)` gives its results, which print themselves and carry
the same data as the ledger.
"""

from __future__ import annotations

from typing import Any

from derive.version import VERSION

__version__ = VERSION
__all__ = ["Results", "__version__", "derive", "read"]


def __getattr__(name: str) -> Any:
    """Load the journey when it is first asked for: `import derive.errors` need not pay for it."""
    if name in ("Results", "derive"):
        from derive import pipeline

        return getattr(pipeline, name)
    if name == "read":
        from derive.reading.read import read

        return read
    raise AttributeError(f"module 'derive' has no attribute '{name}'")

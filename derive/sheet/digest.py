"""The digest by which a sheet names the files that it came from."""

from __future__ import annotations

import hashlib


def digest(text: str) -> str:
    """Give the SHA-256 of a file's text."""
    return hashlib.sha256(text.encode("utf-8")).hexdigest()

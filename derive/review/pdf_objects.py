"""The objects of a PDF within limits: streams unpacked, and digests of all that an object leads to.

Digests are of contents, not of bytes: how streams are packed and objects numbered does not count.
"""

from __future__ import annotations

import hashlib
import zlib
from typing import Any

import pikepdf

MOST_UNPACKED = 256 * 1024 * 1024
MOST_OBJECTS = 3_000_000
# How a stream is packed, and what follows from that.
_PACKING = frozenset({"/Length", "/Filter", "/DecodeParms", "/DL"})
# Back to where one came from: a page is known by its number.
_UP = frozenset({"/Parent"})


class DamagedError(Exception):
    """Raised with the words of what is wrong where a PDF cannot be read."""


class Budget:
    """Counts what is unpacked and looked at, so that no file can ask for more than a sheet holds."""

    def __init__(self) -> None:
        self.unpacked = 0
        self.objects = 0
        self._known: dict[tuple[int, int], str] = {}

    def count(self) -> None:
        """Count one object.

        Raises: DamagedError past the limit.
        """
        self.objects += 1
        if self.objects > MOST_OBJECTS:
            raise DamagedError("it holds more objects than a sheet does")

    def stream(self, stream: Any) -> bytes:
        """Give the bytes of a stream, unpacked where it is packed in the one way that sheets use.

        Raises: DamagedError past the limit, or where it is broken.
        """
        raw = bytes(stream.read_raw_bytes())
        packing = stream.get("/Filter")
        if isinstance(packing, pikepdf.Array) and len(packing) == 1:
            packing = packing[0]
        if packing != pikepdf.Name("/FlateDecode") or stream.get("/DecodeParms") is not None:
            self.unpacked += len(raw)
            return raw if packing is None else repr(packing).encode() + raw
        room = MOST_UNPACKED - self.unpacked
        inflator = zlib.decompressobj()
        made = inflator.decompress(raw, room + 1)
        if len(made) > room:
            raise DamagedError("it unfolds to more than a sheet can hold")
        if not inflator.eof:
            raise DamagedError("a stream in it is cut short")
        self.unpacked += len(made)
        return made

    def once(self, thing: Any, pages: dict[tuple[int, int], int]) -> str:
        """Give the digest of an object; one that is used often is looked at once."""
        if not thing.is_indirect:
            return fingerprint(thing, pages, self)
        key = thing.objgen
        if key not in self._known:
            self._known[key] = fingerprint(thing, pages, self)
        return self._known[key]


def fingerprint(root: Any, pages: dict[tuple[int, int], int], budget: Budget) -> str:
    """Give the digest of an object and of all that it leads to, but for pages, which are named by number."""
    found = hashlib.sha256()
    seen: dict[tuple[int, int], int] = {}
    waiting: list[Any] = [root]
    while waiting:
        thing = waiting.pop()
        if isinstance(thing, str):
            found.update(thing.encode("utf-8", "surrogatepass") + b"\n")
            continue
        budget.count()
        if isinstance(thing, pikepdf.Object) and thing.is_indirect:
            key = thing.objgen
            if key in pages and thing is not root:
                found.update(b"page %d\n" % pages[key])
                continue
            if key in seen:
                found.update(b"seen %d\n" % seen[key])
                continue
            seen[key] = len(seen)
        waiting += reversed(_parts(thing, found, budget))
    return found.hexdigest()


def _parts(thing: Any, found: Any, budget: Budget) -> list[Any]:
    """Write down a thing itself, and give what it consists of."""
    if isinstance(thing, pikepdf.Stream):
        data = budget.stream(thing)
        found.update(b"stream %d " % len(data) + data)
    if isinstance(thing, pikepdf.Dictionary | pikepdf.Stream):
        skipped = _PACKING | _UP if isinstance(thing, pikepdf.Stream) else _UP
        keys = sorted(key for key in thing.keys() if key not in skipped)  # noqa: SIM118 - no mapping
        found.update(b"keys %d\n" % len(keys))
        return [part for key in keys for part in (f"key {key}", thing[key])]
    if isinstance(thing, pikepdf.Array):
        found.update(b"array %d\n" % len(thing))
        return list(thing)
    if isinstance(thing, pikepdf.String):
        found.update(b"string " + bytes(thing) + b"\n")
        return []
    found.update(f"{type(thing).__name__} {thing}\n".encode("utf-8", "surrogatepass"))
    return []


def page_numbers(pdf: Any) -> dict[tuple[int, int], int]:
    """Give the number of each page by its object."""
    return {page.obj.objgen: number for number, page in enumerate(pdf.pages, 1)}


def content(page: Any, budget: Budget) -> bytes:
    """Give what a page draws."""
    found = page.obj.get("/Contents")
    if found is None:
        return b""
    streams = list(found) if isinstance(found, pikepdf.Array) else [found]
    return b"\n".join(budget.stream(stream) for stream in streams)

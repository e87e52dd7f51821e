"""Puts results on disk whole or not at all."""

from __future__ import annotations

import contextlib
import os
import tempfile
from collections.abc import Mapping
from pathlib import Path

from derive.errors import OutputError


def write_whole(path: Path, data: bytes) -> None:
    """Write a file so that at any moment it is the old one or the new one, never a part.

    Raises: OutputError if it cannot be written; what stood there before is untouched.
    """
    write_all({path: data})


def write_all(files: Mapping[Path, bytes]) -> None:
    """Write several files, all or none: every one is complete on disk before the first is named.

    Folders that are missing are made.
    Raises: OutputError if any cannot be written.
    """
    waiting: list[tuple[Path, Path]] = []
    try:
        for path, data in files.items():
            try:
                _refuse_folder(path)
                path.parent.mkdir(parents=True, exist_ok=True)
                waiting.append((_temporary(path, data), path))
            except OSError as problem:
                raise _refused(path, problem) from problem
        for temporary, path in waiting:
            try:
                os.replace(temporary, path)
            except OSError as problem:
                raise _refused(path, problem) from problem
    finally:
        for temporary, _ in waiting:
            with contextlib.suppress(OSError):
                temporary.unlink(missing_ok=True)


def _temporary(path: Path, data: bytes) -> Path:
    """Write the data beside its place, so that the last move stays within one file system."""
    handle, name = tempfile.mkstemp(prefix=".writing-", dir=path.parent)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        os.chmod(name, _mode(path))
    except OSError:
        os.unlink(name)
        raise
    return Path(name)


def _mode(path: Path) -> int:
    """Return the rights of the file that stands there, or those that a new file is given."""
    try:
        return path.stat().st_mode & 0o777
    except FileNotFoundError:
        # Asking for the mask means setting it: there is no other way.
        mask = os.umask(0)
        os.umask(mask)
        return 0o666 & ~mask


def _refuse_folder(path: Path) -> None:
    if path.is_dir():
        raise IsADirectoryError(21, "a folder of that name is in the way")


def _refused(path: Path, problem: OSError) -> OutputError:
    reason = problem.strerror or str(problem)
    cures = {
        "PermissionError": "write into another folder with --out",
        "FileExistsError": "a file stands where a folder is needed: choose another with --out",
        "NotADirectoryError": "a file stands where a folder is needed: choose another with --out",
        "IsADirectoryError": "move that folder away, or write into another one with --out",
    }
    cure = cures.get(type(problem).__name__, "make room there, or write elsewhere with --out")
    return OutputError(f"cannot be written: {reason}", where=str(path), cure=cure)

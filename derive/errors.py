"""One tree of errors: each says where, what is wrong, and what would cure it."""

from __future__ import annotations


class DeriveError(Exception):
    """The root of every error that this package raises on purpose.

    Given: `what` is wrong (a sentence without a full stop), `where` it stands ("buffer.toml:14" or
    ""), and the `cure` ("" where none is known).
    """

    def __init__(self, what: str, *, where: str = "", cure: str = "") -> None:
        self.what = what
        self.where = where
        self.cure = cure
        super().__init__(what)

    def __str__(self) -> str:
        start = f"{self.where}: " if self.where else ""
        end = f"; {self.cure}" if self.cure else ""
        return f"{start}{self.what}{end}"


class InputError(DeriveError, ValueError):
    """Raised when what the user wrote cannot be used: a file, a value, a name, an option."""


class NotYetSupportedError(InputError):
    """Raised when the input is right by the contract, but this version cannot work it yet."""


class SingularError(InputError):
    """Raised when a circuit has no unique solution, for any values of its parts."""


class TooLargeError(InputError):
    """Raised when a result would have more terms than can be written down; nothing was expanded."""


class OutputError(DeriveError, OSError):
    """Raised when a result cannot be written; no partial file is left behind."""

"""`python -m derive` is the command `nodeledger`."""

from __future__ import annotations

import sys

from derive.cli import main

if __name__ == "__main__":
    sys.exit(main())

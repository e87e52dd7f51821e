"""The version that goes into ledgers; the one place where it stands."""

VERSION = "0.1.0"

"""Issued sheets looked at again: whether they still hold, and what changed between two revisions."""

"""Topology: the file that a user writes, read, checked, with the line of every item."""

"""Draws circuits: where every symbol, wire, dot and label lies, with nothing of how it is printed."""

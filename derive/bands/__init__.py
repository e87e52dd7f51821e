"""The circuit of one band: what was shorted, opened and merged, and why."""

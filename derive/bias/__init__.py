"""The DC operating point, and the small-signal parameters that follow from it."""

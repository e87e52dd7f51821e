"""Assumptions: what each one changes, and what it costs."""

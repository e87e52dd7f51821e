"""Quantities: what a value measures, how it is typed, and how it is printed."""

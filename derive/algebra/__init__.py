"""Exact polynomials and their ratios, values and roots; nothing here knows what they describe."""

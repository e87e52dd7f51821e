"""Readable forms: the same exact ratio in the fewest signs, in the words that engineers use."""

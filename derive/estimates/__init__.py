"""Poles, zeros and corner frequencies, what the usual estimates make of them, and how wrong those are."""

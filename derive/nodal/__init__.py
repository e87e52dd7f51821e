"""Kirchhoff's current law at every node, in words, as terms and as a matrix."""

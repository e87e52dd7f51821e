"""The normal form of a response: gain, power of s, polynomials from 1 upward, and its numbers."""

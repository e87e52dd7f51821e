"""Verdicts on a solution, each reached by a road that the solution did not take."""

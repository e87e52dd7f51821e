"""Responses as they are drawn: against frequency with their spans over tolerances, and against time after a step."""

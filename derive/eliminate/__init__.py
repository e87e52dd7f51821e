"""The order of elimination, and its execution as steps that can each be replayed."""

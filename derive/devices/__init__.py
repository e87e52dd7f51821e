"""Small-signal circuits: each part of a topology as the ideal elements that stand for it."""

"""One file per kind of part; each is found by its place in this folder."""

"""How the check of a hand derivation is said: in words, as blocks of a sheet, on a terminal and as data."""

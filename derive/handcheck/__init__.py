"""Hand algebra held against the circuit, line by line."""

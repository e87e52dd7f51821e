"""Beginning: a commented topology file to work on."""

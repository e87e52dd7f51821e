"""From the text of a topology file to a Topology, every item with its file and line, and checked."""

"""What changed between two revisions of a stage: in its circuit, in what is asked, and in the results."""

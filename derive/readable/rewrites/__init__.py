"""The rewrites: one file each, found by folder.

A rewrite has NAME, ORDER and `propose(ratio, search)`, which gives a Proposal for every way that it knows to
write the ratio, each identically equal to it: smaller ratios, and how the form is built from theirs. The ratio
that comes has no sign in front.
"""

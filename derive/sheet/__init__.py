"""The sheet and its ledger as data: what is shown, in which words, and never how it looks."""

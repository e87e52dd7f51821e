"""Sheet to bytes: HTML and PDF. No mathematics and no wording here."""

"""The user's language of expressions: read into a tree, walked, and printed in several dialects."""

"""The roads of checking, one file each; found by folder."""

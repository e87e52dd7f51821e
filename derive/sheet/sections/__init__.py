"""One file per section of the sheet; each is found by its place in this folder.

A section is a module with ORDER (its place), SCOPE ("sheet" or "result") and `compose(...)`, which is
given the outcome, or for the scope "result" a `View` of one result.
"""

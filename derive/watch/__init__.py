"""Watching: a topology's sheet in the browser, derived anew on every save."""

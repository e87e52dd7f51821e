"""Several stages side by side: what each does in the mid band, how far it reaches, and what it loads and drives."""

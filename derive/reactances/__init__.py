"""What each capacitor and inductor does to the response: resistance seen, time constant, Miller's effect."""

"""bridge."""

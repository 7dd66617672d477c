"""trajectory."""

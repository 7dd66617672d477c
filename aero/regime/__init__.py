"""regime."""

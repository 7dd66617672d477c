"""force."""

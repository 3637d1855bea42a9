"""The bench of the window."""

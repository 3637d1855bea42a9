"""The panels of the window."""

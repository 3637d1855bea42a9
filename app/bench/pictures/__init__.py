"""The pictures of the window."""

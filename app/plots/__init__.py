"""The plots of the window."""

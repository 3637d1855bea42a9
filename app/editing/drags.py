"""What a drag carries from one view to another. Knows no Qt."""

PART_MIME = "application/x-feedwright-part"
"""The key of an entry of the parts drawer, in ASCII."""

"""What a person changes and writes, without Qt."""

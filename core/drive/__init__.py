"""The drive."""

"""Compiled functions on plain arrays."""

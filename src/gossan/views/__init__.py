"""Figures and tables of a result."""

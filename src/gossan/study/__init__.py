"""Runs of a case in other forms: what its answers owe to the form."""

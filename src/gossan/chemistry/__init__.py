"""Speciation of a water and its equilibrium with minerals."""

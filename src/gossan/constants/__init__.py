"""Equilibrium constants, molar volumes and diffusion coefficients, each with its source."""

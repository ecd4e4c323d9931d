"""Exchange between flowing and immobile water: first order in the difference of their concentrations."""

from __future__ import annotations

import numpy as np

SERIES = 1e-2  # decay below which phi_2 is summed as a series: its difference would lose digits


def exchanged(
    transfer: np.ndarray, dt: float, difference: np.ndarray, arriving: np.ndarray,
    capacity: np.ndarray, still_capacity: np.ndarray,
) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """What goes from flowing into immobile water in dt, at capacities that stay (equations.md, 57).

    transfer    (still,) s-1, per bulk volume, >= 0; dt s
    difference  (solute, still) mol m-3, flowing less immobile concentration at the start
    arriving    (solute, still) mol m-3 of bulk, what comes into the flowing water meanwhile, evenly
    capacity, still_capacity  (solute, still) what each water and its solids hold per mol m-3, m3 m-3, > 0
    Returns     (solute, still): passed mol m-3 of bulk; difference mol m-3 at the end; and how much more
                would pass for each mol m-3 that the difference had grown more evenly, m3 m-3

    Exact for two well-mixed waters however long the step: an endless transfer mixes them.
    """
    z = transfer * dt * (1.0 / capacity + 1.0 / still_capacity)
    whole, first, second = _phi(z)
    grown = arriving / capacity
    passed = transfer * dt * (first * difference + second * grown)
    return passed, whole * difference + first * grown, transfer * dt * second


def _phi(z: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """e^-z and the two averages of it, phi_1 and phi_2 of -z, for z >= 0; 1, 1 and 1/2 at 0."""
    small = z < SERIES
    safe = np.where(small, 1.0, z)
    series = 0.5 - z / 6.0 * (1.0 - z / 4.0 * (1.0 - z / 5.0 * (1.0 - z / 6.0 * (1.0 - z / 7.0))))
    first = -np.expm1(-safe) / safe
    return (
        np.exp(-z),
        np.where(small, 1.0 - z * series, first),
        np.where(small, series, (1.0 - first) / safe),
    )

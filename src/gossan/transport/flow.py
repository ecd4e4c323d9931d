"""Darcy flux and head along the column, from a held inlet flux or a held loss of head."""

from __future__ import annotations

import numpy as np


def flow_of_flux(
    inlet_flux: float, conductivity: np.ndarray, width: np.ndarray, made_up: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """Flux and head where the water entering is held (equations.md, 28 and 29).

    inlet_flux    m s-1, >= 0
    conductivity  (cell,) m s-1, > 0, or NaN where it is not known: the heads upstream are then NaN
    width         (cell,) m
    made_up       (face,) m s-1, water added on the way to each face, 0 at the inlet: solids push it out
    Returns       darcy_flux (face,) m s-1; head (face,) m, 0 at the outlet
    """
    darcy_flux = inlet_flux + made_up
    loss = width * _mean_in_cell(darcy_flux) / conductivity
    head = np.zeros_like(darcy_flux)
    head[:-1] = np.cumsum(loss[::-1])[::-1]
    return darcy_flux, head


def flow_of_head(
    head_drop: float, conductivity: np.ndarray, width: np.ndarray, made_up: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """Flux and head where the loss of head over the whole column is held (equations.md, 29 and 30).

    head_drop m, >= 0; conductivity (cell,) m s-1, > 0; width, made_up and the returned as in `flow_of_flux`.
    Cells are resistances in series; the entering flux gets what the water made on the way leaves of the drop.

    >>> flux, head = flow_of_head(1.0, np.array([1e-4, 1e-6, 5e-5]), np.array([0.2, 0.5, 0.3]), np.zeros(4))
    >>> float(flux[0].round(12)), head.round(6).tolist()
    (1.968504e-06, [1.0, 0.996063, 0.011811, 0.0])
    """
    resistance = width / conductivity
    inlet_flux = (head_drop - np.sum(resistance * _mean_in_cell(made_up))) / np.sum(resistance)
    return flow_of_flux(inlet_flux, conductivity, width, made_up)


def _mean_in_cell(at_faces: np.ndarray) -> np.ndarray:
    return 0.5 * (at_faces[:-1] + at_faces[1:])

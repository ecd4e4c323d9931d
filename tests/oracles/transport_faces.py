"""What passes through the faces of a column, one face and one cell at a time, straight from the equations."""

from __future__ import annotations

import numpy as np


def allowed(left, right, value, limiter):
    """The share of the mean slope that a limiter allows between two one-sided ones (rises to the face)."""
    if abs(left) + abs(right) <= 1e-10 * abs(value):
        return 1.0  # rounding
    if left * right <= 0.0 or limiter == "none":
        return 0.0
    harmonic = 2 * left * right / (left + right)
    lesser = np.sign(left) * min(abs(left), abs(right))
    return (harmonic if limiter == "van-leer" else lesser) / (0.5 * (left + right))


def passed(dissolved, inflow, groups, darcy_flux, conductance, bias, lean_left, lean_right, uneven,
           limiter, dt):
    """Amounts through every face, (solute, face) mol m-2; groups is a list of lists of solutes."""
    solutes, cells = dissolved.shape
    out = np.zeros((solutes, cells + 1))
    for group in groups:
        for face in range(cells + 1):
            q = darcy_flux[face]
            for k in group:
                c = dissolved[k]
                if face == 0:
                    carried = q * (inflow[k] if q > 0 else c[0])
                    out[k, 0] = dt * (carried + conductance[0] * (inflow[k] - c[0]))
                elif face == cells:
                    out[k, cells] = dt * q * c[-1]
                else:
                    i = face - 1
                    value = c[face] if q < 0 else c[i] + rise(dissolved, inflow, group, k, i, bias, lean_left,
                                                               lean_right, uneven, limiter)
                    out[k, face] = dt * (q * value + conductance[face] * (c[i] - c[face]))
    return out


def rise(dissolved, inflow, group, k, i, bias, lean_left, lean_right, uneven, limiter):
    """From the centre of cell i to its downstream face, solute k, under the strictest limit of its group."""

    def differences(solute):
        before = dissolved[solute, i - 1] if i > 0 else inflow[solute]
        return dissolved[solute, i] - before, dissolved[solute, i + 1] - dissolved[solute, i]

    special = i in uneven
    share = 1.0
    for other in group:
        drop, climb = differences(other)
        left, right = (lean_left[i] * drop, lean_right[i] * climb) if special else (drop / 2, climb / 2)
        value = dissolved[other, i]
        limit = allowed(left, right, value, limiter)
        if limit < 1.0 or abs(left) + abs(right) > 1e-10 * abs(value):
            if special:  # stay between the neighbours
                middle = abs(left + right) / 2
                if limit * middle > min(abs(drop), abs(climb)) > 0:
                    limit = (1 - 1e-10) * min(abs(drop), abs(climb)) / middle
            elif limit > 0:  # the same for the biased mean, were the steeper side the downstream one
                less, more = sorted((abs(left), abs(right)))
                steepest = ((1 - bias[i]) * less + (1 + bias[i]) * more) / 2
                limit = min(limit, 2 * less / steepest)
        share = min(share, limit)
    drop, climb = differences(k)
    if special:
        return share * (lean_left[i] * drop + lean_right[i] * climb) / 2
    return share * ((1 - bias[i]) * drop + (1 + bias[i]) * climb) / 4


def dispersed(surplus, dissolved, swelling, storage, conductance, dt):
    """What a surplus changes and disperses, by a dense matrix: (solute, cell) and (solute, face)."""
    cells = storage.size
    matrix = np.diag(storage.astype(float))
    for face in range(cells + 1):
        through = np.zeros(cells)
        if face > 0:
            through[face - 1] += dt * conductance[face]
        if face < cells:
            through[face] -= dt * conductance[face]
        if face > 0:
            matrix[face - 1] += through
        if face < cells:
            matrix[face] -= through
    right = surplus[:, :-1] - surplus[:, 1:] - swelling * dissolved
    change = np.linalg.solve(matrix, right.T).T
    edged = np.hstack([np.zeros((len(change), 1)), change, np.zeros((len(change), 1))])
    return change, dt * conductance * (edged[:, :-1] - edged[:, 1:])

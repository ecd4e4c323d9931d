"""What passes through the faces of a column, one face and one cell at a time, straight from the equations."""

from __future__ import annotations

import numpy as np

SHORT = 1e-10  # a cut rise ends so much short of its bound, that rounding may not pass it


def allowed(left, right, limiter):
    """The share of the mean slope that a limiter allows between two one-sided ones (rises to the faces)."""
    if limiter == "none":
        return 1.0
    if left * right <= 0.0 or limiter == "upwind":
        return 0.0
    harmonic = 2 * left * right / (left + right)
    lesser = np.sign(left) * min(abs(left), abs(right))
    return (harmonic if limiter == "van-leer" else lesser) / (0.5 * (left + right))


def flat(left, right, value):
    """Whether what changes is rounding."""
    return abs(left) + abs(right) <= 1e-10 * abs(value)


def passed(dissolved, inflow, groups, darcy_flux, conductance, slopes, uneven, limiter, outlet, dt):
    """Amounts through every face, (solute, face) mol m-2.

    groups a list of lists of solutes; slopes a dict of lean_left, lean_right, rise_left, rise_right, kept
    uneven set of cells whose neighbours differ; outlet a dict of rise, half, reach, spread, held, beyond and
    gradient
    """
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
                    value = outlet_value(dissolved, inflow, group, k, q, slopes, limiter, outlet)
                    out[k, cells] = dt * (q * value + conductance[cells] * (c[-1] - outlet["beyond"][k])
                                          - outlet["spread"] * outlet["gradient"][k])
                else:
                    i = face - 1
                    value = c[face] if q < 0 else c[i] + rise(dissolved, inflow, group, k, i, slopes, uneven,
                                                              limiter)
                    out[k, face] = dt * (q * value + conductance[face] * (c[i] - c[face]))
    return out


def differences(dissolved, inflow, k, i):
    """To the neighbour upstream, or what flows in, and from it to the one downstream."""
    before = dissolved[k, i - 1] if i > 0 else inflow[k]
    return dissolved[k, i] - before, dissolved[k, i + 1] - dissolved[k, i]


def rise(dissolved, inflow, group, k, i, slopes, uneven, limiter):
    """From the centre of cell i to its downstream face, solute k, under the strictest limit of its group."""
    special = i in uneven
    weights = slopes["rise_left"][i], slopes["rise_right"][i]
    limits, cuts = [1.0], []
    for other in group:
        drop, climb = differences(dissolved, inflow, other, i)
        leans = (slopes["lean_left"][i], slopes["lean_right"][i]) if special else (0.5, 0.5)
        left, right = leans[0] * drop, leans[1] * climb
        if special and flat(left, right, dissolved[other, i]):
            continue
        if not special and flat(drop, climb, dissolved[other, i]):
            continue
        limits.append(allowed(left, right, limiter))
        less, more = sorted((abs(drop), abs(climb)))
        # no further than to the nearer neighbour, for the steepest profile that is as uneven
        whole = (weights[0] * abs(drop) + weights[1] * abs(climb) if special
                 else weights[0] * less + weights[1] * more)
        cuts.append(less / whole if whole > 0 else np.inf)
    share = min(limits)
    if limiter != "none":
        # unlike neighbours: the solute with the least room; alike: the least even one has it
        share = min([share, *((1.0 - SHORT * special) * cut for cut in cuts if cut < share)])
    drop, climb = differences(dissolved, inflow, k, i)
    return share * slopes["kept"][i] * (weights[0] * drop + weights[1] * climb)


def outlet_value(dissolved, inflow, group, k, q, slopes, limiter, outlet):
    """What stands at the outlet's face: the last cell's value and the rise that the cell before allows."""
    cells = dissolved.shape[1]
    if q < 0 and outlet["held"]:
        return outlet["beyond"][k]
    value = dissolved[k, -1] + outlet["gradient"][k] * outlet["half"]
    if cells == 1 or q <= 0 or outlet["rise"] == 0:
        return value
    share = 0.0 if limiter == "upwind" else 1.0
    for other in group:
        drop, climb = differences(dissolved, inflow, other, cells - 2)
        left, right = slopes["lean_left"][cells - 2] * drop, slopes["lean_right"][cells - 2] * climb
        if not flat(left, right, dissolved[other, cells - 2]):
            share = min(share, allowed(left, right, limiter))
        full = outlet["rise"] * climb
        # towards nil, and beyond it
        if limiter != "none" and full * dissolved[other, -1] <= 0 and abs(full) > 0:
            least = abs(dissolved[other, -1]) / abs(full)
            share = (1.0 - SHORT) * least if least < share else share
    last = dissolved[k, -1] - dissolved[k, -2] - outlet["gradient"][k] * outlet["reach"]
    return value + share * outlet["rise"] * slopes["kept"][cells - 1] * last


def dispersed(surplus, dissolved, swelling, storage, conductance, implicit_flux, dt):
    """What a surplus changes and passes on, by a dense matrix: (solute, cell) and (solute, face)."""
    cells = storage.size
    through = np.zeros((cells + 1, cells))  # what passes a face for a unit of change in a cell
    for face in range(cells + 1):
        if face > 0:
            through[face, face - 1] = dt * (conductance[face] + implicit_flux[face])
        if face < cells:
            through[face, face] = -dt * conductance[face]
    matrix = np.diag(storage.astype(float)) + through[1:] - through[:-1]
    right = surplus[:, :-1] - surplus[:, 1:] - swelling * dissolved
    change = np.linalg.solve(matrix, right.T).T
    return change, change @ through.T

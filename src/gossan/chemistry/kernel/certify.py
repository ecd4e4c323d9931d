"""An answer put back into its equations with twice the digits (equations.md, 79 and 80).

All that is asked of a cell is its ln activities, ionic strength, marks and amounts: how they were found
plays no part, and nothing of the solve is used again.
"""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np

from gossan.base.jit import kernel
from gossan.chemistry.kernel.activity import activity_coefficients
from gossan.chemistry.kernel.dense import invert
from gossan.chemistry.kernel.doubled import add, exponential, over, times, two_product
from gossan.chemistry.kernel.pairs import (
    GONE,
    LAW,
    eliminate_tied,
    follow,
    reduced_balances,
    sort_by_abundance,
)

CAUTION = 1.1  # on a correction: its matrix is known in double precision alone


class Desk(NamedTuple):
    """Working space for one cell; each pair (name, name_low) holds a doubled number."""

    ln_gamma: np.ndarray  # (species,)
    slope: np.ndarray  # (species,) d ln gamma / d ionic strength
    molality: np.ndarray  # (species,)
    molality_low: np.ndarray
    x: np.ndarray  # (basis,) ln activity
    x_low: np.ndarray
    abundance: np.ndarray  # (basis,)
    order: np.ndarray  # (basis,) int64, the scarcest first
    pivot: np.ndarray  # (row,) int64: what a row has eliminated; -1 none yet, -2 not tied
    free: np.ndarray  # (basis,) int64
    rows: np.ndarray  # (row, basis)
    rows_low: np.ndarray
    right: np.ndarray  # (row,)
    right_low: np.ndarray
    total: np.ndarray  # (basis,)
    total_low: np.ndarray
    reduced: np.ndarray  # (basis, species)
    short: np.ndarray  # (basis + 1,) what the balances of the free lack, then the ionic strength
    doubt: np.ndarray  # (basis + 1,) how well that is known
    scale: np.ndarray  # (basis + 1,)
    matrix: np.ndarray  # (basis + 1, 2 basis + 2)
    step: np.ndarray  # (basis + 1,) Newton's
    blur: np.ndarray  # (basis + 1,) how well that is known


def desk(basis: int, species: int, rows: int) -> Desk:
    """Set out working space."""

    def real(*shape):
        return np.zeros(shape)

    def whole(*shape):
        return np.zeros(shape, np.int64)

    return Desk(
        ln_gamma=real(species), slope=real(species), molality=real(species), molality_low=real(species),
        x=real(basis), x_low=real(basis), abundance=real(basis), order=whole(basis), free=whole(basis),
        pivot=whole(max(rows, 1)), rows=real(max(rows, 1), basis), rows_low=real(max(rows, 1), basis),
        right=real(max(rows, 1)), right_low=real(max(rows, 1)), total=real(basis), total_low=real(basis),
        reduced=real(basis, species), short=real(basis + 1), doubt=real(basis + 1), scale=real(basis + 1),
        matrix=real(basis + 1, 2 * basis + 2), step=real(basis + 1), blur=real(basis + 1),
    )  # fmt: skip


@kernel(inner=True)
def speciate(matrices, desk):
    """Fill the molalities that the desk's ln activities stand for; returns (ionic strength, its low part)."""
    strength, strength_low = 0.0, 0.0
    for s in range(desk.molality.shape[0]):
        exponent, exponent_low = matrices.ln_k[s], 0.0
        for b in range(desk.x.shape[0]):
            times_it = matrices.stoichiometry[b, s]
            if times_it != 0.0:
                term, term_low = times(desk.x[b], desk.x_low[b], times_it, 0.0)
                exponent, exponent_low = add(exponent, exponent_low, term, term_low)
        exponent, exponent_low = add(exponent, exponent_low, -desk.ln_gamma[s], 0.0)
        high, low = exponential(exponent, exponent_low)
        desk.molality[s], desk.molality_low[s] = high, low
        squared = 0.5 * matrices.charge_squared[s]
        if squared != 0.0:
            strength, strength_low = add(strength, strength_low, squared * high, squared * low)
    return strength, strength_low


@kernel(inner=True)
def newton_matrix(matrices, desk, free):
    """Fill the matrix of the free balances and the ionic strength, scaled, and the unit matrix beside it."""
    n = free + 1
    for j in range(n):
        for i in range(2 * n):
            desk.matrix[j, i] = 1.0 if i == n + j else 0.0
    own = 1.0
    for s in range(desk.molality.shape[0]):
        molality, slope = desk.molality[s], desk.slope[s]
        charged = 0.5 * matrices.charge_squared[s] * molality
        own += charged * slope
        if molality == 0.0:
            continue
        for j in range(free):
            share = desk.reduced[j, s] * molality
            if share != 0.0:
                for i in range(free):
                    desk.matrix[j, i] += share * desk.reduced[i, s]
                desk.matrix[j, free] -= share * slope
                desk.matrix[free, j] -= desk.reduced[j, s] * charged
    desk.matrix[free, free] = own
    for j in range(free):
        diagonal = desk.matrix[j, j]
        desk.scale[j] = 1.0 / math.sqrt(diagonal) if diagonal > 0.0 else 1.0
        if not diagonal > 0.0:
            desk.matrix[j, j] = 1.0  # nothing in the water is made of it: any value will do
    desk.scale[free] = 1.0
    for j in range(n):
        for i in range(n):
            desk.matrix[j, i] *= desk.scale[j] * desk.scale[i]


@kernel(inner=True)
def corrections(desk, free, error):
    """Fill error (basis,): Newton's correction of every ln activity, and how well it is known.

    desk.x holds exact values for the eliminated ones; on entry error holds by how much they were off.
    Returns whether there is one.
    """
    n = free + 1
    if not invert(desk.matrix, n):
        return False
    for j in range(n):
        step, doubt = 0.0, 0.0
        for i in range(n):
            value = desk.scale[j] * desk.matrix[j, n + i] * desk.scale[i]
            step += value * desk.short[i]
            doubt += abs(value) * desk.doubt[i]
        desk.step[j] = step
        desk.blur[j] = doubt
    for j in range(free):
        error[desk.free[j]] = CAUTION * abs(desk.step[j])
    for r in range(desk.pivot.shape[0]):
        if desk.pivot[r] >= 0:
            value = error[desk.pivot[r]]
            for j in range(free):
                value -= desk.rows[r, desk.free[j]] * desk.step[j]
            error[desk.pivot[r]] = CAUTION * abs(value)
    return True


@kernel(inner=True)
def add_doubt(desk, free, error):
    """Add how well the corrections are known."""
    for j in range(free):
        error[desk.free[j]] += desk.blur[j]
    for r in range(desk.pivot.shape[0]):
        if desk.pivot[r] >= 0:
            for j in range(free):
                error[desk.pivot[r]] += abs(desk.rows[r, desk.free[j]]) * desk.blur[j]


@kernel(inner=True)
def put_back(matrices, desk, total, held, weight, balance):
    """Fill balance (component,): what each mass balance is off by, relative to its largest term.

    total (component,), held (row,) per unit; weight kg of water per unit
    """
    for k in range(total.shape[0]):
        left, left_low = total[k], 0.0
        largest = abs(total[k])
        for r in range(held.shape[0]):
            if held[r] != 0.0 and matrices.supplied[r, k] != 0.0:
                term, term_low = two_product(matrices.supplied[r, k], held[r])
                left, left_low = add(left, left_low, -term, -term_low)
                largest = max(largest, abs(term))
        left, left_low = over(left, left_low, weight, 0.0)
        largest /= weight
        for s in range(desk.molality.shape[0]):
            count = matrices.conserved[k, s]
            if count != 0.0:
                high, low = times(desk.molality[s], desk.molality_low[s], count, 0.0)
                left, left_low = add(left, left_low, -high, -low)
                largest = max(largest, abs(high))
        balance[k] = abs(left) / largest if largest > 0.0 else 0.0


@kernel(inner=True)
def saturations(matrices, desk, saturation):
    """Fill saturation (row,): ln of ion activity product over K, NaN where something is not there."""
    rows, rows_ln_k = matrices.solid, matrices.solid_ln_k
    for r in range(rows.shape[0]):
        value, value_low = -rows_ln_k[r], 0.0
        there = True
        for b in range(rows.shape[1]):
            if rows[r, b] != 0.0:
                there = there and desk.x[b] > GONE
                term, term_low = times(desk.x[b], desk.x_low[b], rows[r, b], 0.0)
                value, value_low = add(value, value_low, term, term_low)
        saturation[r] = value if there else math.nan


@kernel(inner=True)
def lay_out(matrices, desk, tied, total, held, weight):
    """Copy the tied rows and the totals that are to be shared out, exactly.

    What a tied row holds is part of what is shared out; what others hold is not.
    """
    rows = matrices.solid
    for r in range(rows.shape[0]):
        desk.pivot[r] = -1 if tied[r] else -2
        desk.right[r], desk.right_low[r] = matrices.solid_ln_k[r], 0.0
        for b in range(rows.shape[1]):
            desk.rows[r, b], desk.rows_low[r, b] = rows[r, b], 0.0
        if matrices.given:
            water = rows.shape[1] - 1  # its activity is given, and no unknown
            term, term_low = two_product(-rows[r, water], desk.x[water])
            desk.right[r], desk.right_low[r] = add(desk.right[r], desk.right_low[r], term, term_low)
            desk.rows[r, water] = 0.0
    for b in range(desk.total.shape[0]):
        value, value_low = 0.0, 0.0
        if b < total.shape[0]:
            value = total[b]
            for r in range(held.shape[0]):
                if not tied[r] and held[r] != 0.0:
                    term, term_low = two_product(matrices.supplied[r, b], held[r])
                    value, value_low = add(value, value_low, -term, -term_low)
            value, value_low = over(value, value_low, weight, 0.0)
        desk.total[b], desk.total_low[b] = value, value_low


@kernel
def certify_cells(
    matrices, desk, tied, weight, total, held, ln_activity, ionic_strength, ln_gamma, balance, strength,
    saturation, error,
):
    """Judge every cell of an answer (equations.md, 79 and 80).

    tied (row, cell) int8: 1 where the row is saturated; rows are minerals, couples, open gases
    weight (cell,) kg of water per unit; total (component, cell) what is there, per unit; held (row, cell)
        what the answer says that each row holds of it, in formulas per unit
    ln_activity (basis, cell), ionic_strength (cell,)
    ln_gamma (species, cell) where the ionic strength alone does not give it, else (0, cell)
    Overwritten: balance (component, cell), strength (cell,), saturation (row, cell), error (basis, cell)
    """
    for r in range(desk.pivot.shape[0]):
        desk.pivot[r] = -2
    for i in range(ionic_strength.shape[0]):
        activity_coefficients(
            matrices.model, matrices.debye_hueckel, matrices.charge_squared, matrices.neutral, matrices.size,
            ionic_strength[i], desk.ln_gamma, desk.slope,
        )  # fmt: skip
        for s in range(ln_gamma.shape[0]):
            desk.ln_gamma[s] = ln_gamma[s, i]
        for b in range(desk.x.shape[0]):
            desk.x[b], desk.x_low[b] = ln_activity[b, i], 0.0
        made, _ = speciate(matrices, desk)
        strength[i] = abs(made - ionic_strength[i]) / made if made > 0.0 else 0.0
        put_back(matrices, desk, total[:, i], held[:, i], weight[i], balance[:, i])
        saturations(matrices, desk, saturation[:, i])
        count = sort_by_abundance(matrices, desk)
        lay_out(matrices, desk, tied[:, i], total[:, i], held[:, i], weight[i])
        free = eliminate_tied(desk, count)
        follow(desk, free)
        for b in range(desk.x.shape[0]):
            there = ln_activity[b, i] > GONE
            error[b, i] = (desk.x[b] - ln_activity[b, i]) + desk.x_low[b] if there else 0.0
        made, made_low = speciate(matrices, desk)
        reduced_balances(matrices, desk, free)
        desk.short[free], _ = add(made, made_low, -ionic_strength[i], 0.0)
        desk.doubt[free] = LAW * made
        newton_matrix(matrices, desk, free)
        if corrections(desk, free, error[:, i]):
            add_doubt(desk, free, error[:, i])
        else:
            for b in range(desk.x.shape[0]):
                error[b, i] = math.inf

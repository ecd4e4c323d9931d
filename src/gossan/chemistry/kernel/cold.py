"""From nothing but amounts to a water near its balances."""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.activity import activity_coefficients
from gossan.chemistry.kernel.nullspace import NOWHERE
from gossan.chemistry.kernel.vectors import add_row, both_sums, dot, exponentials

ABSENT = 1e-40  # mol/kg: less than one molecule in a lake; below, a component is left out of the solve
PASSES = 12  # of the continued fraction in a cold start


@kernel(inner=True)
def survey(matrices, bench, ionic_strength):
    """Fill bench.molality, sums and abundance from all ln activities; returns the ionic strength made."""
    activity_coefficients(
        matrices.model, matrices.debye_hueckel, matrices.charge_squared, matrices.neutral, matrices.size,
        ionic_strength, bench.ln_gamma, bench.slope,
    )  # fmt: skip
    exponent, ln_k, ln_gamma = bench.exponent, matrices.ln_k, bench.ln_gamma
    for s in range(exponent.shape[0]):
        exponent[s] = ln_k[s] - ln_gamma[s]
    for k in range(bench.sums.shape[0]):
        add_row(exponent, bench.ln_activity[k], matrices.stoichiometry, k)
    exponentials(exponent, bench.bits, bench.molality)
    add_up(matrices, bench)
    return 0.5 * dot(matrices.charge_squared, bench.molality)


@kernel(inner=True)
def add_up(matrices, bench):
    """Fill bench.sums, abundance, positive and negative (by component) from bench.molality."""
    for k in range(bench.sums.shape[0]):
        made, unmade = both_sums(matrices.stoichiometry, k, bench.molality)
        bench.sums[k] = made - unmade
        bench.abundance[k] = made + unmade
        bench.positive[k] = made
        bench.negative[k] = unmade


@kernel(inner=True)
def approach(matrices, bench, dissolved):
    """Bring a cold water near its balances (equations.md, 19); returns the ionic strength.

    Damped continued fractions: every component is multiplied by the ratio of the two sides of its balance,
    all at once, the logarithm divided by how crowded its species are.
    Source: after Carrayrou, Mose & Behra (2002), AIChE J. 48, 894-904, who damp the ratio otherwise.
    """
    components = bench.ln_activity.shape[0]
    for k in range(components):
        if k == matrices.signed:
            bench.ln_activity[k] = math.log(1e-7)
        elif bench.total[k] > ABSENT:
            bench.ln_activity[k] = math.log(dissolved[k] if dissolved[k] > 1e-12 else 1e-12)
        else:
            bench.ln_activity[k] = NOWHERE
    made = 0.0
    for _ in range(PASSES):
        made = survey(matrices, bench, 0.0)
        # a component of crowded species moves less: all components of a species move at once
        share = bench.share
        for s in range(share.shape[0]):
            share[s] = 0.0
        for k in range(components):
            for s in range(share.shape[0]):
                share[s] += abs(matrices.stoichiometry[k, s]) * bench.molality[s]
        for k in range(components):
            crowd = 0.0
            for s in range(share.shape[0]):
                crowd += abs(matrices.stoichiometry[k, s]) * share[s]
            bench.weight[k] = crowd
        for k in range(components):
            if bench.ln_activity[k] == NOWHERE:
                continue
            total = dissolved[k] if dissolved[k] > 1e-12 or k == matrices.signed else 1e-12
            positive = bench.positive[k] - (total if total < 0.0 else 0.0)
            negative = bench.negative[k] + (total if total > 0.0 else 0.0)
            ratio = math.log((negative + 1e-300) / (positive + 1e-300))
            crowd = bench.weight[k] / bench.abundance[k] if bench.abundance[k] > 0.0 else 1.0
            bench.ln_activity[k] += ratio / crowd
    return made if made < 1.0 else 1.0

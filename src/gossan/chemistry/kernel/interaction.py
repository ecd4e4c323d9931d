"""What ions do to each other's activity, and to the water's, on plain arrays."""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.activity import SIT, SIT_HELD_FROM, SIT_SIZE, activity_coefficients

MOLAR_MASS = 0.0180153  # kg/mol of water; IUPAC's atomic weights, good to the last digit
TRACE = 1e-18  # mol/kg: what there is less of pulls at nothing
DRIEST = -1.0  # ln of an activity of water; far from the answer the sums may claim less


@kernel
def held_share(ionic_strength):
    """What the molalities of a water count in its sums: all of them, or as many as make SIT_HELD_FROM."""
    return SIT_HELD_FROM / ionic_strength if ionic_strength > SIT_HELD_FROM else 1.0


@kernel
def interaction_sums(interaction, molality, share, out):
    """Fill the sum over species of interaction coefficient and molality (equations.md, 47).

    interaction (species, species) symmetric, kg/mol on the natural scale; molality (species,) mol/kg
    share of the molalities that counts; out (species,) is overwritten: what ln gamma gains
    """
    for s in range(out.shape[0]):
        out[s] = 0.0
    for k in range(molality.shape[0]):
        if molality[k] > TRACE:
            counted = share * molality[k]
            for s in range(out.shape[0]):
                out[s] += counted * interaction[k, s]


@kernel
def ln_water_activity(debye_hueckel, molality, sums, ionic_strength):
    """The ln of the activity of water that goes with the coefficients (equations.md, 48).

    debye_hueckel A on the natural scale, (kg/mol)^0.5; molality (species,) mol/kg; sums (species,) those of
    interaction_sums; ionic_strength mol/kg, held like they are
    """
    share = held_share(ionic_strength)
    all_of_it, pairs = 0.0, 0.0
    for s in range(molality.shape[0]):
        all_of_it += molality[s]
        pairs += molality[s] * sums[s]
    crowd = 1.0 + SIT_SIZE * math.sqrt(share * ionic_strength)
    cloud = 2.0 * debye_hueckel / SIT_SIZE**3 * (crowd - 2.0 * math.log(crowd) - 1.0 / crowd)
    value = -MOLAR_MASS * (share * (all_of_it + 0.5 * pairs) - cloud)
    return value if value > DRIEST else DRIEST


@kernel(inner=True)
def bare_coefficients(matrices, bench, ionic_strength):
    """Fill bench.ln_gamma and slope by what depends on the ionic strength alone."""
    activity_coefficients(
        matrices.model, matrices.debye_hueckel, matrices.charge_squared, matrices.neutral, matrices.size,
        ionic_strength, bench.ln_gamma, bench.slope,
    )  # fmt: skip


@kernel(inner=True)
def coefficients(matrices, bench, ionic_strength):
    """Fill bench.ln_gamma and slope; under SIT also bench.pull and the activity of water, from bench.seen."""
    bare_coefficients(matrices, bench, ionic_strength)
    if matrices.model == SIT:
        ln_gamma, pull = bench.ln_gamma, bench.pull
        interaction_sums(matrices.interaction, bench.seen, held_share(ionic_strength), pull)
        for s in range(ln_gamma.shape[0]):
            ln_gamma[s] += pull[s]
        bench.ln_activity[bench.ln_activity.shape[0] - 1] = ln_water_activity(
            matrices.debye_hueckel, bench.seen, pull, ionic_strength
        )

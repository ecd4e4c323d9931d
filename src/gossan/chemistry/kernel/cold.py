"""From nothing but amounts to a water near its balances."""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.interaction import bare_coefficients, coefficients
from gossan.chemistry.kernel.nullspace import NOWHERE
from gossan.chemistry.kernel.vectors import add_row, both_sums, dot, exponentials

ABSENT = 1e-40  # mol/kg: less than one molecule in a lake; below, a component is left out of the solve
LITTLE = 1e-12  # mol/kg: what a component starts from of which there is less
PASSES = 12  # of the continued fraction in a cold start
FEW_PASSES = 4  # of it after the activity of e^- has moved
HALVINGS = 9  # of the range of ln activity of e^-, which is left known to a fifth
MOST_OXIDISED, MOST_REDUCED = -22.0 * math.log(10.0), 15.0 * math.log(10.0)  # ln activity of e^- in any water


@kernel(inner=True)
def survey(matrices, bench, ionic_strength):
    """Fill bench.molality, sums and abundance from all ln activities; returns the ionic strength made."""
    coefficients(matrices, bench, ionic_strength)
    return survey_of(matrices, matrices.stoichiometry, matrices.ln_k, bench)


@kernel(inner=True)
def survey_of(matrices, stoichiometry, ln_k, bench):
    """As survey, by bench.ln_gamma, for species formed by these (component or basis, species) and ln_k."""
    exponent, ln_gamma = bench.exponent, bench.ln_gamma
    for s in range(exponent.shape[0]):
        exponent[s] = ln_k[s] - ln_gamma[s]
    for k in range(stoichiometry.shape[0]):
        add_row(exponent, bench.ln_activity[k], stoichiometry, k)
    exponentials(exponent, bench.bits, bench.molality)
    add_up(stoichiometry, bench)
    return 0.5 * dot(matrices.charge_squared, bench.molality)


@kernel(inner=True)
def add_up(stoichiometry, bench):
    """Fill bench.sums, abundance, positive and negative (component or basis) from bench.molality."""
    for k in range(stoichiometry.shape[0]):
        made, unmade = both_sums(stoichiometry, k, bench.molality)
        bench.sums[k] = made - unmade
        bench.abundance[k] = made + unmade
        bench.positive[k] = made
        bench.negative[k] = unmade


@kernel(inner=True)
def valences_follow(matrices, bench):
    """Set the ln activities of the coupled valences from those of the conserved components."""
    components, last = matrices.conserved.shape[0], matrices.stoichiometry.shape[0] - 1
    for v in range(matrices.first.shape[0]):
        row, valence = matrices.minerals + v, components + v
        first = matrices.first[v]
        if first >= 0 and bench.ln_activity[first] == NOWHERE:
            bench.ln_activity[valence] = NOWHERE
            continue
        value = matrices.solid_ln_k[row]
        for k in range(components):
            if matrices.solid[row, k] != 0.0:
                value -= matrices.solid[row, k] * bench.ln_activity[k]
        if matrices.given:
            value -= matrices.solid[row, last] * bench.ln_activity[last]
        bench.ln_activity[valence] = value


@kernel(inner=True)
def level(matrices, bench, component, total):
    """Set the ln activity of a component so that none of its valences is more than the total, mol/kg."""
    most = math.log(total if total > LITTLE else LITTLE)
    value = most
    for v in range(matrices.first.shape[0]):
        if matrices.first[v] != component:
            continue
        row = matrices.minerals + v
        rest = matrices.solid_ln_k[row]
        times = -matrices.solid[row, component]
        for k in range(matrices.conserved.shape[0]):
            if k != component and matrices.solid[row, k] != 0.0:
                rest -= matrices.solid[row, k] * bench.ln_activity[k]
        least = (most - rest) / times
        if least < value:
            value = least
    bench.ln_activity[component] = value


@kernel(inner=True)
def approach(matrices, bench, dissolved):
    """Bring a cold water near its balances (equations.md, 19); returns the ionic strength.

    Damped continued fractions: every component is multiplied by the ratio of the two sides of its balance,
    all at once, the logarithm divided by how crowded its species are.  Where electrons are counted their
    activity is halved in, between the most oxidised and the most reduced of waters.
    Source: after Carrayrou, Mose & Behra (2002), AIChE J. 48, 894-904, who damp the ratio otherwise.
    """
    components = matrices.conserved.shape[0]
    electron = matrices.electron
    bench.ln_activity[matrices.signed] = math.log(1e-7)
    counted = electron >= 0  # and not held by a gas
    if counted:
        bench.ln_activity[electron] = 0.5 * (MOST_OXIDISED + MOST_REDUCED)
    for gas in range(matrices.carrier.shape[0]):
        counted = counted and matrices.carrier[gas] != electron
    for k in range(components):
        if k == matrices.signed or k == electron:
            continue
        if bench.total[k] > ABSENT:
            level(matrices, bench, k, dissolved[k])
        else:
            bench.ln_activity[k] = NOWHERE
    carriers_follow(matrices, bench)
    made = continued_fraction(matrices, bench, dissolved, PASSES)
    if counted:
        # the electrons that the species hold rise with the activity of e^-: halve it in
        low, high = MOST_OXIDISED, MOST_REDUCED
        for _ in range(HALVINGS):
            if bench.sums[electron] > dissolved[electron]:
                high = bench.ln_activity[electron]
            else:
                low = bench.ln_activity[electron]
            bench.ln_activity[electron] = 0.5 * (low + high)
            for k in range(components):
                if k != matrices.signed and k != electron and bench.ln_activity[k] != NOWHERE:
                    level(matrices, bench, k, dissolved[k])
            made = continued_fraction(matrices, bench, dissolved, FEW_PASSES)
    valences_follow(matrices, bench)
    return made if made < 1.0 else 1.0


@kernel(inner=True)
def continued_fraction(matrices, bench, dissolved, passes):
    """Bring the balances of all but e^- and what gases hold nearer; returns the ionic strength."""
    components = matrices.conserved.shape[0]
    stoichiometry, ln_k = matrices.conserved, matrices.conserved_ln_k
    made = 0.0
    for _ in range(passes):
        bare_coefficients(matrices, bench, 0.0)
        made = survey_of(matrices, stoichiometry, ln_k, bench)
        # a component of crowded species moves less: all components of a species move at once
        share = bench.share
        for s in range(share.shape[0]):
            share[s] = 0.0
        for k in range(components):
            for s in range(share.shape[0]):
                share[s] += abs(stoichiometry[k, s]) * bench.molality[s]
        for k in range(components):
            crowd = 0.0
            for s in range(share.shape[0]):
                crowd += abs(stoichiometry[k, s]) * share[s]
            bench.weight[k] = crowd
        for k in range(components):
            if bench.ln_activity[k] == NOWHERE or k == matrices.electron:
                continue
            total = dissolved[k] if dissolved[k] > LITTLE or k == matrices.signed else LITTLE
            positive = bench.positive[k] - (total if total < 0.0 else 0.0)
            negative = bench.negative[k] + (total if total > 0.0 else 0.0)
            ratio = math.log((negative + 1e-300) / (positive + 1e-300))
            crowd = bench.weight[k] / bench.abundance[k] if bench.abundance[k] > 0.0 else 1.0
            bench.ln_activity[k] += ratio / crowd
        carriers_follow(matrices, bench)
    return made


@kernel(inner=True)
def carriers_follow(matrices, bench):
    """Set the ln activity of each open gas's carrier from its pressure."""
    for gas in range(matrices.carrier.shape[0]):
        row = matrices.minerals + matrices.first.shape[0] + gas
        carrier = matrices.carrier[gas]
        rest = matrices.supplied_ln_k[row]
        for k in range(matrices.conserved.shape[0]):
            if k != carrier and matrices.supplied[row, k] != 0.0:
                rest -= matrices.supplied[row, k] * bench.ln_activity[k]
        bench.ln_activity[carrier] = rest / matrices.supplied[row, carrier]

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
FEW_PASSES, MORE_PASSES = 4, 12  # of it after the activity of e^- has moved: at least, and at most
OFF = 1.0  # ln of the ratio of the two sides of a balance that asks for more passes
HALVINGS = 9  # of the range of ln activity of e^-, which is left known to a fifth
MOST_ALKALINE, MOST_ACID = -16.0 * math.log(10.0), math.log(10.0)  # ln activity of H^+ in any water
LEAST_CARRIED, MOST_CARRIED = -100.0 * math.log(10.0), math.log(100.0)  # the same of sulfate beside H2S
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
    activity is halved in, between the most oxidised and the most reduced of waters; beside an open gas
    that holds electrons and something else, H2S, it follows from that, and the sulfate is halved in.
    Source: after Carrayrou, Mose & Behra (2002), AIChE J. 48, 894-904, who damp the ratio otherwise.
    """
    components = matrices.conserved.shape[0]
    electron, signed = matrices.electron, matrices.signed
    sought, low, high = electron, MOST_OXIDISED, MOST_REDUCED
    for gas in range(matrices.carrier.shape[0]):
        if matrices.carrier[gas] == electron:
            # its pressure ties e^- to what else it is made of: halve that in instead, if there is any
            row, sought = matrices.minerals + matrices.first.shape[0] + gas, -1
            for k in range(components):
                if k != signed and k != electron and matrices.supplied[row, k] != 0.0:
                    sought, low, high = k, LEAST_CARRIED, MOST_CARRIED
    bench.ln_activity[signed] = math.log(1e-7)
    if electron >= 0:
        bench.ln_activity[electron] = 0.5 * (MOST_OXIDISED + MOST_REDUCED)
    if sought >= 0:
        bench.ln_activity[sought] = 0.5 * (low + high)
    carriers_follow(matrices, bench)
    for k in range(components):
        if k == matrices.signed or k == matrices.electron or k == sought:
            continue
        if bench.total[k] > ABSENT:
            level(matrices, bench, k, dissolved[k])
        else:
            bench.ln_activity[k] = NOWHERE
    carriers_follow(matrices, bench)
    made = continued_fraction(matrices, bench, dissolved, sought, PASSES, PASSES)
    if sought >= 0:
        # what the species hold of it rises with its activity: halve it in
        for _ in range(HALVINGS):
            if bench.sums[sought] > with_gases(matrices, bench, dissolved, sought):
                high = bench.ln_activity[sought]
            else:
                low = bench.ln_activity[sought]
            bench.ln_activity[sought] = 0.5 * (low + high)
            carriers_follow(matrices, bench)
            for k in range(components):
                if k != signed and k != electron and k != sought and bench.ln_activity[k] != NOWHERE:
                    level(matrices, bench, k, dissolved[k])
            carriers_follow(matrices, bench)
            made = continued_fraction(matrices, bench, dissolved, sought, FEW_PASSES, MORE_PASSES)
    valences_follow(matrices, bench)
    return made if made < 1.0 else 1.0


@kernel(inner=True)
def continued_fraction(matrices, bench, dissolved, sought, passes, most):
    """Bring the balances of all but e^-, what gases hold and what is sought nearer; returns ionic strength.

    passes, and as many more, up to most, as one of the balances is off by the factor e^OFF.
    """
    components = matrices.conserved.shape[0]
    stoichiometry, ln_k = matrices.conserved, matrices.conserved_ln_k
    made = 0.0
    worst = math.inf
    for turn in range(most):
        if turn >= passes and worst < OFF:
            break
        worst = 0.0
        bare_coefficients(matrices, bench, 0.0)
        made = survey_of(matrices, stoichiometry, ln_k, bench)
        # a component of crowded species moves less: all components of a species move at once, but for
        # what is held
        share = bench.share
        for s in range(share.shape[0]):
            share[s] = 0.0
        for k in range(components):
            if k == matrices.electron or k == sought:
                continue
            for s in range(share.shape[0]):
                share[s] += abs(stoichiometry[k, s]) * bench.molality[s]
        for k in range(components):
            crowd = 0.0
            for s in range(share.shape[0]):
                crowd += abs(stoichiometry[k, s]) * share[s]
            bench.weight[k] = crowd
        for k in range(components):
            if bench.ln_activity[k] == NOWHERE or k == matrices.electron or k == sought:
                continue
            total = dissolved[k] if dissolved[k] > LITTLE else LITTLE
            if k == matrices.signed:
                total = with_gases(matrices, bench, dissolved, k)
            positive = bench.positive[k] - (total if total < 0.0 else 0.0)
            negative = bench.negative[k] + (total if total > 0.0 else 0.0)
            ratio = math.log((negative + 1e-300) / (positive + 1e-300))
            crowd = bench.weight[k] / bench.abundance[k] if bench.abundance[k] > 0.0 else 1.0
            bench.ln_activity[k] += ratio / crowd
            worst = max(worst, abs(ratio))
        hydrogen = bench.ln_activity[matrices.signed]
        bench.ln_activity[matrices.signed] = min(max(hydrogen, MOST_ALKALINE), MOST_ACID)
        carriers_follow(matrices, bench)
    return made


@kernel(inner=True)
def with_gases(matrices, bench, dissolved, component):
    """What there is of H^+ or e^- once the open gases have given what the water lacks of their carriers."""
    value = dissolved[component]
    for gas in range(matrices.carrier.shape[0]):
        row = matrices.minerals + matrices.first.shape[0] + gas
        carrier = matrices.carrier[gas]
        if carrier != component:
            given = (bench.sums[carrier] - dissolved[carrier]) / matrices.supplied[row, carrier]
            value += matrices.supplied[row, component] * given
    return value


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

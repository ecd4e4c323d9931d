"""Interactions and the activity of water against the excess energy that both come from, at fifty digits."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from tests.oracles.activity_laws import sit

from gossan.chemistry.activity import SIT, activity_model
from gossan.chemistry.kernel.activity import SIT_HELD_FROM
from gossan.chemistry.kernel.interaction import MOLAR_MASS

A_LOG10 = 0.5085  # at 25 degC; Freeze & Cherry (1979)
CHARGE = np.array([1.0, 2.0, 3.0, -1.0, -2.0, 0.0])
LN10 = np.log(10.0)


def pairs(rng):
    """Coefficients as large as published ones, between unlike signs and of the molecule with ions."""
    found = rng.uniform(-0.3, 0.8, (6, 6))
    found[np.outer(CHARGE, CHARGE) > 0] = 0.0
    found = np.tril(found, -1)
    found[5, 5] = 0.0
    return found + found.T


def a_water(seed, strength):
    rng = np.random.default_rng(seed)
    molality = 10.0 ** rng.uniform(-6, 0, 6)
    molality *= strength / (0.5 * CHARGE**2 @ molality)
    interaction = pairs(rng)
    law = activity_model(SIT, A_LOG10, 0.0, CHARGE, [None] * 6, interaction)
    return law, interaction, molality


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("strength", [1e-9, 1e-4, 0.03, 0.7, 3.5, 4.2, 30.0])
def test_coefficients_and_water(seed, strength):
    law, interaction, molality = a_water(seed, strength)
    with mp.workdps(50):
        ln_gamma, ln_water = sit(CHARGE, interaction, A_LOG10)([mp.mpf(m) for m in molality.tolist()])
        expected, expected_water = np.array(ln_gamma, dtype=float), float(ln_water)
    found = law.ln_gamma(np.array(strength), molality)
    # a dozen operations on terms as large as z^2 times the law, or as a sum of pairs
    assert found == pytest.approx(expected, rel=1e-14, abs=2e-14 * min(1.0, strength**0.5))
    # the cloud's three terms are of order 1 and cancel to the third power of their argument
    assert law.ln_water(np.array(strength), molality) == pytest.approx(expected_water, rel=1e-14, abs=2e-17)


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("strength", [0.01, 0.5, 3.0])
def test_gibbs_and_duhem_hold_between_them(seed, strength):
    """Any small change of a water: what solutes gain in activity, each by its amount, the water loses."""
    law, _, molality = a_water(seed, strength)
    change = np.random.default_rng(seed + 100).normal(0.0, 1e-4, 6) * molality

    def potentials(share):
        at = molality + share * change
        ionic = np.array(0.5 * CHARGE**2 @ at)
        return np.log(at) + law.ln_gamma(ionic, at), law.ln_water(ionic, at)

    (after, water_after), (before, water_before) = potentials(1.0), potentials(-1.0)
    solutes, water = molality @ (after - before), (water_after - water_before) / MOLAR_MASS
    # central differences: exact to the square of 1e-4
    assert solutes == pytest.approx(-water, rel=1e-6, abs=1e-7 * np.abs(change).sum())


def test_beyond_its_hold_a_water_acts_as_the_same_mixture_thinner():
    law, _, molality = a_water(3, SIT_HELD_FROM)
    at = law.ln_gamma(np.array(SIT_HELD_FROM), molality)
    water = law.ln_water(np.array(SIT_HELD_FROM), molality)
    for share in (1.5, 20.0):
        strength = np.array(share * SIT_HELD_FROM)
        assert law.ln_gamma(strength, share * molality) == pytest.approx(at, rel=1e-14)
        assert law.ln_water(strength, share * molality) == pytest.approx(water, rel=1e-14)


def test_many_waters_at_once():
    law, _, one = a_water(1, 0.4)
    other = a_water(2, 1.7)[2]
    molality, strengths = np.array([one, other]).T, np.array([0.4, 1.7])
    for i in (0, 1):
        assert law.ln_gamma(strengths, molality)[:, i].tolist() == (
            law.ln_gamma(strengths[i], molality[:, i]).tolist()
        )
        assert law.ln_water(strengths, molality)[i] == law.ln_water(strengths[i], molality[:, i])

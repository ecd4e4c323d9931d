"""The yardstick: one water at equilibrium as scipy's general root finder sees it.

Twenty unknowns at once: ln activities, amounts of minerals, ionic strength. Rows are the mass balances, each
divided by the sum of its terms' sizes, a Fischer-Burmeister function for each mineral and the ionic strength;
the Jacobian is analytic, all in plain numpy.
"""

from __future__ import annotations

import numpy as np
from scipy.optimize import root

from gossan.chemistry.kernel.activity import HELD_FROM, LEAST_IONIC_STRENGTH
from gossan.chemistry.system import System

STEEPEST = 60.0  # exponents are held below this


class PlainWater:
    """The equations of one water under Davies' law."""

    def __init__(self, system: System, total: np.ndarray):
        """total (component,) mol/kg, minerals included."""
        count = len(system.species)
        self.formation = np.asarray(system.stoichiometry, float)
        self.ln_k = system.matrices.ln_k[:count]
        self.charge_squared = system.matrices.charge_squared[:count]
        self.debye_hueckel = system.matrices.debye_hueckel
        self.solid = np.asarray(system.mineral_stoichiometry, float)
        self.solid_ln_k = system.matrices.solid_ln_k
        self.total = total
        self.components, self.minerals = len(total), len(self.solid_ln_k)

    def _molality(self, ln_activity: np.ndarray, strength: float) -> tuple[np.ndarray, np.ndarray]:
        """Molalities, and the slope of ln gamma against ionic strength."""
        held = min(max(strength, LEAST_IONIC_STRENGTH), HELD_FROM)
        s = np.sqrt(held)
        law = -self.debye_hueckel * (s / (1 + s) - 0.3 * held)
        slope = -self.debye_hueckel * (0.5 / (s * (1 + s) ** 2) - 0.3) if strength < HELD_FROM else 0.0
        exponent = self.ln_k + self.formation @ ln_activity - self.charge_squared * law
        return np.exp(np.minimum(exponent, STEEPEST)), self.charge_squared * slope

    def residual_and_jacobian(self, x: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """(row,) and (row, unknown)."""
        n, m = self.components, self.minerals
        ln_activity, amount, strength = x[:n], x[n : n + m], x[-1]
        molality, slope = self._molality(ln_activity, strength)
        positive, solid = np.abs(self.formation), np.abs(self.solid)
        scale = positive.T @ molality + solid.T @ np.abs(amount) + np.abs(self.total)
        under = self.solid_ln_k - self.solid @ ln_activity
        size = np.hypot(amount, under) + 1e-300
        made = self.formation * molality[:, None]
        value, slopes = np.empty(len(x)), np.zeros((len(x), len(x)))
        value[:n] = (self.formation.T @ molality + self.solid.T @ amount - self.total) / scale
        terms = (self.formation - value[:n] * positive).T  # of the quotient's slope
        slopes[:n, :n] = terms @ made / scale[:, None]
        slopes[:n, n : n + m] = (self.solid - value[:n] * solid * np.sign(amount)[:, None]).T / scale[:, None]
        slopes[:n, -1] = -(terms @ (molality * slope)) / scale
        value[n : n + m] = amount + under - size
        slopes[n : n + m, :n] = -(1 - under / size)[:, None] * self.solid
        slopes[np.arange(n, n + m), np.arange(n, n + m)] = 1 - amount / size
        of_strength = 0.5 * self.charge_squared
        value[-1] = of_strength @ molality - strength
        slopes[-1, :n] = of_strength @ made
        slopes[-1, -1] = -(of_strength * molality) @ slope - 1.0
        return value, slopes

    def solved(self, start: np.ndarray) -> np.ndarray:
        """The root found from a start, or where the search ended; (unknown,)."""
        return root(self.residual_and_jacobian, start, jac=True, method="hybr").x

    def first_guess(self) -> np.ndarray:
        """What a user without an earlier answer may begin with: everything dissolved, nothing bound."""
        ln_activity = np.log(np.maximum(np.abs(self.total), 1e-12))
        ln_activity[0] = np.log(1e-7)
        return np.concatenate((ln_activity, np.zeros(self.minerals), [0.1]))

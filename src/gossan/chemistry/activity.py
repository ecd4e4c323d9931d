"""Which law gives the activity coefficients, and for which waters it is meant."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from gossan.constants.entries import Constant

IDEAL, DAVIES, DEBYE_HUCKEL, SIT = "ideal", "davies", "debye-hueckel", "sit"
MODELS = {IDEAL: 0, DAVIES: 1, DEBYE_HUCKEL: 2, SIT: 3}

# ionic strength, mol/kg, up to which each law is used without a warning
VALID_TO = {IDEAL: np.inf, DAVIES: 0.5, DEBYE_HUCKEL: 0.1, SIT: 3.5}

LN10 = np.log(10.0)
LOWERING = 0.017  # kg/mol, of a solute in the activity of water; Garrels & Christ (1965), from memory


@dataclass(frozen=True, eq=False)
class Activity:
    """A law of activity coefficients for a list of species, as the kernels read it; arrays (species,)."""

    name: str
    model: int
    debye_hueckel: float  # A on the natural scale, (kg/mol)^0.5
    charge_squared: np.ndarray
    neutral: np.ndarray  # 1 for a dissolved molecule without charge whose coefficient follows (6), else 0
    size: np.ndarray  # B times ion size, (kg/mol)^0.5
    interaction: np.ndarray  # (species, species) kg/mol on the natural scale; (0, 0) but under SIT

    @property
    def valid_to(self) -> float:
        """Ionic strength, mol/kg, beyond which a water draws a warning."""
        return VALID_TO[self.name]

    @property
    def interacts(self) -> bool:
        """Whether coefficients depend on every molality and not on the ionic strength alone."""
        return self.name == SIT

    def ln_gamma(self, ionic_strength: np.ndarray, molality: np.ndarray | None = None) -> np.ndarray:
        """(species, ...) ln of the activity coefficients at ionic strengths (...), mol/kg.

        molality (species, ...) mol/kg, which SIT needs and the others do not
        """
        from gossan.chemistry.kernel.activity import activity_coefficients

        strengths = np.atleast_1d(np.asarray(ionic_strength, float))
        out = np.empty((strengths.size, len(self.size)))
        slope = np.empty(len(self.size))
        for strength, row in zip(strengths.flat, out, strict=True):
            activity_coefficients(
                self.model, self.debye_hueckel, self.charge_squared, self.neutral, self.size,
                strength, row, slope,
            )  # fmt: skip
        if self.interacts:
            assert molality is not None
            out += self._sums(strengths, molality)
        return out.T.reshape(len(self.size), *np.shape(ionic_strength))

    def ln_water(self, ionic_strength: np.ndarray, molality: np.ndarray) -> np.ndarray:
        """(...) ln of the activity of water; ionic_strength (...) and molality (species, ...), mol/kg.

        Under SIT it goes with the coefficients (equations.md, 48); the other laws take the common estimate
        (equations.md, 49).
        """
        from gossan.chemistry.kernel.interaction import ln_water_activity

        if not self.interacts:
            return np.log1p(-LOWERING * molality.sum(axis=0))
        strengths = np.atleast_1d(np.asarray(ionic_strength, float))
        columns = np.ascontiguousarray(molality.reshape(len(self.size), -1).T)
        waters = zip(columns, self._sums(strengths, molality), strengths, strict=True)
        found = [ln_water_activity(self.debye_hueckel, *water) for water in waters]
        return np.array(found).reshape(np.shape(ionic_strength))

    def _sums(self, strengths: np.ndarray, molality: np.ndarray) -> np.ndarray:
        """(cell, species) what interactions add to ln gamma."""
        from gossan.chemistry.kernel.interaction import held_share, interaction_sums

        columns = np.ascontiguousarray(molality.reshape(len(self.size), -1).T)
        out = np.empty_like(columns)
        for strength, column, row in zip(strengths, columns, out, strict=True):
            interaction_sums(self.interaction, column, held_share(strength), row)
        return out


def activity_model(
    name: str,
    a_log10: float,
    b_per_m: float,
    charge: np.ndarray,
    sizes: Sequence[Constant | None],
    interaction: np.ndarray | None = None,
) -> Activity:
    """Prepare a law for a list of species.

    name  "ideal", "davies", "debye-hueckel" or "sit"; a_log10, b_per_m: Debye-Hueckel parameters at T
    charge (species,); sizes (species,) m, None for neutral ones
    interaction (species, species) kg/mol on the log10 scale, symmetric, for "sit"
    Raises   KeyError for an unknown law, ValueError for an ion without a size under "debye-hueckel"
    """
    model = MODELS[name]
    size, neutral = np.zeros(len(charge)), (charge == 0.0).astype(float)
    pairs = np.zeros((0, 0))
    if name == DEBYE_HUCKEL:
        for s, constant in enumerate(sizes):
            if charge[s] != 0:
                if constant is None:
                    raise ValueError("the extended Debye-Hueckel law needs an ion size for every ion")
                size[s] = b_per_m * constant.value
    elif name == SIT:
        from gossan.chemistry.kernel.activity import SIT_SIZE

        assert interaction is not None
        size[:] = SIT_SIZE
        neutral[:] = 0.0
        pairs = np.ascontiguousarray(LN10 * interaction)
    return Activity(name, model, a_log10 * LN10, charge**2, neutral, size, pairs)

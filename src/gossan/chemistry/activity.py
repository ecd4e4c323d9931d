"""Which law gives the activity coefficients, and for which waters it is meant."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from gossan.constants.entries import Constant

IDEAL, DAVIES, DEBYE_HUCKEL = "ideal", "davies", "debye-hueckel"
MODELS = {IDEAL: 0, DAVIES: 1, DEBYE_HUCKEL: 2}

# ionic strength, mol/kg, up to which each law is used without a warning
VALID_TO = {IDEAL: np.inf, DAVIES: 0.5, DEBYE_HUCKEL: 0.1}

LN10 = np.log(10.0)


@dataclass(frozen=True, eq=False)
class Activity:
    """A law of activity coefficients for a list of species, as the kernels read it; arrays (species,)."""

    name: str
    model: int
    debye_hueckel: float  # A on the natural scale, (kg/mol)^0.5
    charge_squared: np.ndarray
    neutral: np.ndarray  # 1 for a dissolved molecule without charge, else 0
    size: np.ndarray  # B times ion size, (kg/mol)^0.5

    @property
    def valid_to(self) -> float:
        """Ionic strength, mol/kg, beyond which a water draws a warning."""
        return VALID_TO[self.name]

    def ln_gamma(self, ionic_strength: np.ndarray) -> np.ndarray:
        """(species, ...) ln of the activity coefficients at ionic strengths (...), mol/kg."""
        from gossan.chemistry.kernel.activity import activity_coefficients

        strengths = np.atleast_1d(np.asarray(ionic_strength, float))
        out = np.empty((strengths.size, len(self.size)))
        slope = np.empty(len(self.size))
        for strength, row in zip(strengths.flat, out, strict=True):
            activity_coefficients(
                self.model, self.debye_hueckel, self.charge_squared, self.neutral, self.size,
                strength, row, slope,
            )  # fmt: skip
        return out.T.reshape(len(self.size), *np.shape(ionic_strength))


def activity_model(
    name: str, a_log10: float, b_per_m: float, charge: np.ndarray, sizes: Sequence[Constant | None]
) -> Activity:
    """Prepare a law for a list of species.

    name  "ideal", "davies" or "debye-hueckel"; a_log10, b_per_m: Debye-Hueckel parameters at T
    charge (species,); sizes (species,) m, None for neutral ones
    Raises   KeyError for an unknown law, ValueError for an ion without a size under "debye-hueckel"
    """
    size = np.zeros(len(charge))
    if name == DEBYE_HUCKEL:
        for s, constant in enumerate(sizes):
            if charge[s] != 0:
                if constant is None:
                    raise ValueError("the extended Debye-Hueckel law needs an ion size for every ion")
                size[s] = b_per_m * constant.value
    return Activity(name, MODELS[name], a_log10 * LN10, charge**2, (charge == 0.0).astype(float), size)

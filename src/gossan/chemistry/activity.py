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
    """A law of activity coefficients for a list of species, as the kernels read it.

    Species of one charge (and for the extended Debye-Hueckel law of one ion size) share a kind.
    """

    name: str
    model: int
    debye_hueckel: float  # A on the natural scale, (kg/mol)^0.5
    kind: np.ndarray  # (species,) int64
    kind_charge_squared: np.ndarray  # (kind,)
    kind_size: np.ndarray  # (kind,) B times ion size, (kg/mol)^0.5

    @property
    def valid_to(self) -> float:
        """Ionic strength, mol/kg, beyond which a water draws a warning."""
        return VALID_TO[self.name]

    def ln_gamma(self, ionic_strength: np.ndarray) -> np.ndarray:
        """(species, ...) ln of the activity coefficients at ionic strengths (...), mol/kg."""
        from gossan.chemistry.kernel.activity import activity_coefficients

        strengths = np.atleast_1d(np.asarray(ionic_strength, float))
        out = np.empty((len(self.kind_size), strengths.size))
        value, slope = np.empty(len(self.kind_size)), np.empty(len(self.kind_size))
        for i, strength in enumerate(strengths.flat):
            activity_coefficients(
                self.model, self.debye_hueckel, self.kind_charge_squared, self.kind_size, strength, value, slope
            )
            out[:, i] = value
        return out[self.kind].reshape(len(self.kind), *np.shape(ionic_strength))


def activity_model(
    name: str, a_log10: float, b_per_m: float, charge: np.ndarray, sizes: Sequence[Constant | None]
) -> Activity:
    """Sort species into kinds for a law.

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
    kinds, kind = np.unique(np.column_stack([charge**2, size]), axis=0, return_inverse=True)
    return Activity(
        name=name,
        model=MODELS[name],
        debye_hueckel=a_log10 * LN10,
        kind=kind.reshape(-1).astype(np.int64),
        kind_charge_squared=np.ascontiguousarray(kinds[:, 0]),
        kind_size=np.ascontiguousarray(kinds[:, 1]),
    )

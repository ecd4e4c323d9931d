"""A system's stoichiometry laid out as the kernels read it."""

from __future__ import annotations

import numpy as np

from gossan.chemistry.activity import Activity
from gossan.chemistry.kernel.matrices import Matrices, padded
from gossan.chemistry.redox import Basis

NONE = -1e6  # ln K of a species that does not exist: its molality vanishes


def matrices_of(
    basis: Basis,
    law: Activity,
    *,
    formation: np.ndarray,
    ln_k: np.ndarray,
    hidden: list[tuple[np.ndarray, float]],
    solid: np.ndarray,
    solid_ln_k: np.ndarray,
    minerals: int,
) -> Matrices:
    """Fill the kernels' arrays.

    formation (species, basis), ln_k (species,): of what has a name; hidden: more of them, neutral, without
    solid (row, basis), solid_ln_k (row,): minerals, then couples, then open gases; minerals: how many
    """
    components = len(basis.components)
    count = padded(len(formation) + len(hidden))

    def filled(values: np.ndarray, filling: float = 0.0) -> np.ndarray:
        """(species, ...) made longer by species that do not exist, so that they fill vector registers."""
        out = np.full((count, *values.shape[1:]), filling)
        out[: len(values)] = values
        return out

    rows = np.vstack([formation, *(row[None] for row, _ in hidden)])
    constants = np.concatenate([ln_k, [constant for _, constant in hidden]])
    if basis.electron >= 0:
        constants[basis.electron] = NONE  # it is counted, but there is none of it
    neutral = np.concatenate([law.neutral, np.ones(len(hidden))])
    # a valence in terms of what it is counted as: its own tie undone
    ties = slice(minerals, minerals + len(basis.valences))
    valence_ln_k = solid_ln_k[ties]
    supplied = np.ascontiguousarray(solid @ basis.conserved)
    return Matrices(
        stoichiometry=filled(rows).T.copy(),
        ln_k=filled(constants, NONE),
        conserved=filled(rows @ basis.conserved).T.copy(),
        conserved_ln_k=filled(constants + rows[:, components:] @ valence_ln_k, NONE),
        charge_squared=filled(law.charge_squared),
        neutral=filled(neutral),
        size=filled(law.size),
        model=law.model,
        debye_hueckel=law.debye_hueckel,
        solid=np.ascontiguousarray(solid),
        solid_ln_k=solid_ln_k,
        supplied=supplied,
        supplied_ln_k=solid_ln_k - solid[:, components:] @ valence_ln_k,
        minerals=minerals,
        first=basis.first,
        carrier=_carriers(supplied[minerals + len(basis.valences) :], basis.electron),
        signed=0,
        electron=basis.electron,
    )


def with_minerals(matrices: Matrices, solid: np.ndarray, ln_k: np.ndarray, conserved: np.ndarray) -> Matrices:
    """The same system with other minerals, and without open gases.

    solid (mineral, basis), ln_k (mineral,) of dissolution; conserved (basis, component)
    """
    components = conserved.shape[1]
    couples = slice(matrices.minerals, matrices.minerals + len(matrices.first))
    rows = np.vstack([solid, matrices.solid[couples]])
    constants = np.concatenate([ln_k, matrices.solid_ln_k[couples]])
    return matrices._replace(
        solid=rows,
        solid_ln_k=constants,
        supplied=rows @ conserved,
        supplied_ln_k=constants - rows[:, components:] @ matrices.solid_ln_k[couples],
        minerals=len(solid),
        carrier=np.zeros(0, np.int64),
    )


def _carriers(supplied: np.ndarray, electron: int) -> np.ndarray:
    """(open gas,) the component that each open gas is known by: neither H^+ nor e^-, if there is another."""
    others = np.abs(supplied)
    others[:, 0] = 0.0
    if electron >= 0:
        others[:, electron] *= 1e-3  # the last choice
    return others.argmax(axis=1).astype(np.int64)

"""A system's stoichiometry laid out as the kernels read it."""

from __future__ import annotations

import numpy as np

from gossan.chemistry.activity import Activity
from gossan.chemistry.kernel.matrices import Matrices, padded
from gossan.chemistry.redox import Basis

REACH_OF_WATER = 0.1  # kg/mol: any solute lowers ln of water's activity by 0.018, which may count a few times
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
    components, valences = len(basis.components), len(basis.valences)
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
    if basis.water:
        constants[len(basis.names) - 1] = NONE  # it has an activity, and is not a solute
    neutral = np.concatenate([law.neutral, np.ones(len(hidden))])
    # a valence in terms of what it is counted as: its own tie undone
    ties = slice(minerals, minerals + valences)
    own = slice(components, components + valences)
    valence_ln_k = solid_ln_k[ties]
    supplied = np.ascontiguousarray(solid @ basis.conserved)
    interaction = np.zeros((0, 0))
    if law.interacts:
        interaction = np.zeros((count, count))
        interaction[: len(formation), : len(formation)] = law.interaction
    return Matrices(
        stoichiometry=filled(rows).T.copy(),
        ln_k=filled(constants, NONE),
        conserved=filled(rows @ basis.conserved).T.copy(),
        conserved_ln_k=filled(constants + rows[:, own] @ valence_ln_k, NONE),
        charge_squared=filled(law.charge_squared),
        neutral=filled(neutral),
        size=filled(law.size),
        model=law.model,
        debye_hueckel=law.debye_hueckel,
        solid=np.ascontiguousarray(solid),
        solid_ln_k=solid_ln_k,
        supplied=supplied,
        supplied_ln_k=solid_ln_k - solid[:, own] @ valence_ln_k,
        minerals=minerals,
        first=basis.first,
        carrier=_carriers(supplied[minerals + len(basis.valences) :], basis.electron),
        signed=0,
        electron=basis.electron,
        given=int(basis.water),
        interaction=interaction,
        reach=np.abs(interaction).max(axis=0, initial=0.0) + (REACH_OF_WATER if law.interacts else 0.0),
    )


def with_minerals(matrices: Matrices, solid: np.ndarray, ln_k: np.ndarray, conserved: np.ndarray) -> Matrices:
    """The same system with other minerals, and without open gases.

    solid (mineral, basis), ln_k (mineral,) of dissolution; conserved (basis, component)
    """
    own = slice(conserved.shape[1], conserved.shape[1] + len(matrices.first))
    couples = slice(matrices.minerals, matrices.minerals + len(matrices.first))
    rows = np.vstack([solid, matrices.solid[couples]])
    constants = np.concatenate([ln_k, matrices.solid_ln_k[couples]])
    return matrices._replace(
        solid=rows,
        solid_ln_k=constants,
        supplied=rows @ conserved,
        supplied_ln_k=constants - rows[:, own] @ matrices.solid_ln_k[couples],
        minerals=len(solid),
        carrier=np.zeros(0, np.int64),
    )


def _carriers(supplied: np.ndarray, electron: int) -> np.ndarray:
    """(open gas,) the component that each open gas is known by: e^- for one that carries any, never H^+.

    e^- serves one gas alone, first one that has nothing else, as O2 or H2.
    """
    others = np.abs(supplied)
    others[:, 0] = 0.0
    if electron >= 0:
        electrons = others[:, electron].copy()
        others[:, electron] = 0.0
        bearing = electrons > 0.0
        if bearing.any():
            first = int(np.argmax(bearing * np.where(others.any(axis=1), 1.0, 2.0)))
            others[first, electron] = np.inf
    return others.argmax(axis=1).astype(np.int64)

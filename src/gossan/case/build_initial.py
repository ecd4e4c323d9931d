"""The state that a column begins in: every cell at equilibrium with its own solids."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from gossan.base.errors import SolveError
from gossan.case.model import Case, Layer
from gossan.chemistry.equilibrium import Equilibrium, Solver
from gossan.chemistry.isotherm import Isotherms, sorbed_at
from gossan.chemistry.system import System
from gossan.coupling.problem import Stagnant
from gossan.coupling.state import State, StillWater
from gossan.transport.grid import Grid

WARM = ("ln_activity", "ionic_strength", "presence", "solved", "seen")


def initial_state(
    case: Case, system: System, cells: Grid, composition: dict[str, np.ndarray],
    solids: list[dict[str, float]], ports: int, stagnant: Stagnant | None, isotherms: Isotherms | None,
) -> State:
    """Every cell at equilibrium with its own minerals, in flowing and immobile water: one solve a layer each.

    What sorbs is in equilibrium with that water, and is not taken from it.
    """
    layers = case.layers
    fractions = [layer.immobile.fraction if layer.immobile else 0.0 for layer in layers]
    shares = [layer.immobile.share if layer.immobile else 0.0 for layer in layers]
    given = (layers, system, cells, [composition[layer.water] for layer in layers], solids, isotherms)
    flowing = _region(*given, [1.0 - f for f in fractions], [1.0 - s for s in shares])
    still = None
    if stagnant is not None:
        # a layer without immobile water has a water all the same, which nobody takes
        everywhere = _region(*given, [f or 1.0 for f in fractions], shares)
        fields = {name: np.ascontiguousarray(values[..., stagnant.cells])
                  for name, values in everywhere.items()}
        still = StillWater(**fields)
    solutes = len(flowing["dissolved"])
    return State(
        time=0.0,
        step=0,
        **flowing,
        still=still,
        passed=np.zeros((2 + ports, solutes, 2)),
        made=np.zeros((solutes, 2)),
        water_passed=np.zeros((3, 2)),
        splitting_error=0.0,
    )


def _region(
    layers: tuple[Layer, ...], system: System, cells: Grid, waters: list[np.ndarray],
    solids: list[dict[str, float]], isotherms: Isotherms | None, pores: Sequence[float],
    shares: Sequence[float],
) -> dict[str, Any]:
    """The fields, one value a cell, of a water with these shares of the pores and of the solids.

    waters  (solute,) of each layer, mol m-3
    """
    water = np.array([share * layer.porosity for share, layer in zip(pores, layers, strict=True)])
    settled = [_settled(*each, system) for each in zip(layers, waters, solids, water, shares, strict=True)]

    def spread(field: str) -> np.ndarray:
        by_layer = np.concatenate([getattr(one, field) for one in settled], -1)
        return np.ascontiguousarray(by_layer[..., cells.layer])

    tracers = np.array(waters)[:, len(system.components) :]
    dissolved = np.vstack([spread("amount") / water[cells.layer], tracers[cells.layer].T])
    sorbed = np.zeros((0, len(cells.layer)))
    if isotherms is not None:
        own = isotherms.shared(np.array(shares)[cells.layer])
        sorbed = sorbed_at(own, dissolved[own.solutes])
    return {
        "dissolved": dissolved,
        "solid": spread("solid"),
        "sorbed": sorbed,
        "water": water[cells.layer],
        "swelling": np.zeros(len(cells.layer)),
        **{field: spread(field) for field in WARM},
    }


def _settled(
    layer: Layer, water: np.ndarray, solid: dict[str, float], pores: float, share: float, system: System
) -> Equilibrium:
    amount = water[: len(system.components), None] * pores
    grains = np.array([[solid.get(name, 0.0) * share] for name in system.minerals])
    kilograms = np.array([pores * system.water_density])
    try:
        return Solver(system).cold(kilograms, amount, grains.reshape(len(system.minerals), 1))
    except SolveError as error:
        raise SolveError(error.reason, 0, layer.name, time=0.0) from error

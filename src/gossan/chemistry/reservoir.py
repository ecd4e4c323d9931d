"""Conditions that a water is held to, as solids without end.

A solid of which there is always enough gives or takes its formula until its ion activity product is what it
should be (equations.md, 43).  With the formula of a mineral that is "saturated with", with that of a gas it
is a partial pressure, and with a bare proton it is a pH: all in the same solve.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from gossan.base.errors import SolveError
from gossan.base.wrong import Wrong
from gossan.chemistry.equilibrium import Equilibrium, Solver
from gossan.chemistry.layout import with_minerals
from gossan.chemistry.system import LN10, System

PLENTY = 1e3  # mol/kg: more than any water takes up or gives back


@dataclass(frozen=True, eq=False)
class Condition:
    """One thing that must hold: the ion activity product of a formula."""

    name: str
    formula: np.ndarray  # (basis,)
    ln_product: float

    def __str__(self) -> str:
        return self.name


def fixed_ph(system: System, ph: float) -> Condition:
    """The pH is held; protons come and go."""
    formula = np.zeros(len(system.basis))
    formula[0] = 1.0
    return Condition(f"pH {ph:g}", formula, -ph * LN10)


def fixed_pe(system: System, pe: float) -> Condition:
    """The pe is held; electrons come and go. Something must be coupled."""
    formula = np.zeros(len(system.basis))
    formula[system.electron] = 1.0
    return Condition(f"pe {pe:g}", formula, -pe * LN10)


def saturated(system: System, mineral: str, index: float) -> Condition:
    """A mineral's saturation index is held; its whole formula comes and goes."""
    m = system.minerals.index(mineral)
    product = system.matrices.solid_ln_k[m] + index * LN10
    return Condition(mineral, system.matrices.solid[m], product)


def under_gas(system: System, gas: str, pressure: float) -> Condition:
    """A gas's partial pressure (atm) is held; its molecule comes and goes."""
    g = system.gases.index(gas)
    return Condition(gas, system.gas_stoichiometry[g], system.gas_ln_k[g] + np.log(pressure))


def held_to(system: System, dissolved: np.ndarray, conditions: list[Condition]) -> Equilibrium:
    """Equilibrate one water under conditions.

    dissolved (component,) mol per kg of water; amounts of the answer are (component, 1)
    Raises   Wrong where the conditions contradict each other or cannot be met; SolveError
    """
    rows = np.array([c.formula for c in conditions]).reshape(-1, len(system.basis))
    if len(conditions) and np.linalg.matrix_rank(rows @ system.conserved) < len(conditions):
        named = ", ".join(map(str, conditions))
        raise Wrong(f"holds the water to more than the phase rule allows ({named})", "leave one of them out")
    products = np.array([c.ln_product for c in conditions])
    bare = replace(
        system,
        minerals=tuple(c.name for c in conditions),
        may_form=np.ones(len(conditions), bool),
        open_gases=(),
        matrices=with_minerals(system.matrices, rows, products, system.conserved),
    )
    solid = np.full((len(conditions), 1), PLENTY)
    try:
        found = Solver(bare).cold(np.ones(1), np.asarray(dissolved, float).reshape(-1, 1), solid)
    except SolveError as error:
        named = ", ".join(map(str, conditions))
        raise Wrong(f"cannot be brought to {named or 'equilibrium'} ({error.reason})",
                    "check the amounts and what the water is held to") from error
    if (found.presence != 1).any():
        marks = zip(conditions, found.presence[:, 0], strict=True)
        named = ", ".join(c.name for c, mark in marks if mark != 1)
        raise Wrong(
            f"cannot be brought to {named}: it would take more than {PLENTY:g} mol/kg",
            "lower that index or pressure, or leave out what works against it",
        )
    return replace(found, system=system)

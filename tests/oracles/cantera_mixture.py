"""Equilibrium of an ideal solution and pure solids by cantera, a general library of thermodynamics.

What it can express: one ideal solution in mole fractions, pure solids of fixed composition, any elements,
and so redox. What it cannot: activity coefficients beside molalities, gases held open, upper bounds. A
molality is a mole fraction where the solvent is plenty; that it is one exactly, the potentials count from the
amount of solution that the judged answer has:

    ln (n / N) + ln N - ln K = ln n - ln K          N = solvent and dissolved species, mol

Every component is an element of its own, with a charge; H^+ is hydrogen and e^- is charge. Pure water, of
which there is plenty and whose potential is nil, lends oxygen and hydrogen to what has less than no protons.
"""

from __future__ import annotations

import json
import math

import cantera as ct
import numpy as np
from tests.support.redox_waters import ELECTRON
from tests.support.small_systems import PlainSystem

from gossan.base.notation import charge_of

KELVIN = 298.15  # potentials are in units of RT: the temperature drops out
RT = 8.31446261815324 * KELVIN  # J/mol
SOLVENT, WATER = 1.0, 100.0  # mol: an inert solvent for what is dissolved, and pure water
PER_KMOL = 1e3
BALANCED = 1e-9  # of the largest total
FLAT = {"model": "constant-cp", "T0": KELVIN, "s0": 0.0, "cp0": 0.0}
VOLUME = {"model": "constant-volume", "molar-volume": "1 cm^3/mol"}


class Unbalanced(ArithmeticError):
    """The solver ended with another mixture than it began with."""


def cantera_equilibrium(
    system: PlainSystem, totals: np.ndarray, dissolved: float
) -> tuple[np.ndarray, np.ndarray]:
    """Molalities (species,) and mineral amounts (mineral,), mol per kg of water.

    totals    (component,) mol per kg of water
    dissolved mol per kg of water of all species together, in the answer that is judged
    Raises    ct.CanteraError where the solver gives up, Unbalanced where its answer lost some of the totals
    """
    moles = SOLVENT + dissolved
    charge = [charge_of(name) for name in system.components]
    atoms = [_atoms(system, row, charge) for row in system.formation]
    solids = [_atoms(system, row, charge) for row in system.dissolution]
    species = [_species("solvent", {"Ar": 1.0}, math.log(moles / SOLVENT))]
    for s, made in enumerate(atoms):
        species.append(_species(f"s{s}", made, math.log(moles) - system.ln_k[s]))
    mixed = _phase(system, "ideal-condensed", species, {"standard-concentration-basis": "unity"})
    phases = [mixed]
    for m, made in enumerate(solids):
        solid = _species(f"m{m}", made, system.mineral_ln_k[m])
        phases.append(_phase(system, "fixed-stoichiometry", [solid]))
    phases.append(_phase(system, "fixed-stoichiometry", [_species("water", {"H": 2.0, "O": 1.0}, 0.0)]))
    mixture = ct.Mixture([(phase, 1.0) for phase in phases])
    mixture.T, mixture.P = KELVIN, ct.one_atm
    given = [SOLVENT, *_start(system, totals), *([0.0] * len(solids)), WATER]
    mixture.species_moles = np.array(given) / PER_KMOL
    mixture.equilibrate("TP", solver="vcs", rtol=1e-11, max_steps=5000, estimate_equil=0)
    found = np.array(mixture.species_moles) * PER_KMOL
    molality, amount = found[1 : 1 + len(atoms)], found[1 + len(atoms) : -1]
    left = system.formation.T @ molality + system.dissolution.T @ amount - totals
    if np.abs(left).max() > BALANCED * np.abs(totals).max():
        raise Unbalanced(f"the mixture holds {np.abs(left).max():.1e} mol more or less than it was given")
    return molality, amount


def _atoms(system: PlainSystem, row: np.ndarray, charge: list[int]) -> dict[str, float]:
    """What a formula in components is made of, with as much water as leaves no hydrogen owed."""
    waters = max(0.0, float(math.ceil(-row[0] / 2)))
    atoms = {"H": float(row[0]) + 2 * waters, "O": waters, "E": -float(row @ charge)}
    for k, name in enumerate(system.components[1:], 1):
        if name != ELECTRON:
            atoms[f"X{k}"] = float(row[k])
    return {name: count for name, count in atoms.items() if count}


def _start(system: PlainSystem, totals: np.ndarray) -> list[float]:
    """Amounts of species that hold the totals: the components, and hydrogen, oxygen, protons or hydroxide."""
    amounts = dict.fromkeys(system.species, 0.0)
    left = dict(zip(system.components, np.asarray(totals, float).tolist(), strict=True))
    electrons = left.pop(ELECTRON, 0.0)
    protons = left.pop("H^+")
    if electrons > 0.0:
        amounts[_found(system, "H2")] = electrons / 2
        protons -= electrons
    elif electrons < 0.0:
        amounts[_found(system, "O2")] = -electrons / 4
        protons -= electrons
    amounts["H^+" if protons > 0.0 else "OH^-"] = abs(protons)
    return list((amounts | left).values())


def _found(system: PlainSystem, name: str) -> str:
    """A gas of water, whichever way the system has it."""
    own = f"{name} of water"
    return own if own in system.species else name


def _species(name: str, atoms: dict[str, float], potential: float) -> dict:
    thermo = {**FLAT, "h0": potential * RT}
    return {"name": name, "composition": atoms, "thermo": thermo, "equation-of-state": VOLUME}


def _phase(system: PlainSystem, thermo: str, species: list[dict], more: dict | None = None) -> ct.Solution:
    """A phase from a description in YAML, of which JSON is a part."""
    own = [f"X{k}" for k in range(1, len(system.components)) if system.components[k] != ELECTRON]
    elements = ["H", "O", "E", "Ar", *own]
    described = {
        "units": {"energy": "J", "quantity": "mol"},
        "elements": [{"symbol": name, "atomic-weight": 1.0} for name in own],
        "phases": [{
            "name": species[0]["name"], "thermo": thermo, "elements": elements,
            "species": [each["name"] for each in species], "state": {"T": KELVIN, "P": "1 atm"},
            **(more or {}),
        }],
        "species": species,
    }  # fmt: skip
    return ct.Solution(yaml=json.dumps(described))

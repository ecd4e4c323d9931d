"""What every chemistry kernel reads and writes, as plain arrays under one name."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np


class Matrices(NamedTuple):
    """A chemical system at one temperature, as the kernels read it.

    Species come with the components first; their stoichiometry is kept by rows: entries start[s] to
    start[s + 1] of member (a component's index) and coefficient.
    """

    start: np.ndarray  # (species + 1,) int64
    member: np.ndarray  # (entry,) int64
    coefficient: np.ndarray  # (entry,)
    ln_k: np.ndarray  # (species,) of formation from components
    charge_squared: np.ndarray  # (species,)
    kind: np.ndarray  # (species,) int64, its row of the two below
    kind_charge_squared: np.ndarray  # (kind,)
    kind_size: np.ndarray  # (kind,) ion size times Debye-Hueckel B, (kg/mol)^0.5
    model: int  # activity model: 0 ideal, 1 Davies, 2 extended Debye-Hueckel
    debye_hueckel: float  # A on the natural scale, (kg/mol)^0.5
    solid: np.ndarray  # (mineral, component) what one formula dissolves to
    solid_ln_k: np.ndarray  # (mineral,) of dissolution
    signed: int  # the one component whose total may be negative: H^+


class Bench(NamedTuple):
    """Working space of one solve, set out once for a block of cells."""

    dissolved: np.ndarray  # (component,) mol/kg
    solid: np.ndarray  # (mineral,) mol/kg
    upper: np.ndarray  # (mineral,) mol/kg
    presence: np.ndarray  # (mineral,) int8
    ln_activity: np.ndarray  # (component,)
    total: np.ndarray  # (component,) dissolved, with what absent minerals give back
    ln_gamma: np.ndarray  # (kind,)
    slope: np.ndarray  # (kind,) d ln_gamma / d ionic strength
    molality: np.ndarray  # (species,)
    sums: np.ndarray  # (component,) sum of coefficient times molality
    abundance: np.ndarray  # (component,) the same of absolute values
    # null space of the minerals present
    rows: np.ndarray  # (mineral, component) reduced stoichiometry of the minerals present
    turns: np.ndarray  # (mineral, mineral) the row operations that led there
    active: np.ndarray  # (mineral,) int64
    pivot: np.ndarray  # (mineral,) int64
    free: np.ndarray  # (component,) int64
    place: np.ndarray  # (component,) int64: where a component stands in free; -1 - row for a pivot; -99
    active_before: np.ndarray  # (mineral + 1,) int64: for which minerals and places the reduced arrays
    place_before: np.ndarray  # (component,) int64: below hold; active_before[-1] is their number
    reduced_start: np.ndarray  # (species + 1,) int64
    reduced_member: np.ndarray  # (species * component,) int64
    reduced_coefficient: np.ndarray  # (species * component,)
    reduced_ln_k: np.ndarray  # (species,)
    reduced_total: np.ndarray  # (component,)
    # the linear system
    positive: np.ndarray  # (component,)
    negative: np.ndarray  # (component,)
    matrix: np.ndarray  # (component + mineral, component + mineral)
    right: np.ndarray  # (component + mineral,)
    side: np.ndarray  # (component + mineral,)
    weight: np.ndarray  # (component,)
    taken: np.ndarray  # (component,) the last step of the free ln activities
    gained: np.ndarray  # (mineral,) what a mineral gained in this solve, mol/kg
    reach: np.ndarray  # (mineral,) the most of a mineral its components allow, mol/kg
    saturation: np.ndarray  # (mineral,) ln of activity product over K


def bench(components: int, species: int, minerals: int, kinds: int) -> Bench:
    """Set out working space for a system of this size."""
    wide = species * components
    both = components + minerals
    some = max(minerals, 1)

    def real(*shape):
        return np.zeros(shape)

    def whole(*shape):
        return np.zeros(shape, np.int64)

    return Bench(
        real(components), real(minerals), real(minerals), np.zeros(minerals, np.int8),
        real(components), real(components), real(kinds), real(kinds), real(species), real(components),
        real(components), real(some, components), real(some, some), whole(some), whole(some),
        whole(components), whole(components), np.full(some + 1, -1), whole(components), whole(species + 1), whole(wide), real(wide), real(species),
        real(components), real(components), real(components), real(both, both), real(both), real(both),
        real(components), real(components), real(some), real(some), real(some),
    )

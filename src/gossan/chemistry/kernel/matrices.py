"""What every chemistry kernel reads and writes, as plain arrays under one name."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

LANES = 8  # species are padded to a multiple of this, so that vector registers are filled


class Matrices(NamedTuple):
    """A chemical system at one temperature, as the kernels read it.

    Species stand innermost, the components first, padded at the end by species that do not exist: no
    stoichiometry, no charge and a constant of nothing.
    """

    stoichiometry: np.ndarray  # (component, species) of formation from components
    ln_k: np.ndarray  # (species,) of formation
    charge_squared: np.ndarray  # (species,)
    neutral: np.ndarray  # (species,) 1 for a dissolved molecule without charge, else 0
    size: np.ndarray  # (species,) ion size times Debye-Hueckel B, (kg/mol)^0.5
    model: int  # activity model: 0 ideal, 1 Davies, 2 extended Debye-Hueckel
    debye_hueckel: float  # A on the natural scale, (kg/mol)^0.5
    solid: np.ndarray  # (mineral, component) what one formula dissolves to
    solid_ln_k: np.ndarray  # (mineral,) of dissolution
    signed: int  # the one component whose total may be negative: H^+


class Bench(NamedTuple):
    """Working space of one solve, set out once for a block of cells."""

    # the cell
    dissolved: np.ndarray  # (component,) mol/kg
    solid: np.ndarray  # (mineral,) mol/kg
    upper: np.ndarray  # (mineral,) mol/kg
    presence: np.ndarray  # (mineral,) int8
    ln_activity: np.ndarray  # (component,)
    total: np.ndarray  # (component,) dissolved, with what absent minerals give back
    # its species
    ln_gamma: np.ndarray  # (species,)
    slope: np.ndarray  # (species,) d ln_gamma / d ionic strength
    exponent: np.ndarray  # (species,)
    bits: np.ndarray  # (species,) int64
    molality: np.ndarray  # (species,)
    share: np.ndarray  # (species,) products of the moment
    sums: np.ndarray  # (component,) sum of stoichiometry times molality
    abundance: np.ndarray  # (component,) the same of absolute values
    # null space of the minerals present
    rows: np.ndarray  # (mineral + 1, component) reduced stoichiometry of the minerals present
    turns: np.ndarray  # (mineral + 1, mineral + 1) the row operations that led there
    active: np.ndarray  # (mineral,) int64
    pivot: np.ndarray  # (mineral,) int64
    free: np.ndarray  # (component,) int64
    exit: np.ndarray  # (1,) int64: the mark of a mineral that had to make room
    place: np.ndarray  # (component,) int64: where a component stands in free; -1 - row for a pivot; GONE
    reduced: np.ndarray  # (component, species) stoichiometry in the free components
    reduced_ln_k: np.ndarray  # (species,)
    reduced_total: np.ndarray  # (component,)
    # the linear system of the free components
    positive: np.ndarray  # (component,)
    negative: np.ndarray  # (component,)
    short: np.ndarray  # (component,) total less what the species make
    matrix: np.ndarray  # (component + mineral, component + mineral)
    right: np.ndarray  # (component + mineral,)
    side: np.ndarray  # (component + mineral,)
    weight: np.ndarray  # (component,)
    taken: np.ndarray  # (component,) the last step of the free ln activities
    # its minerals
    gained: np.ndarray  # (mineral,) what a mineral gained in this solve, mol/kg
    reach: np.ndarray  # (mineral,) the most of a mineral its components allow, mol/kg
    saturation: np.ndarray  # (mineral,) ln of activity product over K


def padded(species: int) -> int:
    """The number of species with those that only fill up."""
    return -(-species // LANES) * LANES


def bench(components: int, species: int, minerals: int) -> Bench:
    """Set out working space for a system of this size; species counts the padded ones."""
    both = components + minerals
    some = max(minerals, 1)

    def real(*shape):
        return np.zeros(shape)

    def whole(*shape):
        return np.zeros(shape, np.int64)

    return Bench(
        dissolved=real(components),
        solid=real(minerals),
        upper=real(minerals),
        presence=np.zeros(minerals, np.int8),
        ln_activity=real(components),
        total=real(components),
        ln_gamma=real(species),
        slope=real(species),
        exponent=real(species),
        bits=whole(species),
        molality=real(species),
        share=real(species),
        sums=real(components),
        abundance=real(components),
        rows=real(some + 1, components),
        turns=real(some + 1, some + 1),
        active=whole(some),
        pivot=whole(some),
        free=whole(components),
        exit=whole(1),
        place=whole(components),
        reduced=real(components, species),
        reduced_ln_k=real(species),
        reduced_total=real(components),
        positive=real(components),
        negative=real(components),
        short=real(components),
        matrix=real(both, both),
        right=real(both),
        side=real(both),
        weight=real(components),
        taken=real(components),
        gained=real(some),
        reach=real(some),
        saturation=real(some),
    )

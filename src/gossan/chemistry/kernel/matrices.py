"""What every chemistry kernel reads and writes, as plain arrays under one name."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

LANES = 8  # species are padded to a multiple of this, so that vector registers are filled


class Matrices(NamedTuple):
    """A chemical system at one temperature, as the kernels read it.

    Species stand innermost, the basis first, padded at the end by species that do not exist: no
    stoichiometry, no charge and a constant of nothing.  The basis is the conserved components, then the
    coupled valences, and under SIT water.  Rows are the minerals, and then what always holds, the ties: one
    for each couple, in the order of the valences, and one for each open gas.
    """

    stoichiometry: np.ndarray  # (basis, species) of formation
    ln_k: np.ndarray  # (species,) of formation
    conserved: np.ndarray  # (component, species) of formation from conserved components alone
    conserved_ln_k: np.ndarray  # (species,) of that
    charge_squared: np.ndarray  # (species,)
    neutral: np.ndarray  # (species,) 1 for a dissolved molecule without charge, else 0
    size: np.ndarray  # (species,) ion size times Debye-Hueckel B, (kg/mol)^0.5
    model: int  # activity model: 0 ideal, 1 Davies, 2 extended Debye-Hueckel, 3 SIT
    debye_hueckel: float  # A on the natural scale, (kg/mol)^0.5
    solid: np.ndarray  # (row, basis) what one formula dissolves to
    solid_ln_k: np.ndarray  # (row,) of dissolution
    supplied: np.ndarray  # (row, component) what one formula is counted as; nothing for a couple
    supplied_ln_k: np.ndarray  # (row,) of dissolution to conserved components
    minerals: int  # how many of the rows are minerals
    first: np.ndarray  # (couple,) int64: the component that a valence is counted as; -1: water's own
    carrier: np.ndarray  # (open gas,) int64: the component that follows from its pressure; e^- if it has any
    signed: int  # H^+, whose total may be negative
    electron: int  # e^-, whose total may be negative too; -1 where nothing is coupled
    given: int  # 1 under SIT: the last of the basis is water, of which the law gives the activity; else 0
    interaction: np.ndarray  # (species, species) kg/mol on the natural scale; (0, 0) but under SIT
    reach: np.ndarray  # (species,) kg/mol: the most that so much of it changes any exponent by; the same


class Bench(NamedTuple):
    """Working space of one solve, set out once for a block of cells."""

    # the cell; component: the conserved ones alone
    dissolved: np.ndarray  # (component,) mol/kg
    solid: np.ndarray  # (mineral,) mol/kg
    upper: np.ndarray  # (mineral,) mol/kg
    presence: np.ndarray  # (mineral,) int8
    ln_activity: np.ndarray  # (basis,)
    total: np.ndarray  # (basis,) dissolved, with what absent minerals give back; 0 for valences
    # its species
    ln_gamma: np.ndarray  # (species,)
    slope: np.ndarray  # (species,) d ln_gamma / d ionic strength
    exponent: np.ndarray  # (species,)
    bits: np.ndarray  # (species,) int64
    molality: np.ndarray  # (species,)
    share: np.ndarray  # (species,) products of the moment
    sums: np.ndarray  # (basis,) sum of stoichiometry times molality
    abundance: np.ndarray  # (basis,) the same of absolute values
    # null space of the rows that hold: ties, and minerals present
    tied: np.ndarray  # (row,) int8: which ties hold; a couple of an absent element does not
    rows: np.ndarray  # (row + 1, basis) reduced stoichiometry of the rows that hold
    turns: np.ndarray  # (row + 1, row + 1) the row operations that led there
    active: np.ndarray  # (row,) int64
    pivot: np.ndarray  # (row,) int64
    free: np.ndarray  # (basis,) int64
    exit: np.ndarray  # (2,) int64: the mark of a mineral that had to make room; the one the entering had
    place: np.ndarray  # (basis,) int64: where one stands in free; -1 - row for a pivot; GONE
    reduced: np.ndarray  # (basis, species) stoichiometry in the free ones
    reduced_ln_k: np.ndarray  # (species,)
    eased: np.ndarray  # (species,) how far reduced_ln_k begins from its end, where it is led there by stages
    reduced_total: np.ndarray  # (basis,)
    # the linear system of the free ones
    positive: np.ndarray  # (basis,)
    negative: np.ndarray  # (basis,)
    short: np.ndarray  # (basis,) total less what the species make
    matrix: np.ndarray  # (basis + row, basis + row)
    right: np.ndarray  # (basis + row,)
    side: np.ndarray  # (basis + row,)
    weight: np.ndarray  # (basis,)
    taken: np.ndarray  # (basis,) the last step of the free ln activities
    # its minerals
    gained: np.ndarray  # (row,) what a mineral, or an open gas, gained in this solve, mol/kg
    reach: np.ndarray  # (row,) the most of a mineral its components allow, mol/kg
    saturation: np.ndarray  # (mineral,) ln of activity product over K
    # interactions; with any other law than SIT none of it is used
    seen: np.ndarray  # (species,) mol/kg: the molalities that the sums are taken with
    seen_before: np.ndarray  # (species,) the same before the last step
    seen_step: np.ndarray  # (species,) the step itself
    pull: np.ndarray  # (species,) the sums: what ln_gamma gains
    chosen: np.ndarray  # (species,) int64: whose molalities are unknowns of the step
    steep: np.ndarray  # (species + 2, species) slopes of ln molalities against ionic strength and chosen ones
    sides: np.ndarray  # (species + 1, basis) the same of the balances
    weights: np.ndarray  # (species + 1, basis) slopes of ionic strength and chosen ones against ln activities
    border: np.ndarray  # (species + 1, species + 1) what is left when the balances are eliminated
    ahead: np.ndarray  # (species + 1,) its right side and its answer


def padded(species: int) -> int:
    """The number of species with those that only fill up."""
    return -(-species // LANES) * LANES


def bench(matrices: Matrices) -> Bench:
    """Set out working space for a system."""
    basis, species = matrices.stoichiometry.shape
    components, minerals = matrices.conserved.shape[0], matrices.minerals
    rows = max(matrices.solid.shape[0], 1)
    both = basis + rows
    ions = matrices.interaction.shape[0]

    def real(*shape):
        return np.zeros(shape)

    def whole(*shape):
        return np.zeros(shape, np.int64)

    return Bench(
        dissolved=real(components),
        solid=real(minerals),
        upper=real(minerals),
        presence=np.zeros(minerals, np.int8),
        ln_activity=real(basis),
        total=real(basis),
        ln_gamma=real(species),
        slope=real(species),
        exponent=real(species),
        bits=whole(species),
        molality=real(species),
        share=real(species),
        sums=real(basis),
        abundance=real(basis),
        tied=np.zeros(rows, np.int8),
        rows=real(rows + 1, basis),
        turns=real(rows + 1, rows + 1),
        active=whole(rows),
        pivot=whole(rows),
        free=whole(basis),
        exit=whole(2),
        place=whole(basis),
        reduced=real(basis, species),
        reduced_ln_k=real(species),
        eased=real(species),
        reduced_total=real(basis),
        positive=real(basis),
        negative=real(basis),
        short=real(basis),
        matrix=real(both, both),
        right=real(both),
        side=real(both),
        weight=real(basis),
        taken=real(basis),
        gained=real(rows),
        reach=real(rows),
        saturation=real(rows),
        seen=real(ions),
        seen_before=real(ions),
        seen_step=real(ions),
        pull=real(ions),
        chosen=whole(ions),
        steep=real(ions + 2, ions),
        sides=real(ions + 1, basis),
        weights=real(ions + 1, basis),
        border=real(ions + 1, ions + 1),
        ahead=real(ions + 1),
    )

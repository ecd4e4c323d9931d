"""Closing the charge of a report with the one ion that is named for it."""

from __future__ import annotations

from gossan.base.wrong import Wrong
from gossan.chemistry.charge import basis_charge, net_charge
from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.reading import CARBON, Reading
from gossan.chemistry.roots import root_of_total
from gossan.chemistry.system import PROTON
from gossan.chemistry.valences import valence_totals


def balanced(reading: Reading, found: Equilibrium, ph: float) -> Equilibrium:
    """The water with the balance ion's total moved until the charges cancel.

    found, ph: the water as reported
    Raises   Wrong: an ion without charge, or one that would go below zero, with one that could serve
    """
    ion = str(reading.report.balance_on)
    b = reading.index(ion)
    charge = basis_charge(reading.system)[b]
    if charge == 0:
        raise Wrong(f'is balanced on "{ion}", which carries no charge', "name an ion, such as Cl or Na")
    before = float(reading.totals[b])
    if ion == CARBON:
        before = float(valence_totals(found)[b])

    def with_ion(amount: float) -> Equilibrium:
        changed = reading.totals.copy()
        changed[b] = amount
        return reading.at_reported_ph(changed, ph)

    off = net_charge(found)
    needed = before - off / charge
    if needed < 0.0:
        raise Wrong(
            f'is balanced on "{ion}", which would have to fall below zero (from {before:.3g} by '
            f"{-(needed - before):.3g} mol/kg)", _who_could_serve(found, off)
        )
    amount = root_of_total(lambda amount: net_charge(with_ion(amount)), before, needed)
    if amount is None:
        wrong = f'is balanced on "{ion}", which cannot take up the charge at that pH, even at zero'
        if ion == CARBON and reading.report.alkalinity is not None:
            wrong = f'is balanced on "{ion}", which its alkalinity fixes'
        raise Wrong(wrong, _who_could_serve(found, off))
    return with_ion(amount)


def _who_could_serve(found: Equilibrium, off: float) -> str:
    """Name the most abundant ion that can take up a charge error, or one that can be added."""
    system = found.system
    # what the pH has put on or taken off an ion moves with it, and is lost to the balance
    protons = system.stoichiometry.T @ (system.stoichiometry[:, 0] * found.molality()[:, 0])
    charges = basis_charge(system)
    carried = valence_totals(found) * charges + protons
    room = [
        (abs(held), name)
        for name, held, charge in zip(system.basis, carried, charges, strict=True)
        if name not in (PROTON, CARBON) and charge * off > 0 and held * off > off**2
    ]
    adding = "Cl" if off > 0 else "Na"
    return f'"{max(room)[1] if room else adding}" could serve'

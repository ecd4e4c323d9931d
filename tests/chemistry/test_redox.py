"""Coupled valences and gases that are held: what is conserved, and that the half reactions hold."""

from __future__ import annotations

import numpy as np
import pytest

from gossan.chemistry.equilibrium import Equilibrium, Solver, equilibrate
from gossan.chemistry.redox import basis_of, uncoupled
from gossan.chemistry.reservoir import fixed_pe, fixed_ph, held_to
from gossan.chemistry.system import System, build_system
from gossan.constants.load import load_table
from gossan.constants.temperature import log10_k_at

TABLE = load_table()
ALL = tuple(name for name, component in TABLE.components.items() if component.couple)
IONS = ("Na^+", "Cl^-", "Fe^2+", "Cu^2+", "Zn^2+", "SO4^2-", "CO3^2-", "Ca^2+")
COUPLED = build_system(TABLE, IONS, coupled=ALL)


def counted(system: System, amounts: dict[str, float]) -> np.ndarray:
    """(component,) totals of a water made up of these, valences by name, mol per kg of water."""
    return np.array(list(amounts.values())) @ system.conserved[[system.basis.index(name) for name in amounts]]


def pe(found: Equilibrium) -> float:
    return float(-found.log10_activity()[found.system.species.index("e^-"), 0])


def dissolved(found: Equilibrium, name: str) -> float:
    """mol/kg of a valence, in all its species."""
    return float(found.held()[found.system.basis.index(name), 0])


def test_valences_are_counted_as_first_ions_protons_and_electrons():
    basis = basis_of(TABLE, ["HS^-", "Fe^2+", "NO3^-"], ["HS^-", "Fe^3+", "Cu^+", "O2"])
    assert basis.components == ("H^+", "Fe^2+", "SO4^2-", "NO3^-", "e^-")
    assert set(basis.valences) == {"HS^-", "Fe^3+", "O2"}  # no copper, no Cu^+
    made = dict(zip(basis.names, basis.conserved.tolist(), strict=True))
    assert made["HS^-"] == [9, 0, 1, 0, 8]
    assert made["Fe^3+"] == [0, 1, 0, 0, -1]
    assert made["O2"] == [-4, 0, 0, 0, -4]
    firsts = dict(zip(basis.valences, basis.first.tolist(), strict=True))
    assert firsts == {"HS^-": 2, "Fe^3+": 1, "O2": -1}


def test_without_couples_nothing_is_added():
    basis = basis_of(TABLE, ["HS^-", "Fe^2+"], [])
    assert basis.components == ("H^+", "Fe^2+", "HS^-")
    assert basis.valences == ()
    assert basis.electron == -1


def test_charge_is_counted_with_the_electrons():
    for row, charge in zip(COUPLED.conserved, COUPLED.species_charge, strict=False):
        assert row @ COUPLED.component_charge == charge


def test_pyrite_needs_iron_and_sulfur_coupled():
    reaction = TABLE.minerals["pyrite"].reaction.components
    assert uncoupled(TABLE, reaction, ["HS^-"]) == ["Fe(II)/Fe(III)"]
    assert uncoupled(TABLE, reaction, ["HS^-", "Fe^3+"]) == []
    assert "pyrite" not in build_system(TABLE, IONS, ["pyrite"], coupled=["Fe^3+"]).minerals
    assert "pyrite" in build_system(TABLE, IONS, ["pyrite"], coupled=["Fe^3+", "HS^-"]).minerals


@pytest.mark.parametrize(
    "amounts",
    [
        {"Na^+": 0.01, "Cl^-": 0.01},
        {"Na^+": 0.01, "HS^-": 0.01},
        {"Na^+": 0.01, "HS^-": 0.01, "O2": 0.019},
        {"Na^+": 0.01, "HS^-": 0.01, "O2": 0.021},
        {"Fe^2+": 1e-3, "SO4^2-": 2e-3, "H^+": 2e-3, "O2": 1e-4},
        {"Fe^2+": 1e-3, "Cu^2+": 1e-4, "Zn^2+": 1e-3, "HS^-": 2.2e-3, "H^+": 1e-3, "SO4^2-": 0.02},
    ],
)
def test_half_reactions_and_balances_hold(amounts):
    total = counted(COUPLED, amounts)
    found = equilibrate(COUPLED, total)
    log10_activity = dict(zip(COUPLED.species, found.log10_activity()[:, 0], strict=True))
    for name in COUPLED.basis[len(COUPLED.components) :]:
        half = TABLE.components[name].half_reaction
        expected = log10_k_at(TABLE.components[name], 298.15) + half.electrons * log10_activity["e^-"]
        expected += sum(times * log10_activity[ion] for ion, times in half.components.items())
        if np.isfinite(expected):
            assert log10_activity[name] == pytest.approx(expected, abs=1e-9), name
    molality = found.molality()[:, 0]
    made = COUPLED.conserved.T @ COUPLED.stoichiometry.T @ molality
    made += COUPLED.mineral_stoichiometry.T @ found.solid[:, 0]
    # what counts is the size of the terms: a total of electrons can be nothing, made of much
    size = np.abs(COUPLED.stoichiometry @ COUPLED.conserved).T @ molality
    size += np.abs(COUPLED.mineral_stoichiometry).T @ found.solid[:, 0] + np.abs(total)
    assert np.all(np.abs(made - total) <= 1e-12 * size + 1e-30)


def test_water_alone_splits_into_twice_as_much_hydrogen_as_oxygen():
    found = equilibrate(COUPLED, counted(COUPLED, {"Na^+": 0.01, "Cl^-": 0.01}))
    assert dissolved(found, "H2") == pytest.approx(2 * dissolved(found, "O2"), rel=1e-12)


def test_the_scarce_valence_is_known_to_its_last_digit():
    """Sulfide alone: for each sulfate eight electrons went to hydrogen, or are missing in polysulfides."""
    found = equilibrate(COUPLED, counted(COUPLED, {"Na^+": 0.01, "HS^-": 0.01}))
    sulfate = dissolved(found, "SO4^2-")
    assert sulfate < 1e-7
    polysulfides = -dissolved(found, "e^-")
    assert 8 * sulfate + polysulfides == pytest.approx(2 * dissolved(found, "H2"), rel=1e-11)


def test_oxygen_and_sulfide_do_not_stand_together():
    short = equilibrate(COUPLED, counted(COUPLED, {"Na^+": 0.01, "HS^-": 0.01, "O2": 0.019}))
    spare = equilibrate(COUPLED, counted(COUPLED, {"Na^+": 0.01, "HS^-": 0.01, "O2": 0.021}))
    assert dissolved(short, "HS^-") == pytest.approx(0.01 - 0.019 / 2, rel=1e-3)
    assert dissolved(short, "O2") < 1e-60
    assert dissolved(spare, "O2") == pytest.approx(0.001, rel=1e-9)
    assert dissolved(spare, "HS^-") < 1e-60


def test_a_held_pe_divides_iron_as_its_half_reaction_says():
    system = build_system(TABLE, ["Fe^2+", "Cl^-"], [], coupled=["Fe^3+"], activity="ideal")
    found = held_to(system, [0.0, 1e-3, 3e-3, 0.0], [fixed_ph(system, 1.0), fixed_pe(system, 12.0)])
    ratio = found.log10_activity()[[system.species.index("Fe^3+"), system.species.index("Fe^2+")], 0]
    assert ratio[0] - ratio[1] == pytest.approx(12.0 - 13.02, abs=1e-9)
    iron, electron = system.components.index("Fe^2+"), system.components.index("e^-")
    assert found.amount[iron, 0] == pytest.approx(1e-3, rel=1e-12)
    assert -found.amount[electron, 0] == pytest.approx(dissolved(found, "Fe^3+"), rel=1e-12)


@pytest.mark.parametrize("ferric", [0.0, 1.0])
def test_a_couple_of_one_valence_alone_has_a_pe_within_waters_stability(ferric):
    """Nothing but iron(II), or nothing but iron(III), coupled to nothing else."""
    system = build_system(TABLE, ["Fe^2+", "Cl^-"], [], coupled=["Fe^3+"])
    found = equilibrate(system, [1e-2, 1e-3, 1.2e-2 + ferric * 1e-3, -ferric * 1e-3])
    iron = dissolved(found, "Fe^3+"), dissolved(found, "Fe^2+")
    assert iron[int(ferric)] < 1e-6
    assert iron[int(1 - ferric)] == pytest.approx(1e-3, rel=1e-3)
    assert -10.0 < pe(found) < 21.0


def test_an_absent_element_takes_its_valences_along():
    found = equilibrate(COUPLED, counted(COUPLED, {"Na^+": 0.01, "Cl^-": 0.01, "O2": 1e-4}))
    absent = [COUPLED.basis.index(name) for name in ("SO4^2-", "HS^-", "Fe^2+", "Fe^3+", "Cu^+")]
    assert np.all(np.isneginf(found.log10_activity()[absent, 0]))


def test_a_warm_start_finds_what_a_cold_one_finds():
    total = counted(COUPLED, {"Fe^2+": 1e-3, "HS^-": 3e-3, "Na^+": 1e-3, "SO4^2-": 0.01, "H^+": 2e-3})
    solver = Solver(COUPLED)
    none = np.zeros((len(COUPLED.minerals), 1))
    before = solver.cold(np.ones(1), total[:, None], none)
    for oxygen in (1e-3, 4e-3, 8e-3):
        more = before.amount + oxygen * counted(COUPLED, {"O2": 1.0})[:, None]
        warm = solver.settled(before, np.ones(1), more, before.solid)
        cold = solver.cold(np.ones(1), more, before.solid)
        assert np.array_equal(warm.presence, cold.presence)
        known = np.isfinite(cold.log10_activity())
        assert warm.log10_activity()[known] == pytest.approx(cold.log10_activity()[known], abs=1e-8)


def test_an_open_gas_gives_what_the_water_takes():
    system = build_system(TABLE, ["Ca^2+", "Na^+", "Cl^-"], ["calcite"], open_gases={"CO2": 10**-3.5})
    total = np.zeros(len(system.components))
    solid = np.array([[0.01]])
    found = Solver(system).cold(np.ones(1), total[:, None], solid)
    pressure = found.gas_pressure()[system.gases.index("CO2"), 0]
    assert pressure == pytest.approx(10**-3.5, rel=1e-10)
    gave = system.gas_supply.T @ found.given[:, 0]
    balance = found.amount[:, 0] + system.mineral_stoichiometry.T @ found.solid[:, 0]
    assert balance == pytest.approx(gave + system.mineral_stoichiometry.T @ solid[:, 0], abs=1e-16)
    # Garrels & Christ (1965): pH 8.3 of calcite under the air of their time (from memory)
    assert -found.log10_activity()[0, 0] == pytest.approx(8.3, abs=0.05)


def test_oxygen_held_in_a_cell_burns_all_sulfide():
    system = build_system(TABLE, IONS, coupled=ALL, open_gases={"O2": 0.2})
    solid = np.zeros((len(system.minerals), 1))
    solid[system.minerals.index("mackinawite")] = 0.01
    total = counted(system, {"Ca^2+": 0.02, "CO3^2-": 0.03, "H^+": 0.02})
    found = Solver(system).cold(np.ones(1), total[:, None], solid)
    assert found.solid[system.minerals.index("mackinawite"), 0] == 0.0
    iron = [name for name, amount in zip(system.minerals, found.solid[:, 0], strict=True) if amount > 1e-3]
    assert set(iron) & {"ferrihydrite", "schwertmannite"}
    # FeS + 9/4 O2 + 5/2 H2O = Fe(OH)3 + SO4^2- + 2 H^+
    assert found.given[0, 0] == pytest.approx(9 / 4 * 0.01, rel=0.1)


def test_a_limited_gas_is_used_up():
    def left(amount: float) -> tuple[float, float]:
        system = build_system(TABLE, ["Na^+", "HS^-", "Cl^-"], [], coupled=ALL, limited_gases={"O2": 0.2})
        total = counted(system, {"Na^+": 0.01, "HS^-": 0.01})
        found = Solver(system).cold(np.ones(1), total[:, None], np.array([[amount]]))
        return float(found.solid[0, 0]), dissolved(found, "HS^-")

    gone, sulfide = left(0.01)
    assert gone == 0.0
    assert sulfide == pytest.approx(0.005, rel=1e-3)
    rest, sulfide = left(0.03)
    # 2 O2 a sulfide; what is dissolved beside it at 0.2 atm by Henry's law, 1.265e-3 mol/kg and atm
    assert rest == pytest.approx(0.03 - 0.02 - 0.2 * 1.265e-3, rel=1e-3)
    assert sulfide < 1e-60

"""A laboratory report becomes a water by the rules: totals, then charge, then saturation."""

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gossan.base.wrong import Wrong
from gossan.chemistry.charge import net_charge
from gossan.chemistry.water import LabReport, Water, read_water
from gossan.constants.load import load_table

TABLE = load_table()
CHARGE = {name: component.charge for name, component in TABLE.components.items()}
BALANCED = 1e-13  # of all charges: what may be left after balance_on
# ions that no proton of the range below touches; their charges add up to the alkalinity of a neutral water
CONSERVATIVE = ("Na^+", "K^+", "Ca^2+", "Mg^2+", "Cl^-")
some = settings(max_examples=40, deadline=None)


def read(dissolved=None, **more) -> Water:
    activity = more.pop("activity", "davies")
    return read_water(LabReport("w", dissolved=dissolved or {}, **more), TABLE, activity=activity)


def tried(dissolved, **more) -> Water | Wrong:
    """The water, or why there is none."""
    try:
        return read(dissolved, **more)
    except Wrong as wrong:
        return wrong


def charges(water: Water) -> float:
    """All charges of a water, eq/kg, whatever their sign: the scale of a charge balance."""
    found = water.equilibrium
    return float(np.abs(found.system.species_charge) @ found.molality()[:, 0])


def logarithmic(low, high):
    return st.floats(low, high).map(lambda exponent: 10.0**exponent)


analyses = st.fixed_dictionaries({name: logarithmic(-5, -2) for name in CONSERVATIVE})
alkalinities = logarithmic(-4, -2)
phs = st.floats(5.0, 9.5)


# totals


@some
@given(analyses, alkalinities, phs)
def test_alkalinity_is_what_strong_ions_leave(analysis, alkalinity, ph):
    """Stumm & Morgan (1996), ch. 4: in a neutral water alkalinity is the charge of the strong ions."""
    analysis["Na^+"] += 0.05  # so that chloride can always be added
    water = read(analysis, pH=ph, alkalinity=alkalinity, balance_on="Cl^-")
    strong = sum(CHARGE[name] * water.totals[name] for name in CONSERVATIVE)
    assert strong == pytest.approx(alkalinity, abs=1e-9 * charges(water) + 1e-11 * alkalinity)
    assert water.pH == pytest.approx(ph, abs=1e-11)


@some
@given(analyses, alkalinities, phs)
def test_alkalinity_is_the_acid_that_brings_carbonate_to_carbonic_acid(analysis, alkalinity, ph):
    """With that much acid the water holds two protons per carbon: a solution of CO2 in salt water."""
    water = read(analysis, pH=ph, alkalinity=alkalinity, accept_imbalance=True)
    titrated = water.totals["H^+"] + alkalinity
    assert titrated == pytest.approx(2.0 * water.totals["CO3^2-"], rel=1e-9)


def test_an_alkalinity_below_what_other_solutes_make_is_refused():
    with pytest.raises(Wrong, match="less than its other solutes make") as wrong:
        read({"Na^+": 0.01, "HS^-": 0.01}, pH=9.0, alkalinity=1e-4)
    assert "leave it out" in wrong.value.right


def test_the_ph_is_the_report_s_and_is_7_without_one():
    assert read({"Na^+": 0.01, "Cl^-": 0.01}, pH=4.2).pH == pytest.approx(4.2, abs=1e-12)
    assert read({"Na^+": 0.01, "Cl^-": 0.01}).pH == pytest.approx(7.0, abs=1e-12)


@some
@given(analyses, phs)
def test_totals_are_the_report_s(analysis, ph):
    water = read(analysis, pH=ph, accept_imbalance=True)
    for name, amount in analysis.items():
        assert water.totals[name] == amount


# charge


@some
@given(analyses, phs, st.sampled_from(CONSERVATIVE), st.booleans())
def test_the_named_ion_alone_takes_up_the_imbalance(analysis, ph, ion, with_alkalinity):
    alkalinity = 1e-3 if with_alkalinity else None
    others = {name: amount for name, amount in analysis.items() if name != ion}
    water = tried(analysis, pH=ph, alkalinity=alkalinity, balance_on=ion)
    if isinstance(water, Wrong):
        assert "below zero" in water.wrong
        return
    assert abs(net_charge(water.equilibrium)) <= 10 * BALANCED * charges(water)
    assert water.pH == pytest.approx(ph, abs=1e-11)
    assert {name: water.totals[name] for name in others} == others
    assert water.totals[ion] >= 0.0


@some
@given(analyses, phs, st.sampled_from(CONSERVATIVE))
def test_who_could_serve_does_serve(analysis, ph, ion):
    """The cure of a refusal works when it is followed."""
    refused = tried(analysis, pH=ph, balance_on=ion)
    if isinstance(refused, Wrong):
        name = refused.right.split('"')[1]
        serving = name if name in CHARGE else {"Cl": "Cl^-", "Na": "Na^+"}[name]
        assert serving != ion
        water = read(analysis, pH=ph, balance_on=serving)
        assert abs(net_charge(water.equilibrium)) <= 10 * BALANCED * charges(water)


@pytest.mark.parametrize(
    ("analysis", "more"),
    [
        ({"Na^+": 0.01, "Cl^-": 0.02, "CO3^2-": 0.05}, {"pH": 5.0}),
        ({"Na^+": 0.001, "Cl^-": 0.01}, {"pH": 5.0, "alkalinity": 1e-3}),
    ],
)
def test_a_weak_ion_that_cannot_take_up_the_charge_is_refused(analysis, more):
    """Carbon at pH 5 is CO2 and carries nothing; with an alkalinity it is not free to move at all."""
    with pytest.raises(Wrong, match=r"CO3\^2-"):
        read(analysis, balance_on="CO3^2-", **more)


def test_an_ion_that_the_ph_has_taken_the_charge_from_is_not_named_as_a_cure():
    with pytest.raises(Wrong) as wrong:
        read({"Na^+": 1e-3, "Cl^-": 2e-3, "CO3^2-": 0.05, "SO4^2-": 0.01}, pH=5.0, balance_on="Cl^-")
    assert "CO3" not in wrong.value.right


def test_a_balance_ion_below_zero_is_refused():
    with pytest.raises(Wrong, match="below zero") as wrong:
        read({"Na^+": 0.001, "Ca^2+": 0.02, "Cl^-": 0.001}, pH=7.0, balance_on="Na^+")
    assert "could serve" in wrong.value.right
    assert "Ca" in wrong.value.right


def test_an_ion_that_the_analysis_lacks_can_be_the_balance():
    water = read({"Na^+": 0.01}, pH=7.0, balance_on="Cl^-")
    assert water.totals["Cl^-"] == pytest.approx(0.01, rel=1e-4)


def test_a_neutral_molecule_balances_nothing():
    with pytest.raises(Wrong, match="carries no charge"):
        read({"Na^+": 0.01, "H4SiO4": 1e-4}, pH=7.0, balance_on="H4SiO4")


@some
@given(analyses, phs)
def test_balanced_on_ph_the_given_ph_is_only_a_guess(analysis, guess):
    analysis["CO3^2-"] = 0.05  # enough carbon to take the imbalance up
    analysis["Na^+"] += 0.03
    water = read(analysis, pH=guess, balance_on="pH")
    assert abs(net_charge(water.equilibrium)) <= BALANCED * charges(water)
    assert water.pH == read(analysis, balance_on="pH").pH
    assert {name: water.totals[name] for name in analysis} == pytest.approx(analysis, rel=1e-15)


@pytest.mark.parametrize(
    ("percent", "told", "refused"),
    [(4.9, False, False), (5.1, True, False), (9.9, True, False), (10.1, True, True)],
)
@pytest.mark.parametrize("sign", [1, -1])
def test_limits_of_the_charge_error(percent, told, refused, sign):
    share = sign * percent / 100.0
    analysis = {"Na^+": 0.01 * (1 + share), "Cl^-": 0.01 * (1 - share)}
    if refused:
        with pytest.raises(Wrong, match=rf"charge error of \{'+' if sign > 0 else '-'}10\.1 %") as wrong:
            read(analysis, pH=7.0)
        assert "accept_imbalance" in wrong.value.right
    accepted = read(analysis, pH=7.0, accept_imbalance=True)
    assert accepted.charge_error_percent == pytest.approx(sign * percent, abs=1e-3)
    assert len(accepted.warnings) == told
    assert all("charge error" in warning for warning in accepted.warnings)
    if not refused:
        assert read(analysis, pH=7.0).warnings == accepted.warnings


def test_the_charge_error_is_that_of_the_report_also_when_it_is_balanced():
    analysis = {"Na^+": 0.012, "Cl^-": 0.008}
    water = read(analysis, pH=7.0, balance_on="Cl^-")
    assert water.charge_error_percent == pytest.approx(20.0, abs=1e-3)
    assert water.warnings == ()


# saturation


def test_mineral_and_gas_hold_together():
    water = read({"Na^+": 0.01, "Cl^-": 0.01}, pH=7.0, minerals={"calcite": 0.3}, gases={"CO2": 0.02})
    found = water.equilibrium
    assert found.saturation()[water.system.minerals.index("calcite"), 0] == pytest.approx(0.3, abs=1e-10)
    assert found.gas_pressure()[water.system.gases.index("CO2"), 0] == pytest.approx(0.02, rel=1e-10)


@some
@given(
    analyses,
    phs,
    st.floats(-1.0, 1.0),
    st.floats(-4.0, 0.0).map(lambda exponent: 10.0**exponent),
    st.floats(-1.0, 0.0),
)
def test_totals_move_by_whole_formulas_alone(analysis, ph, calcite, pressure, gypsum):
    analysis |= {"SO4^2-": 1e-3, "CO3^2-": 1e-3}
    before = read(analysis, pH=ph, accept_imbalance=True)
    after = read(
        analysis, pH=ph, accept_imbalance=True,
        minerals={"calcite": calcite, "gypsum": gypsum}, gases={"CO2": pressure},
    )  # fmt: skip
    system = after.system
    saturation = after.equilibrium.saturation()[:, 0]
    assert saturation[system.minerals.index("calcite")] == pytest.approx(calcite, abs=1e-9)
    assert saturation[system.minerals.index("gypsum")] == pytest.approx(gypsum, abs=1e-9)
    assert after.equilibrium.gas_pressure()[system.gases.index("CO2"), 0] == pytest.approx(pressure, rel=1e-9)
    moved = {name: after.totals[name] - before.totals[name] for name in system.components}
    sulfate = moved["SO4^2-"]  # of gypsum
    lime = moved["Ca^2+"] - sulfate  # of calcite
    scale = 1e-9 * max(map(abs, after.totals.values()))
    assert moved["H^+"] == pytest.approx(2.0 * (moved["CO3^2-"] - lime), abs=scale)  # CO2 is CO3 and 2 H
    for name in ("Na^+", "K^+", "Mg^2+", "Cl^-"):
        assert after.totals[name] == before.totals[name]
    assert net_charge(after.equilibrium) == pytest.approx(net_charge(before.equilibrium), abs=scale)


def test_saturation_comes_after_the_balance():
    """The ion is balanced at the report's pH; then calcite moves the pH and the charge stays closed."""
    analysis = {"Na^+": 0.005, "Cl^-": 0.002}
    bare = read(analysis, pH=6.0, alkalinity=1e-3, balance_on="Cl^-")
    water = read(analysis, pH=6.0, alkalinity=1e-3, balance_on="Cl^-", minerals={"calcite": 0.0})
    # calcite brings components along, and with them other last bits
    assert water.totals["Cl^-"] == pytest.approx(bare.totals["Cl^-"], rel=1e-11)
    assert water.pH > 7.0 > bare.pH
    assert abs(net_charge(water.equilibrium)) < 1e-12


@pytest.mark.parametrize(
    ("minerals", "gases"),
    [
        ({"calcite": 0.0, "aragonite": 0.0}, {}),
        ({"calcite": 0.0, "portlandite": 0.0}, {"CO2": 1e-3}),
        ({"gypsum": 0.0, "anhydrite": 0.0}, {}),
    ],
)
def test_more_than_the_phase_rule_allows_is_refused(minerals, gases):
    with pytest.raises(Wrong, match="phase rule") as wrong:
        read({"Na^+": 0.01, "Cl^-": 0.01}, pH=7.0, minerals=minerals, gases=gases)
    assert all(name in wrong.value.wrong for name in (*minerals, *gases))


def test_a_mineral_brings_its_own_components():
    water = read({"Na^+": 0.01, "Cl^-": 0.01}, pH=7.0, minerals={"gypsum": 0.0})
    assert water.totals["Ca^2+"] == pytest.approx(water.totals["SO4^2-"], rel=1e-12)
    assert water.totals["Ca^2+"] > 0.015


# pure water, temperature, warnings


@pytest.mark.parametrize(("celsius", "ph"), [(0.0, 7.473), (25.0, 6.998), (50.0, 6.632)])
def test_pure_water(celsius, ph):
    """Neutral pH of the CRC Handbook (Bandura & Lvov 2006), seen; 0.01 is what the fit costs."""
    water = read(temperature=273.15 + celsius)
    assert water.pH == pytest.approx(ph, abs=0.01)
    assert water.totals == {"H^+": 0.0}
    assert water.warnings == ()
    assert water.charge_error_percent == 0.0


def test_pure_water_cannot_have_another_ph():
    (warning,) = read(pH=4.0).warnings
    assert "pure water has pH 7.00" in warning
    assert read(pH=7.0).warnings == ()


def test_pure_water_under_gas_is_rain():
    """5.60 at 420 ppm of CO2 (arithmetic from Henry's and the first acid constant)."""
    water = read(gases={"CO2": 4.2e-4})
    assert water.pH == pytest.approx(5.60, abs=0.01)
    assert water.warnings == ()
    assert abs(net_charge(water.equilibrium)) < 1e-15


def test_the_report_s_temperature_is_that_of_the_constants():
    limestone = {"minerals": {"calcite": 0.0}, "gases": {"CO2": 1.0}}
    cold, warm = (read(temperature=273.15 + celsius, **limestone) for celsius in (10, 25))
    assert cold.totals["Ca^2+"] > 1.2 * warm.totals["Ca^2+"]
    assert cold.system.temperature == 283.15


@pytest.mark.parametrize(
    ("activity", "strength", "told"),
    [("davies", 0.49, False), ("davies", 0.51, True), ("debye-hueckel", 0.09, False),
     ("debye-hueckel", 0.11, True), ("ideal", 2.0, False), ("sit", 3.4, False), ("sit", 3.6, True)],
)  # fmt: skip
def test_a_water_outside_the_law_s_range_draws_a_warning(activity, strength, told):
    water = read({"Na^+": strength, "Cl^-": strength}, pH=7.0, activity=activity)
    assert any("ionic strength" in warning for warning in water.warnings) == told


def test_a_strong_acid_salt_of_aluminium_is_told_to_be_out_of_range():
    """1 mol/kg of AlCl3 has I = 6: its coefficient comes out a third too low there, and the water says so."""
    water = read({"Al^3+": 1.0, "Cl^-": 3.0}, pH=2.5, balance_on="Cl^-", activity="sit")
    assert "ionic strength 6 mol/kg: the sit law is meant for waters up to 3.5" in water.warnings


def test_excluded_species_are_not_there():
    report = LabReport("w", dissolved={"Ca^2+": 0.01, "SO4^2-": 0.01}, pH=7.0)
    with_pair, without = (read_water(report, TABLE, excluded=left_out) for left_out in ((), ("CaSO4",)))
    assert "CaSO4" in with_pair.system.species
    assert "CaSO4" not in without.system.species
    assert without.ionic_strength == pytest.approx(0.04, rel=1e-3)
    assert with_pair.ionic_strength < 0.03


def test_an_alkalinity_that_an_acid_water_cannot_have_is_refused():
    """Common practice, no source: below pH 4.5 a titration finds no alkalinity.

    By hand: bicarbonate is alkalinity + H^+ = 1.2 mmol/kg, CO2 10^(6.35 - 3.1) times that, 2.1 mol/kg, over
    0.034 mol/kg/atm: some 60 atm.
    """
    report = LabReport("adit", dissolved={"Ca^2+": 1e-3, "Cl^-": 2e-3}, pH=3.1, alkalinity=4e-4)
    with pytest.raises(Wrong, match=r"needs carbon dioxide at (5[5-9]|6\d|70)(\.\d)? atm"):
        read_water(report, load_table())
    fizzing = read_water(replace(report, pH=4.3, dissolved={"Ca^2+": 1.2e-3, "Cl^-": 2e-3}), load_table())
    assert any("fizz" in warning for warning in fizzing.warnings)

"""Waters by Eh, pe or dissolved oxygen: what is divided once, what is coupled, what stays as it was named.

The oracles are ratios of activities by Nernst's equation, worked out here from the half reactions' constants.
"""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gossan.base.wrong import Wrong
from gossan.chemistry.charge import equivalents, net_charge
from gossan.chemistry.report import LabReport
from gossan.chemistry.water import Water, read_water
from gossan.constants.couples import couples_of
from gossan.constants.load import load_table
from gossan.constants.potential import pe_of_oxygen

TABLE = load_table()
ALL = couples_of(TABLE)
FE, CU, HS, O2 = 13.02, 2.69, 33.69, 86.0  # log10 K of the half reactions at 25 degC, as the table has them
some = settings(max_examples=25, deadline=None)
POLYSULFIDES = tuple(f"S{count}^2-" for count in range(2, 7))


def read(dissolved, coupled=(), **more) -> Water:
    return read_water(LabReport("w", dissolved=dissolved, **more), TABLE, coupled=coupled)


def log10(water: Water, name: str) -> float:
    """log10 of the activity of a species."""
    return float(water.equilibrium.log10_activity()[water.system.species.index(name), 0])


SALT = {"Na^+": 2e-3, "Cl^-": 3e-3}
METALS = {**SALT, "Fe^2+": 1e-4, "Cu^2+": 1e-5, "Mn^2+": 1e-5}
BARE = frozenset({"Fe^2+", "Cu^2+", "Mn^2+"})


# held: pe divides once


def test_without_a_redox_potential_nothing_is_divided():
    water = read(METALS, pH=5.0, balance_on="Cl^-", undivided=BARE)
    assert math.isnan(water.pe)
    assert math.isnan(water.reported_pe)
    assert "Fe^3+" not in water.totals
    assert "Cu^+" not in water.totals
    assert "e^-" not in water.totals


@some
@given(st.floats(3.0, 9.0), st.floats(-3.0, 12.0))
def test_pe_divides_by_nernst_and_leaves_no_electrons(ph, pe):
    water = read(METALS, pH=ph, pe=pe, balance_on="Cl^-", undivided=BARE)
    totals = water.totals
    assert "e^-" not in totals
    assert math.isnan(water.pe)
    assert water.reported_pe == pe
    assert water.pH == pytest.approx(ph, abs=1e-9)
    for element, first, second in (("Fe", "Fe^2+", "Fe^3+"), ("Cu", "Cu^2+", "Cu^+")):
        given_, parts = METALS[first], totals[first] + totals.get(second, 0.0)
        assert parts == pytest.approx(given_, rel=1e-12), element
    if totals.get("Fe^3+", 0.0) > 1e-14:
        assert log10(water, "Fe^3+") - log10(water, "Fe^2+") == pytest.approx(pe - FE, abs=1e-6)
    if totals.get("Cu^+", 0.0) > 1e-14:
        assert log10(water, "Cu^+") - log10(water, "Cu^2+") == pytest.approx(CU - pe, abs=1e-6)
    assert abs(net_charge(water.equilibrium)) < 1e-13


def test_a_valence_that_is_named_is_not_divided():
    named = read(METALS, pH=5.0, pe=12.0, balance_on="Cl^-", undivided=frozenset({"Cu^2+"}))
    assert named.totals["Fe^2+"] == METALS["Fe^2+"]
    assert "Fe^3+" not in named.totals
    both = read({**SALT, "Fe^2+": 1e-4, "Fe^3+": 2e-6}, pH=3.0, pe=12.0, balance_on="Cl^-")
    assert (both.totals["Fe^2+"], both.totals["Fe^3+"]) == (1e-4, 2e-6)


def test_less_than_anybody_measures_is_not_split_off():
    water = read(METALS, pH=4.0, pe=-3.0, balance_on="Cl^-", undivided=BARE)
    assert "Mn^3+" not in water.totals
    assert water.totals["Mn^2+"] == pytest.approx(METALS["Mn^2+"], rel=1e-12)


def test_other_elements_do_not_know_of_the_pe():
    analysis = {**METALS, "SO4^2-": 1e-3, "NO3^-": 1e-4}
    water = read(analysis, pH=7.0, pe=-5.0, balance_on="Na^+", undivided=BARE)
    assert water.totals["SO4^2-"] == 1e-3
    assert water.totals["NO3^-"] == 1e-4
    assert "HS^-" not in water.totals


def test_oxygen_is_a_solute_and_divides_like_its_pe():
    by_oxygen = read(METALS, pH=5.0, oxygen=2e-4, balance_on="Cl^-", undivided=BARE)
    assert by_oxygen.totals["O2"] == 2e-4
    pe = (math.log10(2e-4) + O2) / 4 - 5.0  # but for an activity coefficient of 1.001
    assert by_oxygen.reported_pe == pytest.approx(pe, abs=1e-3)
    by_pe = read(METALS, pH=5.0, pe=by_oxygen.reported_pe, balance_on="Cl^-", undivided=BARE)
    for name in ("Fe^2+", "Fe^3+", "H^+"):
        assert by_oxygen.totals[name] == pytest.approx(by_pe.totals[name], rel=1e-6)


def test_oxygen_in_pure_water_leaves_its_ph_alone():
    water = read({}, oxygen=2.5e-4)
    assert water.totals == {"H^+": pytest.approx(0.0, abs=1e-15), "O2": 2.5e-4}
    assert water.warnings == ()


def test_balanced_on_ph_at_a_pe():
    """Iron(III) is the stronger acid: the more of it, the lower the pH that closes the charge."""
    analysis = {"Fe^2+": 1e-3, "SO4^2-": 3e-3, "Na^+": 4e-3}
    acid = [
        read(analysis, pe=pe, balance_on="pH", undivided=frozenset({"Fe^2+"})) for pe in (9.0, 11.0, 12.0)
    ]
    for water in acid:
        assert abs(net_charge(water.equilibrium)) < 1e-13
        assert water.totals["Fe^2+"] + water.totals["Fe^3+"] == pytest.approx(1e-3, rel=1e-12)
        ratio = log10(water, "Fe^3+") - log10(water, "Fe^2+")
        assert ratio == pytest.approx(water.reported_pe - FE, abs=1e-6)
    assert acid[0].pH != acid[1].pH != acid[2].pH


# coupled


@some
@given(st.floats(3.0, 9.0), st.floats(-0.8, 0.95))
def test_all_couples_stand_at_the_reported_pe(ph, place):
    """Anywhere between the lines of water (place 0 is hydrogen, 1 oxygen)."""
    pe = 20.0 * max(place, 0.0) - ph
    analysis = {**METALS, "SO4^2-": 1e-3}
    water = read(analysis, ALL, pH=ph, pe=pe, balance_on="Cl^-", undivided=BARE)
    assert water.pe == pytest.approx(pe, abs=1e-7)
    assert water.pH == pytest.approx(ph, abs=1e-7)
    assert "HS^-" not in water.totals
    assert log10(water, "Fe^3+") - log10(water, "Fe^2+") == pytest.approx(pe - FE, abs=1e-6)
    assert log10(water, "Cu^+") - log10(water, "Cu^2+") == pytest.approx(CU - pe, abs=1e-6)
    assert log10(water, "HS^-") - log10(water, "SO4^2-") == pytest.approx(HS - 9 * ph - 8 * pe, abs=1e-6)
    assert log10(water, "O2") == pytest.approx(4 * (ph + pe) - O2, abs=1e-6)
    for name in ("Fe^2+", "Cu^2+", "SO4^2-"):
        assert water.totals[name] == pytest.approx(analysis[name], rel=1e-12)
    assert abs(net_charge(water.equilibrium)) < 1e-12


def test_without_a_potential_the_electrons_are_those_of_the_valences_named():
    analysis = {**SALT, "Fe^2+": 2e-4, "Fe^3+": 1e-4, "SO4^2-": 1e-3, "HS^-": 1e-5}
    water = read(analysis, ALL, pH=3.0, balance_on="Cl^-")
    assert water.totals["Fe^2+"] == pytest.approx(3e-4, rel=1e-12)
    assert water.totals["SO4^2-"] == pytest.approx(1.01e-3, rel=1e-12)
    assert water.totals["e^-"] == pytest.approx(8 * 1e-5 - 1e-4, rel=1e-12)
    # iron(III) eats the sulfide: 8 for one
    assert water.valences["Fe^3+"] == pytest.approx(2e-5, rel=1e-3)
    assert water.valences["HS^-"] < 1e-20
    assert any("HS^- in the report" in warning for warning in water.warnings)


def test_two_valences_that_are_named_keep_their_ratio():
    water = read({**SALT, "Fe^2+": 1e-3, "Fe^3+": 1e-3}, ("Fe^3+",), pH=2.5, balance_on="Cl^-")
    assert water.valences["Fe^3+"] == pytest.approx(1e-3, rel=1e-9)
    assert water.pe == pytest.approx(FE + log10(water, "Fe^3+") - log10(water, "Fe^2+"), abs=1e-9)
    assert water.warnings == ()


def test_only_the_named_couple_is_at_equilibrium():
    analysis = {**SALT, "Fe^2+": 1e-3, "Fe^3+": 1e-3, "HS^-": 1e-3, "NO3^-": 1e-3}
    water = read(analysis, ("Fe^3+",), pH=2.5, balance_on="Cl^-", accept_imbalance=True)
    assert (water.totals["HS^-"], water.totals["NO3^-"]) == (1e-3, 1e-3)
    assert "SO4^2-" not in water.totals
    assert water.totals["Fe^2+"] == pytest.approx(2e-3, rel=1e-12)


def test_a_couple_whose_element_is_absent_brings_no_electrons():
    water = read(SALT, ("Fe^3+", "Cu^+"), pH=6.0, balance_on="Cl^-")
    assert set(water.totals) == {"H^+", "Na^+", "Cl^-"}
    assert math.isnan(water.pe)


def test_oxygen_holds_the_pe_of_a_coupled_water():
    """Nothing else can then be reduced, and the measured oxygen is there to the last digit that matters."""
    water = read({**METALS, "SO4^2-": 1e-3}, ALL, pH=6.0, oxygen=2e-4, balance_on="Cl^-", undivided=BARE)
    assert water.valences["O2"] == pytest.approx(2e-4, rel=1e-6)
    assert water.pe == pytest.approx(pe_of_oxygen(2e-4, 6.0, 298.15, TABLE), abs=1e-3)
    assert water.totals["e^-"] == pytest.approx(-4 * 2e-4 - water.valences["Fe^3+"], rel=1e-6)


def test_a_potential_and_one_couple_leave_no_oxygen_behind():
    """Oxygen that is no couple of the case is neither a store of electrons nor in the totals."""
    water = read({**SALT, "Fe^2+": 1e-4}, ("Fe^3+",), pH=7.0, oxygen=2e-4, balance_on="Cl^-",
                 undivided=frozenset({"Fe^2+"}))  # fmt: skip
    assert water.totals["O2"] == 2e-4
    assert water.totals["e^-"] == pytest.approx(-1e-4, rel=1e-6)


@some
@given(st.floats(6.0, 9.0), st.floats(0.05, 0.95))
def test_alkalinity_and_charge_count_valences(ph, share):
    """A coupled sulfidic water is read as the same water with its valences held apart.

    The share of sulfide sets the pe by Nernst, so the couple does not react, and both must agree but for the
    hydrogen that water makes at that pe, below 1e-10 mol/kg.
    """
    analysis = {"Na^+": 9e-3, "SO4^2-": 3e-3 * (1 - share), "HS^-": 3e-3 * share, "Cl^-": 1e-4}
    more = {"pH": ph, "alkalinity": 4e-3, "balance_on": "Na^+"}
    report = LabReport("w", dissolved=analysis, **more)
    held, coupled = (read_water(report, TABLE, excluded=POLYSULFIDES, coupled=c) for c in ((), ("HS^-",)))
    assert coupled.charge_error_percent == pytest.approx(held.charge_error_percent, abs=1e-5)
    for name, total in held.totals.items():
        assert coupled.valences[name] == pytest.approx(total, rel=1e-6, abs=2e-9), name
    assert equivalents(coupled.equilibrium) == pytest.approx(equivalents(held.equilibrium), rel=1e-6)


def test_ions_between_two_valences_count_by_their_charge():
    """Polysulfides have electrons in their formula; cations and anions are equal all the same."""
    analysis = {"Na^+": 0.05, "SO4^2-": 3e-3, "HS^-": 2e-2}
    water = read(analysis, ALL, pH=8.5, balance_on="Na^+", minerals={"sulfur": 0.0})
    found = water.equilibrium
    poly = found.molality()[water.system.species.index("S5^2-"), 0]
    assert poly > 1e-5
    cations, anions = equivalents(found)
    assert cations == pytest.approx(anions, rel=1e-12)


# saturation


def test_a_mineral_with_electrons_moves_pe_by_its_formula_alone():
    analysis = {**SALT, "Fe^2+": 1e-4, "SO4^2-": 1e-3, "HS^-": 1e-4}
    before = read(analysis, ALL, pH=6.5, balance_on="Cl^-")
    after = read(analysis, ALL, pH=6.5, balance_on="Cl^-", minerals={"pyrite": 0.0})
    found = after.equilibrium
    assert found.saturation()[after.system.minerals.index("pyrite"), 0] == pytest.approx(0.0, abs=1e-9)
    dissolved = {name: after.totals[name] - before.totals[name] for name in ("Fe^2+", "SO4^2-", "e^-", "H^+")}
    pyrite = dissolved["Fe^2+"]
    assert dissolved["SO4^2-"] == pytest.approx(2 * pyrite, rel=1e-6)
    assert dissolved["e^-"] == pytest.approx(14 * pyrite, rel=1e-6)  # FeS2 + 8 H2O = Fe + 2 SO4 + 16 H + 14 e
    assert dissolved["H^+"] == pytest.approx(16 * pyrite, rel=1e-6)


def test_oxygen_of_the_air_by_saturation_sets_the_pe():
    water = read({**SALT, "Fe^2+": 1e-4}, ALL, pH=7.0, balance_on="Cl^-", gases={"O2": 0.2})
    gas = water.system.gases.index("O2")
    assert water.equilibrium.gas_pressure()[gas, 0] == pytest.approx(0.2, rel=1e-6)
    assert water.valences["Fe^3+"] == pytest.approx(1e-4, rel=1e-6)
    assert water.pH < 5.0  # 2.5 protons of hydrolysis for each iron that is oxidised
    assert water.warnings == ()


def test_two_burning_gases_are_more_than_the_phase_rule_allows():
    with pytest.raises(Wrong, match="phase rule"):
        read(SALT, ALL, pH=7.0, accept_imbalance=True, gases={"O2": 0.2, "H2": 0.2})


def test_an_index_out_of_reach_is_refused_by_name():
    with pytest.raises(Wrong, match=r"cannot be brought to calcite.*1000 mol/kg") as wrong:
        read(SALT, pH=7.0, accept_imbalance=True, minerals={"calcite": 20.0, "gypsum": 0.0})
    assert "lower that index" in wrong.value.right


# what cannot be


def test_methane_has_no_alkalinity():
    """At the foot of water's stability carbon is methane, and no amount of it takes up acid at pH 5.3."""
    with pytest.raises(Wrong, match="that no carbon brings about") as wrong:
        read({"Na^+": 0.02, "SO4^2-": 1e-3}, ALL, pH=5.3, pe=-5.2, alkalinity=9.5e-3, balance_on="Na^+")
    assert "redox potential" in wrong.value.right


@pytest.mark.parametrize(
    ("ph", "pe", "outcome"),
    [(7.0, 13.6, ""), (7.0, 13.9, "oxygen"), (7.0, 15.0, "refused"), (7.0, -6.9, ""), (7.0, -7.4, "hydrogen"),
     (7.0, -9.0, "refused"), (2.0, 18.6, ""), (2.0, 19.0, "oxygen")],
)  # fmt: skip
@pytest.mark.parametrize("coupled", [(), ALL], ids=["held", "coupled"])
def test_a_pe_beyond_the_lines_of_water(ph, pe, outcome, coupled):
    """The lines are pe = 20.78 - pH and pe = -pH at 25 degC."""
    more = {"pH": ph, "pe": pe, "balance_on": "Cl^-"}
    if outcome == "refused":
        with pytest.raises(Wrong, match="outside of what water can stand") as wrong:
            read({"Na^+": 0.02}, coupled, **more)
        assert "hydrogen electrode" in wrong.value.right
        return
    warnings = [warning for warning in read({"Na^+": 0.02}, coupled, **more).warnings if "outside" in warning]
    assert len(warnings) == bool(outcome)
    assert all(outcome in warning for warning in warnings)


@pytest.mark.parametrize(("milligrams", "told"), [(8.2, False), (8.5, False), (9.0, True), (16.0, True)])
def test_more_oxygen_than_air_gives_draws_a_warning(milligrams, told):
    warnings = read(SALT, pH=7.0, oxygen=milligrams / 31998.0, accept_imbalance=True).warnings
    assert any("of saturation with air" in warning for warning in warnings) is told


def test_a_water_that_says_nothing_of_redox_is_told_so():
    silent = {**SALT, "Fe^2+": 1e-4, "SO4^2-": 1e-3, "Na^+": 5e-3}
    for dissolved, more, told in [
        (silent, {}, True),
        (silent, {"pe": 2.0}, False),
        (silent, {"gases": {"O2": 0.2}}, False),
        (silent, {"gases": {"CO2": 0.01}}, True),
        ({**silent, "HS^-": 1e-5}, {}, False),
    ]:
        warnings = read(dissolved, ALL, pH=6.0, balance_on="Cl^-", **more).warnings
        assert any("nothing says how oxidised" in warning for warning in warnings) is told, more


def test_the_division_is_told():
    (told,) = read({**SALT, "Fe^2+": 1e-4}, pH=4.0, pe=13.0, balance_on="Cl^-",
                   undivided=frozenset({"Fe^2+"})).warnings  # fmt: skip
    assert told.startswith("at pe 13.00, ")
    assert told.endswith("% of Fe is Fe^3+")


def test_totals_and_valences_are_the_same_thing_where_nothing_is_coupled():
    water = read(METALS, pH=6.0, balance_on="Cl^-")
    assert water.valences == water.totals
    assert np.isnan(water.pe)

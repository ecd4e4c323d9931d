"""Constants at another temperature: the three ways, sums of fits, and what the loader makes of chains."""

from math import log10

import pytest
from hypothesis import given
from hypothesis import strategies as st

from gossan.constants.entries import Constant, Reaction, Species, TemperatureFit
from gossan.constants.load import load_table
from gossan.constants.temperature import combined, evaluated, log10_k_at, van_t_hoff

TABLE = load_table()
numbers = st.floats(-1e3, 1e3)
fits = st.builds(TemperatureFit, numbers, numbers, numbers, numbers, numbers)


def bare(enthalpy=None, fit=None):
    heat = None if enthalpy is None else Constant(enthalpy, None, "J/mol", "judgement")
    return Species("X", 0, Reaction("", {}), Constant(-3.0, 0.1, "1", "judgement"), heat, fit)


def test_the_fit_comes_first_then_the_enthalpy_then_the_constant():
    assert log10_k_at(bare(), 283.15) == -3.0
    # integrated van 't Hoff by hand: 40000/(8.314462618 ln 10) (1/298.15 - 1/283.15) = -0.37124
    assert log10_k_at(bare(40e3), 283.15) == pytest.approx(-3.37124, abs=1e-5)
    assert log10_k_at(bare(40e3, TemperatureFit(linear=0.01)), 283.15) == pytest.approx(2.8315)


def test_every_power_of_a_fit_counts():
    fit = TemperatureFit(constant=1.0, linear=0.5, inverse=300.0, log10=2.0, inverse_square=9e4)
    assert evaluated(fit, 300.0) == pytest.approx(1.0 + 150.0 + 1.0 + 2.0 * log10(300.0) + 1.0, rel=1e-15)


@given(fits, fits, st.floats(-5, 5), st.floats(273.15, 323.15))
def test_sums_of_fits_are_fits_of_sums(first, second, times, t):
    both = evaluated(combined([(1.0, first), (times, second)]), t)
    size = (
        sum(abs(n) for fit in (first, second) for n in (fit.constant, fit.linear * t, fit.log10 * 3)) + 10.0
    )
    assert both == pytest.approx(evaluated(first, t) + times * evaluated(second, t), abs=1e-13 * size * 6)


@given(st.floats(-50, 50), st.floats(-1e6, 1e6))
def test_van_t_hoff_passes_through_25_degrees_with_its_slope(log10_k, enthalpy):
    fit = van_t_hoff(log10_k, enthalpy)
    assert evaluated(fit, 298.15) == pytest.approx(log10_k, abs=1e-10)
    slope = (evaluated(fit, 298.25) - evaluated(fit, 298.05)) / 0.2
    assert slope == pytest.approx(enthalpy / (8.314462618 * 2.302585093 * 298.15**2), rel=1e-5, abs=1e-10)


def test_the_table_keeps_its_constants_at_25_degrees():
    """log10_k is what is printed, the fit what is used: they differ by rounding, the most for siderite."""
    for group in (TABLE.species, TABLE.minerals, TABLE.gases):
        for record in group.values():
            assert log10_k_at(record, 298.15) == pytest.approx(record.log10_k.value, abs=2.5e-3), record.name


def test_a_chain_without_a_fit_still_follows_its_parts():
    # FeHCO3+ from HCO3- has no enthalpy of its own: all its change with temperature is that of HCO3-
    iron, bicarbonate = TABLE.species["FeHCO3^+"], TABLE.species["HCO3^-"]
    for t in (273.15, 285.15, 323.15):
        assert log10_k_at(iron, t) == pytest.approx(2.0 + log10_k_at(bicarbonate, t), abs=1e-10)


def test_half_reactions_follow_their_enthalpy_and_first_ions_have_none():
    # O2: 559.5 kJ/mol, so at 10 degC 86.0 becomes 86.0 + 559500/19.14476 (1/283.15 - 1/298.15)
    oxygen = TABLE.components["O2"]
    assert log10_k_at(oxygen, 283.15) == pytest.approx(-86.0 - 559500 / 19.144757 * (1 / 283.15 - 1 / 298.15))
    with pytest.raises(ValueError, match="first ion"):
        log10_k_at(TABLE.components["Zn^2+"], 298.15)

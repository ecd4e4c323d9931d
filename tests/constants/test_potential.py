"""pe, Eh and oxygen by arithmetic that stands beside them, and what air leaves in water."""

import math

import pytest

from gossan.constants.load import load_table
from gossan.constants.oxygen import air_saturated
from gossan.constants.potential import pe_of_oxygen, pe_of_potential, potential_of_pe, pressures_of_water
from gossan.constants.temperature import log10_k_at
from gossan.constants.water import density

TABLE = load_table()


@pytest.mark.parametrize(("celsius", "millivolts"), [(0, 54.20), (20, 58.17), (25, 59.16), (30, 60.15)])
def test_a_unit_of_pe_is_the_slope_of_nernst(celsius, millivolts):
    """The slope of every glass electrode: 59.16 mV a decade at 25 degC (tables of pH meters, from memory)."""
    assert potential_of_pe(1.0, 273.15 + celsius) == pytest.approx(millivolts / 1e3, abs=6e-6)


@pytest.mark.parametrize("kelvin", [273.15, 298.15, 323.15])
@pytest.mark.parametrize("pe", [-7.3, 0.0, 13.6])
def test_there_and_back(pe, kelvin):
    assert pe_of_potential(potential_of_pe(pe, kelvin), kelvin) == pytest.approx(pe, abs=1e-14)


@pytest.mark.parametrize("kelvin", [273.15, 298.15, 323.15])
@pytest.mark.parametrize("ph", [2.0, 7.0, 11.0])
def test_oxygen_of_one_atmosphere_is_the_upper_line_of_water(ph, kelvin):
    """Its pe, put back, has a pressure of one atmosphere."""
    dissolved = 10.0 ** log10_k_at(TABLE.gases["O2"], kelvin)
    pe = pe_of_oxygen(dissolved, ph, kelvin, TABLE)
    assert pressures_of_water(pe, ph, kelvin, TABLE)["O2"] == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize("ph", [2.0, 7.0, 11.0])
def test_hydrogen_of_one_atmosphere_is_the_hydrogen_electrode(ph):
    """pe = -pH by definition of the scale, at every temperature."""
    for kelvin in (273.15, 298.15, 323.15):
        assert pressures_of_water(-ph, ph, kelvin, TABLE)["H2"] == pytest.approx(0.0, abs=0.03)


def test_the_width_of_water_is_that_of_its_formation():
    """1.229 V between oxygen and hydrogen of 1 atm: 237.1 kJ/mol over 2 F (CODATA, from memory)."""
    upper = pe_of_oxygen(10.0 ** log10_k_at(TABLE.gases["O2"], 298.15), 0.0, 298.15, TABLE)
    assert potential_of_pe(upper, 298.15) == pytest.approx(237.14e3 / (2 * 96485.0), abs=2e-3)


# mg/L under moist air of 1 atm.  Source: Benson & Krause (1984) as tabulated in Standard Methods 4500-O, from
# memory; the table has three decimals, and the density of the water comes in
IN_AIR = [
    (0, 14.621), (5, 12.770), (10, 11.288), (15, 10.084), (20, 9.092), (25, 8.263), (30, 7.559), (40, 6.412),
]  # fmt: skip


@pytest.mark.parametrize(("celsius", "milligrams"), IN_AIR)
def test_what_air_leaves_in_water(celsius, milligrams):
    kelvin = 273.15 + celsius
    assert 31.998 * density(kelvin) * air_saturated(kelvin) == pytest.approx(milligrams, abs=2e-3)


@pytest.mark.parametrize(("celsius", "vapour"), [(0, 0.00603), (10, 0.01211), (25, 0.03126), (40, 0.07285)])
def test_the_gas_constant_of_the_table_says_the_same(celsius, vapour):
    """Oxygen is 20.946 % of dry air; vapour: pressure of water in atm (CRC Handbook, from memory)."""
    kelvin = 273.15 + celsius
    by_pressure = 10.0 ** log10_k_at(TABLE.gases["O2"], kelvin) * 0.20946 * (1.0 - vapour)
    assert math.log10(by_pressure / air_saturated(kelvin)) == pytest.approx(0.0, abs=1e-3)

"""Columns whose feed, flow or temperature changes in time, against superposed exact solutions.

Transport is linear in what enters, so a feed c(t) leaves the sum of its steps, C = sum of dc S(x, t - t'),
with the step S of a held flux: Lindstrom et al. (1967) Soil Sci. Soc. Am. Proc. 31, 623-629 and van Genuchten
& Alves (1982) USDA Tech. Bull. 1661, both from memory. Ramps are its integral, here by quadrature to 1e-10.
Without diffusion D is proportional to the flux, so that a profile knows only how much water has passed: any
course of the flux has the exact solution of that water. A stop lets a step spread as an error function:
Crank (1975) The Mathematics of Diffusion, ch. 2, from memory.
"""

from __future__ import annotations

from collections.abc import Callable
from math import pi, sqrt

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.interpolate import CubicSpline
from scipy.special import erfc, erfcx
from tests.support.columns import Walk, case_of, column, walk

import gossan
from gossan.case.waters import read_waters
from gossan.constants.water import fluidity_ratio
from gossan.views.bed import bed_of

DAY = 86400.0
POROSITY = 0.3
FLUX = 0.3  # m d-1: 1 m/d in the pores
SPREAD = 0.05  # m, dispersivity
PLACES = np.array([0.1, 0.3, 0.5, 0.7, 0.9, 1.1])
# What such a grid (1 cm) and such steps leave of a front this broad; measured: see each test.
CLOSE = 2e-4
WATERS = """
[waters.rinse]
[waters.pore]
[waters.feed.tracers]
a = "1 mol/m3"
"""


def step(x: np.ndarray, passed: float) -> np.ndarray:
    """Resident concentration after a step of the inflow, where water has since moved on by `passed` m."""
    if passed <= 0.0:
        return np.zeros_like(x)
    root = 2.0 * np.sqrt(SPREAD * passed)
    gauss = np.exp(-((x - passed) ** 2) / root**2)
    # exp(x / a) erfc(...) without overflow: erfcx(u) = exp(u^2) erfc(u)
    far = gauss * erfcx((x + passed) / root)
    return (
        0.5 * erfc((x - passed) / root)
        + sqrt(passed / (pi * SPREAD)) * gauss
        - 0.5 * (1.0 + x / SPREAD + passed / SPREAD) * far
    )


def ramped(
    x: np.ndarray, moved: Callable[[float], float], start: float, end: float, now: float
) -> np.ndarray:
    """The same of an inflow that rises from 0 to 1 between two times, d; moved: m of the water by a time."""
    last = min(end, now)

    def at(place: float) -> float:
        def integrand(time: float) -> float:
            return float(step(np.array([place]), moved(now) - moved(time))[0])

        return quad(integrand, start, last, epsabs=1e-10, epsrel=1e-10, limit=200)[0] / (end - start)

    return np.array([at(place) for place in x])


def steady(time: float) -> float:
    return FLUX / POROSITY * time


def tracer_column(feed: str, days: float, **more: str) -> Walk:
    """2 m of sand under a changing feed."""
    return walk(
        column(
            WATERS, feed=feed, cells=200, length="2 m", porosity=POROSITY, dispersivity=f"{SPREAD} m",
            flow=more.pop("flow", f'darcy_flux = "{FLUX} m/d"'), duration=f"{days} d",
            run=f'ports_every = "{days} d"\nprofiles_every = "{days} d"', **more,
        )
    )  # fmt: skip


def read(run: Walk, x: np.ndarray = PLACES) -> np.ndarray:
    return CubicSpline(run.problem.grid.centres, run.dissolved("a"))(x)


def test_a_pulse():
    run = tracer_column('{from = "0 d", water = "feed"}, {from = "0.4 d", water = "rinse"}', 0.8)
    assert np.abs(read(run) - (step(PLACES, 0.8) - step(PLACES, 0.4))).max() < CLOSE


def test_a_ramp_and_its_end():
    """Up from 0.1 to 0.5 d, level, and down from 0.6 to 0.8 d."""
    feed = (
        '{from = "0 d", water = "rinse"}, {from = "0.1 d", water = "feed", over = "0.4 d"}, '
        '{from = "0.6 d", water = "rinse", over = "0.2 d"}'
    )
    run = tracer_column(feed, 0.9)
    expected = ramped(PLACES, steady, 0.1, 0.5, 0.9) - ramped(PLACES, steady, 0.6, 0.8, 0.9)
    assert np.abs(read(run) - expected).max() < CLOSE
    assert run.last.passed[0, -1].sum() == pytest.approx(FLUX * 0.4, rel=1e-14)


def test_a_ramp_counted_in_pore_volumes_is_the_same():
    """A pore volume of 0.6 m takes 2 d."""
    by_time = '{from = "0 d", water = "rinse"}, {from = "0.2 d", water = "feed", over = "0.4 d"}'
    by_volume = '{from = "0 d", water = "rinse"}, {from = "0.1 PV", water = "feed", over = "0.2 PV"}'
    one, other = (read(tracer_column(feed, 0.8)) for feed in (by_time, by_volume))
    assert one == pytest.approx(other, abs=1e-12)


def moved_on_a_ramp(time: float) -> float:
    """m: the flux rises from 0 to 0.6 m/d in 0.5 d, stays 0.25 d, stops until 1.25 d, goes on at 0.3 m/d."""
    water = 0.6 * min(time, 0.5) ** 2 / (2.0 * 0.5) + 0.6 * min(max(time - 0.5, 0.0), 0.25)
    return (water + 0.3 * max(time - 1.25, 0.0)) / POROSITY




def test_a_flux_that_rises_stops_and_goes_on():
    """Diffusion is none: the profile is that of the water that has passed, and a stop changes nothing."""
    flow = [
        "time (d),darcy_flux (m/d)", "0,0", "0.5,0.6", "0.75,0.6", "0.7500001,0", "1.25,0", "1.2500001,0.3",
    ]  # fmt: skip
    run = from_series("\n".join(flow), 'water = "feed"', 1.75)
    assert moved_on_a_ramp(1.75) == pytest.approx(1.5)
    assert run.last.water_passed[0].sum() == pytest.approx(1.5 * POROSITY, rel=1e-6)  # the jumps' own 1e-7 d
    moved = run.last.water_passed[0].sum() / POROSITY
    assert np.abs(read(run) - step(PLACES, moved)).max() < CLOSE


def from_series(text: str, entry: str, days: float) -> Walk:
    """A column whose only feed is a series."""
    import tempfile
    from pathlib import Path

    with tempfile.TemporaryDirectory() as folder:
        (Path(folder) / "feed.csv").write_text(text, encoding="utf-8")
        text = column(
            WATERS, feed=f'{{from = "0 d", series = "feed.csv", {entry}}}', cells=200, length="2 m",
            porosity=POROSITY, dispersivity=f"{SPREAD} m", flow="", duration=f"{days} d",
            run=f'ports_every = "{days} d"\nprofiles_every = "{days} d"',
        )  # fmt: skip
        return walk(text, folder)


def test_concentration_and_flux_that_change_at_once():
    """c(t) and q(t) each bend twice: every change of c moves on with the water that passes after it."""
    rows = [(0.0, 0.1, 0.2), (0.3, 0.5, 1.0), (0.7, 0.2, 0.4), (1.2, 0.4, 0.7)]
    text = "time (d),darcy_flux (m/d),a (mol/m3)\n" + "\n".join(f"{t},{q},{c}" for t, q, c in rows)
    run = from_series(text, 'water = "rinse"', 1.2)
    times, flux, entering = np.array(rows).T
    ends = np.concatenate([[0.0], np.cumsum(np.diff(times) * 0.5 * (flux[1:] + flux[:-1]))])

    def moved(time: float) -> float:
        i = min(int(np.searchsorted(times, time, side="right")) - 1, len(times) - 2)
        gone, rise = time - times[i], (flux[i + 1] - flux[i]) / (times[i + 1] - times[i])
        return float((ends[i] + gone * (flux[i] + 0.5 * rise * gone)) / POROSITY)

    expected = entering[0] * step(PLACES, moved(1.2))
    for i, change in enumerate(np.diff(entering)):
        expected = expected + change * ramped(PLACES, moved, times[i], times[i + 1], 1.2)
    assert np.abs(read(run) - expected).max() < CLOSE
    # Simpson's rule is exact for the product of two straight lines
    parts = np.diff(times) * (
        flux[:-1] * entering[:-1] + flux[1:] * entering[1:]
        + (flux[:-1] + flux[1:]) * (entering[:-1] + entering[1:])
    ) / 6.0  # fmt: skip
    assert run.last.passed[0, -1].sum() == pytest.approx(parts.sum(), rel=1e-13)


def test_a_step_spreads_while_the_pump_stands_still():
    """A front at 0.6 m, moved on 0.5 m by the flow, spreads all the time: erfc of its age, flow or none."""
    diffusion, moving, still = 1e-8, 0.5 * DAY, 40.0 * DAY
    text = """
[waters.there.tracers]
a = "1 mol/m3"
[waters.pore]
[waters.feed.tracers]
a = "1 mol/m3"
[[layers]]
name = "first"
length = "0.6 m"
cells = 60
porosity = 0.3
dispersivity = "0 m"
diffusion = "1e-8 m2/s"
tortuosity = 1.0
water = "there"
[[layers]]
name = "second"
length = "1.4 m"
cells = 140
porosity = 0.3
dispersivity = "0 m"
diffusion = "1e-8 m2/s"
tortuosity = 1.0
water = "pore"
[flow]
darcy_flux = "0.3 m/d"
feed = [
    {from = "0 d", water = "feed", darcy_flux = "0 m/d"}, {from = "40 d", water = "feed"},
    {from = "40.5 d", water = "feed", darcy_flux = "0 m/d"},
]
[run]
duration = "80.5 d"
ports_every = "40.25 d"
profiles_every = "80.5 d"
"""
    run = walk(text)
    x = np.linspace(0.7, 1.5, 41)
    age = 2.0 * still + moving
    expected = 0.5 * erfc((x - 1.1) / (2.0 * sqrt(diffusion * age)))
    assert np.abs(read(run, x) - expected).max() < 1e-3
    assert run.last.water_passed[0].sum() == pytest.approx(0.15, rel=1e-14)


SEASONS = (2.0, 11.0, 24.0, 11.0)  # degC


def test_gypsum_dissolves_as_much_as_each_season_lets_it():
    """What leaves is saturated at the season's temperature: as the assay of such a water says."""
    entries = ", ".join(
        f'{{from = "{4 * i} d", water = "feed", temperature = "{celsius} degC"}}'
        for i, celsius in enumerate(SEASONS)
    )
    rain = '[waters.feed]\n[waters.pore]\nsaturated_with = {gypsum = 0.0}\n'
    run = walk(
        column(
            rain, minerals='gypsum = "2 wt%"', forms='["gypsum"]', feed=entries, cells=10, length="0.5 m",
            duration="16 d", flow='darcy_flux = "0.3 m/d"', run='ports_every = "4 d"\nprofiles_every = "4 d"',
        )
    )  # fmt: skip
    outlet = [run.dissolved("Ca^2+", state)[-1] for state in run.frames[1:]]
    asked = "".join(
        f'[waters.w{i}]\ntemperature = "{celsius} degC"\nsaturated_with = {{gypsum = 0.0}}\n'
        for i, celsius in enumerate(SEASONS)
    )
    found = read_waters(case_of(asked))
    expected = [
        found[f"w{i}"].totals["Ca^2+"] * found[f"w{i}"].system.water_density for i in range(len(SEASONS))
    ]
    assert np.ptp(expected) > 1.0, "the seasons differ"
    assert outlet == pytest.approx(expected, rel=1e-9)


# mPa s by the IAPWS formulation of 2008 and kg/m3 at 1 bar, CRC Handbook of Chemistry and Physics
VISCOSITY, DENSITY = {10: 1.3059, 20: 1.0016, 30: 0.7972}, {10: 999.70, 20: 998.21, 30: 995.65}


def seasons(celsius: tuple[int, ...], days: float) -> str:
    """A feed whose entries last so many days each."""
    return ", ".join(
        f'{{from = "{days * i} d", water = "feed", temperature = "{t} degC"}}' for i, t in enumerate(celsius)
    )


def test_the_flow_under_a_held_head_follows_the_viscosity(tmp_path):
    """K = 10 m/d at 20 degC, 0.03 m over 1 m: 0.3 m/d; what enters in a season of a day, and its record."""
    celsius = (20, 10, 30)
    text = column(
        WATERS, feed=seasons(celsius, 1.0), layer='conductivity = "10 m/d"', flow='head_drop = "0.03 m"',
        dispersivity="1 cm", duration="3 d", run='ports_every = "1 d"\nprofiles_every = "0.5 d"',
    )  # fmt: skip
    text = 'temperature = "20 degC"\n' + text
    result = gossan.run(case_of(text), tmp_path / "seasons.h5")
    entered = np.diff(result.ports["outlet"].pore_volumes.values) * 0.4  # m of water in a pore volume
    expected = [0.3 * DENSITY[t] / DENSITY[20] * VISCOSITY[20] / VISCOSITY[t] for t in celsius]
    assert entered == pytest.approx(expected, rel=2e-4)  # the digits of the viscosities
    conductivity = result.profiles.conductivity.values[1::2, 0]  # in the middle of each season
    assert conductivity == pytest.approx(np.array(expected) / 0.03 / DAY, rel=2e-4)
    head = result.profiles.head.values[1::2]
    assert head[:, 0] == pytest.approx(0.03)
    assert head[:, 10] == pytest.approx(0.015)
    cells = bed_of(result, case_of(text)).cells
    assert cells == pytest.approx(np.ones((7, 20)), rel=1e-12), "cold water does not clog"


def test_a_front_in_still_water_spreads_as_warm_as_it_is():
    """1e-9 m2/s at 20 degC, 60 d each at 20, 10 and 30 degC: an error function of the sum of D t."""
    celsius = (20, 10, 30)
    factors = [(273.15 + t) / 293.15 * VISCOSITY[20] / VISCOSITY[t] for t in celsius]
    spread = 1e-9 * sum(factors) * 60.0 * DAY
    text = column(
        WATERS, feed=seasons(celsius, 60.0), cells=200, length="0.6 m", diffusion="1e-9 m2/s",
        layer="tortuosity = 1.0", flow='darcy_flux = "0 m/d"\ninlet = "concentration"', duration="180 d",
        run='ports_every = "180 d"\nprofiles_every = "60 d"',
    )  # fmt: skip
    run = walk('temperature = "20 degC"\n' + text)
    x = np.linspace(0.02, 0.4, 39)
    assert np.abs(read(run, x) - erfc(x / (2.0 * sqrt(spread)))).max() < CLOSE
    told = erfc(x / (2.0 * sqrt(1e-9 * 180.0 * DAY)))
    assert np.abs(read(run, x) - told).max() > 5 * CLOSE, "the seasons make a difference"


def test_a_temperature_that_rises_evenly_drives_ever_more_water_in():
    """From 10 to 30 degC in four days: the volume is the integral of the conductivity, to second order."""
    text = column(
        WATERS,
        feed='{from = "0 d", water = "feed", temperature = "10 degC"}, '
        '{from = "0.0001 d", water = "feed", temperature = "30 degC", over = "4 d"}',
        layer='conductivity = "10 m/d"', flow='head_drop = "0.03 m"', dispersivity="1 cm", cells=40,
        duration="4.0001 d", run='ports_every = "4.0001 d"\nprofiles_every = "4.0001 d"',
    )  # fmt: skip
    run = walk('temperature = "20 degC"\n' + text)

    def flux(days: float) -> float:
        return 0.3 * fluidity_ratio(283.15 + 5.0 * max(days - 1e-4, 0.0), 293.15)

    entered = float(run.last.water_passed[0].sum())
    assert entered == pytest.approx(quad(flux, 0.0, 4.0001, epsabs=1e-12)[0], rel=2e-6)

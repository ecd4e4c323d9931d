"""Advection and dispersion of a solute that nothing holds back, against exact solutions at eight digits.

Sources of the solutions: Ogata & Banks (1961) USGS Prof. Paper 411-A (held concentration, no end);
Lindstrom et al. (1967), van Genuchten & Alves (1982) USDA Tech. Bull. 1661 (held flux); Brenner (1962)
Chem. Eng. Sci. 17, 229-243 (finite column, zero gradient at its end); Leij & van Genuchten (1995) Transp.
Porous Media 18 (two layers); Carslaw & Jaeger (1959) (still water). The tabulated numbers come from these
closed forms, series and transforms; the oracle here, written anew, repeats them.

The accuracies demanded hold at the stated cells and Courant numbers; they are about twice what a careful
second-order scheme reaches there. Profiles are read between cell centres by a cubic spline: at these
cell sizes its own error, and that of taking cell means for point values, is below 1e-5 except at Peclet 500.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from scipy.interpolate import CubicSpline
from tests.oracles.transport_column import Column as Exact
from tests.oracles.transport_column import Stratum, ogata_banks, still_water
from tests.support.solute_march import Column, started

from gossan.transport.faces import transport_of
from gossan.transport.grid import Layer, grid_of
from gossan.transport.tortuosity import Tortuosity

DAY = 86400.0
POROSITY = 0.3  # drops out: one layer, nothing sorbed


@dataclass(frozen=True)
class Case:
    """One column: v m/d, dispersivity m, domain m; profile (x m, t d, C), effluent (t d, C)."""

    name: str
    v: float
    dispersivity: float
    domain: float
    cells: int
    courant: float
    inlet: str
    profile: tuple[tuple[float, float, float], ...] = ()
    effluent: tuple[tuple[float, float], ...] = ()
    demand: float = 0.0
    demand_effluent: float = 0.0
    pulse: float = float("inf")  # d
    initial: float = 0.0
    entering: float = 1.0
    endless: bool = False  # the exact column has no end; the domain is long enough

    def column(self) -> Column:
        """The column at time 0."""
        grid = grid_of([Layer("sand", self.domain, self.cells, dispersivity=self.dispersivity)])
        transport = transport_of(grid, np.zeros(1), self.inlet)
        flux = self.v * POROSITY / DAY
        return started(transport, flux, POROSITY, initial=lambda x: np.full_like(x, self.initial))

    def exact(self) -> Exact:
        """The oracle for a unit inflow into an empty column."""
        length = float("inf") if self.endless else self.domain
        stratum = Stratum(length, POROSITY, self.v * self.dispersivity)
        return Exact((stratum,), self.v * POROSITY, self.inlet == "concentration")

    def errors(self, implicit: bool) -> tuple[float, float]:
        """The largest error of the profile and of the effluent."""
        column = self.column()
        dt = column.at_courant(self.courant)
        if not implicit:
            dt = min(dt, column.explicit_limit)
        times = {t for _, t, _ in self.profile} | {t for t, _ in self.effluent}
        if self.pulse < max(times):
            times.add(self.pulse)
        profile_error = effluent_error = 0.0
        for time in sorted(times):
            inflow = np.array([self.entering if time <= self.pulse else 0.0])
            column.run_to(time * DAY, inflow, dt, implicit)
            read = CubicSpline(column.transport.grid.centres, column.dissolved[0])
            for x, t, value in self.profile:
                if t == time:
                    profile_error = max(profile_error, abs(float(read(x)) - value))
            for t, value in self.effluent:
                if t == time:
                    effluent_error = max(effluent_error, abs(column.flux_averaged(inflow)[0, -1] - value))
        return profile_error, effluent_error


CASES = (
    Case("held concentration, no end", 0.5, 0.2, 20.0, 200, 0.1, "concentration", endless=True, demand=2.1e-3,
         profile=((1.0, 10.0, 0.9993003927323294), (3.0, 10.0, 0.9465500384308067),
                  (5.0, 10.0, 0.5553523188665342), (7.0, 10.0, 0.09571489948327581),
                  (9.0, 10.0, 0.0030696619797207))),
    Case("held flux, no end", 0.5, 0.2, 20.0, 200, 0.5, "flux", endless=True, demand=1.7e-4,
         profile=((1.0, 10.0, 0.9985115289862627), (3.0, 10.0, 0.9259338198324295),
                  (5.0, 10.0, 0.4979796555455315), (7.0, 10.0, 0.0754352936305017),
                  (9.0, 10.0, 0.002119922142762016))),
    Case("Peclet 5", 1.0, 0.2, 1.0, 100, 0.5, "flux", demand=4.8e-5, demand_effluent=5.8e-5,
         profile=((0.1, 0.6, 0.8590588893561893), (0.3, 0.6, 0.7243326035957843),
                  (0.5, 0.6, 0.559262534828536), (0.7, 0.6, 0.3937042311984262),
                  (0.9, 0.6, 0.2725256585459296)),
         effluent=((0.8, 0.4425612825646249), (1.0, 0.6025010782386747), (1.2, 0.722964652666712))),
    Case("Peclet 20", 1.0, 0.05, 1.0, 100, 0.5, "flux", demand=1.8e-4, demand_effluent=4.7e-4,
         profile=((0.1, 0.6, 0.986285899371675), (0.3, 0.6, 0.8985502747864329),
                  (0.5, 0.6, 0.6586672477643937), (0.7, 0.6, 0.3326364079570452),
                  (0.9, 0.6, 0.1040563703024092)),
         effluent=((0.8, 0.2798958132739852), (1.0, 0.559889195110389), (1.2, 0.773361260326275))),
    Case("Peclet 500", 1.0, 0.002, 1.0, 200, 0.5, "flux", demand=1.2e-3, demand_effluent=9.7e-3,
         profile=((0.1, 0.6, 1.0), (0.3, 0.6, 0.9999999995936444), (0.5, 0.6, 0.9795778428108887),
                  (0.7, 0.6, 0.02046475843390672), (0.9, 0.6, 4.381788466948517e-10)),
         effluent=((0.8, 0.0002246371521245689), (1.0, 0.5125903949270026), (1.2, 0.9982643450829599))),
    Case("pulse", 1.0, 0.05, 1.0, 100, 0.5, "flux", pulse=0.3, demand_effluent=2.2e-4,
         effluent=((0.6, 0.06142774074210598), (0.8, 0.2647470466480674), (1.0, 0.4073751900039594),
                   (1.2, 0.3507840771383533), (1.5, 0.1585488336114215), (2.0, 0.02118189434865255))),
    Case("flushing", 1.0, 0.02, 1.0, 100, 0.5, "flux", initial=1.0, entering=0.0, demand=3.6e-4,
         profile=((0.1, 0.6, 0.0003576747143043439), (0.3, 0.6, 0.0236994596806637),
                  (0.5, 0.6, 0.2570020035862403), (0.7, 0.6, 0.7445601984990942),
                  (0.9, 0.6, 0.9749471274615096))),
)


@pytest.mark.parametrize("implicit", [False, True], ids=["explicit", "implicit"])
@pytest.mark.parametrize("case", CASES, ids=lambda case: case.name)
def test_column(case, implicit):
    profile_error, effluent_error = case.errors(implicit)
    assert profile_error <= case.demand
    assert effluent_error <= case.demand_effluent


@pytest.mark.parametrize("case", CASES, ids=lambda case: case.name)
def test_oracle_repeats_the_table(case):
    exact = case.exact()

    def value(x, t):
        late = exact.resident(x, t - case.pulse) if t > case.pulse else 0.0
        return case.initial + (case.entering - case.initial) * exact.resident(x, t) - late

    table = case.profile[::2] + tuple((case.domain, t, c) for t, c in case.effluent[:2])
    for x, t, tabulated in table:
        assert value(x, t) == pytest.approx(tabulated, abs=1e-12)


def test_closed_form_of_the_held_concentration():
    for x, t, tabulated in CASES[0].profile:
        assert ogata_banks(x, t, 0.5, 0.1) == pytest.approx(tabulated, abs=1e-14)


def test_inventory_and_outflow():
    """Brenner's column at Peclet 20: what it stores, the integral of C in m, and what has left, per v C0."""
    stored = {0.25: 0.2499999878907157, 0.5: 0.4993000827033274, 0.75: 0.7263907774459982,
              1.0: 0.8797667430555663, 1.5: 0.9850541586874025}
    left = {0.25: 1.210928431757564e-08, 0.5: 0.0006999172966725636, 0.75: 0.02360922255400177,
            1.0: 0.1202332569444337, 1.5: 0.5149458413125975}
    case = CASES[3]
    exact, column = case.exact(), case.column()
    dt = column.at_courant(0.5)
    for time in stored:
        column.run_to(time * DAY, np.ones(1), dt, implicit=True)
        inventory = float(column.dissolved[0] @ column.transport.grid.width)
        passed = column.passed[0] / POROSITY
        assert inventory == pytest.approx(stored[time], abs=6.4e-5)
        assert passed[-1] == pytest.approx(left[time], abs=6.4e-5)
        assert passed[0] - passed[-1] - inventory == pytest.approx(0.0, abs=1e-13)  # the ledger
    assert exact.stored(1.0) / POROSITY == pytest.approx(stored[1.0], abs=1e-12)
    assert exact.passed(1.0, 1.0) / POROSITY == pytest.approx(left[1.0], abs=1e-12)


@pytest.mark.parametrize("implicit", [False, True], ids=["explicit", "implicit"])
def test_diffusion_in_still_water(implicit):
    """Pump off: 1e-9 m2/s in the pore water, from a held concentration, over 100 d."""
    table = {0.02: 0.879072450308971, 0.05: 0.7036760597779689, 0.1: 0.4468208767086975,
             0.2: 0.1281465612656797, 0.3: 0.02247887336612528}
    grid = grid_of([Layer("clay", 1.0, 100, diffusion=1e-9, tortuosity=Tortuosity("number", factor=1.0))])
    column = started(transport_of(grid, np.zeros(1), "concentration"), 0.0, POROSITY)
    limit = column.explicit_limit
    column.run_to(100 * DAY, np.ones(1), 4 * limit if implicit else limit, implicit)
    read = CubicSpline(grid.centres, column.dissolved[0])
    for x, tabulated in table.items():
        assert still_water(x, 100 * DAY, 1e-9) == pytest.approx(tabulated, abs=1e-14)
        assert float(read(x)) == pytest.approx(tabulated, abs=1e-3)


TWO_LAYERS = (
    # porosities, dispersivities m, t d, ((x, resident, flux-averaged), ...)
    ((0.25, 0.4), (0.1, 0.025), 2.0,
     ((0.1, 0.9757541702273836, 0.9931601697773367), (0.3, 0.9277321458291433, 0.9556815609341461),
      (0.4, 0.9028497873803581, 0.9215358763182983), (0.5, 0.7985682320769493, 0.8327681962871277),
      (0.7, 0.4150874763437969, 0.4693432482918775), (0.9, 0.08608102710850722, 0.1092076017298814),
      (1.0, 0.03165416205433012, 0.03165416205433012))),
)


@pytest.mark.parametrize("implicit", [False, True], ids=["explicit", "implicit"])
@pytest.mark.parametrize(("porosity", "dispersivity", "time", "table"), TWO_LAYERS)
def test_two_layers(porosity, dispersivity, time, table, implicit):
    """Interface at 0.4 of 1 m, Darcy flux 0.1 m/d, 100 cells, Courant 1/2: resident within 1.2e-4."""
    layers = [Layer("first", 0.4, 40, dispersivity[0]), Layer("second", 0.6, 60, dispersivity[1])]
    grid = grid_of(layers)
    column = started(transport_of(grid, np.zeros(1)), 0.1 / DAY, np.repeat(porosity, (40, 60)))
    dt = column.at_courant(0.5)
    if not implicit:
        dt = min(dt, column.explicit_limit)
    column.run_to(time * DAY, np.ones(1), dt, implicit)
    strata = tuple(Stratum(layer.length, p, 0.1 / p * a)
                   for layer, p, a in zip(layers, porosity, dispersivity, strict=True))
    exact = Exact(strata, 0.1)
    for x, resident, flux in table:
        assert exact.resident(x, time) == pytest.approx(resident, abs=1e-11)
        assert exact.flux_averaged(x, time) == pytest.approx(flux, abs=1e-11)
        face = grid.face_at(x)
        assert column.resident(np.ones(1), face)[0] == pytest.approx(resident, abs=1.2e-4)
        assert column.flux_averaged(np.ones(1))[0, face] == pytest.approx(flux, abs=1.2e-4)

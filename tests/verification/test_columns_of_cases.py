"""Tracers in columns as a case states them: every kind of inlet, outlet and mesh, against exact solutions.

Sources: Ogata & Banks (1961) USGS Prof. Paper 411-A; Lindstrom et al. (1967); Brenner (1962) Chem. Eng. Sci.
17, 229-243; Leij & van Genuchten (1995) Transp. Porous Media 18; Carslaw & Jaeger (1959), Conduction of Heat
in Solids; van Genuchten & Alves (1982) USDA Tech. Bull. 1661. The tables are those of
test_advection_dispersion.py, with the same accuracies; here the march chooses its steps itself.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.interpolate import CubicSpline
from tests.support.columns import Walk, column, walk
from tests.support.tracer_columns import POROSITY, Profiles, Solute, profiles, tracer_column
from tests.verification.test_advection_dispersion import CASES, TWO_LAYERS

from gossan.coupling.drive import Drive
from gossan.transport.faces import faces_of
from gossan.transport.step import passages

DAY = 86400.0
EMPTY = '[waters.feed.tracers]\na = "1 mol/m3"\n[waters.pore]\n'


def of(case, mesh: str = "") -> Profiles:
    """A case of the table as a user would write it, on even cells or on those that `mesh` says."""
    last = max(t for t, *_ in [(t,) for _, t, _ in case.profile] + list(case.effluent))
    text = tracer_column(
        [Solute(entering=case.entering, initial=case.initial)], velocity=case.v,
        dispersivity=case.dispersivity, length=case.domain, cells=case.cells, days=last, inlet=case.inlet,
        courant=case.courant,
        every=last if case.endless else 0.1, pulse=None if math.isinf(case.pulse) else case.pulse,
    )  # fmt: skip
    if mesh:
        text = text.replace(f"cells = {case.cells}\n", f"cell = {mesh}\n")
        assert mesh in text
    return Profiles(walk(text))


@pytest.mark.parametrize("case", CASES, ids=lambda case: case.name)
def test_on_even_cells(case):
    found = of(case)
    for x, t, value in case.profile:
        assert found.at(x, t) == pytest.approx(value, abs=case.demand)
    for t, value in case.effluent:
        assert found.outlet(t) == pytest.approx(value, abs=case.demand_effluent)


@pytest.mark.parametrize("case", [CASES[3], CASES[6]], ids=lambda case: case.name)
@pytest.mark.parametrize("mesh", ['{first = "2 mm", last = "1.5 cm"}', '{first = "1.5 cm", last = "2 mm"}'])
def test_on_growing_cells(case, mesh):
    """Some 130 cells, the longest half as long again as the even ones: twice the error is allowed."""
    found = of(case, mesh)
    for x, t, value in case.profile:
        assert found.at(x, t) == pytest.approx(value, abs=2 * case.demand)
    for t, value in case.effluent:
        assert found.outlet(t) == pytest.approx(value, abs=2 * case.demand_effluent)


def test_cells_that_water_crosses_many_of_in_a_step():
    """From 0.2 mm to 2 cm: in a twentieth of the 12,000 explicit steps, some six times the error."""
    case = CASES[3]
    found = of(case, '{first = "0.2 mm", last = "2 cm"}')
    assert found.walk.strides < 700
    for x, t, value in case.profile:
        assert found.at(x, t) == pytest.approx(value, abs=4e-4)
    for t, value in case.effluent:
        assert found.outlet(t) == pytest.approx(value, abs=case.demand_effluent)


def test_without_a_limiter_a_front_overshoots_and_upwind_smears_it():
    def front(limiter: str) -> np.ndarray:
        text = tracer_column([Solute()], velocity=1.0, dispersivity=0.0, length=1.0, cells=100, days=0.5)
        return walk(text.replace("[run]\n", f'[run]\nlimiter = "{limiter}"\n')).dissolved("a")

    found = {name: front(name) for name in ("van-leer", "minmod", "none", "upwind")}
    wide = {name: int(((row > 0.01) & (row < 0.99)).sum()) for name, row in found.items()}
    assert found["none"].max() > 1.01
    assert found["none"].min() < -0.001
    for name in ("van-leer", "minmod", "upwind"):
        assert found[name].max() <= 1.0 + 1e-9
        assert found[name].min() >= 0.0
    assert wide["van-leer"] < wide["minmod"] < 0.6 * wide["upwind"]


def test_still_water():
    """Pump off, concentration held at the inlet: 1e-9 m2/s in the pores for 100 d."""
    run = walk(
        column(
            EMPTY, cells=100, length="1 m", diffusion="1e-9 m2/s", layer="tortuosity = 1.0",
            flow='darcy_flux = "0 m/d"\ninlet = "concentration"', duration="100 d",
            run='ports_every = "100 d"\nprofiles_every = "100 d"',
        )
    )  # fmt: skip
    read = CubicSpline(run.problem.grid.centres, run.dissolved("a"))
    table = {0.02: 0.879072450308971, 0.05: 0.7036760597779689, 0.1: 0.4468208767086975,
             0.2: 0.1281465612656797, 0.3: 0.02247887336612528}
    for x, value in table.items():
        assert float(read(x)) == pytest.approx(value, abs=1e-3)
    # what has diffused in counts as entered: 2 n C0 sqrt(D t / pi), Carslaw & Jaeger
    entered = float(run.last.passed[0, run.problem.solutes.index("a")].sum())
    assert entered == pytest.approx(2 * 0.4 * math.sqrt(1e-9 * 100 * DAY / math.pi), rel=2e-3)
    assert run.strides < 1000


def test_a_closed_inlet_lets_nothing_in():
    run = walk(
        column(
            EMPTY, cells=10, diffusion="1e-9 m2/s", flow='darcy_flux = "0 m/d"', duration="10 yr",
            run='ports_every = "1 yr"\nprofiles_every = "1 yr"',
        )
    )  # fmt: skip
    assert (run.dissolved("a") == 0.0).all()
    assert run.strides < 200


BETWEEN = '[waters.feed.tracers]\na = "1 mol/m3"\n[waters.pore]\n[waters.river.tracers]\na = "0.25 mol/m3"'


@pytest.mark.parametrize("mesh", ["cells = 50", 'cell = {first = "5 mm", last = "5 cm"}'])
@pytest.mark.parametrize("peclet", [0.0, 0.5, 5.0, 500.0])
def test_a_held_outlet_at_steady_state(peclet, mesh):
    """c = c0 + (c1 - c0)(e^(P x/L) - 1)/(e^P - 1) between held ends; P = v L/D (textbook)."""
    spread = 1e-9
    flux = peclet * 0.4 * spread / 1.0
    duration = 4 * 0.4 / flux if peclet > 5 else 1.5 / spread  # many times the slowest mode's L^2/(pi^2 D)
    text = column(
        BETWEEN, cells=50, length="1 m", diffusion="1e-9 m2/s", layer="tortuosity = 1.0",
        flow=f'darcy_flux = "{flux!r} m/s"\ninlet = "concentration"\noutlet = "concentration"\n'
        'outlet_water = "river"', duration=f"{duration!r} s",
        run=f'ports_every = "{duration!r} s"\nprofiles_every = "{duration!r} s"',
    ).replace("cells = 50", mesh)  # fmt: skip
    run = walk(text)
    x = run.problem.grid.centres
    share = x if peclet == 0 else np.expm1(peclet * x) / np.expm1(peclet)
    # cells of a Peclet number of ten and more do not see the layer at the outlet, but what passes is right
    assert run.dissolved("a") == pytest.approx(1.0 - 0.75 * share, abs=3e-3 if peclet <= 5 else 1e-2)
    drive = Drive(run.problem, run.last)
    darcy_flux, _ = drive.flow(1.0, 0.0)
    faces = faces_of(run.problem.transport, run.last.water, darcy_flux)
    row = run.problem.solutes.index("a")
    through = passages(faces, run.last.dissolved, drive.inflow, 1.0).passed[row]
    exact = 0.4 * spread * 0.75 if peclet == 0 else flux * (1.0 + 0.75 / np.expm1(peclet))
    assert through == pytest.approx(np.full_like(through, exact), rel=2e-3)


def test_a_gradient_at_the_outlet_draws_out_what_it_says():
    """Still water between a held inlet and a gradient of -0.5 mol/m3 per m: c = 1 - x/2 in the end."""
    run = walk(
        column(
            EMPTY, cells=20, diffusion="1e-9 m2/s", layer="tortuosity = 1.0", duration="300 yr",
            flow='darcy_flux = "0 m/d"\ninlet = "concentration"\noutlet = "gradient"\n'
            'outlet_gradient = {a = "-0.5 mol/m3/m"}',
            run='ports_every = "100 yr"\nprofiles_every = "100 yr"',
        )
    )  # fmt: skip
    assert run.dissolved("a") == pytest.approx(1.0 - run.problem.grid.centres / 2, abs=1e-5)
    left = float(run.last.passed[1, run.problem.solutes.index("a")].sum())
    assert left == pytest.approx(0.4 * 1e-9 * 0.5 * run.last.time, rel=1e-9)


@pytest.mark.parametrize("growth", [False, True], ids=["even", "growing"])
def test_two_layers(growth):
    """Interface at 0.4 m of 1 m, Darcy flux 0.1 m/d; resident and flux-averaged, outlet included."""
    (porosity, dispersivity, days, table) = TWO_LAYERS[0]
    meshes = (("cells = 40", "cells = 60") if not growth else
              ('cell = {first = "1.2 cm", last = "5 mm"}', 'cell = {first = "5 mm", last = "1.2 cm"}'))
    layers = "".join(
        f'[[layers]]\nname = "{i}"\nlength = "{length} m"\n{mesh}\nporosity = {n}\ndispersivity = "{a} m"\n'
        'diffusion = "0 m2/s"\nwater = "pore"\n'
        for i, (length, mesh, n, a) in enumerate(zip((0.4, 0.6), meshes, porosity, dispersivity, strict=True))
    )
    run = walk(
        EMPTY + layers
        + '[flow]\ndarcy_flux = "0.1 m/d"\nfeed = [{from = "0 d", water = "feed"}]\n'
        f'[run]\nduration = "{days} d"\naccuracy = 0.9\nports_every = "{days} d"\n'
        f'profiles_every = "{days} d"\n'
    )
    flux, resident = at_faces(run)
    edges = run.problem.grid.edges
    for x, standing, passing in table:
        face = int(np.argmin(np.abs(edges - x)))
        if not growth:
            assert resident[face] == pytest.approx(standing, abs=1.2e-4)
            assert flux[face] == pytest.approx(passing, abs=1.2e-4)
    # both ends and the interface are faces of any mesh
    for x, standing, passing in (table[2], table[-1]):
        face = int(np.argmin(np.abs(edges - x)))
        assert edges[face] == pytest.approx(x, abs=1e-12)
        assert resident[face] == pytest.approx(standing, abs=1.2e-4)
        assert flux[face] == pytest.approx(passing, abs=1.2e-4)


# x m, resident and flux-averaged after 5 d; Leij & van Genuchten (1995) Transp. Porous Med. 18, 65-85; two
# inversions of the Laplace transform and collocation with a matrix exponential, 13 digits
DECAY_IN_ONE_LAYER = (
    (0.1, 0.9999999999999826, 0.9999999999999996), (0.3, 0.9999926855185869, 0.9999999684521244),
    (0.4, 0.84491885300207, 0.9994790693211125), (0.5, 0.5995544354098561, 0.7401116434597257),
    (0.7, 0.2023412757138892, 0.2908571892790755), (0.9, 0.02965100849502451, 0.05078361483831781),
    (1.0, 0.0114253664196772, 0.0114253664196772),
)


@pytest.mark.parametrize("own", ["", "7 d"], ids=["of the layer alone", "in place of the tracer's"])
def test_decay_that_differs_between_layers(own):
    """Sand without retention or decay before a bed with R = 3 and 0.2 1/d: 100 cells, Courant 1/2."""
    solute = 'half_life = "7 d"\n' if own else ""
    text = EMPTY + f"[tracers.a]\n{solute}"
    rates, kept = (f"{math.log(2.0) / 1e-9!r} d", f"{math.log(2.0) / 0.2!r} d"), 2.0 * 0.5 / (2500.0 * 0.5)
    for i, (length, cells, n, a) in enumerate(((0.4, 40, 0.35, 0.01), (0.6, 60, 0.5, 0.06))):
        text += f'''[[layers]]
name = "{i}"
length = "{length} m"
cells = {cells}
porosity = {n}
grain_density = "2500 kg/m3"
dispersivity = "{a} m"
diffusion = "0 m2/s"
water = "pore"
'''
        if own or i:
            text += f'[layers.half_life]\na = "{rates[i]}"\n'
        if i:
            text += f'[layers.sorption.a]\nlaw = "linear"\nkd = "{kept!r} m3/kg"\n'
    text += '[flow]\ndarcy_flux = "0.1 m/d"\nfeed = [{from = "0 d", water = "feed"}]\n'
    text += '[run]\nduration = "5 d"\naccuracy = 0.9\nports_every = "5 d"\nprofiles_every = "5 d"\n'
    run = walk(text)
    flux, resident = at_faces(run)
    grid, values = run.problem.grid, run.dissolved("a")
    parts = [grid.layer == 0, grid.layer == 1]
    within = [CubicSpline(grid.centres[part], values[part]) for part in parts]
    for x, standing, passing in DECAY_IN_ONE_LAYER:
        face = int(np.argmin(np.abs(grid.edges - x)))
        found = resident[face] if x in (0.4, 1.0) else within[int(x > 0.4)](x)
        assert found == pytest.approx(standing, abs=6.4e-5), x
        assert flux[face] == pytest.approx(passing, abs=6.4e-5), x


def at_faces(run: Walk) -> tuple[np.ndarray, np.ndarray]:
    """Flux-averaged and resident concentration of `a` at every face at the end."""
    problem, state = run.problem, run.last
    drive, row = Drive(problem, state), problem.solutes.index("a")
    darcy_flux, _ = drive.flow(1.0, 0.0)
    faces = faces_of(problem.transport, state.water, darcy_flux)
    through = passages(faces, state.dissolved, drive.inflow, 1.0).passed
    count = len(darcy_flux)
    standing = [faces.resident(state.dissolved, drive.inflow, through[:, f], f)[row] for f in range(count)]
    return through[row] / darcy_flux, np.array(standing)


TIMES = (0.5, 0.7, 0.8, 0.9, 1.0, 1.1, 1.2, 1.5, 2.0)  # pore volumes
FINITE = {  # Brenner's column, four decimals
    10: (0.0681, 0.2552, 0.3690, 0.4798, 0.5803, 0.6672, 0.7396, 0.8821, 0.9715),
    40: (0.0009, 0.0637, 0.1815, 0.3553, 0.5435, 0.7067, 0.8267, 0.9755, 0.9996),
    100: (None, 0.0065, 0.0639, 0.2480, 0.5279, 0.7732, 0.9148, 0.9985, 1.0000),
    400: (None, None, 0.0009, 0.0724, 0.5141, 0.9172, 0.9956, 1.0000, None),
}


@pytest.mark.parametrize("peclet", FINITE)
def test_breakthrough_of_a_finite_column(peclet):
    found = profiles([Solute()], velocity=1.0, dispersivity=1.0 / peclet, length=1.0, days=2.0, every=0.1,
                     cells=400 if peclet == 400 else 200)  # fmt: skip
    for time, value in zip(TIMES, FINITE[peclet], strict=True):
        if value is not None:
            # half of the last decimal, and what 200 to 400 cells cost
            assert found.outlet(time) == pytest.approx(value, abs=1.5e-4), time


@pytest.mark.parametrize(
    ("velocity", "rate", "falls", "dispersivity", "thickness", "residence"),
    [(0.3, 1.0, 100, 0.0, 1.3816, 4.605), (0.3, 1.0, 100, 0.05, 1.5826, 5.275),
     (0.3, 1.0, 100, 0.1, 1.7460, 5.820), (0.6, 1.0, 100, 0.1, 3.1651, 5.275),
     (0.3, 0.5, 500, 0.1, 4.2713, 14.238)],
)  # fmt: skip
def test_thickness_that_holds_a_first_order_limit(velocity, rate, falls, dispersivity, thickness, residence):
    """Where C = C0/100: C/C0 = exp(x v/(2 D) (1 - sqrt(1 + 4 k D/v^2))), held inlet, no end."""
    length = 1.6 * thickness
    found = profiles([Solute(rate=rate)], velocity=velocity, dispersivity=dispersivity, length=length,
                     cells=200, days=4 * length / velocity, inlet="concentration")  # fmt: skip
    state = found.walk.last
    values = np.log(state.dissolved[found.walk.problem.solutes.index("a")] * falls)
    centres = found.walk.problem.grid.centres
    found_at = float(np.interp(0.0, -values, centres))
    assert found_at == pytest.approx(thickness, rel=1e-3)
    assert found_at / velocity == pytest.approx(residence, rel=1e-3)


def test_porosity_is_what_the_tables_take():
    """It drops out of all but the ledger, which is in moles per section of bulk."""
    found = of(CASES[3])
    entered = float(found.walk.last.passed[0, found.walk.problem.solutes.index("a")].sum())
    assert entered == pytest.approx(POROSITY * 1.0 * 1.2, rel=1e-12)

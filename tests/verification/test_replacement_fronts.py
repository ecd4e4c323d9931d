"""Fronts of minerals that dissolve or replace each other, against exact waves of synthetic salts.

AB(s) = A + B with A B = K, and C, whose salt CB is the less soluble, taking A's place. Each front keeps the
balances of A, B and C across it; with nothing but those and the solubilities, speeds and plateaus between
fronts follow in closed form. A is Na^+, C is K^+ and B is Cl^- here, in an ideal water, with NO3^- or K^+ to
balance charges: their salts are invented, by a file of constants as a user would write it.

Citations
  rubin1983     Rubin (1983), Water Resour. Res. 19, 1231-1252
  bryant1986    Bryant, Schechter & Lake (1986), AIChE J. 32, 751-764
  helfferich1989 Helfferich (1989), AIChE J. 35, 75-87
  carslaw1959   Carslaw & Jaeger (1959), Conduction of Heat in Solids, chapter XI (Neumann's solution)

The numbers below were worked out from the balances to 35 digits, apart from this program, and the tolerances
are what such a front allows: it is at least one cell thick, and stands within half a cell of its place.
"""

from __future__ import annotations

from math import pi, sqrt
from pathlib import Path

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import erfc
from tests.support.columns import Walk, column, started, walk
from tests.support.orders import observed_order
from tests.support.salts import Salt, water, write_salts

ONCE = 'ports_every = "1000 d"\nprofiles_every = "1000 d"'


def salts(folder: Path, **products: float) -> str:
    """Salts of Na and K by their solubility products, (mol m-3)^2, without a volume."""
    return write_salts(folder, *(Salt(f"salt of {ion}", ion, product) for ion, product in products.items()))


def bed(**moles: float) -> str:
    """Starting salts, mol per m3 of bulk."""
    return ", ".join(f'"salt of {name}" = "{amount / 1000!r} mol/L"' for name, amount in moles.items())


def dissolved_up_to(run: Walk, mineral: str, at_start: float, state=None) -> float:
    """Where the front of a mineral stands, m, from what is left of it."""
    return run.problem.grid.length - run.inventory(mineral, state) / at_start


def test_pure_water_dissolves_a_salt(tmp_path):
    """The front goes at v / (1 + M0 / (porosity dC)) = 0.25 m/d (rubin1983, bryant1986)."""
    run = walk(
        column(
            water("feed") + water("pore", Na=1.0, Cl=1.0), minerals=bed(Na=0.9), porosity=0.3, cells=200,
            length="4 m", flow='darcy_flux = "0.3 m/d"', chemistry=salts(tmp_path, Na=1.0), duration="12 d",
            run=ONCE,
        ),
        tmp_path,
    )  # fmt: skip
    assert dissolved_up_to(run, "salt of Na", 0.9) == pytest.approx(3.0, abs=0.002)  # a tenth of a cell
    ahead = run.problem.grid.centres > 3.05
    assert run.dissolved("Cl^-")[ahead] == pytest.approx(1.0, rel=1e-9)


def test_water_with_common_ions_dissolves_a_salt(tmp_path):
    """A = 0.5 and B = 2 mol m-3 enter where A B = 4: dC = 0.886, front speed 5.038 mm/d (bryant1986)."""
    run = walk(
        column(
            water("feed", Na=0.5, K=1.5, Cl=2.0)
            + water("pore", Na=1.386000936329383, K=1.5, Cl=2.886000936329383),
            minerals=bed(Na=12.0), porosity=0.35, cells=40, length="0.4 m", dispersivity="2 cm",
            flow='darcy_flux = "0.07 m/d"', chemistry=salts(tmp_path, Na=4.0), duration="60 d",
            run='ports_every = "20 d"\nprofiles_every = "60 d"',
        ),
        tmp_path,
    )  # fmt: skip
    fronts = [dissolved_up_to(run, "salt of Na", 12.0, state) for state in run.records]
    speed = (fronts[3] - fronts[1]) / 40.0
    assert speed == pytest.approx(0.005038144604185165, rel=0.001)
    # dispersion puts it ahead by speed D / (v (v - speed)) for good; a hundredth of a cell is 0.1 mm
    lead = fronts[3] - 60.0 * 0.005038144604185165
    assert lead == pytest.approx(0.0005168338795254732, abs=1e-4)


def test_a_salt_dissolves_by_diffusion_alone(tmp_path):
    """Neumann's front, x = 2 lambda sqrt(D t) with lambda 0.38807 for porosity Ceq = M0 / 3 (carslaw1959)."""
    problem, _ = started(
        column(
            water("feed") + water("pore", Na=1.0, Cl=1.0), minerals=bed(Na=0.9), porosity=0.3, cells=100,
            length="0.5 m", diffusion="1e-9 m2/s", layer="tortuosity = 1.0",
            flow='darcy_flux = "0 m/d"\ninlet = "concentration"', chemistry=salts(tmp_path, Na=1.0),
            duration="1000 d", run='ports_every = "100 d"\nprofiles_every = "1000 d"',
        ),
        tmp_path,
    )  # fmt: skip
    run = walk(problem)
    for state in run.records[1:]:
        expected = 2.0 * 0.3880669230305801 * sqrt(1e-9 * state.time)
        assert dissolved_up_to(run, "salt of Na", 0.9, state) == pytest.approx(expected, rel=0.005)


# C takes A's place: plateaus behind (II) and ahead (III) of the front, mol m-3 of water or of bulk, and m/d
C_II, B_II = 2.019803902718557, 0.01980390271855697
A_III, B_III, C_III = 2.334890082412087, 0.42828568570857, 0.09339560329648346
CB, REPLACED, REDISSOLVED = 0.4950318596835978, 0.5386272865107737, 0.01185926278236448
DAYS = 5.8


def replacement(
    folder: Path, dispersivity: str, cells: int, coupling: str = "two-stage",
    *, length: float = 6.0, days: float = DAYS, every: float = 1e3,
) -> Walk:  # fmt: skip
    """A bed of the salt of A, m, into which C flows for some days; every so many there is a record."""
    return walk(
        column(
            water("feed", K=2.0, NO3=2.0) + water("pore", Na=1.0, Cl=1.0), minerals=bed(Na=0.6), porosity=0.3,
            cells=cells, length=f"{length} m", dispersivity=dispersivity, flow='darcy_flux = "0.3 m/d"',
            chemistry=salts(folder, Na=1.0, K=0.04), duration=f"{days} d",
            run=f'ports_every = "{every} d"\nprofiles_every = "1000 d"\ncoupling = "{coupling}"',
        ),
        folder,
    )  # fmt: skip


@pytest.mark.parametrize("coupling", ["two-stage", "lie"])
def test_one_salt_replaces_another(tmp_path, coupling):
    """Nothing disperses: plateaus are exact, the front is a cell (bryant1986, helfferich1989)."""
    run = replacement(tmp_path, "0 m", 300, coupling)
    x, front = run.problem.grid.centres, REPLACED * DAYS
    behind, ahead = (x > 0.5) & (x < front - 0.2), (x > front + 0.2) & (x < DAYS - 0.5)
    a, b, c = (run.dissolved(ion) for ion in ("Na^+", "Cl^-", "K^+"))
    assert dissolved_up_to(run, "salt of Na", 0.6) == pytest.approx(front, abs=0.01)  # half a cell
    assert c[behind] == pytest.approx(C_II, rel=1e-6)
    assert b[behind] == pytest.approx(B_II, rel=1e-6)
    assert a[ahead] == pytest.approx(A_III, rel=1e-3)
    assert b[ahead] == pytest.approx(B_III, rel=1e-3)
    assert c[ahead] == pytest.approx(C_III, rel=5e-3)
    assert run.solid("salt of K")[behind].mean() == pytest.approx(CB, rel=2e-3)


@pytest.mark.parametrize("coupling", ["two-stage", "lie"])
def test_what_replaced_it_dissolves_in_its_turn(tmp_path, coupling):
    """Behind all, the salt of C goes at 11.86 mm/d: C enters with less of B than the salt needs (bryant1986).

    It stands up to half a cell behind its place, by what its first cell took up, and stays there: the speed
    is right to 2e-4 on any grid, the place to first order.
    """
    behind = []
    for cells in (15, 30):
        run = replacement(tmp_path, "0 m", cells, coupling, length=0.6, days=20.0, every=10.0)
        fronts = [dissolved_up_to(run, "salt of K", CB, state) for state in run.records]
        assert (fronts[2] - fronts[1]) / 10.0 == pytest.approx(REDISSOLVED, rel=2e-4)
        behind.append(20.0 * REDISSOLVED - fronts[2])
    assert 0.0 < behind[1] < 0.6 * behind[0] < 0.6 * 0.5 * 0.04  # half a cell of 4 cm


def test_waters_that_mix_leave_salt_behind(tmp_path):
    """Both waters of the first front are saturated, their mixture is supersaturated, and so salt falls there.

    At x, with E = A - B ahead (0) and behind (E_III): porosity/(2 pi) sqrt(D/(v x)) times the integral of
    A''(E) (dE)^2 exp(-2 z^2) dz over the mixture E = E_III erfc(z)/2, to first order in D/(v x).
    """
    run = replacement(tmp_path, "2 cm", 200)
    grid, behind = run.problem.grid, A_III - B_III
    cell = int(np.argmin(np.abs(grid.centres - 4.0)))

    def mixed(z: float) -> float:
        return 2.0 * behind**2 / ((0.5 * behind * erfc(z)) ** 2 + 4.0) ** 1.5 * np.exp(-2.0 * z * z)

    expected = 0.3 / (2.0 * pi) * sqrt(0.02 / grid.centres[cell]) * quad(mixed, -8.0, 8.0)[0]
    assert run.solid("salt of Na")[cell] - 0.6 == pytest.approx(expected, rel=0.02)  # it is a first order


def test_a_far_less_soluble_salt_replaces_another(tmp_path):
    """Solubility products 10^-18.7 and 10^-30.1 (mol m-3)^2, as zinc and copper sulfide (helfferich1989)."""
    run = walk(
        column(
            water("feed", K=1.0, NO3=1.0) + water("pore"), minerals=bed(Na=20.0), porosity=0.3, cells=40,
            length="0.2 m", flow='darcy_flux = "0.03 m/d"', duration="80 d",
            chemistry=salts(tmp_path, Na=10**-18.7, K=10**-30.1),
            run='ports_every = "20 d"\nprofiles_every = "80 d"',
        ),
        tmp_path,
    )  # fmt: skip
    fronts = [dissolved_up_to(run, "salt of Na", 20.0, state) for state in run.records]
    assert (fronts[4] - fronts[1]) / 60.0 == pytest.approx(0.001477832512309475, rel=0.002)
    x = run.problem.grid.centres
    ahead, behind = x > fronts[4] + 0.01, x < fronts[4] - 0.01
    # what cannot be seen in any balance must come out right all the same
    assert run.dissolved("K^+")[ahead] == pytest.approx(3.981071705519124e-12, rel=1e-6)
    assert run.dissolved("Cl^-")[ahead] == pytest.approx(1.995262314976823e-19, rel=1e-6)
    assert run.dissolved("Cl^-")[behind] == pytest.approx(7.943282347242816e-31, rel=1e-6)
    assert run.dissolved("Na^+")[ahead] == pytest.approx(0.9999999999960189, rel=1e-9)
    assert run.solid("salt of K")[behind] == pytest.approx(20.0, rel=1e-6)


BANDS = Path(__file__).resolve().parents[2] / "cases" / "sulfide-bands" / "case.toml"
COPPER, LEAD = 0.1477832512315271, 0.2200488997555012  # where their fronts stand after 100 d, m


def bands(cells: int) -> Walk:
    """The first 100 days of the case, on so many cells."""
    text = BANDS.read_text(encoding="utf-8")
    for old, new in (
        ("cells = 30\n", f"cells = {cells}\n"), ('"220 d"', '"100 d"'), ('every = "0.5 d"', 'every = "50 d"')
    ):  # fmt: skip
        assert old in text
        text = text.replace(old, new)
    return walk(text)


def test_metals_line_up_in_the_order_of_their_sulfides():
    """Cu and Pb into ZnS: bands of CuS, PbS, ZnS, front k at v / (1 + M0 / (porosity (c_1 + ... + c_k))).

    On two grids (helfferich1989): the error falls by more than the cells, and to first order at least.
    """
    grids, errors = (20, 40), []
    for cells in grids:
        run = bands(cells)
        copper, both = run.inventory("covellite") / 20.0, 0.3 - run.inventory("sphalerite") / 20.0
        assert copper == pytest.approx(COPPER, rel=0.002)
        assert both == pytest.approx(LEAD, rel=0.002)
        errors.append(abs(copper - COPPER) + abs(both - LEAD))
    assert observed_order(grids, errors) > 1.0
    x = run.problem.grid.centres
    band, beyond = (x > 0.16) & (x < 0.21), (x > 0.23) & (x < 0.3)
    assert run.dissolved("Pb^2+")[band] == pytest.approx(1.5, rel=1e-4)
    assert run.dissolved("Zn^2+")[beyond] == pytest.approx(1.5, rel=0.001)  # 1 in 4000 takes lead

"""The oracles against chemistry that fits on one sheet of paper, and against each other."""

from __future__ import annotations

import hashlib
import math

import mpmath as mp
import numpy as np
import pytest
from tests.oracles.activity_laws import davies, extended_debye_hueckel
from tests.oracles.gibbs import ACCURACY, NotConverged, least_gibbs_energy
from tests.oracles.newton60 import ABSENT, FULL, PRESENT, NoAnswer, settle
from tests.oracles.plain_speciation import NoSpeciation, all_speciations, speciate
from tests.support.battery import battery, scaled, stirred, wide_battery
from tests.support.small_systems import MINE_COMPONENTS, PlainSystem, mine_water, plain_system

LN10 = math.log(10)
A, B = 0.5085, 3.281e9  # Debye-Hueckel at 25 degC: (kg/mol)^0.5, m^-1 (kg/mol)^0.5; Freeze & Cherry (1979)


def salt(ln_k: float, pair_ln_k: float | None = None) -> PlainSystem:
    """A solid AB of two ions, with or without an ion pair."""
    paired = pair_ln_k is not None
    return PlainSystem(
        components=("A^+", "B^-"),
        species=("A^+", "B^-", "AB")[: 2 + paired],
        minerals=("salt",),
        formation=np.array([[1.0, 0.0], [0.0, 1.0], [1.0, 1.0]])[: 2 + paired],
        ln_k=np.array([0.0, 0.0, pair_ln_k or 0.0])[: 2 + paired],
        charge=np.array([1.0, -1.0, 0.0])[: 2 + paired],
        ion_size=np.full(2 + paired, 4e-10),
        dissolution=np.array([[1.0, 1.0]]),
        mineral_ln_k=np.array([ln_k]),
    )


def settled(system, totals, upper=None, ln_gamma=None, presence=None):
    """60 digits from no better start than the totals."""
    start = np.log(np.maximum(np.abs(totals), 1e-9))
    none = np.zeros(len(system.minerals))
    return settle(system, totals, start, none, none if presence is None else presence, upper, ln_gamma)


def rounding(system, totals, found) -> float:
    """What doubles may leave in ln a: ten last bits of the largest total, over the scarcest component."""
    dissolved = np.abs(system.formation).T @ found.molality
    return 2e-15 * np.abs(totals).max() / dissolved.min() + 1e-12


def as_floats(values) -> np.ndarray:
    return np.array([float(v) for v in values])


@pytest.fixture(scope="module")
def mine():
    return mine_water()


@pytest.fixture(scope="module")
def easy():
    """Few enough minerals to try every set."""
    components = ("H^+", "Na^+", "Ca^2+", "Fe^2+", "Zn^2+", "SO4^2-", "HS^-", "CO3^2-", "Cl^-")
    return plain_system(
        components, None, ("sphalerite", "mackinawite", "calcite", "smithsonite", "gypsum")
    )


def test_pure_water_is_neutral():
    water = PlainSystem(
        components=("H^+",),
        species=("H^+", "OH^-"),
        minerals=(),
        formation=np.array([[1.0], [-1.0]]),
        ln_k=np.array([0.0, -13.995 * LN10]),
        charge=np.array([1.0, -1.0]),
        ion_size=np.array([9e-10, 3.5e-10]),
        dissolution=np.zeros((0, 1)),
        mineral_ln_k=np.zeros(0),
    )
    # [H] = [OH] and Davies gives both the same coefficient, so that a(H) = sqrt(Kw) exactly
    half = 13.995 / 2
    for find in (speciate, settled):
        found = find(water, np.zeros(1), ln_gamma=davies(water.charge, A))
        assert float(-found.ln_activity[0]) / LN10 == pytest.approx(half, abs=1e-12)


@pytest.mark.parametrize("pair_ln_k", [None, 5.3])
@pytest.mark.parametrize("a_total", [0.05, 0.2])
def test_a_salt_dissolves_to_the_root_of_a_quadratic(pair_ln_k, a_total):
    """A b = K and a - b = A - B; the pair K beta takes its share, the solid the rest."""
    ln_k, b_total = -9.0, 0.08
    k, d = math.exp(ln_k), a_total - b_total
    a = (d + math.sqrt(d * d + 4 * k)) / 2 if d > 0 else k / ((-d + math.sqrt(d * d + 4 * k)) / 2)
    pair = math.exp(ln_k + pair_ln_k) if pair_ln_k is not None else 0.0
    solid = a_total - a - pair

    system, totals = salt(ln_k, pair_ln_k), np.array([a_total, b_total])
    plain, exact = speciate(system, totals), settled(system, totals)
    least = least_gibbs_energy(system, totals)
    assert plain.ln_activity[0] == pytest.approx(math.log(a), abs=1e-12)
    assert plain.amount[0] == pytest.approx(solid, rel=1e-12)
    assert float(exact.ln_activity[0]) == pytest.approx(math.log(a), abs=1e-12)
    assert float(exact.amount[0]) == pytest.approx(solid, rel=1e-12)
    assert least.molality[0] == pytest.approx(a, abs=ACCURACY * a_total)
    assert least.amount[0] == pytest.approx(solid, abs=ACCURACY * a_total)


def test_a_trace_is_the_difference_of_two_totals():
    """With 0.1 of A and 1e-10 less of B the free B is K / (A - B): the doubles' own difference decides."""
    totals = np.array([0.1, 0.1 * (1 - 1e-9)])
    exact = settled(salt(-80.0), totals)
    with mp.workdps(100):
        d = mp.mpf(float(totals[0])) - mp.mpf(float(totals[1]))
        k = mp.exp(mp.mpf(-80.0))
        a = (d + mp.sqrt(d * d + 4 * k)) / 2
        assert abs(exact.ln_activity[0] - mp.log(a)) < mp.mpf("1e-58")
        assert abs(exact.ln_activity[1] - mp.log(k / a)) < mp.mpf("1e-58")


def test_ionic_strength_and_solubility_find_each_other():
    """K chosen so that the saturated solution is 0.2 molal: K = (0.2 gamma)^2."""
    law = davies([1.0, -1.0], A)
    system = salt(2 * (math.log(0.2) + law(0.2)[0]))
    for found in (speciate(system, [1.0, 1.0], ln_gamma=law), settled(system, [1.0, 1.0], ln_gamma=law)):
        assert float(found.ionic_strength) == pytest.approx(0.2, rel=1e-12)
        assert float(found.amount[0]) == pytest.approx(0.8, rel=1e-12)


@pytest.mark.parametrize(
    ("upper", "presence", "solid"),
    [(math.inf, PRESENT, 0.04), (0.05, PRESENT, 0.04), (0.03, FULL, 0.03), (0.0, ABSENT, 0.0)],
)
def test_a_solid_that_may_only_dissolve_stops_at_its_bound(upper, presence, solid):
    """0.05 of each ion over a salt that keeps 0.01 dissolved: 0.04 would be solid, if the bound lets it."""
    system, totals, bound = salt(2 * math.log(0.01)), np.array([0.05, 0.05]), np.array([upper])
    plain, exact = speciate(system, totals, bound), settled(system, totals, bound)
    assert (plain.presence[0], exact.presence[0]) == (presence, presence)
    assert plain.amount[0] == pytest.approx(solid, abs=1e-15)
    assert float(exact.amount[0]) == pytest.approx(solid, abs=1e-15)
    assert float(exact.ln_activity[0]) == pytest.approx(math.log(0.05 - solid), abs=1e-12)
    assert least_gibbs_energy(system, totals, bound).amount[0] == pytest.approx(solid, abs=ACCURACY * 0.05)


@pytest.mark.parametrize("given", [ABSENT, PRESENT, FULL])
def test_a_wrong_presence_is_told_and_mended(given):
    # at most 0.03: full is right; below 0.01 of each ion the salt is absent
    full = settled(salt(2 * math.log(0.01)), np.array([0.05, 0.05]), np.array([0.03]), presence=[given])
    assert full.presence[0] == FULL
    assert bool(full.changes) == (given != FULL)
    thin = settled(salt(2 * math.log(0.01)), np.array([0.005, 0.004]), np.array([0.003]), presence=[given])
    assert thin.presence[0] == ABSENT
    assert bool(thin.changes) == (given != ABSENT)


def test_the_error_of_an_answer_is_its_distance():
    system, totals = salt(2 * math.log(0.01)), np.array([0.05, 0.05])
    right = np.full(2, math.log(0.01))
    judged = settle(system, totals, right + np.array([0.0, 1e-6]), np.array([0.04 + 5e-9]), [PRESENT])
    assert judged.changes == ()
    assert judged.error == pytest.approx(1e-6, rel=1e-6)
    assert judged.amount_error == pytest.approx(1e-7, rel=1e-6)


def test_davies_holds_beyond_its_minimum():
    law = davies([1.0, -2.0, 0.0], A)
    # 0.5085 (0.316228 / 1.316228 - 0.03) = 0.106914
    assert law(0.1) == pytest.approx(np.array([-0.106914, -4 * 0.106914, 0.01]) * LN10, abs=1e-5)
    lowest = law(0.394979338)  # 2 q (1 + q)^2 = 1 / 0.3
    assert law(5.0) == pytest.approx(lowest, abs=1e-8)
    assert law(0.30)[0] > lowest[0]
    # neutral species are held with either law, ions only with Davies
    ion, neutral = extended_debye_hueckel([1.0, 0.0], [4e-10, np.nan], A, B)(5.0)
    assert neutral == pytest.approx(lowest[2], abs=1e-8)
    assert ion == pytest.approx(-LN10 * A * math.sqrt(5) / (1 + B * 4e-10 * math.sqrt(5)), rel=1e-12)


@pytest.mark.parametrize(
    ("charge", "size", "tabulated"),
    [(1, 9, 0.83), (1, 3, 0.755), (2, 8, 0.45), (2, 6, 0.405), (-2, 4, 0.355)],
)
def test_extended_debye_hueckel_is_kiellands_table(charge, size, tabulated):
    """Kielland (1937), J. Am. Chem. Soc. 59, 1675-1678, I = 0.1, in steps of 0.005 (from memory)."""
    gamma = math.exp(extended_debye_hueckel([charge], [size * 1e-10], A, B)(0.1)[0])
    assert gamma == pytest.approx(tabulated, abs=0.005)


def test_three_ways_lead_to_the_same_water(easy):
    """Trying all sets, 60 digits and a convex minimum, on waters of every family."""
    for totals in wide_battery(11, 20, easy.components, easy.dissolution):
        largest = np.abs(totals).max()
        plain, least = speciate(easy, totals), least_gibbs_energy(easy, totals)
        exact = settle(easy, totals, plain.ln_activity, plain.amount, plain.presence)
        assert exact.changes == ()
        assert exact.error < rounding(easy, totals, plain)
        assert exact.amount_error < 1e-13
        assert least.molality == pytest.approx(plain.molality, abs=ACCURACY * largest)
        assert least.amount == pytest.approx(plain.amount, abs=ACCURACY * largest)


def test_two_ways_agree_with_activity_coefficients(easy):
    sizes = np.where(np.isnan(easy.ion_size), 4e-10, easy.ion_size)
    for law in (davies(easy.charge, A), extended_debye_hueckel(easy.charge, sizes, A, B)):
        for totals in wide_battery(12, 8, easy.components, easy.dissolution):
            plain = speciate(easy, totals, ln_gamma=law)
            exact = settle(easy, totals, plain.ln_activity, plain.amount, plain.presence, ln_gamma=law)
            assert exact.changes == ()
            assert exact.error < rounding(easy, totals, plain)
            assert float(exact.ionic_strength) == pytest.approx(plain.ionic_strength, rel=1e-10)


def test_one_set_of_minerals_works_and_no_other(easy):
    for totals in wide_battery(13, 4, easy.components, easy.dissolution):
        assert len(list(all_speciations(easy, totals))) == 1


def test_bounded_minerals_three_ways(easy):
    rng = np.random.default_rng(2)
    states = set()
    for totals in wide_battery(14, 8, easy.components, easy.dissolution):
        largest = np.abs(totals).max()
        upper = np.where(rng.random(5) < 0.3, np.inf, largest * 10.0 ** rng.uniform(-6, -1, 5))
        plain, least = speciate(easy, totals, upper), least_gibbs_energy(easy, totals, upper)
        # from one set for all, mostly wrong
        exact = settled(easy, totals, upper, presence=[PRESENT, ABSENT, PRESENT, ABSENT, PRESENT])
        assert exact.presence.tolist() == plain.presence.tolist()
        assert as_floats(exact.amount) == pytest.approx(plain.amount, abs=1e-13 * largest)
        assert least.amount == pytest.approx(plain.amount, abs=ACCURACY * largest)
        states |= set(plain.presence.tolist())
    assert states == {ABSENT, PRESENT, FULL}


def test_every_single_mistake_in_the_set_is_found(mine):
    totals = battery(20261201, 4)[2]  # sphalerite, covellite, mackinawite and gypsum, with Davies
    law = davies(mine.charge, A)
    right = settled(mine, totals, ln_gamma=law)
    x, n = as_floats(right.ln_activity), as_floats(right.amount)
    assert settle(mine, totals, x, n, right.presence, ln_gamma=law).changes == ()
    for m in range(len(mine.minerals)):
        wrong = right.presence.copy()
        wrong[m] = PRESENT - wrong[m]
        mended = settle(mine, totals, x, n, wrong, ln_gamma=law)
        assert mended.changes
        assert mended.presence.tolist() == right.presence.tolist()
        assert mended.error < 1e-14


def test_dependent_minerals_are_told(mine):
    """FeS + Cu(OH)2 = CuS + Fe(OH)2: four solids, three equations."""
    names = ("covellite", "mackinawite", "iron(II) hydroxide", "spertiniite")
    given = np.array([int(name in names) for name in mine.minerals])
    mended = settled(mine, battery(20261201, 4)[3], presence=given)
    assert any("depends on" in told for told in mended.changes)


def test_nearly_balanced_sulfide_is_settled(mine):
    """Free sulfide of 1e-25 beside metals of 0.1 (family 1), from starts that are wrong by decades."""
    for totals in battery(20261201, 20)[1::4]:
        least = least_gibbs_energy(mine, totals)
        guess = (least.amount > 1e-9 * np.abs(totals).max()).astype(int)
        exact = settle(mine, totals, least.ln_activity, least.amount, guess)
        again = settled(mine, totals)
        for a, b in zip(exact.ln_activity, again.ln_activity, strict=True):
            assert abs(a - b) < mp.mpf("1e-58")
        assert as_floats(exact.amount) == pytest.approx(least.amount, abs=ACCURACY * np.abs(totals).max())


def test_what_has_no_answer_is_refused():
    system, impossible = salt(-9.0), np.array([-0.1, 0.1])
    with pytest.raises(NotConverged):
        least_gibbs_energy(system, impossible)
    with pytest.raises(NoSpeciation):
        speciate(system, impossible)
    with pytest.raises(NoAnswer):
        settled(system, impossible)


def test_batteries_are_electroneutral_and_grow_by_appending(easy):
    charge = np.array([1, 1, 2, 2, 2, 2, 2, -2, -1, -2, -1])
    totals = battery(3, 40)
    assert np.abs(totals @ charge).max() < 1e-14 * np.abs(totals).max()
    assert (totals[:17] == battery(3, 17)).all()
    assert (np.delete(totals, MINE_COMPONENTS.index("H^+"), axis=1) > 0).all()
    wide = wide_battery(3, 40, easy.components, easy.dissolution)
    assert np.abs(wide @ easy.charge[: len(easy.components)]).max() < 1e-14 * np.abs(wide).max()
    assert (np.delete(wide, 0, axis=1) > 0).all()


def test_the_batteries_are_frozen(easy):
    """SHA-256 in single precision: the last bit of a double's power differs between C libraries."""

    def digest(totals):
        return hashlib.sha256(totals.astype("<f4").tobytes()).hexdigest()[:16]

    totals = battery(20261201, 400)
    assert digest(totals) == "584f59c3994dbf76"
    assert digest(wide_battery(20261201, 100, easy.components, easy.dissolution)) == "73e0f567e5e1dcd2"
    assert digest(scaled(totals, 1)) == "51b3a9de3a6dee3a"
    assert digest(stirred(totals, 1)) == "f2f10e58228f69dd"

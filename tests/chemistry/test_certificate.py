"""Certificates: what they say of right answers, of wrong ones, and of numbers that cannot be better."""

from __future__ import annotations

from dataclasses import replace

import mpmath as mp
import numpy as np
import pytest
from tests.support.plain_of import judged
from tests.support.redox_waters import IONS, VALENCES, counted_as, random_waters, totals_of
from tools.battery.answers import solve
from tools.battery.mixes import batches, mine_system

import gossan
from gossan.chemistry.certificate import certify, certify_water
from gossan.chemistry.equilibrium import Solver, equilibrate
from gossan.chemistry.system import build_system
from gossan.constants.load import load_table

LN10 = np.log(10.0)


@pytest.fixture(scope="module")
def gypsum():
    """Gypsum in a water that holds a little acid: one mineral present."""
    system = build_system(load_table(), ["Ca^2+", "SO4^2-", "Cl^-"], ["gypsum", "portlandite"])
    totals = np.zeros((len(system.components), 1))
    for name, value in (("Ca^2+", 0.1), ("SO4^2-", 0.1), ("H^+", 1e-3), ("Cl^-", 1e-3)):
        totals[system.components.index(name)] = value
    return equilibrate(system, totals), totals


def test_a_right_answer_is_right_to_the_last_digits(gypsum):
    found, totals = gypsum
    certificate = certify(found, totals=totals)
    assert certificate.balance.max() < 1e-14
    assert certificate.ionic_strength[0] < 1e-14
    assert certificate.present[0] < 1e-13
    assert certificate.absent[0] == 0.0
    assert 0.0 < certificate.worst[0] < 1e-13
    assert "ln activities within" in certificate.line()


@pytest.mark.parametrize("off", [1e-3, 1e-6, 1e-10])
@pytest.mark.parametrize("name", ["H^+", "Cl^-"])
def test_the_error_of_a_wrong_answer_is_told(gypsum, name, off):
    """One ln activity moved: it is off by that much, and the estimate adds a tenth."""
    found, totals = gypsum
    k = found.system.components.index(name)
    wrong = found.ln_activity.copy()
    wrong[k] += off
    certificate = certify(replace(found, ln_activity=wrong), totals=totals)
    exact = judged(replace(found, ln_activity=wrong), 0, totals[:, 0])
    assert certificate.ln_activity[k, 0] == pytest.approx(1.1 * off, rel=5e-3 + 1e-13 / off)
    assert (certificate.ln_activity[:, 0] >= exact.errors).all()
    assert certificate.balance[k, 0] > 0.1 * off


def test_a_mineral_off_its_saturation_is_told(gypsum):
    found, totals = gypsum
    wrong = found.ln_activity.copy()
    wrong[found.system.components.index("SO4^2-")] += 1e-5
    certificate = certify(replace(found, ln_activity=wrong), totals=totals)
    assert certificate.present[0] == pytest.approx(1e-5, rel=1e-6)
    assert certificate.worst[0] == pytest.approx(1.1e-5, rel=0.02)


def test_an_absent_mineral_that_should_be_there_is_told(gypsum):
    found, totals = gypsum
    alone = certify_water(equilibrate(found.system, found.amount))
    assert alone.absent[0] == 0.0
    dry = replace(
        found, presence=np.zeros_like(found.presence), ln_activity=found.ln_activity + 0.1
    )
    m = found.system.minerals.index("gypsum")
    told = certify(dry, totals=totals)
    assert told.absent[0] == pytest.approx(told.saturation[m, 0])
    assert told.absent[0] == pytest.approx(0.2, rel=1e-6)
    assert certify_water(dry).absent[0] == 0.0, "a water on its own may be oversaturated"


def test_a_full_mineral_that_should_dissolve_is_told():
    system = build_system(load_table(), ["Ca^2+", "SO4^2-"], (), dissolving=["gypsum"])
    totals = np.zeros((3, 1))
    totals[1:] = 0.1
    found = Solver(system).cold(np.ones(1), totals, np.zeros((1, 1)), np.full((1, 1), 0.01))
    assert found.presence[0, 0] == 2
    right = certify(found, totals=totals, upper=np.full((1, 1), 0.01))
    assert right.full[0] == 0.0
    assert right.balance.max() < 1e-14
    weak = replace(found, ln_activity=found.ln_activity - 5.0)
    assert certify(weak, totals=totals).full[0] > 1.0


def test_amounts_count_per_kilogram_of_water(gypsum):
    found, totals = gypsum
    scaled = replace(found, amount=380.0 * found.amount, solid=380.0 * found.solid)
    kilograms = np.array([380.0])
    one, other = certify(found, totals=totals), certify(scaled, kilograms, 380.0 * totals)
    assert other.worst[0] == pytest.approx(one.worst[0], abs=1e-13)
    assert certify(scaled, kilograms).balance.max() < 1e-13


def test_residuals_are_those_of_sixty_digits():
    """The balances of a coupled water that is a little wrong, term by term in mpmath."""
    system = build_system(load_table(), IONS, (), coupled=VALENCES, activity="ideal")
    totals = totals_of(random_waters(5, 1), counted_as(load_table(), system.components)).T
    found = equilibrate(system, totals)
    wrong = replace(found, ln_activity=found.ln_activity + 1e-9 * np.arange(len(system.basis))[:, None])
    certificate = certify(wrong)
    matrices = system.matrices
    with mp.workdps(60):
        x = [mp.mpf(v) for v in wrong.ln_activity[:, 0].tolist()]
        molality = []
        for s, ln_k in enumerate(matrices.ln_k.tolist()):
            terms = zip(matrices.stoichiometry[:, s].tolist(), x, strict=True)
            molality.append(mp.exp(mp.mpf(ln_k) + mp.fsum(mp.mpf(n) * v for n, v in terms if n)))
        for k in range(len(system.components)):
            counts = matrices.conserved[k].tolist()
            parts = [mp.mpf(n) * m for n, m in zip(counts, molality, strict=True) if n]
            total = mp.mpf(float(wrong.amount[k, 0]))
            largest = max([abs(total), *map(abs, parts)])
            off = float(abs(total - mp.fsum(parts)) / largest)
            assert certificate.balance[k, 0] == pytest.approx(off, rel=1e-12)


def test_estimates_cover_the_errors_of_hundreds_of_waters():
    """Three hundred waters of the first battery and of coupled redox, settled at many digits."""
    shares, digits = [], []
    for mix, count in (("mine", 200), ("coupled", 48), ("open", 24), ("missing", 24), ("bounded", 24)):
        for batch in batches(mix, 91, count):
            answers = solve(batch)
            found, solved = answers.found, answers.batch
            certificate = certify(found, totals=solved.totals.T, upper=solved.upper.T)
            for w, totals in enumerate(solved.totals):
                exact = judged(found, w, totals, solved.upper[w])
                says = certificate.ln_activity[: len(totals), w]
                shares.append(float((exact.errors / np.maximum(says, 1e-300)).max()))
                digits.append(exact.error)
    assert max(shares) <= 1.0
    assert np.median(shares) > 0.3, "an estimate that is far too large says nothing"
    assert max(digits) < 1e-11


def test_the_package_gives_it(gypsum):
    found, totals = gypsum
    assert gossan.certify(found, totals=totals).worst[0] == certify(found, totals=totals).worst[0]


def test_more_waters_at_once_are_the_same_bits():
    system = mine_system()
    totals = np.abs(np.random.default_rng(1).normal(0.0, 0.01, (len(system.components), 5)))
    found = equilibrate(system, totals)
    whole = certify(found, totals=totals)
    for i in range(5):
        one = certify(equilibrate(system, totals[:, i]), totals=totals[:, i : i + 1])
        assert one.ln_activity[:, 0].tobytes() == np.ascontiguousarray(whole.ln_activity[:, i]).tobytes()


def test_interactions_count_as_they_stand():
    """A brine under SIT: what is certified is what the solve found."""
    system = build_system(load_table(), ["Na^+", "Cl^-", "SO4^2-", "Ca^2+"], ["gypsum"], activity="sit")
    totals = np.zeros((len(system.components), 1))
    for name, value in (("Na^+", 2.1), ("Cl^-", 2.0), ("SO4^2-", 0.25), ("Ca^2+", 0.2)):
        totals[system.components.index(name)] = value
    found = equilibrate(system, totals)
    certificate = certify(found, totals=totals)
    assert found.presence[0, 0] == 1
    assert certificate.balance.max() < 1e-10
    assert certificate.worst[0] < 1e-10
    wrong = found.ln_activity.copy()
    wrong[system.components.index("Cl^-")] += 1e-6
    assert certify(replace(found, ln_activity=wrong), totals=totals).worst[0] > 5e-7

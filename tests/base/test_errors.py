"""Faults say what, where and how to cure, and come home from another process whole."""

from __future__ import annotations

import inspect
import multiprocessing
import pickle

import pytest

from gossan.base import errors, outcome
from gossan.base.errors import (
    BAD_INPUT,
    DONE,
    GAVE_UP,
    LIMIT_EXCEEDED,
    STOPPED,
    Fault,
    GossanError,
    InputError,
    ResultError,
    SolveError,
)

FAULTS = [
    Fault("case.toml", 14, "layers.gate.porosity", "is 38", "did you mean 0.38?"),
    Fault("case.toml", 0, "", "has no waters"),
]
SOLVE = SolveError("it did not settle", 17, "gate", 0.35, 412.6 * 86400, 3e-6, "gate.h5")
EVERY = [InputError(FAULTS), ResultError("gate.h5 exists"), SOLVE, GossanError("a fault")]


def tree(kind: type) -> set[type]:
    return {kind}.union(*map(tree, kind.__subclasses__()))


def test_exit_codes_are_those_of_the_contract():
    assert (DONE, LIMIT_EXCEEDED, BAD_INPUT, STOPPED, GAVE_UP) == (0, 1, 2, 3, 4)
    assert InputError(FAULTS).exit_code == BAD_INPUT
    assert ResultError("gone").exit_code == BAD_INPUT
    assert SOLVE.exit_code == GAVE_UP


@pytest.mark.parametrize(
    ("fault", "text"),
    [
        (FAULTS[0], "case.toml:14: layers.gate.porosity is 38: did you mean 0.38?"),
        (FAULTS[1], "case.toml: has no waters"),
        (Fault("case.toml", 3, "run", "is missing"), "case.toml:3: run is missing"),
        (Fault("case.toml", 3, "", "is empty", "write"), "case.toml:3: is empty: write"),
    ],
)
def test_a_fault_reads_as_one_line(fault, text):
    assert str(fault) == text


def test_all_faults_stand_in_one_message():
    assert str(InputError(FAULTS)).splitlines() == [str(fault) for fault in FAULTS]


def test_a_failed_solve_names_cell_layer_place_time_and_what_is_kept():
    assert str(SOLVE) == (
        "no equilibrium in cell 17 (layer gate, x = 0.35 m) at 412.6 d: it did not settle; "
        "last good state in gate.h5"
    )


@pytest.mark.parametrize(
    ("error", "text"),
    [
        (SolveError("singular"), "singular"),
        (SolveError("singular", 3), "no equilibrium in cell 3: singular"),
        (SolveError("singular", 3, time=86400.0), "no equilibrium in cell 3 at 1 d: singular"),
        (SolveError("singular", kept="a.h5"), "singular; last good state in a.h5"),
    ],
)
def test_what_is_not_known_is_not_said(error, text):
    assert str(error) == text


@pytest.mark.parametrize("error", EVERY, ids=lambda error: type(error).__name__)
def test_a_fault_survives_pickling(error):
    """A worker's fault that cannot be unpickled breaks the whole pool."""
    again = pickle.loads(pickle.dumps(error))
    assert type(again) is type(error)
    assert str(again) == str(error)
    assert repr(again.args) == repr(error.args)
    assert vars(again).keys() == vars(error).keys()


def test_every_error_of_the_tree_is_tried():
    own = {kind for kind in tree(GossanError) if kind.__module__ == errors.__name__}
    assert own == {type(error) for error in EVERY}


def _fail(_: int) -> None:
    raise SOLVE


def test_a_fault_comes_home_from_a_worker():
    with multiprocessing.get_context("spawn").Pool(1) as pool, pytest.raises(SolveError) as caught:
        pool.map(_fail, [0])
    assert caught.value.cell == 17
    assert caught.value.kept == "gate.h5"


def test_what_is_kept_can_be_added_later():
    error = SolveError("singular", 3)
    error.kept = "gate.h5"
    assert str(error).endswith("last good state in gate.h5")


def test_every_outcome_has_its_sentence():
    codes = {
        name: code for name, code in inspect.getmembers(outcome) if name.isupper() and isinstance(code, int)
    }
    assert len(set(codes.values())) == len(codes)
    assert set(outcome.SENTENCES) == set(codes.values())
    assert outcome.SOLVED == 0
    for code, sentence in outcome.SENTENCES.items():
        assert sentence.split()[0].islower() or code == outcome.ITERATIONS, sentence
        assert not sentence.endswith(".")

"""Which minerals a figure shows where there are too many."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np

from gossan.views import chosen


def result_of(**stocks: np.ndarray) -> SimpleNamespace:
    """What `chosen.minerals` reads of a result: (time, cell) mol m-3 by mineral, cells of 0.1 m."""
    solid = np.stack(list(stocks.values()), axis=1)
    axes = SimpleNamespace(mineral=tuple(stocks), face=0.1 * np.arange(solid.shape[-1] + 1))
    return SimpleNamespace(profiles=SimpleNamespace(solid=SimpleNamespace(values=solid)), axes=axes)


def test_what_is_used_up_comes_before_a_spike_that_walks_through():
    walking, spent = np.eye(10), np.outer(np.linspace(0.3, 0.0, 10), np.ones(10))
    kept = np.full((10, 10), 5.0)
    found = result_of(walking=walking, spent=spent, never=np.zeros((10, 10)), kept=kept)
    assert chosen.minerals(found, 1) == ["spent"]
    assert chosen.minerals(found, 2) == ["spent", "kept"], "of those that do not change the more abundant"
    assert chosen.minerals(found) == ["walking", "spent", "kept"]

"""Layers to cells and faces."""

import numpy as np
import pytest

from gossan.transport.grid import Layer, grid_of

LAYERS = [Layer("sand", 0.3, 3, 0.01), Layer("gate", 1.2, 60, 0.04, 1e-9), Layer("gravel", 0.1, 1)]


def test_layers_meet_and_fill_the_column():
    grid = grid_of(LAYERS)
    assert grid.edges[0] == 0.0
    assert grid.length == pytest.approx(1.6, rel=1e-15)
    np.testing.assert_allclose(np.diff(grid.edges), grid.width, rtol=1e-12)
    assert [layer.start for layer in grid.layers] == pytest.approx([0.0, 0.3, 1.5])
    assert np.bincount(grid.layer).tolist() == [3, 60, 1]


def test_refined_cells_lie_inside_the_old_ones():
    grid = grid_of(LAYERS)
    fine = grid.refined(2)
    np.testing.assert_allclose(fine.edges[::2], grid.edges, rtol=1e-14, atol=1e-16)
    assert fine.layers[1].cells == 120
    assert fine.layers[1].dispersivity == 0.04


def test_port_takes_the_nearest_face():
    grid = grid_of(LAYERS)
    assert grid.face_at(0.0) == 0
    assert grid.face_at(0.3) == 3
    assert grid.face_at(0.308) == 3
    assert grid.face_at(0.312) == 4
    assert grid.face_at(grid.length) == 64
    assert grid.face_at(0.3 + 1.2 + 0.1) == 64


@pytest.mark.parametrize("x", [-0.01, 1.61, float("nan")])
def test_port_outside_is_refused(x):
    with pytest.raises(ValueError, match="outside the column"):
        grid_of(LAYERS).face_at(x)

"""Layers to cells and faces."""

import numpy as np
import pytest

from gossan.transport.grid import Layer, grid_of
from gossan.transport.growth import growing

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


@pytest.mark.parametrize("growth", [1.2, 1 / 1.2])
def test_cells_grow_and_layers_still_meet_on_faces(growth):
    grid = grid_of([Layer("sand", 0.3, 5), Layer("clay", 0.5, 9, growth=growth), Layer("sand", 0.2, 2)])
    assert grid.edges[[5, 14, 16]] == pytest.approx([0.3, 0.8, 1.0], rel=1e-15)
    inside = grid.width[5:14]
    assert inside[1:] / inside[:-1] == pytest.approx(np.full(8, growth), rel=1e-12)
    np.testing.assert_allclose(np.diff(grid.edges), grid.width, rtol=1e-12)
    fine = grid.refined(3)
    np.testing.assert_allclose(fine.edges[::3], grid.edges, rtol=1e-13, atol=1e-16)
    assert fine.width[16] / fine.width[15] == pytest.approx(growth ** (1 / 3))


@pytest.mark.parametrize(
    ("length", "first", "last"), [(1.0, 0.001, 0.02), (1.0, 0.02, 0.001), (0.3, 0.01, 0.01), (0.5, 0.5, 0.5),
                                  (0.1, 0.08, 0.09), (2.0, 1e-4, 1.0)]
)
def test_the_fewest_cells_that_grow_as_asked(length, first, last):
    cells, growth = growing(length, first, last)
    width = grid_of([Layer("one", length, cells, growth=growth)]).width
    assert width.sum() == pytest.approx(length)
    assert width[0] <= first * (1 + 1e-9)
    assert width[-1] <= last * (1 + 1e-9)
    if cells > 2:
        assert width[-1] / width[0] == pytest.approx(last / first)
        fewer = (last / first) ** (np.arange(cells - 1) / (cells - 2))
        assert first * fewer.sum() < length
    assert growing(length, length, length) == (1, 1.0)


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

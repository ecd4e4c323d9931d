"""Pure water for hundreds of pore volumes: what was there goes towards nothing, and the walk goes on."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import column, walk

# minerals, pore volumes, coupling, inlet, dispersivity (20 cm: implicit)
WASHED = {
    "gypsum": ('gypsum = "1 wt%"', 300, "two-stage", "flux", "1 cm"),
    "calcite": ('calcite = "0.02 wt%"', 300, "two-stage", "flux", "1 cm"),
    "both": ('gypsum = "0.1 wt%", calcite = "0.01 wt%"', 300, "lie", "concentration", "20 cm"),
    "mackinawite": ('mackinawite = "0.02 umol/g"', 200, "lie", "flux", "1 cm"),
}


@pytest.mark.parametrize("name", WASHED)
def test_a_bed_is_washed_to_nothing(name):
    minerals, pore_volumes, coupling, inlet, dispersivity = WASHED[name]
    run = walk(
        column(
            "[waters.feed]\n[waters.pore]\n", minerals=minerals, cells=5, duration=f"{pore_volumes} PV",
            dispersivity=dispersivity, flow=f'darcy_flux = "0.1 m/d"\ninlet = "{inlet}"',
            run=f'coupling = "{coupling}"\nports_every = "5 PV"\nprofiles_every = "50 PV"',
        )
    )  # fmt: skip
    left = np.array([state.solid.sum() for state in run.records])
    assert left[0] > 0.0
    assert np.diff(left).max() <= 0.0
    assert left[-1] == 0.0
    assert run.last.dissolved[1:].max() < 1e-9  # mol m-3: less than any analysis finds
    assert run.last.dissolved[1:].min() >= 0.0
    assert -run.last.ln_activity[0] / np.log(10.0) == pytest.approx(7.0, abs=0.01)

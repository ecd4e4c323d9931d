"""A case without a fault, and a look at the faults of others."""

from __future__ import annotations

import pytest

from gossan.base.errors import Fault, InputError
from gossan.case.read import case_from_text

GOOD = """\
title = "a gate of sulfide-bearing sand"
temperature = "12 degC"

[waters.mine]
pH = 5.9
alkalinity = "6 mg/L as CaCO3"
balance_on = "Mg"
temperature = "11 degC"
[waters.mine.analysis]
Ca = "180 mg/L"
Mg = "205 mg/L"
SO4 = "1300 mg/L"
Zn = "24 mg/L"
Cd = "<0.0005 mg/L"
[waters.mine.tracers]
bromide = "40 mg/L"

[waters.pore]
pH = 7.2
[waters.pore.analysis]
Ca = "2 mmol/L"
SO4 = "2 mmol/L"
[waters.pore.saturated_with]
calcite = 0.0
CO2 = "0.003 atm"

[tracers.bromide]
molar_mass = "79.9 g/mol"

[[layers]]
name = "inlet sand"
length = "20 cm"
cell = "2 cm"
porosity = 0.40
dispersivity = "1 cm"
water = "pore"

[[layers]]
name = "gate"
length = "1.0 m"
cells = 50
porosity = 0.38
dispersivity = "4 cm"
water = "pore"
[layers.minerals]
mackinawite = "0.8 wt%"
calcite = {amount = "3 wt%", reactive = 0.4}
[layers.clogging]
law = "kozeny-carman"

[flow]
darcy_flux = "0.12 m/d"
[[flow.feed]]
from = "0 d"
water = "mine"
[[flow.feed]]
from = "2 yr"
water = "pore"

[chemistry]
also = ["gypsum"]
exclude = ["siderite"]

[[ports]]
name = "middle"
at = "0.6 m"

[limits.outlet]
Zn = "0.12 mg/L"
pH = [6.5, 9.0]

[run]
duration = "8 yr"
"""


def faults_of(text: str) -> list[Fault]:
    """The faults of a text, in the order of the message."""
    with pytest.raises(InputError) as caught:
        case_from_text(text, "gate.toml")
    error = caught.value
    assert error.exit_code == 2
    assert str(error) == "\n".join(map(str, error.faults))
    return error.faults

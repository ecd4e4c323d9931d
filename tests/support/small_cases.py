"""Cases that run in a second: gypsum washed out of sand by water with a tracer; two waters."""

from __future__ import annotations

GYPSUM = """\
title = "gypsum washed out of sand"
[waters.rain]
balance_on = "SO4"
analysis = {Ca = "20 mg/L", SO4 = "48 mg/L"}
[waters.rain.tracers]
bromide = "1 mmol/L"
[waters.pore.saturated_with]
gypsum = 0.0
[[layers]]
name = "sand"
length = "20 cm"
cells = 8
porosity = 0.4
dispersivity = "1 cm"
conductivity = "10 m/d"
water = "pore"
minerals = {gypsum = "0.1 wt%"}
[flow]
darcy_flux = "0.4 m/d"
[[flow.feed]]
from = "0 d"
water = "rain"
[limits.outlet]
SO4 = "500 mg/L"
bromide = "0.5 mmol/L"
Zn = "1 mg/L"
pH = [2.0, 12.0]
[run]
duration = "4 PV"
profiles_every = "0.5 PV"
ports_every = "0.1 PV"
"""
WATERS = """\
title = "two laboratory reports"
temperature = "12 degC"
[waters.mine]
pH = 5.4
balance_on = "SO4"
[waters.mine.analysis]
Ca = "180 mg/L"
SO4 = "500 mg/L"
Zn = "24 mg/L"
Cd = "<0.0005 mg/L"
[waters.gate]
pH = 6.6
balance_on = "Na"
[waters.gate.analysis]
Ca = "60 mg/L"
SO4 = "140 mg/L"
HS = "3 mg/L"
CO3 = "30 mg/L"
"""

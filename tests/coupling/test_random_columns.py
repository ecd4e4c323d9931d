"""Whatever the column: no mole, charge or water is lost, and what may form is nowhere above saturation."""

from __future__ import annotations

from hypothesis import HealthCheck, given, reject, settings
from hypothesis import strategies as st
from tests.support.columns import column, started, walk

from gossan.base.errors import InputError

SOLIDS = {
    "gypsum": "1 wt%", "calcite": "0.05 wt%", "mackinawite": "1 umol/g", "brucite": "0.02 wt%",
    "siderite": "0.05 wt%", "sphalerite": "0.5 umol/g", "gibbsite": "0.01 wt%",
}  # fmt: skip
FORMS = [*SOLIDS, "covellite", "smithsonite", "epsomite", "ferrihydrite"]
CATIONS = ("Na", "Ca", "Mg", "Fe", "Zn", "Cu", "Al")
ANIONS = ("SO4", "HS", "CO3")
AMOUNTS = st.sampled_from(["0.001 mmol/L", "0.1 mmol/L", "2 mmol/L", "20 mmol/L"])


@st.composite
def waters(draw, name: str) -> str:
    """A water of a few ions in little or much salt, whose chloride or sodium takes the rest of the charge."""
    held = draw(st.dictionaries(st.sampled_from(CATIONS + ANIONS), AMOUNTS, max_size=5))
    held |= dict.fromkeys(("Cl", "Na"), draw(st.sampled_from(["400 mmol/L", "10 mmol/L", "0.1 mmol/L"])))
    analysis = ", ".join(f'{ion} = "{amount}"' for ion, amount in held.items())
    balance = draw(st.sampled_from(["Cl", "Na"]))
    pH = draw(st.floats(3.0, 10.0).map(lambda value: round(value, 2)))
    return f'[waters.{name}]\npH = {pH}\nbalance_on = "{balance}"\nanalysis = {{{analysis}}}\n'


@st.composite
def columns(draw) -> str:
    solids = draw(st.lists(st.sampled_from(sorted(SOLIDS)), max_size=3, unique=True))
    forms = sorted(set(draw(st.lists(st.sampled_from(FORMS), max_size=6))))
    head = draw(st.booleans())
    text = "".join(draw(waters(name)) for name in ("feed", "second", "pore"))
    return column(
        text,
        minerals=", ".join(f'{name} = "{SOLIDS[name]}"' for name in solids),
        forms="[" + ", ".join(f'"{name}"' for name in forms) + "]",
        cells=draw(st.integers(1, 6)),
        length="20 cm",
        porosity=draw(st.sampled_from([0.2, 0.4, 0.6])),
        dispersivity=draw(st.sampled_from(["0 m", "1 cm", "30 cm"])),
        diffusion=draw(st.sampled_from(["0 m2/s", "1e-9 m2/s"])),
        layer='conductivity = "1 m/d"',
        flow=('head_drop = "2 cm"' if head else 'darcy_flux = "0.1 m/d"')
        + f'\ninlet = "{draw(st.sampled_from(["flux", "concentration"]))}"',
        feed='{from = "0 d", water = "feed"}, {from = "0.6 d", water = "second"}',
        duration=draw(st.sampled_from(["2 PV", "1.5 d"])),
        run=f'coupling = "{draw(st.sampled_from(["two-stage", "lie"]))}"\n'
        f'max_courant = {draw(st.sampled_from([0.2, 0.5]))}\nprofiles_every = "1 PV"\nports_every = "0.5 PV"',
    )


@settings(max_examples=60, suppress_health_check=[HealthCheck.too_slow])
@given(columns())
def test_no_mole_is_lost(text):
    """`walk` closes the books after every step, and holds both ends of the run against its minerals."""
    try:
        problem, _ = started(text)
    except InputError:
        reject()  # more charge to balance than there is salt
    run = walk(problem)
    assert run.strides > 3
    positive = run.last.dissolved[1:]  # all but excess H^+
    assert positive.min(initial=0.0) >= 0.0

"""What a good case becomes: SI numbers beside their text, the contract's defaults, the schema."""

import pickle
import subprocess
import sys
import tomllib

import numpy as np
import pytest
from pydantic import ValidationError

from gossan.base.amounts import Amount
from gossan.base.errors import InputError
from gossan.case.entries import course
from gossan.case.model import Case, Layer, case_schema
from gossan.case.quantities import Range
from gossan.case.read import case_from_data, case_from_text, read_case

SMALL = """\
[waters.mine]
[[layers]]
name = "gate"
length = "1 m"
cells = 10
porosity = 0.40
dispersivity = "1 cm"
water = "mine"
[flow]
darcy_flux = "0.1 m/d"
[[flow.feed]]
from = "0 d"
water = "mine"
[run]
duration = "20 PV"
"""


def test_the_defaults_are_the_contracts():
    case = case_from_text(SMALL)
    layer, water = case.layers[0], case.waters["mine"]
    assert case.temperature.si == 298.15
    assert (water.pH, water.analysis, water.saturated_with, water.tracers) == (7.0, {}, {}, {})
    assert (water.alkalinity, water.density) == (None, None)
    assert (water.balance_on, water.accept_imbalance) == ("", False)
    assert case.temperature_of("mine") == 298.15
    assert (case.chemistry.activity, case.chemistry.redox) == ("davies", "held")
    assert (case.chemistry.minerals, case.chemistry.also, case.chemistry.exclude) == (None, (), ())
    assert (case.flow.inlet, case.run.coupling) == ("flux", "two-stage")
    assert (case.run.accuracy, case.run.max_courant) == (1e-3, 0.5)
    assert (case.run.profiles_every, case.run.ports_every) == (None, None)
    assert layer.diffusion.si == 1e-9
    assert layer.tortuosity is None
    assert (case.flow.outlet, case.flow.outlet_water, case.flow.outlet_gradient) == ("zero-gradient", "", {})
    assert case.run.limiter == "van-leer"
    assert layer.grain_density.si == 2650.0
    assert layer.clogging.law == "kozeny-carman"
    assert layer.conductivity is None
    assert layer.minerals == {}
    assert (case.tracers, case.tracer_names, case.limits) == ({}, (), {})
    assert case.port_positions == {"outlet": 1.0}


def test_amounts_keep_their_text_and_line():
    case = case_from_text(SMALL)
    assert case.layers[0].length == Amount("1 m", 1.0, "m", 4)
    assert case.flow.darcy_flux == Amount("0.1 m/d", 0.1 / 86400, "m/s", 10)
    assert case.run.duration == Amount("20 PV", 20.0, "PV", 15)
    assert case.text == SMALL
    assert case.file == "case.toml"


def test_pore_volumes_become_seconds_under_a_held_flux():
    case = case_from_text(SMALL)
    assert case.pore_length == pytest.approx(0.4)
    # 20 times 0.4 m of water at 0.1 m/d are 80 d
    assert course(case).seconds(case.run.duration) == pytest.approx(80 * 86400, rel=1e-14)
    held_head = case_from_text(
        SMALL.replace('darcy_flux = "0.1 m/d"', 'head_drop = "5 cm"').replace(
            "cells = 10", 'cells = 10\nconductivity = "5 m/d"'
        )
    )
    with pytest.raises(ValueError, match="held"):
        course(held_head).seconds(held_head.run.duration)


@pytest.mark.parametrize(
    ("size", "count"), [("10 cm", 10), ("3 cm", 34), ("1 m", 1), ("0.1 m", 10), ("0.7 m", 2), ("1 mm", 1000)]
)
def test_cell_gives_the_fewest_cells_no_longer_than_it(size, count):
    case = case_from_text(SMALL.replace("cells = 10", f'cell = "{size}"'))
    assert case.layers[0].mesh == (count, 1.0)


def test_cells_may_grow():
    """One centimetre at most at the inlet, four at the end, in the fewest cells."""
    case = case_from_text(SMALL.replace("cells = 10", 'cell = {first = "1 cm", last = "4 cm"}'))
    cells, growth = case.layers[0].mesh
    widths = growth ** np.arange(cells)
    widths /= widths.sum()
    assert 0.009 < widths[0] <= 0.01
    assert widths[-1] == pytest.approx(4 * widths[0])
    fewer = 4 ** (np.arange(cells - 1) / (cells - 2))
    assert 0.01 * fewer.sum() < 1.0
    assert case_from_text(SMALL).layers[0].mesh == (10, 1.0)


def test_every_water_alone_is_a_case_for_assay():
    case = case_from_text('[waters.a]\npH = 3\n[waters."b 2"]\n')
    assert list(case.waters) == ["a", "b 2"]
    with pytest.raises(InputError) as caught:
        case.require_column()
    assert [fault.key for fault in caught.value.faults] == ["layers", "flow", "flow.feed", "run"]
    case_from_text(SMALL).require_column()


def test_all_that_a_case_can_say():
    case = case_from_text(
        SMALL.replace(
            "[waters.mine]",
            """[waters.mine]
density = "1.02 g/cm3"
accept_imbalance = true
balance_on = "SO4^2-"
analysis = {"Zn²⁺" = "24 mg/L", Fe = "2 mg/L", "Fe(III)" = "1 mg/L", NO3 = "3 mg/L as N", SiO2 = "9 mg/L"}
saturated_with.calcite = 0
saturated_with.CO2 = "0.003 atm"
tracers.bromide = "1 mmol/L"
""",
        ).replace(
            "[flow]",
            """[layers.minerals]
mackinawite = {amount = "0.5 umol/g"}
calcite = {amount = "3 wt%", reactive = 0.4}
gypsum = "1 vol%"
[layers.clogging]
law = "threshold"
exponent = 3
critical_porosity = 0.05
[chemistry]
minerals = []
exclude = ["NaCO3^-"]
[[ports]]
name = "end"
at = "outlet"
[[ports]]
name = "half"
at = "50 cm"
[limits.half]
bromide = "2 mmol/L"
pH = [6, 9]
Zn = "0.12 mg/L"
[flow]""",
        )
    )
    water, layer = case.waters["mine"], case.layers[0]
    assert water.density.si == 1020.0
    assert list(water.analysis) == ["Zn²⁺", "Fe", "Fe(III)", "NO3", "SiO2"]
    assert water.saturated_with["calcite"] == 0.0
    assert water.saturated_with["CO2"].si == pytest.approx(303.975)
    assert case.tracer_names == ("bromide",)
    assert layer.minerals["mackinawite"].amount.si == pytest.approx(5e-4)
    assert layer.minerals["calcite"].reactive == 0.4
    assert layer.minerals["gypsum"].amount.unit == "m3/m3"
    assert case.chemistry.minerals == ()
    assert case.port_positions == {"end": 1.0, "half": 0.5, "outlet": 1.0}
    assert case.limits["half"]["pH"] == Range(6.0, 9.0)
    assert case.limits["half"]["Zn"].si == pytest.approx(1.2e-4)


def test_a_case_pickles_whole():
    """Workers of an ensemble are sent cases."""
    case = case_from_text(SMALL)
    again = pickle.loads(pickle.dumps(case))
    assert again == case
    assert (again.text, again.file) == (case.text, case.file)


def test_a_case_does_not_change():
    case = case_from_text(SMALL)
    with pytest.raises(ValidationError):
        case.title = "other"


def test_a_file_is_read_with_windows_line_ends_and_a_mark(tmp_path):
    path = tmp_path / "case.toml"
    path.write_bytes(b"\xef\xbb\xbf" + SMALL.replace("\n", "\r\n").encode())
    assert read_case(path).layers[0].length.line == 4


def test_changed_data_are_checked_again():
    data = tomllib.loads(SMALL)
    data["layers"][0]["length"] = "2 m"
    assert case_from_data(data).length == 2.0
    data["layers"][0]["length"] = "2"
    with pytest.raises(InputError, match=r"case: layers.gate.length is \"2\", without a unit"):
        case_from_data(data)


def test_pydantic_checks_a_model_built_in_python():
    given = tomllib.loads(SMALL)
    assert Case(**given).length == 1.0
    with pytest.raises(ValidationError, match="a porosity is between 0 and 1"):
        Layer(**(given["layers"][0] | {"porosity": 38}))


def test_the_schema_knows_every_key():
    schema = case_schema()
    layer = schema["$defs"]["Layer"]
    assert set(layer["required"]) == {"name", "length", "porosity", "dispersivity", "water"}
    assert layer["properties"]["porosity"]["exclusiveMaximum"] == 1
    assert layer["additionalProperties"] is False
    assert "from" in schema["$defs"]["Feed"]["properties"]
    assert schema["properties"]["spread"]["not"] == {}
    ways = schema["$defs"]["Run"]["properties"]["coupling"]["enum"]
    assert ways == ["two-stage", "lie", "strang", "iterated"]


def test_reading_needs_neither_pint_nor_numba():
    """A check of a case must answer in less than a second."""
    code = (
        "import sys; from gossan.case.read import case_from_text;"
        f"case_from_text({SMALL!r}); assert not {{'pint', 'numba', 'h5py', 'scipy'}} & set(sys.modules)"
    )
    subprocess.run([sys.executable, "-c", code], check=True)


def test_keys_have_lines():
    case = case_from_text(SMALL)
    assert case.line_of("waters", "mine") == 1
    assert case.line_of("layers", 0, "porosity") == 6
    assert case.line_of("layers", 0, "tortuosity") == 0

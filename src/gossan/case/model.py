"""What a case can say: one class per table of the TOML, one field per key, each fact of a key once.

docs/case-file.md and the schema are derived from these fields. Quantities are Amounts (base/amounts.py): the
text, its line, and the number in SI that everything below works with.
"""

from __future__ import annotations

import math
from typing import Annotated, Any

from pydantic import Field, PrivateAttr

from gossan.base.amounts import Amount, amount
from gossan.base.errors import Fault, InputError
from gossan.case.column_kinds import CellLength, Growing, Winding, WindingKind
from gossan.case.feed import TEMPERATURE, Flow
from gossan.case.fields import Choice, Flag, Later, Names, Number, Text
from gossan.case.quantities import (
    Alkalinity,
    GasPressure,
    HeldGas,
    InWater,
    Limit,
    Oxygen,
    Place,
    Quantity,
    Range,
    Saturation,
    Solid,
    SolidAmount,
)
from gossan.case.retention import Immobile, Sorption
from gossan.case.table import TableOfCase
from gossan.constants.entries import Table
from gossan.constants.load import load_table
from gossan.transport.growth import growing

MOST_CELLS = 1_000_000  # of a layer; more is a slip of the unit of `cell`

Name = Annotated[str, Text(is_name=True, example='"gate"')]
PH = Annotated[float, Number("a pH", -2, 16, example="5.9")]
POROSITY = Number("a porosity", 0, 1, is_open=True, is_share=True, example="0.38")
POTENTIAL = Quantity(("V",), "a redox potential", '"310 mV"', -3.0, 3.0,
                     says="a redox potential of water is between -3 and 3 V")  # fmt: skip
HALF_LIFE = Quantity(("s",), "a half-life", '"40 d"', positive=True)
INTERVAL = Quantity(("s", "PV"), "a duration", '"60 d"', positive=True)


class Water(TableOfCase):
    """A laboratory report, as the laboratory writes it; without analysis it is pure water."""

    pH: PH = Field(default=7.0, description="pH; with `balance_on = \"pH\"` a first guess")
    Eh: Annotated[Amount | None, POTENTIAL] = Field(
        default=None, description="redox potential against the hydrogen electrode; or `pe`"
    )
    pe: Annotated[float | None, Number("a pe", -50, 50, example="5.2")] = Field(
        default=None, description="-log10 of the electron's activity; or `dissolved_oxygen`"
    )
    dissolved_oxygen: Annotated[Amount | None, Oxygen()] = Field(
        default=None, description="the oxygen found; it stands for a pe as well"
    )
    alkalinity: Annotated[Amount | None, Alkalinity()] = Field(
        default=None,
        description="alkalinity; excludes inorganic carbon in the analysis and `balance_on = \"pH\"`",
    )
    balance_on: Annotated[str, Text(example='"Mg"')] = Field(
        default="", description='the ion that takes up the charge imbalance, or "pH"'
    )
    temperature: Annotated[Amount | None, TEMPERATURE] = Field(
        default=None, description="default: the case's"
    )
    density: Annotated[
        Amount | None,
        Quantity(("kg/m3",), "a density of water", '"1.02 g/cm3"', 900.0, 1500.0,
                 says="a density of water is between 900 and 1500 kg/m3"),
    ] = Field(default=None, description="of the sample; default: pure water's at its temperature")
    accept_imbalance: Annotated[bool, Flag()] = Field(
        default=False, description="read a water whose charge imbalance exceeds 10 %"
    )
    analysis: dict[str, Annotated[Amount, InWater()]] = Field(
        default={},
        description="amount by element, ion or usual name; below detection, half the limit is used",
    )
    saturated_with: dict[str, Annotated[float | Amount, Saturation()]] = Field(
        default={}, description="so much of the mineral or gas goes in or out until this holds"
    )
    tracers: dict[str, Annotated[Amount, InWater()]] = Field(default={}, description="amount by tracer")
    table: Later = Field(default=None, description="a laboratory table (CSV) to read the water from")
    sample: Later = Field(default=None, description="this sample of the table")


class Clogging(TableOfCase):
    """How conductivity follows porosity."""

    law: Annotated[str, Choice(("kozeny-carman", "power", "threshold", "none"))] = Field(
        default="kozeny-carman",
        description='"none": conductivity stays, porosity follows the solids all the same',
    )
    exponent: Annotated[float | None, Number("an exponent", 0, 100, is_open=True, example="3.0")] = Field(
        default=None, description="of power and threshold, which need it"
    )
    critical_porosity: Annotated[
        float | None, Number("a critical porosity", 0, 1, is_open=True, is_share=True, example="0.05")
    ] = Field(default=None, description="of threshold, which needs it: no flow below")
    pore_bodies: Annotated[
        float | None, Number("a share of the way", 0, 1, is_open=True, is_share=True, example="0.8")
    ] = Field(
        default=None,
        description="of threshold, instead of an exponent: wide pores and throats in turn, of which the "
        "throats close at `critical_porosity`; the share of the way that is wide",
    )
    residual: Annotated[
        float | None, Number("a share of the conductivity", 0, 1, is_open=True, is_share=True, example="1e-4")
    ] = Field(
        default=None,
        description="share of the starting conductivity that is left where the law leaves less; default none",
    )


class Layer(TableOfCase):
    """A stretch of the column, in flow order."""

    name: Name = Field(description="names the layer in messages, limits and `[unknowns]`")
    length: Annotated[Amount, Quantity(("m",), "a length", '"1.2 m"', positive=True)] = Field(
        description="along the flow"
    )
    cells: Annotated[int | None, Number("a count of cells", 1, MOST_CELLS, whole=True, example="60")] = Field(
        default=None, description="how many cells; this or `cell`"
    )
    cell: Annotated[Amount | Growing | None, CellLength()] = Field(
        default=None,
        description="the length of a cell at most; the layer is divided evenly, or by steady growth",
    )
    porosity: Annotated[float, POROSITY] = Field(
        description="water-filled fraction with the starting minerals in place"
    )
    dispersivity: Annotated[Amount, Quantity(("m",), "a dispersivity", '"4 cm"', 0.0)] = Field(
        description="longitudinal; D = dispersivity * pore velocity + tortuosity * diffusion"
    )
    diffusion: Annotated[Amount, Quantity(("m2/s",), "a diffusion coefficient", '"1e-9 m2/s"', 0.0)] = Field(
        default=amount("1e-9 m2/s", ("m2/s",)),
        description="in free water, one value for all dissolved components, at the case's temperature: it "
        "follows that of the feed, as temperature over viscosity of water",
    )
    tortuosity: Annotated[Winding | None, WindingKind()] = Field(
        default=None,
        description="factor on diffusion; a law follows the porosity of the moment, a number stays; "
        'default "millington-quirk", porosity^(1/3)',
    )
    conductivity: Annotated[
        Amount | None, Quantity(("m/s",), "a conductivity", '"25 m/d"', positive=True)
    ] = Field(
        default=None,
        description="saturated hydraulic conductivity at the starting porosity and the case's temperature: "
        "it follows that of the feed, as density over viscosity of water; needed with `head_drop`",
    )
    grain_density: Annotated[
        Amount,
        Quantity(("kg/m3",), "a density of grains", '"2650 kg/m3"', 1000.0, 10000.0,
                 says="a density of grains is between 1000 and 10000 kg/m3"),
    ] = Field(
        default=amount("2650 kg/m3", ("kg/m3",)),
        description="dry bulk density = grain_density * (1 - porosity), starting minerals included",
    )
    water: Annotated[str, Text(example='"mine"')] = Field(description="the pore water at the start")
    minerals: dict[str, Annotated[Solid, SolidAmount()]] = Field(default={}, description="starting solids")
    clogging: Clogging = Field(default=Clogging(), description="how conductivity follows porosity")
    rates: Later = Field(default=None, description="the kinetic steps that run here")
    exchange: Later = Field(default=None, description="cation exchange (Gaines-Thomas)")
    surface: Later = Field(default=None, description="hydrous ferric oxide with strong and weak sites")
    sorption: dict[str, Sorption] = Field(default={}, description="an isotherm per component or tracer")
    immobile: Immobile | None = Field(default=None, description="immobile water beside the flowing water")
    half_life: dict[str, Annotated[Amount, HALF_LIFE]] = Field(
        default={}, description="by tracer: its half-life in this layer, in place of the tracer's own"
    )

    @property
    def mesh(self) -> tuple[int, float]:
        """Number of cells, the fewest that `cell` allows, and the length of each over that of the last."""
        if self.cells:
            return self.cells, 1.0
        assert self.cell is not None
        if isinstance(self.cell, Growing):
            return growing(self.length.si, self.cell.first.si, self.cell.last.si)
        return growing(self.length.si, self.cell.si, self.cell.si)


class Tracer(TableOfCase):
    """A solute without chemistry."""

    molar_mass: Annotated[
        Amount | None, Quantity(("kg/mol",), "a molar mass", '"79.9 g/mol"', positive=True)
    ] = Field(default=None, description="needed where amounts of it are in mass")
    half_life: Annotated[Amount | None, HALF_LIFE] = Field(
        default=None,
        description="first-order decay, in flowing and immobile water and where it is sorbed; a layer may "
        "have another (`[layers.half_life]`)",
    )
    parent: Annotated[str, Text(example='"nitrate"')] = Field(
        default="", description="the tracer that decays into this one, mole for mole"
    )


class Chemistry(TableOfCase):
    """Which reactions are at equilibrium."""

    activity: Annotated[str, Choice(("davies", "debye-hueckel", "sit", "ideal"))] = Field(
        default="davies", description="activity coefficients"
    )
    redox: Annotated[str, Choice(("held", "coupled"))] = Field(
        default="held",
        description='"held": each valence is its own component; "coupled": one electron balance over all',
    )
    coupled: Annotated[tuple[str, ...], Names('["Fe(II)/Fe(III)"]')] = Field(
        default=(), description='couples at equilibrium although redox is "held"'
    )
    minerals: Annotated[tuple[str, ...] | None, Names()] = Field(
        default=None, description="exactly these may form and dissolve; excludes `also`"
    )
    also: Annotated[tuple[str, ...], Names('["dolomite"]')] = Field(
        default=(), description="these besides the default list"
    )
    exclude: Annotated[tuple[str, ...], Names('["siderite", "NaCO3^-"]')] = Field(
        default=(), description="minerals or aqueous species left out"
    )
    constants: Annotated[str, Text(example='"site.toml"')] = Field(
        default="", description="a file of your own constants, beside the case; adds or replaces entries"
    )
    gases: dict[str, Annotated[HeldGas, GasPressure()]] = Field(
        default={}, description="pressures held in every cell, of gases without end or of a limited amount"
    )


class Port(TableOfCase):
    """A sampling port; the port `outlet` at the end of the column is always there."""

    name: Name = Field(description="names the port in limits and in the result file")
    at: Annotated[Amount | str, Place()] = Field(description='distance from the inlet, or "outlet"')


class Run(TableOfCase):
    """How long, and how finely, the column is followed."""

    duration: Annotated[Amount, INTERVAL] = Field(description="of the whole run")
    profiles_every: Annotated[Amount | None, INTERVAL] = Field(
        default=None, description="between two recorded profiles; default duration/100"
    )
    ports_every: Annotated[Amount | None, INTERVAL] = Field(
        default=None, description="between two records at the ports; default duration/1000"
    )
    coupling: Annotated[str, Choice(("two-stage", "lie", "strang", "iterated"))] = Field(
        default="two-stage", description="how transport and chemistry take turns"
    )
    accuracy: Annotated[float, Number("an accuracy", 0, 1, is_open=True, example="1e-3")] = Field(
        default=1e-3, description="relative target for the time and splitting error; steps adapt to it"
    )
    max_courant: Annotated[float, Number("a Courant number", 0, 1, example="0.5")] = Field(
        default=0.5, description="cells that water may pass in a step"
    )
    errors: Annotated[str, Choice(("carried", "none"))] = Field(
        default="carried",
        description="whether what each step missed is carried on to every answer; costs up to as much again",
    )
    limiter: Annotated[str, Choice(("van-leer", "minmod", "none", "upwind"))] = Field(
        default="van-leer",
        description='keeps fronts from overshooting; to compare: "none" (they do), "upwind" (they smear)',
    )


class Case(TableOfCase):
    """A whole case."""

    title: Annotated[str, Text()] = Field(default="", description="stands on reports and in the result file")
    temperature: Annotated[Amount, TEMPERATURE] = Field(
        default=amount("25 degC", ("K",)), description="of the column; 0 to 50 degC"
    )
    waters: dict[str, Water] = Field(description="laboratory reports by name")
    layers: tuple[Layer, ...] = Field(default=(), description="the column, in flow order; needed for a run")
    tracers: dict[str, Tracer] = Field(default={}, description="solutes without chemistry, by name")
    flow: Flow | None = Field(default=None, description="how the water is driven; needed for a run")
    chemistry: Chemistry = Field(default=Chemistry(), description="which reactions are at equilibrium")
    ports: tuple[Port, ...] = Field(default=(), description="sampling ports")
    limits: dict[str, dict[str, Annotated[Amount | Range, Limit()]]] = Field(
        default={}, description="water-quality limits by port, then by solute or pH"
    )
    run: Run | None = Field(default=None, description="how long the column is followed; needed for a run")
    rates: Later = Field(default=None, description="kinetic steps by name")
    unknowns: Later = Field(default=None, description="what `match` fits and `spread` samples")
    size: Later = Field(default=None, description="what `size` varies, and until when limits hold")
    spread: Later = Field(default=None, description="members and sampler of an ensemble")
    match: Later = Field(default=None, description="how `match` weighs residuals")

    _file: str = PrivateAttr("")
    _text: str = PrivateAttr("")
    _table: Table | None = PrivateAttr(default=None)
    _constants_text: str = PrivateAttr("")
    _files: dict[str, str] = PrivateAttr(default={})
    _lines: dict[tuple[str | int, ...], int] = PrivateAttr(default={})

    @property
    def file(self) -> str:
        """The path the case was read from, as given; or the name given with its text."""
        return self._file

    @property
    def text(self) -> str:
        """The whole TOML text, as read."""
        return self._text

    @property
    def table(self) -> Table:
        """The constants in force: the program's own, with the case's file over them."""
        return self._table or load_table()

    @property
    def constants_text(self) -> str:
        """The text of the user's own constants; empty without."""
        return self._constants_text

    @property
    def files(self) -> dict[str, str]:
        """The texts of the files beside the case that it names, by name; the constants are not among them."""
        return self._files

    def line_of(self, *path: str | int) -> int:
        """The line of a key or table in the text, 0 where it is not known."""
        return self._lines.get(path, 0)

    @property
    def length(self) -> float:
        """Length of the column, m."""
        return math.fsum(layer.length.si for layer in self.layers)

    @property
    def pore_length(self) -> float:
        """One pore volume as a depth of water: total porosity times length at time 0, m."""
        return math.fsum(layer.length.si * layer.porosity for layer in self.layers)

    @property
    def port_positions(self) -> dict[str, float]:
        """Distance from the inlet by port, m; `outlet` is always among them."""
        positions = {
            port.name: port.at.si if isinstance(port.at, Amount) else self.length for port in self.ports
        }
        return positions if "outlet" in positions else {**positions, "outlet": self.length}

    @property
    def tracer_names(self) -> tuple[str, ...]:
        """The tracers declared in `[tracers]`, or else those that waters name, in order."""
        if self.tracers:
            return tuple(self.tracers)
        return tuple(dict.fromkeys(name for water in self.waters.values() for name in water.tracers))

    def temperature_of(self, water: str) -> float:
        """Temperature of a water of the case, K."""
        own = self.waters[water].temperature
        return own.si if own else self.temperature.si

    def require_column(self) -> None:
        """Refuse a case that says too little to run a column; raises InputError with all that is missing."""
        missing = []
        if not self.layers:
            wrong = "is missing: a run needs at least one layer"
            missing.append(("layers", wrong, "begin one with [[layers]]"))
        if self.flow is None:
            missing.append(("flow", "is missing", 'write [flow] with darcy_flux = "0.12 m/d" or a head_drop'))
        if self.flow is None or not self.flow.feed:
            cure = 'write [[flow.feed]] with from = "0 d" and a water'
            missing.append(("flow.feed", "is missing: a run needs the water that enters", cure))
        if self.run is None:
            missing.append(("run", "is missing", 'write [run] with duration = "5 yr"'))
        if missing:
            raise InputError([Fault(self.file, 0, *entry) for entry in missing])


def case_schema() -> dict[str, Any]:
    """The JSON Schema of a case file, for editors that complete and check TOML."""
    return Case.model_json_schema(by_alias=True)

"""How the water of a case is driven, and what enters from when."""

from __future__ import annotations

from typing import Annotated

from pydantic import Field

from gossan.base.amounts import Amount
from gossan.case.column_kinds import Gradient
from gossan.case.fields import Choice, Text
from gossan.case.quantities import Quantity
from gossan.case.table import TableOfCase

TEMPERATURE = Quantity(
    ("K",), "a temperature", '"12 degC"', 273.15, 323.15,
    says="water must be liquid and its constants valid: between 0 and 50 degC",
)  # fmt: skip
DARCY_FLUX = Quantity(
    ("m/s",), "a Darcy flux", '"0.12 m/d"', 0.0,
    says="a Darcy flux is not negative: water flows from the first layer to the last; turn the column round",
)  # fmt: skip
HEAD_DROP = Quantity(
    ("m",), "a head drop", '"0.15 m"', 0.0,
    says="a head drop is not negative: water flows from the first layer to the last; turn the column round",
)  # fmt: skip
TIME = Quantity(("s", "PV"), "a time", '"0 d"', 0.0)
RAMP = Quantity(("s", "PV"), "a duration", '"30 d"', positive=True)


class Feed(TableOfCase):
    """What enters, from when. What an entry does not say is as `[flow]` and the case have it."""

    from_: Annotated[Amount, TIME] = Field(
        alias="from", description="since the start of the run; the first is 0"
    )
    water: Annotated[str, Text(example='"mine"')] = Field(
        default="", description="the water that enters; needed, unless the series names one in every row"
    )
    over: Annotated[Amount | None, RAMP] = Field(
        default=None,
        description="how long it takes, from `from` on, to come from all that the entry before gives to all "
        "that this one gives, evenly; without, the change is instant",
    )
    darcy_flux: Annotated[Amount | None, DARCY_FLUX] = Field(
        default=None, description="of this entry, in place of `[flow]`'s; zero: the pump stops"
    )
    head_drop: Annotated[Amount | None, HEAD_DROP] = Field(
        default=None, description="of this entry, in place of `[flow]`'s; excludes `darcy_flux`"
    )
    temperature: Annotated[Amount | None, TEMPERATURE] = Field(
        default=None, description="of the whole column while this entry lasts; default: the case's"
    )
    series: Annotated[str, Text(example='"feed.csv"')] = Field(
        default="",
        description="a file (CSV) beside the case, of what enters against time since `from`; excludes `over`",
    )
    between: Annotated[str, Choice(("linear", "held"))] = Field(
        default="linear",
        description='from one row of the series to the next: "linear", or "held" as it was',
    )


class Flow(TableOfCase):
    """How the water is driven: `darcy_flux` or `head_drop`, unless every entry of the feed has its own."""

    darcy_flux: Annotated[Amount | None, DARCY_FLUX] = Field(
        default=None,
        description="held flux: volume per area of the whole section and time; zero: diffusion alone",
    )
    head_drop: Annotated[Amount | None, HEAD_DROP] = Field(
        default=None, description="held head over the whole column: the flux follows the conductivity"
    )
    inlet: Annotated[str, Choice(("flux", "concentration"))] = Field(
        default="flux", description='"flux" (third type) or "concentration" (first type)'
    )
    outlet: Annotated[str, Choice(("zero-gradient", "concentration", "gradient"))] = Field(
        default="zero-gradient",
        description="what holds at the end of the column: no gradient, the concentrations of `outlet_water`, "
        "or the gradients of `outlet_gradient`",
    )
    outlet_water: Annotated[str, Text(example='"river"')] = Field(
        default="", description="the water that stands beyond the outlet"
    )
    outlet_gradient: dict[str, Annotated[Amount, Gradient()]] = Field(
        default={}, description="change of concentration along the flow at the outlet, by tracer"
    )
    feed: tuple[Feed, ...] = Field(default=(), description="what enters, in order of time")

"""What a case can say of how the water is driven, what enters, and what holds at the end."""

from __future__ import annotations

from typing import Annotated

from pydantic import Field

from gossan.base.amounts import Amount
from gossan.case.column_kinds import Gradient
from gossan.case.fields import Choice, Later, Text
from gossan.case.quantities import Quantity
from gossan.case.table import TableOfCase

TURNED = "water enters at the first layer, and to turn it round write the layers in the other order"


class Feed(TableOfCase):
    """What enters, from when."""

    from_: Annotated[Amount, Quantity(("s", "PV"), "a time", '"0 d"', 0.0)] = Field(
        alias="from", description="since the start of the run; the first is 0"
    )
    water: Annotated[str, Text(example='"mine"')] = Field(description="the water that enters")
    darcy_flux: Later = Field(default=None, description="from then on: seasons, pump stops")
    head_drop: Later = Field(default=None, description="from then on")
    temperature: Later = Field(default=None, description="from then on")


class Flow(TableOfCase):
    """How the water is driven; exactly one of `darcy_flux` and `head_drop`."""

    darcy_flux: Annotated[
        Amount | None,
        Quantity(("m/s",), "a Darcy flux", '"0.12 m/d"', 0.0, says=f"a Darcy flux is not negative: {TURNED}"),
    ] = Field(
        default=None,
        description="held flux: volume per area of the whole section and time; zero for diffusion alone",
    )
    head_drop: Annotated[
        Amount | None,
        Quantity(("m",), "a head drop", '"0.15 m"', positive=True,
                 says=f"a head drop is more than zero: {TURNED}"),
    ] = Field(
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

"""What a case can say of how a bed slows solutes down: isotherms and immobile water."""

from __future__ import annotations

from typing import Annotated

from pydantic import Field

from gossan.base.amounts import Amount, amount
from gossan.case.fields import Choice, Number
from gossan.case.quantities import Quantity
from gossan.case.table import TableOfCase

PER_SOLID = ("mol/kg", "kg/kg")
NEEDED = {"linear": ("kd",), "freundlich": ("coefficient", "exponent"), "langmuir": ("capacity", "affinity")}
TAKEN = {**NEEDED, "freundlich": (*NEEDED["freundlich"], "at")}


class Sorption(TableOfCase):
    """An isotherm for one dissolved component or tracer: what the dry solid sorbs at a concentration.

    It acts on the total dissolved concentration `c`, in flowing and immobile water alike. At the start the
    solid is in equilibrium with the pore water. With masses the component's own element (or the tracer) is
    meant, as in an analysis.
    """

    law: Annotated[str, Choice(("linear", "freundlich", "langmuir"))] = Field(
        description="linear: kd c; freundlich: coefficient (c / at)^exponent; "
        "langmuir: capacity affinity c / (1 + affinity c)"
    )
    kd: Annotated[Amount | None, Quantity(("m3/kg",), "a distribution coefficient", '"2 L/kg"', 0.0)] = Field(
        default=None, description="of linear, which needs it"
    )
    coefficient: Annotated[
        Amount | None, Quantity(PER_SOLID, "an amount per dry solid", '"12 mg/kg"', positive=True)
    ] = Field(
        default=None, description="of freundlich, which needs it: what is sorbed at the concentration `at`"
    )
    exponent: Annotated[float | None, Number("an exponent", 0, 2, is_open=True, example="0.7")] = Field(
        default=None, description="of freundlich, which needs it"
    )
    at: Annotated[
        Amount, Quantity(("mol/m3", "kg/m3"), "a concentration", '"1 mg/L"', positive=True)
    ] = Field(
        default=amount("1 mmol/L", ("mol/m3",)),
        description="of freundlich: a coefficient in (mg/kg) (L/mg)^exponent is written "
        'coefficient = "12 mg/kg", at = "1 mg/L"',
    )
    capacity: Annotated[
        Amount | None, Quantity(PER_SOLID, "an amount per dry solid", '"3 mmol/kg"', positive=True)
    ] = Field(default=None, description="of langmuir, which needs it: the most that is sorbed")
    affinity: Annotated[
        Amount | None, Quantity(("m3/mol", "m3/kg"), "an affinity", '"0.2 L/mg"', positive=True)
    ] = Field(
        default=None,
        description="of langmuir, which needs it: one over the concentration at which half the capacity is "
        "taken",
    )


class Immobile(TableOfCase):
    """Immobile water beside the flowing water, with a share of the layer's solids of its own."""

    fraction: Annotated[
        float, Number("a fraction of the porosity", 0, 1, is_open=True, is_share=True, example="0.3")
    ] = Field(description="of the porosity; pore velocity = darcy_flux / flowing porosity")
    transfer: Annotated[Amount, Quantity(("1/s",), "a rate of transfer", '"1e-6 1/s"', 0.0)] = Field(
        description="per bulk volume: exchanged amount = transfer * (flowing - immobile concentration)"
    )
    solids: Annotated[
        float | None, Number("a share of the solids", 0, 1, is_share=True, example="0.4")
    ] = Field(default=None, description="share of the minerals and isotherms it reaches; default `fraction`")

    @property
    def share(self) -> float:
        """Of the solids, 1."""
        return self.fraction if self.solids is None else self.solids

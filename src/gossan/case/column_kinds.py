"""Kinds of value that only a column has: cells that grow, laws of tortuosity, gradients at the outlet."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from gossan.base.amounts import Amount
from gossan.base.wrong import Wrong, did_you_mean
from gossan.case.fields import Kind, Number, is_number, shown
from gossan.case.quantities import Quantity


@dataclass(frozen=True, slots=True)
class Growing:
    """Cells of a layer that grow or shrink from a first to a last length, each at most."""

    first: Amount
    last: Amount


@dataclass(frozen=True)
class CellLength(Kind):
    """The length of a layer's cells, or {first, last} where it changes along the layer."""

    example = '"2 cm"'
    unit = 'm; or {first = "1 mm", last = "2 cm"}'
    schema = {  # noqa: RUF012
        "anyOf": [
            {"type": "string", "examples": ["2 cm"]},
            {
                "type": "object",
                "properties": {"first": {"type": "string"}, "last": {"type": "string"}},
                "required": ["first", "last"],
                "additionalProperties": False,
            },
        ]
    }

    def read(self, value: Any, line: int = 0) -> Amount | Growing:
        length = Quantity(("m",), "a length of a cell", self.example, positive=True)
        if isinstance(value, Growing):
            return value
        if not isinstance(value, dict):
            return length.read(value, line)
        fields = _fields(value, ("first", "last"), '{first = "1 mm", last = "2 cm"}')
        return Growing(*(length.read(fields[key], line) for key in ("first", "last")))


@dataclass(frozen=True, slots=True)
class Winding:
    """A law of tortuosity and its exponent, or a number that stays."""

    law: str
    exponent: float | None = None
    factor: float | None = None


# the laws, and the range of the exponent of those that need one
WINDING_LAWS: dict[str, tuple[float, float, str] | None] = {
    "millington-quirk": None,
    "bruggeman": None,
    "boudreau": None,
    "weissberg": None,
    "maxwell": None,
    "archie": (1.0, 5.0, "2.0"),
    "iversen-joergensen": (0.5, 5.0, "3.0"),
}


@dataclass(frozen=True)
class WindingKind(Kind):
    """A number, the name of a law, or {law, exponent}."""

    example = '"boudreau"'
    unit = "number; " + ", ".join(
        f'"{law}"' if bounds is None else f'{{law = "{law}", exponent = {bounds[2]}}}'
        for law, bounds in WINDING_LAWS.items()
    )
    schema = {  # noqa: RUF012
        "anyOf": [
            {"type": "number", "minimum": 0, "maximum": 1},
            {"enum": [law for law, bounds in WINDING_LAWS.items() if bounds is None]},
            {
                "type": "object",
                "properties": {"law": {"enum": list(WINDING_LAWS)}, "exponent": {"type": "number"}},
                "required": ["law"],
                "additionalProperties": False,
            },
        ]
    }

    def read(self, value: Any, line: int = 0) -> Winding:
        if isinstance(value, Winding):
            return value
        if is_number(value):
            return Winding("number", factor=Number("a tortuosity", 0, 1, example="0.7").read(value))
        exponent = None
        if isinstance(value, dict):
            example = '{law = "archie", exponent = 2.0}'
            fields = _fields(value, ("law",), example, ("exponent",))
            value, exponent = fields["law"], fields.get("exponent")
        if not isinstance(value, str) or value not in WINDING_LAWS:
            close = did_you_mean(value if isinstance(value, str) else "", WINDING_LAWS)
            raise Wrong(f"is {shown(value)}; a tortuosity is a number or the name of a law", close)
        bounds = WINDING_LAWS[value]
        if bounds is None:
            if exponent is not None:
                raise Wrong(f'has an exponent, which "{value}" does not take', f'write "{value}" alone')
            return Winding(value)
        if exponent is None:
            raise Wrong(f'is "{value}" without its exponent',
                        f'such as {{law = "{value}", exponent = {bounds[2]}}}')
        return Winding(value, Number("this exponent", *bounds[:2], example=bounds[2]).read(exponent))


def _fields(
    value: dict[str, Any], needed: tuple[str, ...], example: str, allowed: tuple[str, ...] = ()
) -> dict[str, Any]:
    """The entries of an inline table, none missing and none too many."""
    for key in value:
        if key not in (*needed, *allowed):
            raise Wrong(f"holds {key}", did_you_mean(key, (*needed, *allowed)) or f"such as {example}")
    for key in needed:
        if key not in value:
            raise Wrong(f"lacks {key}", f"such as {example}")
    return value


@dataclass(frozen=True)
class Gradient(Quantity):
    """A change of an amount in water along the column, of either sign."""

    units: tuple[str, ...] = ("kg/m4", "mol/m4")
    what: str = "a gradient"
    example: str = '"-5 mg/L/m"'

"""The kinds of value that carry a unit: quantities, amounts in water and in solids, limits, places."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from gossan.base.amounts import Amount, alkalinity, amount, in_solid, in_water
from gossan.base.wrong import Wrong, did_you_mean
from gossan.case.fields import Kind, Number, is_number, shown

MOST_PASCAL = 1000.0 * 101325.0  # of a gas held in a column; more is a slip of the unit


@dataclass(frozen=True)
class Quantity(Kind):
    """A number with a unit, in one of several SI units, within bounds.

    least, most  in SI; `positive`: zero is outside too; says  the sentence when a bound is broken
    """

    units: tuple[str, ...]
    what: str
    example: str
    least: float = -math.inf
    most: float = math.inf
    positive: bool = False
    says: str = ""
    otherwise: str = ""  # the cure where no slip of the unit explains it

    @property
    def unit(self) -> str:  # type: ignore[override]
        return " or ".join(self.units)

    @property
    def schema(self) -> dict[str, Any]:  # type: ignore[override]
        return {"type": "string", "examples": [self.example.strip('"')]}

    def read(self, value: Any, line: int = 0) -> Amount:
        if isinstance(value, Amount):
            return value
        plain = self.example.strip('"')
        if is_number(value):
            unit = plain.split(" ", 1)[1]
            raise Wrong(f"is {shown(value)}, a bare number; {self.what} has a unit",
                        f'did you mean "{shown(value)} {unit}"?')
        if not isinstance(value, str):
            raise Wrong(f"is {shown(value)}; {self.what} is needed", f"such as {self.example}")
        found = self.parse(value, line)
        if (self.positive and found.si <= 0) or not self.least <= found.si <= self.most:
            low = "more than zero" if self.positive else "not negative"
            raise Wrong(f"is {shown(value)}; {self.says or f'{self.what} is {low}'}", self._cure(value))
        return found

    def parse(self, text: str, line: int) -> Amount:
        return amount(text, self.units, line, self.what, self.example.strip('"'))

    def _cure(self, text: str) -> str:
        """A slip of the unit that can be guessed: kelvin for degrees, kg/m3 for g/cm3, V for mV."""
        swaps = {" K": " degC", " kg/m3": " g/cm3", " degF": " degC", " V": " mV"}
        for given, meant in swaps.items():
            if text.endswith(given):
                other = text.removesuffix(given) + meant
                if self.least <= self.parse(other, 0).si <= self.most:
                    return f'did you mean "{other}"?'
        return self.otherwise


@dataclass(frozen=True)
class InWater(Quantity):
    """An amount in water as a laboratory writes it."""

    units: tuple[str, ...] = ("kg/m3", "mol/m3", "eq/m3", "mol/kg", "kg/kg", "eq/kg")
    what: str = "an amount in water"
    example: str = '"24 mg/L"'
    least: float = 0.0
    unit = "mg/L, mmol/L, meq/L, mg/kg, mmol/kg; mg/L as N; <0.5 ug/L"

    def parse(self, text: str, line: int) -> Amount:
        return in_water(text, line)


@dataclass(frozen=True)
class Oxygen(InWater):
    """Dissolved oxygen, by a meter or a titration."""

    units: tuple[str, ...] = ("kg/m3", "mol/m3", "mol/kg", "kg/kg")
    what: str = "dissolved oxygen"
    example: str = '"6 mg/L"'
    unit = "mg/L, mmol/L, mg/kg, mmol/kg"

    def parse(self, text: str, line: int) -> Amount:
        return in_water(text, line, self.units, self.what, self.example.strip('"'))


@dataclass(frozen=True)
class Alkalinity(Quantity):
    """Equivalents of acid that the water takes up; negative in acid waters."""

    units: tuple[str, ...] = ("eq/m3", "kg/m3")
    what: str = "an alkalinity"
    example: str = '"6 mg/L as CaCO3"'
    unit = "mg/L as CaCO3, mg/L as HCO3, meq/L"

    def parse(self, text: str, line: int) -> Amount:
        return alkalinity(text, line)


@dataclass(frozen=True, slots=True)
class Solid:
    """A mineral at the start: how much, and the share of it (0 to 1) that water reaches."""

    amount: Amount
    reactive: float = 1.0


@dataclass(frozen=True)
class SolidAmount(Kind):
    """An amount of a mineral, or {amount, reactive}."""

    example = '"0.8 wt%"'
    unit = "wt%, g/kg, umol/g of dry solid; vol%, mol/L of bulk; or {amount, reactive}"
    schema = {  # noqa: RUF012
        "anyOf": [
            {"type": "string", "examples": ["0.8 wt%"]},
            {
                "type": "object",
                "properties": {"amount": {"type": "string"}, "reactive": {"type": "number"}},
                "required": ["amount"],
                "additionalProperties": False,
            },
        ]
    }

    def read(self, value: Any, line: int = 0) -> Solid:
        if isinstance(value, Solid):
            return value
        if not isinstance(value, dict):
            return Solid(self._amount(value, line))
        for key in value:
            if key not in ("amount", "reactive"):
                raise Wrong(f'has the unknown key "{key}"', did_you_mean(key, ("amount", "reactive")))
        if "amount" not in value:
            raise Wrong("has no amount", 'write {amount = "3 wt%", reactive = 0.4}')
        try:
            kind = Number("a reactive share", 0, 1, is_share=True, example="0.4")
            share = kind.read(value.get("reactive", 1.0))
        except Wrong as wrong:
            raise Wrong(f"has a reactive share that {wrong.wrong}", wrong.right) from None
        return Solid(self._amount(value["amount"], line), share)

    def _amount(self, value: Any, line: int) -> Amount:
        if is_number(value):
            cure = f'did you mean "{shown(value)} wt%"?'
            raise Wrong(f"is {shown(value)}, a bare number; an amount of solid has a unit", cure)
        if not isinstance(value, str):
            raise Wrong(f"is {shown(value)}; an amount of solid is needed", 'such as "0.8 wt%"')
        found = in_solid(value, line)
        if found.si < 0:
            raise Wrong(f'is "{value}"; an amount of solid is not negative')
        return found


@dataclass(frozen=True)
class Saturation(Kind):
    """A saturation index of a mineral (a number) or the partial pressure of a gas (a text)."""

    example = "0.0"
    unit = "saturation index of a mineral, or pressure of a gas"
    schema = {"anyOf": [{"type": "number"}, {"type": "string", "examples": ["0.003 atm"]}]}  # noqa: RUF012

    def read(self, value: Any, line: int = 0) -> float | Amount:
        if isinstance(value, str):
            needed = "the pressure of a gas"
            found = amount(value, ("Pa",), line, needed, "0.003 atm")
            if found.si <= 0:
                raise Wrong(f'is "{value}"; {needed} is more than zero')
            return found
        if isinstance(value, Amount):
            return value
        return Number("a saturation index", -20, 20, example="0.0").read(value)


@dataclass(frozen=True, slots=True)
class HeldGas:
    """A gas in every cell: its pressure, and how much of it there is (None: no end of it)."""

    pressure: Amount
    amount: Amount | None = None


@dataclass(frozen=True)
class GasPressure(Kind):
    """A pressure, or {pressure, amount} of a gas that can be used up."""

    example = '"0.2 atm"'
    unit = "pressure; or {pressure, amount}, the amount in mol/L of bulk"
    schema = {  # noqa: RUF012
        "anyOf": [
            {"type": "string", "examples": ["0.2 atm"]},
            {
                "type": "object",
                "properties": {"pressure": {"type": "string"}, "amount": {"type": "string"}},
                "required": ["pressure", "amount"],
                "additionalProperties": False,
            },
        ]
    }

    def read(self, value: Any, line: int = 0) -> HeldGas:
        if isinstance(value, HeldGas):
            return value
        pressure = Quantity(("Pa",), "the pressure of a gas", self.example, 0.0, MOST_PASCAL, True,
                            says="the pressure of a gas is more than zero and at most 1000 atm",
                            otherwise="leave out a gas that is not there")
        if not isinstance(value, dict):
            return HeldGas(pressure.read(value, line))
        for key in value:
            if key not in ("pressure", "amount"):
                raise Wrong(f'has the unknown key "{key}"', did_you_mean(key, ("pressure", "amount")))
        for key in ("pressure", "amount"):
            if key not in value:
                raise Wrong(f"has no {key}", 'write {pressure = "0.2 atm", amount = "1e-3 mol/L"}')
        amount = Quantity(("mol/m3",), "an amount of a gas", '"1e-3 mol/L"', 0.0,
                          says="an amount of a gas is not negative", otherwise="write how much there is")
        return HeldGas(
            _within("pressure", pressure, value["pressure"], line),
            _within("amount", amount, value["amount"], line),
        )


def _within(key: str, kind: Quantity, value: Any, line: int) -> Amount:
    """A quantity in an inline table; what is wrong with it says which key it is."""
    try:
        return kind.read(value, line)
    except Wrong as wrong:
        article = "an" if key == "amount" else "a"
        raise Wrong(f"has {article} {key} that {wrong.wrong}", wrong.right) from None


@dataclass(frozen=True, slots=True)
class Range:
    """The pH that a limit allows, both ends included."""

    low: float
    high: float


@dataclass(frozen=True)
class Limit(Kind):
    """The highest amount allowed, or the range [low, high] of pH."""

    example = '"0.12 mg/L"'
    unit = "amount in water, or [low, high] for pH"
    schema = {  # noqa: RUF012
        "anyOf": [
            {"type": "string", "examples": ["0.12 mg/L"]},
            {"type": "array", "items": {"type": "number"}, "minItems": 2, "maxItems": 2},
        ]
    }

    def read(self, value: Any, line: int = 0) -> Amount | Range:
        if isinstance(value, (Amount, Range)):
            return value
        if isinstance(value, dict):
            raise Wrong("is a published criterion, which is part of the contract but has not landed yet",
                        'give an amount, such as "0.12 mg/L"')
        if not isinstance(value, list):
            found = InWater(what="a limit", example=self.example).read(value, line)
            if found.below_detection:
                raise Wrong(f'is "{value}"', f'a limit is written without "<": "{value.strip(" <")}"')
            return found
        if len(value) != 2 or not all(is_number(end) for end in value):
            raise Wrong("is a list of something else than two numbers", "a range of pH is [6.5, 9.0]")
        low, high = (Number("a pH", -2, 16, example="6.5").read(end) for end in value)
        if low >= high:
            wrong = f"is [{low:g}, {high:g}]; the lower end comes first"
            raise Wrong(wrong, f"did you mean [{high:g}, {low:g}]?")
        return Range(low, high)


@dataclass(frozen=True)
class Place(Kind):
    """A distance from the inlet, or "outlet"."""

    example = '"1.2 m"'
    unit = 'm, or "outlet"'
    schema = {"type": "string", "examples": ["1.2 m", "outlet"]}  # noqa: RUF012

    def read(self, value: Any, line: int = 0) -> Amount | str:
        if value == "outlet":
            return "outlet"
        return Quantity(("m",), "a distance from the inlet", '"1.2 m"', least=0.0).read(value, line)

"""A constants file and its entries: keys checked, numbers in SI, faults with the line they stand on."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import Any

from gossan.base.errors import Fault
from gossan.base.wrong import Wrong, did_you_mean
from gossan.constants.entries import Alternative, Constant, TemperatureFit
from gossan.constants.temperature import KELVIN, REFERENCE

POWERS = ("constant", "linear", "inverse", "log10", "inverse_square")

_CONSTANT = ("value", "sd", "source", "seen", "note")
_SHARED = ("reaction", "log10_k", "enthalpy", "temperature_fit", "valid", "note", "alternatives")
KEYS = {
    "components": ("half_reaction", "couple", *_SHARED[1:], "ion_size", "diffusion"),
    "species": (*_SHARED, "ion_size", "diffusion", "default"),
    "minerals": (*_SHARED, "molar_volume", "forms", "also_called"),
    "gases": _SHARED,
}
REQUIRED = {
    "components": (),
    "species": ("reaction", "log10_k"),
    "minerals": ("reaction", "log10_k", "molar_volume", "forms"),
    "gases": ("reaction", "log10_k"),
}
# What a file states a number in: its factor to SI and the SI unit.
_UNITS = {
    "log10_k": (1.0, "1"),
    "enthalpy": (1e3, "J/mol"),  # kJ/mol
    "ion_size": (1e-10, "m"),  # angstrom
    "diffusion": (1e-9, "m2/s"),  # 1e-9 m2/s
    "molar_volume": (1e-6, "m3/mol"),  # cm3/mol
}
_POSITIVE = ("ion_size", "diffusion", "molar_volume")


@dataclass(frozen=True, slots=True)
class Document:
    """A constants file: its text for finding lines, and what TOML made of it."""

    file: str
    text: str
    tables: dict[str, Any]

    def line_of(self, kind: str, name: str = "", key: str = "") -> int:
        """Line of a section, an entry or a key in it; the nearest thing above where there is no such line."""
        path = re.escape(kind)
        if name:
            path += rf"\s*\.\s*(?:\"{re.escape(name)}\"|'{re.escape(name)}'|{re.escape(name)})"
        heading = re.compile(rf"\s*\[\s*{path}\s*" + (r"\]" if name else r"[.\]]"))
        lines = self.text.splitlines()
        start = next((i for i, line in enumerate(lines) if heading.match(line)), None)
        if start is None:
            return self.line_of(kind) if name else 0
        for i in range(start + 1, len(lines) if key else 0):
            if lines[i].lstrip().startswith("["):
                break
            if re.match(rf"\s*[\"']?{re.escape(key)}[\"']?\s*=", lines[i]):
                return i + 1
        return start + 1


@dataclass(frozen=True, slots=True)
class Entry:
    """What a file says of one component, species, mineral or gas; faults go to the list that is shared."""

    kind: str  # "components", "species", "minerals" or "gases"
    name: str
    keys: dict[str, Any]
    document: Document
    faults: list[Fault]

    def fault(self, key: str, wrong: str, right: str = "") -> None:
        """Add a fault of this entry, at the key's line."""
        path = f"{self.kind}.{self.name}" + (f".{key}" if key else "")
        line = self.document.line_of(self.kind, self.name, key)
        fault = Fault(self.document.file, line, path, wrong, right)
        if fault not in self.faults:  # a reaction may be walked twice, with and without held components
            self.faults.append(fault)

    def check_keys(self) -> None:
        """Note every key that is unknown or missing."""
        allowed = KEYS[self.kind]
        for key in self.keys:
            if key not in allowed:
                self.fault(key, "is not a key of such an entry", did_you_mean(key, allowed, quote=""))
        for key in REQUIRED[self.kind]:
            if key not in self.keys:
                self.fault(key, "is missing")

    def typed(self, key: str, kind: type, default: Any) -> Any:
        """Value of a key that must be of this type (bool, str)."""
        value = self.keys.get(key, default)
        if isinstance(value, kind):
            return value
        self.fault(key, f"is {value!r}", {str: "write a text in quotes", bool: "write true or false"}[kind])
        return default

    def names(self, key: str) -> tuple[str, ...]:
        """Value of a key that is a list of texts."""
        value = self.keys.get(key, [])
        if isinstance(value, list) and all(isinstance(item, str) and item.strip() for item in value):
            return tuple(value)
        self.fault(key, f"is {value!r}", 'write a list of names, like ["zinc oxide"]')
        return ()

    def constant(self, key: str, sources: dict[str, str]) -> Constant | None:
        """Value of a key that is a constant, in SI; None where there is none or it is faulty."""
        found = self.keys.get(key)
        if found is None:
            return None
        try:
            made = read_constant(found, sources, *_UNITS[key], sd_needed=key == "log10_k")
            if key in _POSITIVE and made.value <= 0.0:
                raise Wrong(f"has value = {found['value']}", "it is above zero")
        except Wrong as wrong:
            self.fault(key, wrong.wrong, wrong.right)
            return None
        return made

    def fit(self) -> TemperatureFit | None:
        """Value of temperature_fit; None where there is none or it is faulty."""
        powers = self.keys.get("temperature_fit")
        if powers is None:
            return None
        if not isinstance(powers, dict) or not powers or not all(map(_is_number, powers.values())):
            self.fault("temperature_fit", "is no set of numbers", f"its powers are {', '.join(POWERS)}")
            return None
        for power in powers:
            if power not in POWERS:
                right = did_you_mean(power, POWERS, quote="")
                self.fault("temperature_fit", f"has no power '{power}'", right)
                return None
        return TemperatureFit(**{power: float(value) for power, value in powers.items()})

    def valid(self) -> tuple[float, float] | None:
        """Value of valid, from and to which temperature in K; None where there is none or it is faulty."""
        found = self.keys.get("valid")
        if found is None:
            return None
        if not isinstance(found, list) or len(found) != 2 or not all(map(_is_number, found)):
            self.fault("valid", f"is {found!r}", "write the range in degC, like [5, 90]")
            return None
        low, high = found
        if not low <= REFERENCE - KELVIN <= high:
            self.fault("valid", f"is {found!r}", "it holds 25 degC, where log10_k stands")
            return None
        return low + KELVIN, high + KELVIN

    def alternatives(self, sources: dict[str, str]) -> tuple[Alternative, ...]:
        """Value of alternatives: published constants that were not chosen."""
        rows = self.keys.get("alternatives", [])
        complaints = (
            [_complaint(row, sources, ("value",)) for row in rows]
            if isinstance(rows, list)
            else [(f"is {rows!r}", 'write a list, like [{value = -8.35, source = "..."}]')]
        )
        for complaint in filter(None, complaints):
            self.fault("alternatives", *complaint)
        if any(complaints):
            return ()
        return tuple(
            Alternative(float(row["value"]), row["source"], not row.get("seen", False), row.get("note", ""))
            for row in rows
        )


def read_constant(found: Any, sources: dict[str, str], factor: float, unit: str, sd_needed: bool) -> Constant:
    """Make a constant of `{value, sd, source, seen, note}`, its numbers times factor in SI.

    Raises  Wrong: a part is missing, unknown or of the wrong kind, or the source has no line
    """
    complaint = _complaint(found, sources, ("value", "sd") if sd_needed else ("value",))
    if complaint:
        raise Wrong(*complaint)
    sd = factor * found["sd"] if "sd" in found else None
    seen, note = found.get("seen", False), found.get("note", "")
    return Constant(factor * found["value"], sd, unit, found["source"], not seen, note)


def _complaint(found: Any, sources: dict[str, str], needed: tuple[str, ...]) -> tuple[str, str] | None:
    """Say what is wrong with one `{value, sd, source, seen, note}` and what would be right; None: nothing."""
    if not isinstance(found, dict):
        return f"is {found!r}", 'write {value = ..., sd = ..., source = "..."}'
    for part in found:
        if part not in _CONSTANT:
            return f"has no part '{part}'", did_you_mean(part, _CONSTANT, quote="")
    for part in ("value", "sd"):
        if part in found and not _is_number(found[part]):
            return f"has {part} = {found[part]!r}, which is no number", ""
        if part in needed and part not in found:
            return f"has no {part}", "give half of a 95 % interval" if part == "sd" else ""
    if found.get("sd", 1.0) <= 0.0:
        return f"has sd = {found['sd']}", "a standard uncertainty is above zero"
    if "source" not in found:
        return "has no source", 'add source = "..." and a line for it to [sources]'
    if found["source"] not in sources:
        right = did_you_mean(str(found["source"]), sources, quote="") or "add a line for it to [sources]"
        return f"cites '{found['source']}', which [sources] lacks", right
    if not isinstance(found.get("seen", False), bool) or not isinstance(found.get("note", ""), str):
        return "has a seen or a note of the wrong kind", "seen is true or false, note is a text"
    return None


def _is_number(value: object) -> bool:
    return isinstance(value, (int, float)) and not isinstance(value, bool) and math.isfinite(value)

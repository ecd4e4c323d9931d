"""Invented salts of Cl^-, stated as a user states constants: for waters that can be solved by hand."""

from __future__ import annotations

from dataclasses import dataclass
from math import log10, sqrt
from pathlib import Path

from gossan.constants.water import density

MINERAL = """
[minerals."{name}"]
reaction = "{ion}Cl{crystal}(s) = {ion}^+ + Cl^-{freed}"
log10_k = {{value = {log10_k!r}, sd = 0.1, source = "invented"}}
molar_volume = {{value = {volume!r}, source = "invented"}}
forms = false
"""


@dataclass(frozen=True)
class Salt:
    """A salt of a cation of charge 1.

    product (mol m-3)^2, its solubility product; volume cm3/mol; water, molecules in its crystal
    """

    name: str
    cation: str
    product: float
    volume: float = 1e-6
    water: int = 0

    @property
    def solubility(self) -> float:
        """mol m-3 in pure water."""
        return sqrt(self.product)

    def __str__(self) -> str:
        return MINERAL.format(
            name=self.name, ion=self.cation, log10_k=log10(self.product / density(298.15) ** 2),
            crystal=f"·{self.water}H2O" if self.water else "",
            freed=f" + {self.water} H2O" if self.water else "", volume=float(self.volume),
        )  # fmt: skip


def write_salts(folder: Path, *salts: Salt) -> str:
    """Write site.toml into a folder; returns the lines of [chemistry] that use it, in an ideal water."""
    text = '[sources]\ninvented = "Invented for a test"\n' + "".join(str(salt) for salt in salts)
    (folder / "site.toml").write_text(text, encoding="utf-8")
    names = ", ".join(f'"{salt.name}"' for salt in salts)
    return f'constants = "site.toml"\nactivity = "ideal"\nminerals = [{names}]'


def water(name: str, **ions: float) -> str:
    """A water of so many mol m-3 of each ion, as a table of a case."""
    amounts = ", ".join(f'{ion} = "{amount!r} mmol/L"' for ion, amount in ions.items())
    return f"[waters.{name}]\nanalysis = {{{amounts}}}\n"

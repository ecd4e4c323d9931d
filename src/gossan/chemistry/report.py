"""What a laboratory says of a water, in the program's own terms."""

from __future__ import annotations

from dataclasses import dataclass, field


@dataclass(frozen=True)
class LabReport:
    """A report as moles per kg of water.

    dissolved  by component, each in the valence that was named, without H^+ and O2
    pH         None where none was given: 7, or whatever electroneutrality makes of pure water
    pe, oxygen how oxidised the water is: pe, or dissolved oxygen in mol per kg; one of them at most
    undivided  the components among `dissolved` whose valence nobody said (Fe, not Fe(II)): pe divides them
    alkalinity eq per kg of water, in place of the inorganic carbon
    balance_on a component, or "pH"
    minerals, gases  what the water is saturated with: index, or partial pressure in atm
    """

    name: str
    temperature: float = 298.15  # K
    dissolved: dict[str, float] = field(default_factory=dict)
    pH: float | None = None
    alkalinity: float | None = None
    balance_on: str | None = None
    minerals: dict[str, float] = field(default_factory=dict)
    gases: dict[str, float] = field(default_factory=dict)
    accept_imbalance: bool = False
    pe: float | None = None
    oxygen: float | None = None
    undivided: frozenset[str] = frozenset()

    @property
    def says_pe(self) -> bool:
        """Whether anything in it says how oxidised the water is."""
        return self.pe is not None or self.oxygen is not None

    @property
    def is_pure(self) -> bool:
        """Whether there is nothing in the water that carries a charge."""
        return not any(self.dissolved.values()) and self.alkalinity is None

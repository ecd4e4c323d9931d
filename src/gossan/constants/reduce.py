"""Every reaction of a table brought down to components, water and electrons."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass, replace

from gossan.base.notation import charge_of, imbalance, parse_formula, parse_reaction, split_phase
from gossan.base.wrong import did_you_mean
from gossan.constants.document import Entry
from gossan.constants.entries import ANY_TEMPERATURE, Constant, Reaction, TemperatureFit
from gossan.constants.temperature import REFERENCE, combined, enthalpy_of, evaluated, van_t_hoff

WATER, ELECTRON = "H2O", "e^-"
NEGLIGIBLE = 1e-12  # coefficients that cancelled leave this much
FIT_AGREES = 0.01  # how far a fit may be from log10_k at 25 degC even where the constant is known better
SLOPE_AGREES = 3e3  # J/mol, the same of its slope and an enthalpy: measured ones scatter by so much


@dataclass(frozen=True, slots=True)
class Published:
    """What a file gives for a reaction as it is printed there."""

    log10_k: Constant
    enthalpy: Constant | None
    fit: TemperatureFit | None
    valid: tuple[float, float]  # K, from and to


@dataclass(frozen=True, slots=True)
class Reduced:
    """One mole of something, taken apart: log a = log10_k + sum of made[name] times log a of name."""

    made: dict[str, float]  # components, H2O and e^-
    log10_k: float  # of formation from these at 25 degC
    fit: TemperatureFit  # the same against temperature
    direct: bool  # the printed reaction holds nothing else
    valid: tuple[float, float] = ANY_TEMPERATURE  # K, where all that it is made through is valid

    def reaction(self, text: str) -> Reaction:
        """Give the record of this reaction, printed as text."""
        components = {name: times for name, times in self.made.items() if name not in (WATER, ELECTRON)}
        return Reaction(text, components, self.made.get(WATER, 0.0), self.made.get(ELECTRON, 0.0))


class Faulty(Exception):
    """An entry that cannot be reduced; its fault is already on the list."""


class Reducer:
    """Reduces entries on demand and remembers them, so that each is walked once.

    entries    kind -> name -> entry
    published  (kind, name) -> constants of its printed reaction, None where there are none or they are faulty
    """

    def __init__(
        self, entries: dict[str, dict[str, Entry]], published: dict[tuple[str, str], Published | None]
    ):
        self._entries = entries
        self._published = published
        self._done: dict[tuple[str, str, bool], Reduced | None] = {}
        self._walking: set[tuple[str, str, bool]] = set()
        self._solids: dict[str, list[str]] = {}
        for name, entry in entries["minerals"].items():
            self._solids.setdefault(solid_of(entry), []).append(name)

    def reduced(self, kind: str, name: str, held: bool = True) -> Reduced:
        """Reduce one entry; held = False takes held components apart too, down to first ions and e^-.

        Raises  Faulty, with the reason on the entry's list
        """
        key = (kind, name, held)
        if key not in self._done:
            self._done[key] = None  # what it stays if the walk fails
            self._walking.add(key)
            try:
                self._done[key] = self._walk(self._entries[kind][name], held)
            finally:
                self._walking.remove(key)
        found = self._done[key]
        if found is None:
            raise Faulty
        return found

    def _walk(self, entry: Entry, held: bool) -> Reduced:
        key = "half_reaction" if entry.kind == "components" else "reaction"
        published = self._published[entry.kind, entry.name]
        left, right = _sides(entry, key)
        own, forms = _own_term(entry, left, right)
        if own is None:
            own_terms = {
                "minerals": "solid, marked (s), on its left",
                "gases": f"{entry.name}(g) on its left",
            }
            entry.fault(key, f"does not have one {own_terms.get(entry.kind, f'{entry.name} on its right')}")
        if own is None or published is None:
            raise Faulty
        sign = 1.0 if forms else -1.0
        own_part = Reduced({}, published.log10_k.value, _fit_of(entry, published), True, published.valid)
        parts = [(sign, own_part)]
        for side, times in ((left, sign), (right, -sign)):
            for term, count in side.items():
                if term != own:
                    parts.append((times * count, self._term(entry, key, term, held)))
        made: dict[str, float] = {}
        for times, part in parts:
            for name, count in part.made.items():
                made[name] = made.get(name, 0.0) + times * count
        return Reduced(
            {name: count for name, count in made.items() if abs(count) > NEGLIGIBLE},
            sum(times * part.log10_k for times, part in parts),
            combined((times, part.fit) for times, part in parts),
            all(part.direct for _, part in parts),
            (max(part.valid[0] for _, part in parts), min(part.valid[1] for _, part in parts)),
        )

    def _term(self, entry: Entry, key: str, term: str, held: bool) -> Reduced:
        """Reduce one term of a reaction: at once where it is a component, H2O or e^-."""
        components = self._entries["components"]
        if term in (WATER, ELECTRON) or (term in components and (held or _is_first(components[term]))):
            return Reduced({term: 1.0}, 0.0, TemperatureFit(), True)
        name, phase = split_phase(term)
        kind = "components" if term in components else {"s": "minerals", "g": "gases"}.get(phase, "species")
        if kind == "minerals":
            solids = self._solids.get(name, [])
            if len(solids) > 1:
                entry.fault(key, f"uses {term}, which could be {' or '.join(solids)}")
                raise Faulty
            name = solids[0] if solids else name
        if name not in self._entries[kind]:
            right = _cure(term, components, self._entries["species"])
            entry.fault(key, f"uses {term}, which the table lacks", right)
            raise Faulty
        if (kind, name, held) in self._walking:
            entry.fault(key, f"goes round in a circle: {term} is itself made from {entry.name}")
        return replace(self.reduced(kind, name, held), direct=False)


def solid_of(entry: Entry) -> str:
    """Formula of the solid that a mineral's reaction dissolves, "" where it cannot be read."""
    try:
        left, _ = parse_reaction(str(entry.keys.get("reaction", "")))
    except ValueError:
        return ""
    return next((split_phase(term)[0] for term in left if split_phase(term)[1] == "s"), "")


def _sides(entry: Entry, key: str) -> tuple[dict[str, float], dict[str, float]]:
    """Read a reaction and refuse one that gains or loses charge or an element."""
    text = entry.typed(key, str, "")
    if not text:
        raise Faulty  # missing or no text, and noted as such
    try:
        sides, gained = parse_reaction(text), imbalance(text)
    except ValueError as error:
        entry.fault(key, f"cannot be read ({error})")
        raise Faulty from None
    if gained:
        amounts = ", ".join(f"{what} {amount:+g}" for what, amount in sorted(gained.items()))
        entry.fault(key, "is not balanced", f"from left to right it gains {amounts}")
        raise Faulty
    return sides


def _cure(term: str, components: Collection[str], species: Collection[str]) -> str:
    """What to do about a term that the table lacks: mend its name, or add what it is made of."""
    formula, phase = split_phase(term)
    if phase:
        return "write the reaction with dissolved ions, or add an entry for it too"
    elements = set(parse_formula(formula)) - {"H", "O"}
    missing = sorted(elements.difference(*map(parse_formula, components)))
    if missing:
        like = f', like [components."{term}"]' if charge_of(term) else ""
        return f"no component holds {' or '.join(missing)}: add its ion to the components{like}"
    alike = [name for name in (*components, *species) if elements <= set(parse_formula(name))]
    return did_you_mean(term, alike, quote="") or f'add it, like [species."{term}"]'


def _is_first(component: Entry) -> bool:
    return "half_reaction" not in component.keys


def _fit_of(entry: Entry, published: Published) -> TemperatureFit:
    """Temperature fit of a printed reaction: its own, or van 't Hoff's law as one."""
    log10_k = published.log10_k
    if published.fit is None:
        return van_t_hoff(log10_k.value, published.enthalpy.value if published.enthalpy else 0.0)
    off = evaluated(published.fit, REFERENCE) - log10_k.value
    if abs(off) > max(FIT_AGREES, log10_k.sd or 0.0):
        right = "one of the two is wrong: mend it"
        entry.fault("temperature_fit", f"is {off:+.3g} away from log10_k at 25 degC", right)
    if published.enthalpy:
        off = published.enthalpy.value - enthalpy_of(published.fit)
        if abs(off) > max(SLOPE_AGREES, published.enthalpy.sd or 0.0):
            wrong = f"is {off / 1e3:+.3g} kJ/mol away from the slope of temperature_fit at 25 degC"
            entry.fault("enthalpy", wrong, "one of the two is wrong: leave it out, or mend it")
    return published.fit


def _own_term(entry: Entry, left: dict[str, float], right: dict[str, float]) -> tuple[str | None, bool]:
    """Find the entry's own term, once and on its side, and whether the reaction forms or dissolves it."""
    if entry.kind == "minerals":
        solids = [term for term in left if split_phase(term)[1] == "s"]
        own = solids[0] if len(solids) == 1 else ""
    else:
        own = f"{entry.name}(g)" if entry.kind == "gases" else entry.name
    forms = entry.kind in ("components", "species")
    side, other = (right, left) if forms else (left, right)
    return (own if side.get(own) == 1.0 and own not in other else None), forms

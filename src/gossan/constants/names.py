"""What a laboratory calls a solute: which component it names, and how its amount becomes moles of it."""

from __future__ import annotations

import re
from collections.abc import Collection
from dataclasses import dataclass

from gossan.base.amounts import Amount
from gossan.base.notation import charge_of, molar_mass, normal_ion, parse_formula, split_ion
from gossan.base.wrong import Wrong, closest

WORDS = {
    "sodium": "Na", "potassium": "K", "calcium": "Ca", "magnesium": "Mg", "manganese": "Mn", "iron": "Fe",
    "cobalt": "Co", "nickel": "Ni", "copper": "Cu", "zinc": "Zn", "cadmium": "Cd", "lead": "Pb",
    "aluminium": "Al", "aluminum": "Al", "silicon": "Si", "silica": "SiO2", "boron": "B",
    "ferrous iron": "Fe(II)", "ferric iron": "Fe(III)", "chloride": "Cl", "nitrate": "NO3", "nitrite": "NO2",
    "ammonium": "NH4", "ammonia": "NH3", "sulfate": "SO4", "sulphate": "SO4", "sulfide": "S(-II)",
    "sulphide": "S(-II)", "bisulfide": "HS", "hydrogen sulfide": "H2S", "carbonate": "CO3",
    "bicarbonate": "HCO3", "carbon dioxide": "CO2", "phosphate": "PO4", "phosphorus": "P",
    "oxalate": "C2O4", "acetate": "CH3COO",
}  # fmt: skip

# other ions, molecules and the bare element that name a whole component
MEMBERS = {
    "CO3^2-": ("CO3^2-", "HCO3^-", "CO2", "H2CO3", "C"),
    "SO4^2-": ("SO4^2-", "HSO4^-"),
    "HS^-": ("HS^-", "H2S", "S^2-"),
    "NO3^-": ("NO3^-",),
    "NH4^+": ("NH4^+", "NH3"),
    "PO4^3-": ("PO4^3-", "HPO4^2-", "H2PO4^-", "H3PO4", "P"),
    "C2O4^2-": ("C2O4^2-", "HC2O4^-", "H2C2O4"),
    "H4SiO4": ("H4SiO4", "SiO2", "Si"),
    "B(OH)3": ("B(OH)3", "H3BO3", "B(OH)4^-", "B"),
    "CH3COO^-": ("CH3COO^-", "CH3COOH"),
}
# an element in one valence, counted by the element's own mass
VALENCES = {
    "S(VI)": "SO4^2-",
    "S(-II)": "HS^-",
    "N(V)": "NO3^-",
    "N(-III)": "NH4^+",
    "C(IV)": "CO3^2-",
    "P(V)": "PO4^3-",
    "N(III)": "NO2^-",
    "N(0)": "N2",
    "C(-IV)": "CH4",
    "Si(IV)": "H4SiO4",
    "B(III)": "B(OH)3",
}
ROMAN = {"I": 1, "II": 2, "III": 3, "IV": 4}
VALENCE = re.compile(r"([A-Z][a-z]?)\s?\((\+?-?)([IV]+|0)\)")
UNNAMED_CHARGE = 2  # Fe, Mn, Cu, Co, Pb without a valence are the divalent ion

REFUSED = {
    # name: what it is, and the cure
    "S": ("sulfur without its valence", 'name the ion: "SO4" for sulfate, "HS" for sulfide'),
    "N": ("nitrogen without its species", 'name it: "NO3" or "NH4" (amounts "as N" are read too)'),
    "H": ("which is not given in an analysis", "the pH says it"),
    "OH": ("which is not given in an analysis", "the pH says it"),
    "H2O": ("the water itself", "leave it out"),
    "O2": ("dissolved oxygen", 'write dissolved_oxygen = "6 mg/L" among the keys of the water'),
}


@dataclass(frozen=True, slots=True)
class Named:
    """A component as a laboratory named it.

    formula  the substance whose mass is meant unless the unit says `as ...`
    charge   by which equivalents are counted; 0 where they have no meaning
    """

    component: str
    formula: str
    charge: int


def component_named(text: str, components: Collection[str]) -> Named:
    """Which component of the table an element, ion or usual name stands for.

    components  names in the table, "Zn^2+"
    Raises      Wrong: not in the table (with the closest name), or a name that says too little

    >>> component_named("HCO3", ["Ca^2+", "CO3^2-"])
    Named(component='CO3^2-', formula='HCO3', charge=-1)
    >>> component_named("Fe(III)", ["Fe^2+", "Fe^3+"]).component
    'Fe^3+'
    """
    written = text.strip()
    name = WORDS.get(written.lower(), written)
    named = _by_valence(name) or _by_formula(name, components)
    if named is None:
        raise Wrong(f'names "{text}", which the table of constants lacks', _cure(written, components))
    if named.component not in components:
        wrong = f'names "{text}", but the table of constants has no {named.component}'
        raise Wrong(wrong, _cure("", components))
    return named


def _by_valence(name: str) -> Named | None:
    match = VALENCE.fullmatch(name)
    if not match:
        return None
    element, sign, roman = match.groups()
    component = VALENCES.get(f"{element}({sign.strip('+')}{roman})")
    if component:
        return Named(component, element, 0)
    if sign == "-" or roman not in ROMAN:
        return None
    size = ROMAN[roman]
    return Named(normal_ion(f"{element}^{size}+"), element, size)


def _by_formula(name: str, components: Collection[str]) -> Named | None:
    try:
        formula, charge = split_ion(name)
    except ValueError:
        return None
    charged = "^" in normal_ion(name)
    if formula in REFUSED and (not charged or formula in ("H", "OH")):
        what, cure = REFUSED[formula]
        raise Wrong(f'names "{name}", {what}', cure)
    for component, members in MEMBERS.items():
        for member in members:
            if member == normal_ion(name) or (not charged and split_ion(member)[0] == formula):
                return Named(component, formula, charge_of(member))
    same = [ion for ion in components if split_ion(ion)[0] == formula and formula not in ("H", "e")]
    if charged:
        same = [ion for ion in same if charge_of(ion) == charge]
    if not same:
        return None
    component = min(same, key=lambda ion: abs(charge_of(ion) - UNNAMED_CHARGE))
    return Named(component, formula, charge_of(component))


def is_bare_element(text: str) -> bool:
    """Whether a name says nothing of a valence: "Fe" and "iron" do not, "Fe(II)" and "Fe^2+" do.

    >>> is_bare_element("iron"), is_bare_element("ferrous iron")
    (True, False)
    """
    name = WORDS.get(text.strip().lower(), text.strip())
    return re.fullmatch(r"[A-Z][a-z]?", name) is not None


def usual_names(components: Collection[str]) -> list[str]:
    """Every name under which a component of the table can be given, the shortest of each first."""
    names = [split_ion(ion)[0] for ion in components] + list(components)
    names += [split_ion(member)[0] for ion in components for member in MEMBERS.get(ion, ())]
    names = [name for name in names if name not in REFUSED and name not in ("H^+", "e", "e^-")]
    names += [word for word, name in WORDS.items() if name in names]
    return list(dict.fromkeys(names))


def _cure(text: str, components: Collection[str]) -> str:
    close = closest(text, usual_names(components)) if len(text) > 1 else ""
    if close:
        return f'did you mean "{close}"?'
    held = dict.fromkeys(split_ion(ion)[0] for ion in components if ion not in ("H^+", "e^-", "H2O"))
    return f"it holds {', '.join(held)}; a solute without chemistry can be a tracer"


def moles(amount: Amount, named: Named) -> float:
    """The moles of the component in an amount, mol/m3 or mol/kg as the amount is per volume or per kg.

    A mass is divided by the molar mass of what it is counted as, and the atoms of the component's own element
    are followed: 10 mg/L as N of nitrate is 10/14.007 mmol/L. Calcium and magnesium are also read as CaCO3.
    Raises  Wrong: a substance without that element, equivalents of a neutral molecule

    >>> from gossan.base.amounts import in_water
    >>> nitrate = component_named("NO3", ["NO3^-"])
    >>> round(moles(in_water("10 mg/L as N"), nitrate), 4)
    0.7139
    """
    per = amount.unit.partition("/")[0]
    if per == "mol":
        return amount.si
    if per == "eq":
        if not named.charge:
            wrong = f'is "{amount.text}", but {named.formula} has no charge to count'
            raise Wrong(wrong, "give mg/L or mmol/L")
        return amount.si / abs(named.charge)
    substance = amount.as_formula or named.formula
    return amount.si / molar_mass(substance) * _atoms(named.component, substance, amount.text)


def _atoms(component: str, substance: str, text: str) -> float:
    """Moles of a component per mole of the substance that it is counted as."""
    if substance == "CaCO3":
        if component in ("Ca^2+", "Mg^2+"):
            return 1.0
        if component == "CO3^2-":
            raise Wrong(f'is "{text}"', "carbonates as CaCO3 are the water's alkalinity: give it there")
    own = parse_formula(component)
    element = next((e for e in own if e not in ("H", "O")), next(iter(own)))
    count = parse_formula(substance).get(element, 0.0)
    if not count:
        raise Wrong(f'is "{text}", but there is no {element} in {substance}', f'did you mean "as {element}"?')
    return count / own[element]


def equivalents(alkalinity: Amount) -> float:
    """An alkalinity in eq/m3, or eq/kg where it was given per kg.

    >>> from gossan.base.amounts import alkalinity
    >>> round(equivalents(alkalinity("6 mg/L as CaCO3")), 4)
    0.1199
    """
    if alkalinity.unit.startswith("eq"):
        return alkalinity.si
    per_mole = {"CaCO3": 2.0, "HCO3": 1.0}[alkalinity.as_formula]
    return per_mole * alkalinity.si / molar_mass(alkalinity.as_formula)

"""Every kind of wrong case, one row each: what is changed, what the message says, on which line."""

import pickle
import re

import pytest
from tests.support.good_case import GOOD, faults_of

from gossan.base.errors import InputError
from gossan.case.read import case_from_text

# what stands in the good case, what stands there instead, the words of the fault;
# the fault must name the last line of the new text, or the line that starts with a fourth entry
ONE_FAULT = [
    # quantities
    (
        '"12 degC"',
        "12",
        'temperature is 12, a bare number; a temperature has a unit: did you mean "12 degC"?',
    ),
    ('"12 degC"', '"12"', 'is "12", without a unit; a temperature is needed: did you mean "12 degC"?'),
    ('"12 degC"', '"60 degC"', "between 0 and 50 degC"),
    ('"12 degC"', '"-3 degC"', "between 0 and 50 degC"),
    ('"12 degC"', '"12 K"', 'did you mean "12 degC"?'),
    ('"12 degC"', '"12 C"', 'did you mean "12 degC"?'),
    ('"11 degC"', '"99 degC"', "waters.mine.temperature"),
    ('"0.12 m/d"', '"0.12 m"', 'flow.darcy_flux is "0.12 m", a length, where a Darcy flux is needed'),
    ('"0.12 m/d"', '"-0.12 m/d"', "water flows from the first layer to the last; turn the"),
    ('"0.12 m/d"', '"nan m/d"', "not a finite number"),
    ('"0.12 m/d"', '"0,12 m/d"', 'the decimal sign is a point: "0.12 m/d"'),
    ('"0.12 m/d"', "true", "flow.darcy_flux is true; a Darcy flux is needed"),
    ('"0.12 m/d"', '["0.12 m/d"]', "flow.darcy_flux is a list; a Darcy flux is needed"),
    ('"0.12 m/d"', "0.12 m/d", 'flow.darcy_flux is 0.12 m/d, without quotes: write "0.12 m/d"'),
    ('"8 yr"', '"8 yrrs"', '"yrrs" is not a unit that is known: did you mean "8 yr"?'),
    ('"8 yr"', '"0 yr"', "run.duration is"),
    ('"8 yr"', '"8 m"', "where a duration is needed"),
    ('"4 cm"', '"-4 cm"', 'layers.gate.dispersivity is "-4 cm"; a dispersivity is not negative'),
    ('"4 cm"', "4", "layers.gate.dispersivity is 4, a bare number; a dispersivity has a unit"),
    ('"1.0 m"', '"0 m"', 'layers.gate.length is "0 m"; a length is more than zero'),
    ("cells = 50", 'cells = 50\ngrain_density = "2.65 kg/m3"', 'did you mean "2.65 g/cm3"?'),
    ("cells = 50", 'cells = 50\nconductivity = "0 m/d"', "a conductivity is more than zero"),
    (
        "cells = 50",
        'cells = 50\ndiffusion = "1e-9 m/s"',
        "a velocity, where a diffusion coefficient is needed",
    ),
    # plain numbers, flags, texts
    ("0.38", "38", "layers.gate.porosity is 38; a porosity is between 0 and 1: did you mean 0.38?"),
    ("0.38", "0.0", "layers.gate.porosity is 0; a porosity is between 0 and 1"),
    ("0.38", "1.0", "layers.gate.porosity is 1; a porosity is between 0 and 1"),
    ("0.38", "-0.38", "layers.gate.porosity is -0.38"),
    ("0.38", '"0.38"', "a porosity is a number without quotes: did you mean 0.38?"),
    ("0.38", '"38 %"', "did you mean 0.38?"),
    ("0.38", "true", "layers.gate.porosity is true; a porosity is a number"),
    ("0.38", "nan", "layers.gate.porosity is nan; a porosity is a finite number"),
    ("0.38", "0,38", "layers.porosity is 0,38: the decimal sign is a point: 0.38"),
    ("pH = 5.9", "pH = 59", "waters.mine.pH is 59; a pH is between -2 and 16"),
    ("pH = 5.9", 'pH = "5.9"', "a pH is a number without quotes: did you mean 5.9?"),
    ("pH = 5.9", "pH = 5.9\naccept_imbalance = 1", "is 1; true or false is needed"),
    ("pH = 5.9", "pH = 5.9\naccept_imbalance = True", "is True: write true"),
    ('"0.8 wt%"', '"0.8 wt%"\nZnS = "1 wt%"', 'names the mineral "ZnS", the formula of several: name one: '),
    ('bromide = "40 mg/L"', '"Cl^-" = "4 mmol/L"', "a component with chemistry"),
    ("cells = 50", "cells = 0", "a count of cells is between 1 and"),
    ("cells = 50", "cells = 2.5", "a count of cells is a whole number"),
    ("cells = 50", "cells = 50\ntortuosity = 1.7", "a tortuosity is between 0 and 1"),
    ("cells = 50", 'cells = 50\ntortuosity = "bruggemann"', 'did you mean "bruggeman"?'),
    ("cells = 50", 'cells = 50\ntortuosity = "archie"', 'such as {law = "archie", exponent = 2.0}'),
    ("cells = 50", 'cells = 50\ntortuosity = {law = "archie", exponent = 0.3}', "is between 1 and 5"),
    ("cells = 50", 'cells = 50\ntortuosity = {law = "boudreau", exponent = 2}', "does not take"),
    ("cells = 50", 'cells = 50\ntortuosity = {lwa = "archie"}', "holds lwa: did you mean"),
    ("cells = 50", 'cell = {first = "1 cm"}', 'lacks last: such as {first = "1 mm", last = "2 cm"}'),
    ("cells = 50", 'cell = {first = "1 cm", last = "0 cm"}', "a length of a cell is more than zero"),
    ("cells = 50", 'cell = {first = "1 mm", last = "80 cm"}', "at most 1.5, or profiles lose their accuracy"),
    ("cells = 50", 'cell = {first = "1 mm", last = "2 m"}', 'longer than the layer ("1.0 m")'),
    ('"8 yr"', '"8 yr"\nlimiter = "superbee"', "is not a choice"),
    ('"8 yr"', '"8 yr"\naccuracy = 0', "run.accuracy"),
    ('"8 yr"', '"8 yr"\nmax_courant = 1.5', "a Courant number is between 0 and 1: such as 0.5"),
    ('title = "a gate of sulfide-bearing sand"', "title = 7", "title is 7; a text is needed"),
    ('name = "gate"', 'name = ""', "is empty: give it a name"),
    ('name = "middle"', 'name = "mid/dle"', "a name has no slash"),
    ("[waters.pore]", '[waters."po/re"]', 'waters.po/re is "po/re": a name has no slash'),
    # unknown and missing keys
    (
        "porosity = 0.38",
        "porosty = 0.38",
        'layers.gate.porosty is not a key of [[layers]]: did you mean "porosity"?',
    ),
    ("pH = 5.9", "PH = 5.9", 'waters.mine.PH is not a key of [waters.mine]: did you mean "pH"?'),
    ("[run]", "[runn]", 'runn is not a key of a case: did you mean "run"?'),
    ("[waters.pore]\n", "[water.pore]\n", 'did you mean "waters"?'),
    ("[flow]", "[flow]\nporosity = 0.3", "it is a key of [[layers]]"),
    ("[chemistry]", "[chemistry]\nfoo = 1", "chemistry.foo is not a key of [chemistry]"),
    (
        'dispersivity = "4 cm"\n',
        "",
        'layers.gate.dispersivity is missing: write dispersivity = "4 cm"',
        '[[layers]]\nname = "gate"',
    ),
    ('length = "1.0 m"\n', "", "layers.gate.length is missing", '[[layers]]\nname = "gate"'),
    ('name = "gate"\n', "", 'layers.2.name is missing: write name = "gate"', '[[layers]]\nlength = "1.0'),
    ("cells = 50\n", "", 'write cells = 60, or cell = "2 cm"', '[[layers]]\nname = "gate"'),
    ('duration = "8 yr"\n', "", "run.duration is missing", "[run]"),
    # tables
    ("[waters.mine]\n", "[[waters.mine]]\n", "a table is needed"),
    (
        '[[flow.feed]]\nfrom = "0 d"\nwater = "mine"\n[[flow.feed]]',
        "[flow.feed]",
        "write [[flow.feed]], double brackets",
    ),
    ("[run]", "[flow.inlet]", "which is not a choice"),
    # choices
    ('law = "kozeny-carman"', 'law = "kozeny"', 'which is not a choice: did you mean "kozeny-carman"?'),
    (
        'law = "kozeny-carman"',
        'law = "power"',
        'clogging.exponent is missing: law = "power" needs it',
        "[layers.clogging]",
    ),
    (
        'law = "kozeny-carman"',
        'law = "threshold"\nexponent = 3.0',
        "critical_porosity is missing",
        "[layers.clogging]",
    ),
    (
        'law = "kozeny-carman"',
        'critical_porosity = 0.5\nlaw = "threshold"\nexponent = 3',
        "is 0.5, but the layer starts",
        "critical_porosity",
    ),
    (
        'law = "kozeny-carman"',
        'law = "threshold"\ncritical_porosity = 0.1\nexponent = 3\npore_bodies = 0.8',
        "stands beside exponent: two laws for one layer",
        "pore_bodies",
    ),
    (
        'law = "kozeny-carman"',
        'law = "threshold"\npore_bodies = 0.8',
        "critical_porosity is missing",
        "[layers.clogging]",
    ),
    (
        'law = "kozeny-carman"',
        'law = "kozeny-carman"\nresidual = 5',
        "did you mean 0.05?",
        "residual",
    ),
    ("[flow]", '[flow]\ninlet = "third type"', '"concentration" is needed'),
    ("[chemistry]", '[chemistry]\nactivity = "davis"', 'did you mean "davies"?'),
    ("[chemistry]", "[chemistry]\nactivity = davis", "chemistry.activity is davis, without quotes"),
    # the analysis
    ('Zn = "24 mg/L"', 'Zm = "24 mg/L"', 'names "Zm", which the table of constants lacks'),
    ('Zn = "24 mg/L"', 'zink = "24 mg/L"', 'did you mean "zinc"?'),
    ('Zn = "24 mg/L"', 'Zn = "-24 mg/L"', "an amount in water is not negative"),
    ('Zn = "24 mg/L"', "Zn = 24", 'did you mean "24 mg/L"?'),
    ('Zn = "24 mg/L"', 'Zn = "24 ppm"', '"ppm" can be mg/L, mg/kg'),
    ('Zn = "24 mg/L"', 'Zn = "ND"', "write the detection limit"),
    ('Zn = "24 mg/L"', 'Zn = "24 mg/L as N"', "there is no Zn in N"),
    ('Zn = "24 mg/L"', 'Zn^2+ = "24 mg/L"', 'write "Zn^2+" = "24 mg/L"'),
    ('Zn = "24 mg/L"', 'Zn = "24 mg/L"\n"Zn^2+" = "24 mg/L"', "gives Zn^2+ a second time, after Zn"),
    ('Zn = "24 mg/L"', 'Zn = "24 mg/L"\nZn = "25 mg/L"', "waters.mine.analysis.Zn is given twice"),
    ('Zn = "24 mg/L"', 'S = "24 mg/L"', '"SO4" for sulfate, "HS" for sulfide'),
    ('Zn = "24 mg/L"', 'N = "24 mg/L"', '"NO3" or "NH4"'),
    ('Zn = "24 mg/L"', 'HCO3 = "24 mg/L"', "which the alkalinity gives already"),
    ('Zn = "24 mg/L"', 'pH = "7"', "is no solute: it is a key of the water itself"),
    (
        'SO4 = "2 mmol/L"',
        'CO3 = "2 mmol/L"\nHCO3 = "2 mmol/L"',
        "gives inorganic carbon a second time, after CO3",
    ),
    # other facts of a water
    ('"6 mg/L as CaCO3"', '"6 mg/L"', 'did you mean "6 mg/L as CaCO3"?'),
    ('balance_on = "Mg"', 'balance_on = "Mgg"', 'waters.mine.balance_on names "Mgg"'),
    ('balance_on = "Mg"', 'balance_on = "SiO2"', "which has no charge"),
    ('balance_on = "Mg"', 'balance_on = "pH"', "the same fact twice"),
    ("calcite = 0.0", "calcit = 0.0", 'which the table of constants lacks: did you mean calcite?'),
    ("calcite = 0.0", 'calcite = "1 atm"', "a mineral has a saturation index"),
    ('CO2 = "0.003 atm"', "CO2 = 0.003", 'a gas has a pressure: did you mean "0.003 atm"?'),
    ('CO2 = "0.003 atm"', 'CO2 = "3 mg/L"', "where the pressure of a gas is needed"),
    ('bromide = "40 mg/L"', 'bromid = "40 mg/L"', 'did you mean "bromide"?'),
    ('bromide = "40 mg/L"', 'bromide = "40 mg/L as N"', "a tracer has no formula"),
    ('molar_mass = "79.9 g/mol"', "# nothing", "a mass, but the molar mass is not known", 'bromide = "40'),
    # solids
    ("mackinawite", "mackinawit", 'which the table of constants lacks: did you mean mackinawite?'),
    ('"0.8 wt%"', '"0.8 %"', 'say of what: "0.8 wt%" or "0.8 vol%"'),
    ('"0.8 wt%"', '"-0.8 wt%"', "an amount of solid is not negative"),
    ('"0.8 wt%"', "0.8", 'did you mean "0.8 wt%"?'),
    ('"0.8 wt%"', '"0.8 mg/L"', "a mass per volume, where an amount of solid"),
    ('"0.8 wt%"', '"98 wt%"', "add up to 101 wt% of the dry solid", "[layers.minerals]"),
    ('"0.8 wt%"', '"70 vol%"', "at most 62 vol% is solid", "[layers.minerals]"),
    ("reactive = 0.4", "reactive = 40", "a reactive share is between 0 and 1: did you mean 0.4?"),
    ("reactive = 0.4", "share = 0.4", 'has the unknown key "share"'),
    ('{amount = "3 wt%", reactive = 0.4}', "{reactive = 0.4}", "has no amount"),
    ('mackinawite = "0.8 wt%"', 'pyrite = "0.8 wt%"', "gives or takes electrons"),
    # layers, flow, ports, limits
    ('name = "inlet sand"', 'name = "gate"', 'is "gate" a second time', 'name = "gate"\nlength = "1.0'),
    ('cell = "2 cm"', 'cell = "2 m"', "longer than the layer"),
    ('cell = "2 cm"', 'cell = "2 nm"', "at most 1000000 cells are possible"),
    ('cell = "2 cm"', 'cell = "2 cm"\ncells = 10', "stands beside cells", 'cell = "2 cm"'),
    (
        'water = "pore"\n[layers.minerals]',
        'water = "por"\n[layers.minerals]',
        'layers.gate.water is "por", but there is no [waters.por]: did you mean "pore"?',
        'water = "por"',
    ),
    ('water = "mine"', 'water = "mines"', 'flow.feed.1.water is "mines"'),
    ('from = "0 d"', 'from = "1 d"', "the first feed starts with the run"),
    ('from = "2 yr"', 'from = "0 d"', "not later than the feed before", 'from = "0 d"\nwater = "pore"'),
    ('from = "2 yr"', 'from = "9 yr"', 'not before the end of the run ("8 yr")'),
    ('darcy_flux = "0.12 m/d"', 'darcy_flux = "0.12 m/d"\nhead_drop = "1 m"\n', "only one can be held"),
    ('darcy_flux = "0.12 m/d"', "", 'write darcy_flux = "0.12 m/d", or a head_drop', "[flow]"),
    ('"0.12 m/d"', '"0.12 m/d"\noutlet = "concentration"', 'outlet = "concentration" needs it', "[flow]"),
    ('"0.12 m/d"', '"0.12 m/d"\noutlet_water = "pore"', 'goes with outlet = "concentration"'),
    (
        '"0.12 m/d"',
        '"0.12 m/d"\noutlet = "concentration"\noutlet_water = "por"',
        'flow.outlet_water is "por", but there is no [waters.por]: did you mean "pore"?',
    ),
    (
        '"0.12 m/d"',
        '"0.12 m/d"\noutlet = "gradient"\noutlet_gradient = {Zn = "1 mg/L/m"}',
        "is no tracer; a gradient of ions would not balance their charges",
    ),
    (
        '"0.12 m/d"',
        '"0.12 m/d"\noutlet = "gradient"\noutlet_gradient = {bromide = "1 mg/L"}',
        "a mass per volume, where a gradient is needed",
    ),
    ('at = "0.6 m"', 'at = "6 m"', "beyond the column of 1.2 m"),
    ('at = "0.6 m"', 'at = "-1 m"', "a distance from the inlet is not negative"),
    ('name = "middle"', 'name = "outlet"', "the port outlet is the end of the column", 'at = "0.6'),
    ("[limits.outlet]", "[limits.outlett]", 'limits.outlett is no port: did you mean "outlet"?'),
    ('Zn = "0.12 mg/L"', 'Zm = "0.12 mg/L"', "limits.outlet.Zm names"),
    ('Zn = "0.12 mg/L"', 'Zn = "<0.12 mg/L"', 'a limit is written without "<"'),
    ('Zn = "0.12 mg/L"', "Zn = [0.1, 0.2]", "a solute has a highest amount"),
    ('Zn = "0.12 mg/L"', 'Zn = "0.12 mg/L"\nzinc = "1 mg/L"', "limits Zn^2+ a second time, after Zn"),
    ("pH = [6.5, 9.0]", 'pH = "9 mg/L"', "a limit of pH is a range"),
    ("pH = [6.5, 9.0]", "pH = [9.0, 6.5]", "did you mean [6.5, 9]?"),
    ("pH = [6.5, 9.0]", "pH = [6.5]", "a range of pH is [6.5, 9.0]"),
    # chemistry
    ('also = ["gypsum"]', 'also = "gypsum"', 'did you mean ["gypsum"]?'),
    ('also = ["gypsum"]', 'also = ["gypsun"]', "did you mean gypsum?"),
    ('also = ["gypsum"]', 'also = ["gypsum", "gypsum"]', 'names "gypsum" twice'),
    ('also = ["gypsum"]', 'also = ["siderite"]', "which is asked for as well", "exclude ="),
    ('also = ["gypsum"]', 'also = ["gypsum"]\nminerals = ["calcite"]', "stands beside minerals", "also"),
    ('exclude = ["siderite"]', 'exclude = ["NaCO4^-"]', "neither a mineral nor a species of the table"),
    ('exclude = ["siderite"]', 'exclude = ["Zn^2+"]', "leave it out of the waters instead"),
    ('exclude = ["siderite"]', 'constants = "nowhere.toml"', 'is "nowhere.toml", which has faults'),
    # the text itself
    ("[run]", "[run", "this is not TOML"),
    ('"8 yr"', '"8 yr', "a text ends on its line"),
    ("pH = 5.9", "pH : 5.9", "is followed by a colon: write pH = 5.9"),
    ("pH = 5.9", "pH =", "has no value"),
    ("[chemistry]", "[flow]", "flow is a table that is begun twice"),
]

# keys of the contract whose parts are not there yet
NOT_LANDED = [
    ("pH = 5.9", 'table = "lab.csv"'),
    ("pH = 5.9", 'sample = "MW-3"'),
    ("cells = 50", 'cells = 50\nrates = ["x"]'),
    ("[layers.clogging]", '[layers.exchange]\ncapacity = "4 meq/100g"\n[layers.clogging]'),
    ("[layers.clogging]", '[layers.surface]\nferrihydrite = "0.2 wt%"\n[layers.clogging]'),
    ("[[ports]]", '[rates.sulfate]\nlaw = "monod"\n[[ports]]'),
    ('Zn = "0.12 mg/L"', 'Cu = {criterion = "x", hardness = "port"}'),
    ("[run]", '[unknowns]\n"a.b" = {low = "1 cm"}\n[run]'),
    ("[run]", "[size]\nsafety = 1.5\n[run]"),
    ("[run]", "[spread]\nmembers = 5\n[run]"),
    ("[run]", '[match]\nscale = "log"\n[run]'),
]


def test_the_good_case_is_good():
    case_from_text(GOOD).require_column()


@pytest.mark.parametrize("row", ONE_FAULT, ids=[f"{row[1][:30]!r}" for row in ONE_FAULT])
def test_each_fault_has_its_line_and_cure(row):
    old, new, words, *where = row
    assert GOOD.count(old) >= 1
    text = GOOD.replace(old, new, 1)
    found = [fault for fault in faults_of(text) if words in str(fault)]
    assert len(found) == 1, [str(fault) for fault in faults_of(text)]
    assert str(found[0]).startswith("gate.toml")
    before = text[: text.index(where[0])] if where else text[: GOOD.index(old)] + new.rstrip("\n")
    expected = before.count("\n") + 1
    assert found[0].line == expected, str(found[0])


@pytest.mark.parametrize(("old", "new"), NOT_LANDED, ids=[row[1][:30] for row in NOT_LANDED])
def test_what_has_not_landed_is_refused_with_those_words(old, new):
    words = [str(fault) for fault in faults_of(GOOD.replace(old, new, 1))]
    assert any("is part of the contract but has not landed yet" in line for line in words), words


def test_all_faults_come_in_one_message_in_the_order_of_lines():
    text = GOOD
    for old, new in [
        ('"12 degC"', "12"),
        ('Zn = "24 mg/L"', "Zn = 24 mg/L"),
        ("porosity = 0.38", "porosity = 38"),
        ("cells = 50", "cels = 50"),
        ('water = "mine"', 'water = "mines"'),
        ("mackinawite", "mackinawit"),
        ('"8 yr"', '"8 years or so"'),
    ]:
        text = text.replace(old, new, 1)
    faults = faults_of(text)
    assert len(faults) == 8  # `cels` leaves the layer without a count of cells, too
    lines = [fault.line for fault in faults]
    assert lines == sorted(lines)
    assert all(re.match(r"gate\.toml:\d+: [\w.\" ]+ (is|names) ", str(fault)) for fault in faults)
    assert sum("did you mean" in str(fault) for fault in faults) >= 5
    again = pickle.loads(pickle.dumps(InputError(faults)))
    assert again.faults == faults


def test_the_sample_of_the_house():
    faults = faults_of(GOOD.replace("0.38", "38"))
    line = GOOD[: GOOD.index("porosity = 0.38")].count("\n") + 1
    told = f"gate.toml:{line}: layers.gate.porosity is 38; a porosity is between 0 and 1: did you mean 0.38?"
    assert [str(fault) for fault in faults] == [told]


def test_head_drop_needs_conductivity_everywhere():
    faults = faults_of(GOOD.replace('darcy_flux = "0.12 m/d"', 'head_drop = "0.1 m"'))
    assert [fault.key for fault in faults] == ['layers."inlet sand".conductivity', "layers.gate.conductivity"]


def test_under_a_held_head_times_and_pore_volumes_do_not_mix():
    text = GOOD.replace('darcy_flux = "0.12 m/d"', 'head_drop = "0.1 m"').replace('"2 yr"', '"2 PV"')
    text = text.replace("porosity", 'conductivity = "5 m/d"\nporosity')
    case_from_text(text)
    mixed = text.replace('from = "2 PV"', 'from = "1 yr"\nwater = "pore"\n[[flow.feed]]\nfrom = "2 PV"')
    assert ["give all of them in one unit" in str(fault) for fault in faults_of(mixed)] == [True]

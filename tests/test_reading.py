"""What good files become: values in the project's units, and one file made of another."""

from pathlib import Path

import pytest

from bufferfolio.definitions import Ion, PublishedEquation, ReferenceConstants
from bufferfolio.errors import DefinitionErrors
from bufferfolio.reading import quantities as q
from bufferfolio.reading import read_formulation, read_library
from bufferfolio.reading.dangers import neutral_charge
from bufferfolio.reading.formulas import parse_formula, printed
from bufferfolio.reading.quantities import Unfit, parse_quantity

LIBRARY = Path(__file__).parent / "broken" / "library"
GOOD = Path(__file__).parent / "broken" / "good"
SHIPPED = Path(__file__).parents[1] / "systems"

FORMULATION = """\
title: Test
revision: 3
purpose: To test.
medium: dilute
model: davies
make_up:
  {measure}
  at: 20 °C
  reagents:
    - {{reagent: {reagent}, amount: {amount}}}
use: {{temperature: [2 °C, 40 °C], pH: [4, 9]}}
"""


@pytest.fixture(scope="module")
def library():
    return read_library(LIBRARY)


def one_portion(library, tmp_path, reagent, amount, measure="made_up_to: 2 L"):
    path = tmp_path / "test.yaml"
    text = FORMULATION.format(measure=measure, reagent=reagent, amount=amount)
    path.write_text(text, encoding="utf-8")
    make_up = read_formulation(path, library).make_up
    return make_up, make_up.portions[0]


@pytest.mark.parametrize(
    ("text", "dimension", "value"),
    [
        ("25 °C", q.TEMPERATURE, 298.15),
        ("25°C", q.TEMPERATURE, 298.15),
        ("77 degF", q.TEMPERATURE, 298.15),
        ("298.15 K", q.TEMPERATURE, 298.15),
        ("-0.41 kJ/mol", q.ENTHALPY, -410.0),
        ("-142 J/mol/K", q.HEAT_CAPACITY, -142.0),
        ("0.142 kJ/(mol K)", q.HEAT_CAPACITY, 142.0),
        ("1.184 g/mL", q.DENSITY, 1184.0),
        ("250 mL", q.VOLUME, 2.5e-4),
        ("50 µL", q.VOLUME, 5e-8),
        ("50 μL", q.VOLUME, 5e-8),
        ("6.06 g", q.MASS, 6.06e-3),
        ("5 mmol", q.SUBSTANCE, 5e-3),
        ("0.1 mol/L", q.MOLARITY, 100.0),
        ("5 g/L", q.MASS_PER_VOLUME, 5.0),
        ("50 mmol/kg", q.MOLALITY, 0.05),
        ("37 %", q.PERCENT, 0.37),
        ("1e-3 kg/mol", q.INTERACTION, 1e-3),
    ],
)
def test_quantity_in_the_projects_units(text, dimension, value):
    assert parse_quantity(text, dimension).value == pytest.approx(value, rel=1e-13)


def test_every_accepted_unit_is_known_to_the_units_library():
    dimensions = [item for item in vars(q).values() if isinstance(item, q.Dimension)]
    assert len(dimensions) >= 12
    for dimension in dimensions:
        for unit in dimension.units:
            bound = min(dimension.high, 400.0)
            try:
                parse_quantity(f"{bound:g} {unit}", dimension)
            except Unfit as problem:
                assert "out of bounds" in problem.problem


@pytest.mark.parametrize(
    "text", ["1 g 2", "1 g**2", "1 M", "g 1", "1e3", "1_000 g", "0x10 g", "1 :"]
)
def test_what_is_no_mass(text):
    with pytest.raises(Unfit):
        parse_quantity(text, q.MASS)


# Molar masses in g/mol from the abridged standard atomic weights (IUPAC Commission on Isotopic
# Abundances and Atomic Weights, table of 2021), summed by hand. The library works from isotopes:
# its elements lie within the intervals of that table, hence 2e-4.
ABRIDGED = {
    "NaCl": 22.990 + 35.45,
    "H2O": 2 * 1.008 + 15.999,
    "Na2HPO4·7H2O": 2 * 22.990 + 15 * 1.008 + 30.974 + 11 * 15.999,
    "C4H11NO3": 4 * 12.011 + 11 * 1.008 + 14.007 + 3 * 15.999,
    "C8H5KO4": 8 * 12.011 + 5 * 1.008 + 39.098 + 4 * 15.999,
    "Na2B4O7·10H2O": 2 * 22.990 + 4 * 10.81 + 17 * 15.999 + 20 * 1.008,
    "(NH4)2SO4": 2 * 14.007 + 8 * 1.008 + 32.06 + 4 * 15.999,
}


@pytest.mark.parametrize(("formula", "published"), ABRIDGED.items())
def test_molar_mass_agrees_with_the_standard_atomic_weights(formula, published):
    assert parse_formula(formula).molar_mass * 1000 == pytest.approx(published, rel=2e-4)


@pytest.mark.parametrize(
    ("text", "atoms", "charge", "water"),
    [
        ("HPO4-2", {"H": 1, "P": 1, "O": 4}, -2, 0),
        ("NH4+", {"N": 1, "H": 4}, 1, 0),
        ("B(OH)4-", {"B": 1, "O": 4, "H": 4}, -1, 0),
        ("Na2CO3·1.5H2O", {"Na": 2, "C": 1, "O": 4.5, "H": 3}, 0, 1.5),
        ("CaCl2·H2O", {"Ca": 1, "Cl": 2, "O": 1, "H": 2}, 0, 1),
    ],
)
def test_formula_is_taken_apart(text, atoms, charge, water):
    formula = parse_formula(text)
    assert dict(formula.atoms) == atoms
    assert (formula.charge, formula.hydrate_water) == (charge, water)


@pytest.mark.parametrize(
    "text",
    ["", "+", "2H2O", "D2O", "EtOH", "Me2O", "Na Cl", "NaCl·", "NaCl·7NH3", "na+", "N-0"],
)
def test_what_is_no_formula_here(text):
    with pytest.raises(Unfit):
        parse_formula(text)


@pytest.mark.parametrize(
    ("text", "page"),
    [("HPO4-2", "HPO₄²⁻"), ("NH4+", "NH₄⁺"), ("Na2HPO4·12H2O", "Na₂HPO₄·12H₂O"), ("HOCl", "HOCl")],
)
def test_formula_as_a_page_prints_it(text, page):
    assert printed(text) == page


@pytest.mark.parametrize(
    ("reagent", "amount", "expected", "basis"),
    [
        # NaCl, 99.5 % pure, 58.44 g/mol; in 2 L
        ("sodium-chloride", "58.443 g", 0.995, "mol"),
        ("sodium-chloride", "0.5 mol", 0.5, "mol"),
        ("sodium-chloride", "0.1 mol/L", 0.2, "mol"),
        ("sodium-chloride", "58.443 g/L", 1.99, "mol"),
        ("sodium-chloride", "0.1 mol/kg", 0.1, "mol/kg"),
        ("sodium-chloride", "5.8443 %", 0.995, "mol/kg"),
        # HCl 37 %, 1.184 g/mL, 36.46 g/mol: 12.015 mol/L
        ("hydrochloric-acid-37", "100 mL", 1.2015, "mol"),
        ("hydrochloric-acid-37", "118.4 g", 1.2015, "mol"),
        ("hydrochloric-acid-37", "1 mol", 1.0, "mol"),
    ],
)
def test_amount_of_a_portion(library, tmp_path, reagent, amount, expected, basis):
    _, portion = one_portion(library, tmp_path, reagent, amount)
    assert portion.amount == pytest.approx(expected, rel=2e-4)
    assert portion.basis == basis
    assert portion.stated == amount


@pytest.mark.parametrize(
    ("measure", "basis", "volume", "mass"),
    [
        ("made_up_to: 500 mL", "made up to", 5e-4, None),
        ("water: 2 L", "water added", 2e-3, None),
        ("water: 3 kg", "water added", None, 3.0),
    ],
)
def test_the_three_ways_to_give_the_water(library, tmp_path, measure, basis, volume, mass):
    make_up, _ = one_portion(library, tmp_path, "sodium-chloride", "1 g", measure)
    assert (make_up.basis, make_up.volume, make_up.mass) == (basis, volume, mass)
    assert make_up.temperature == 293.15


def test_formulation_keeps_what_the_file_says(library):
    formulation = read_formulation(GOOD / "formulation.yaml", library)
    assert (formulation.key, formulation.revision) == ("formulation", "1")
    assert formulation.use_temperature.low == 275.15
    assert [titrant.molarity for titrant in formulation.titrants] == [1.0, 1.0]
    assert formulation.titrants[0].label == "sodium hydroxide, 1 mol/L"
    assert str(formulation.make_up.portions[1].place).endswith("formulation.yaml:11:7")


def test_undiluted_titrant_and_missing_parts(library, tmp_path):
    path = tmp_path / "plain.yaml"
    text = FORMULATION.format(measure="water: 1 kg", reagent="sodium-chloride", amount="1 g")
    text += "correct_with: [{reagent: sodium-hydroxide, direction: upward}]\n"
    path.write_text(text, encoding="utf-8")
    formulation = read_formulation(path, library)
    assert formulation.revision == "3"  # written without quotation marks
    assert formulation.titrants[0].molarity is None
    assert formulation.titrants[0].label == "sodium hydroxide"
    assert formulation.expected is None
    assert formulation.cautions == ()


def test_technical_liquid_brings_its_company_along(library):
    bleach = library.reagents["bleach"]
    assert bleach.families == {"hypochlorite": 1.0}
    sodium, chloride = Ion(name="Na+", charge=1), Ion(name="Cl-", charge=-1)
    assert bleach.ions[sodium] == pytest.approx(1 + 1.05 + 0.05)
    assert bleach.ions[chloride] == pytest.approx(1.05)
    assert bleach.stock is not None
    assert bleach.stock.mass_fraction == pytest.approx(0.12)


def test_steps_by_constants_and_by_equation(library):
    (acetate,) = library.families["acetate"].steps
    assert acetate.law == ReferenceConstants(
        pK=4.756, temperature=298.15, enthalpy=-410.0, heat_capacity=None
    )
    assert acetate.enthalpy_citation is not None
    assert acetate.enthalpy_citation.source.key == "goldberg2002"
    assert acetate.heat_capacity_citation is None
    (morris,) = library.families["hypochlorite"].steps
    assert isinstance(morris.law, PublishedEquation)
    assert morris.law.inverse == 3000.0
    assert morris.uncertainty is None


def test_equation_for_log_K_becomes_one_for_pK(tmp_path):
    text = (LIBRARY / "families" / "hypochlorite.yaml").read_text(encoding="utf-8")
    text = text.replace("gives: pK", "gives: log10 K").replace("linear: 0.0253", "log10: 2.0")
    (tmp_path / "families").mkdir()
    (tmp_path / "families" / "other.yaml").write_text(text, encoding="utf-8")
    (step,) = read_library(tmp_path, LIBRARY).families["other"].steps
    assert isinstance(step.law, PublishedEquation)
    assert (step.law.inverse, step.law.constant) == (-3000.0, 10.0686)
    # 2 log10 T = 0.8686 ln T
    assert step.law.logarithm == pytest.approx(-0.868588963806504, rel=1e-14)


def test_acid_and_base_are_told_by_charge_at_pH_7(library):
    charges = {
        key: neutral_charge(reagent, library.families) for key, reagent in library.reagents.items()
    }
    assert charges["hydrochloric-acid-37"] == -1.0
    assert charges["sodium-hydroxide"] == 1.0
    assert charges["sodium-chloride"] == 0.0
    assert abs(charges["sodium-acetate-trihydrate"]) < 0.01  # pK 4.76
    assert charges["bleach"] > 0.5


def test_a_folder_adds_to_the_shipped_library(tmp_path, library):
    (tmp_path / "reagents").mkdir()
    (tmp_path / "reagents" / "mine.yaml").write_text(
        (GOOD / "reagent.yaml").read_text(encoding="utf-8"), encoding="utf-8"
    )
    both = read_library(tmp_path, LIBRARY)
    assert set(both.reagents) == {*library.reagents, "mine"}
    assert both.sources == library.sources
    assert both.interactions == library.interactions


def test_formulations_come_from_the_folder_alone(tmp_path):
    base, folder = tmp_path / "base", tmp_path / "folder"
    for home in (base, folder):
        (home / "formulations").mkdir(parents=True)
    text = FORMULATION.format(measure="water: 1 kg", reagent="x", amount="1 g")
    plain = text.replace("\n    - {reagent: x, amount: 1 g}", " []")
    (base / "formulations" / "theirs.yaml").write_text(plain, encoding="utf-8")
    (folder / "formulations" / "mine.yaml").write_text(plain, encoding="utf-8")
    assert set(read_library(folder, base).formulations) == {"mine"}


def test_the_library_may_be_its_own_base(library):
    assert read_library(LIBRARY, LIBRARY) == library


def test_the_shipped_library_reads():
    shipped = read_library(SHIPPED)
    assert len(shipped.families) >= 14
    assert len(shipped.reagents) >= 30
    assert len(shipped.formulations) >= 10
    assert list(shipped.reagents) == sorted(shipped.reagents)


def test_a_byte_order_mark_and_windows_line_ends_are_fine(tmp_path, library):
    text = (GOOD / "formulation.yaml").read_text(encoding="utf-8").replace("\n", "\r\n")
    path = tmp_path / "formulation.yaml"
    path.write_bytes(b"\xef\xbb\xbf" + text.encode())
    assert read_formulation(path, library).title == "Acetate extract"


def test_one_mistake_is_one_message(tmp_path):
    """A broken family is not unknown as well to the reagents and formulations that need it."""
    for kind in ("families", "reagents", "formulations"):
        (tmp_path / kind).mkdir()
    family = (GOOD / "family.yaml").read_text(encoding="utf-8")
    (tmp_path / "families" / "propionate.yaml").write_text(
        family.replace("kJ/mol", "kcal/mol"), encoding="utf-8"
    )
    reagent = (GOOD / "reagent.yaml").read_text(encoding="utf-8")
    reagent = reagent.replace("phosphate: 1", "propionate: 1")
    (tmp_path / "reagents" / "salt.yaml").write_text(reagent, encoding="utf-8")
    text = FORMULATION.format(measure="water: 1 kg", reagent="salt", amount="1 g")
    (tmp_path / "formulations" / "bath.yaml").write_text(text, encoding="utf-8")
    with pytest.raises(DefinitionErrors) as caught:
        read_library(tmp_path, LIBRARY)
    assert [error.problem for error in caught.value.errors] == [
        "enthalpy has the unknown unit 'kcal/mol'; did you mean 'kJ/mol'?"
    ]


def test_a_broken_list_of_sources_is_one_message(tmp_path):
    (tmp_path / "sources.yaml").write_text("a: [", encoding="utf-8")
    (tmp_path / "families").mkdir()
    family = (GOOD / "family.yaml").read_text(encoding="utf-8")
    (tmp_path / "families" / "propionate.yaml").write_text(
        family.replace("goldberg2002", "a"), encoding="utf-8"
    )
    with pytest.raises(DefinitionErrors) as caught:
        read_library(tmp_path, LIBRARY)
    assert [error.place.line for error in caught.value.errors] == [1]

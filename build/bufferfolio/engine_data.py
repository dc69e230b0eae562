"""The data block of a page: what its own engine needs, and the cases that engine must reproduce.

Numbers of the definitions are written in full, so that the page reckons with exactly the same
constants; results in the cases likewise, because they are compared to 1e-9.
"""

from collections.abc import Sequence
from typing import Final

from bufferfolio.activity import name_of
from bufferfolio.composition import Addition
from bufferfolio.definitions import (
    Family,
    Formulation,
    Interaction,
    Ion,
    PublishedEquation,
    Step,
    Titrant,
)
from bufferfolio.explorations import Exploration, exploration_of
from bufferfolio.recipes import Part, Recipe, nature_of
from bufferfolio.sheets import Sheet
from bufferfolio.subjects import State, Subject, reference_temperature, state_at
from bufferfolio.substitutes import Setting
from bufferfolio.tolerances import ASSUMED, Care, step_doubt

Data = dict[str, object]

CHECKED_STRENGTHS: Final = (1.0, 0.25, 2.0)
CHECKED_TOTALS: Final = (0.001, 0.2)  # mol/kg
CHECKED_IONIC_STRENGTHS: Final = (0.01, 0.5)  # mol/kg
CHECKED_COLUMNS: Final = (20, 55, 70, 100, 125)  # of an explorer's sweep: pH 2, 5.5, 7, 10, 12.5


def family_data(family: Family) -> Data:
    """Return a family as the page's engine takes it."""
    return {
        "key": family.key,
        "label": family.label,
        "charge": family.charge,
        "species": [
            {"name": form.name, "label": form.label, "charge": form.charge}
            for form in family.species
        ],
        "steps": [_step_data(step) for step in family.steps],
    }


def _step_data(step: Step) -> Data:
    law = step.law
    valid = {"low": step.valid_temperature.low, "high": step.valid_temperature.high}
    if isinstance(law, PublishedEquation):
        numbers: Data = {
            "kind": "equation",
            "constant": law.constant,
            "inverse": law.inverse,
            "linear": law.linear,
            "logarithm": law.logarithm,
            "inverse_square": law.inverse_square,
        }
    else:
        numbers = {
            "kind": "reference",
            "pK": law.pK,
            "temperature": law.temperature,
            "enthalpy": law.enthalpy,
            "heat_capacity": law.heat_capacity,
        }
    doubt = step_doubt(step)
    return {
        "law": numbers,
        "valid_temperature": valid,
        "doubt": {"pK": doubt.pK, "enthalpy": doubt.enthalpy, "stated": doubt.stated},
    }


def subject_data(subject: Subject) -> Data:
    """Return a formulation as the page's engine takes it."""
    formulation, mixture = subject.formulation, subject.mixture
    return {
        "families": [family_data(family) for family in mixture.families],
        "totals": mixture.totals.tolist(),
        "ions": [_ion_data(ion) for ion in mixture.ions],
        "molalities": mixture.molalities.tolist(),
        "model": name_of(subject.model),
        "interactions": [_interaction_data(pair) for pair in subject.interactions],
        "water": subject.water,
        "titrants": [
            _titrant_data(titrant, added, mixture.families)
            for titrant, added in zip(formulation.titrants, subject.additions, strict=True)
        ],
        **_limits_data(formulation),
        "recipe": _recipe_data(subject.recipe),
        "care": _care_data(subject.care),
        "doubts": {"pKw": ASSUMED["pKw"].value, "activity": ASSUMED["activity"].value},
        "accepted_dangers": list(formulation.accepted_dangers),
        "never_corrected": formulation.never_corrected,
        "reference_temperature": reference_temperature(formulation),
        "make_up_temperature": formulation.make_up.temperature,
    }


def _limits_data(formulation: Formulation) -> Data:
    expected = formulation.expected
    return {
        "expected": None
        if expected is None
        else {
            "pH": expected.pH,
            "temperature": expected.temperature,
            "tolerance": expected.tolerance,
        },
        "use_temperature": {
            "low": formulation.use_temperature.low,
            "high": formulation.use_temperature.high,
        },
        "use_pH": {"low": formulation.use_pH.low, "high": formulation.use_pH.high},
    }


def setting_data(setting: Setting) -> Data:
    """Return what the page's engine needs beside the formulation to find a fault."""
    carbonate = setting.carbonate
    return {
        "carbonate": None if carbonate is None else family_data(carbonate),
        "substitutes": [[part_data(part) for part in parts] for parts in setting.substitutes],
    }


def _recipe_data(recipe: Recipe) -> Data:
    return {
        "parts": [part_data(part) for part in recipe.parts],
        "water": recipe.water,
        "counted": recipe.counted,
        "weighed": recipe.weighed,
    }


def part_data(part: Part) -> Data:
    """Return one reagent of a recipe as the page's engine takes it."""
    return {
        "key": part.key,
        "label": part.label,
        "added": _addition_data(part.added),
        "amount": part.amount,
        "doubt": part.doubt,
        "releases": list(part.releases),
        "nature": part.nature,
    }


def _care_data(care: Care) -> Data:
    return {
        "weighing": care.weighing,
        "volume": care.volume,
        "temperature": care.temperature,
        "meter": care.meter,
        "model": care.model,
        "stated": list(care.stated),
    }


def _ion_data(ion: Ion) -> Data:
    return {"name": ion.name, "charge": ion.charge}


def _interaction_data(pair: Interaction) -> Data:
    return {"cation": pair.cation, "anion": pair.anion, "epsilon": pair.epsilon}


def _titrant_data(titrant: Titrant, added: Addition, families: Sequence[Family]) -> Data:
    return {
        "label": titrant.label,
        "key": titrant.reagent.key,
        "reagent": titrant.reagent.label,
        "direction": titrant.direction,
        "releases": list(titrant.reagent.releases),
        "nature": nature_of(titrant.reagent, {family.key: family for family in families}),
        **_addition_data(added),
    }


def _addition_data(added: Addition) -> Data:
    return {
        "families": [family.key for family in added.families],
        "per_family": list(added.per_family),
        "ions": [_ion_data(ion) for ion in added.ions],
        "per_ion": list(added.per_ion),
        "water": added.water,
        "volume": added.volume,
        "mass": added.mass,
    }


def sheet_checks(sheet: Sheet) -> list[Data]:
    """Return the cases that the engine of a sheet must reproduce before it may answer."""
    subject = sheet.subject
    use = subject.formulation.use_temperature
    cases = []
    for temperature in (use.low, sheet.reference.temperature, use.high):
        for strength in CHECKED_STRENGTHS:
            state = state_at(subject, temperature, strength)
            cases.append(_case(state, strength, None, 0.0))
    for index, added in enumerate(subject.additions):
        for side in sheet.sides:
            if side.added is added:
                amount = float(side.curve.amount[-1]) / 3.0
                state = state_at(subject, use.low, 1.0, [(added, amount)])
                cases.append(_case(state, 1.0, index, amount))
    return cases


def _case(state: State, strength: float, titrant: int | None, amount: float) -> Data:
    return {
        "temperature": state.temperature,
        "strength": strength,
        "titrant": titrant,
        "amount": amount,
        "pH": state.pH,
        "ionic_strength": state.ionic_strength,
        "capacity": state.capacity,
        "fractions": [shares.tolist() for shares in state.forms.fractions],
    }


def explorer_checks(family: Family) -> list[Data]:
    """Return the cases that the engine of an explorer must reproduce before it may answer."""
    low = max(step.valid_temperature.low for step in family.steps)
    high = min(step.valid_temperature.high for step in family.steps)
    cases = []
    for temperature in sorted({low, 298.15, high}):
        for total, strength in zip(CHECKED_TOTALS, CHECKED_IONIC_STRENGTHS, strict=True):
            result = exploration_of(family, temperature, total, strength)
            cases.append(
                {
                    "temperature": temperature,
                    "total": total,
                    "ionic_strength": strength,
                    "pH": result.sweep.pH[list(CHECKED_COLUMNS)].tolist(),
                    "capacity": result.sweep.capacity[list(CHECKED_COLUMNS)].tolist(),
                    "hydroxide": result.sweep.forms.hydroxide[list(CHECKED_COLUMNS)].tolist(),
                    "fractions": result.sweep.forms.fractions[0][:, list(CHECKED_COLUMNS)].tolist(),
                }
            )
    return cases


def sheet_data(sheet: Sheet) -> Data:
    """Return the whole data block of a sheet's page, its figures excepted."""
    return {
        "kind": "sheet",
        "subject": subject_data(sheet.subject),
        "temperature": sheet.reference.temperature,
        "checks": sheet_checks(sheet),
    }


def explorer_data(exploration: Exploration) -> Data:
    """Return the whole data block of an explorer's page, its figures excepted."""
    return {
        "kind": "explorer",
        "family": family_data(exploration.family),
        "temperature": exploration.temperature,
        "total": exploration.total,
        "ionic_strength": exploration.ionic_strength,
        "model": name_of(exploration.model),
        "checks": explorer_checks(exploration.family),
    }

"""The activity model of a formulation whose file names none, and liquids weighed or measured."""

import math
from dataclasses import replace
from pathlib import Path

import pytest

from bufferfolio.activity import MODELS, for_ionic_strength, name_of
from bufferfolio.definitions import Formulation
from bufferfolio.engine_data import subject_data
from bufferfolio.make_up_contexts import portion_rows
from bufferfolio.page_parts import numbering
from bufferfolio.reading import read_formulation
from bufferfolio.subjects import reference_temperature, state_at, subject_of
from recipes import shipped

SALT = """\
title: Salt water
revision: "1"
purpose: To test.
medium: dilute
make_up:
  made_up_to: 1 L
  at: 20 °C
  reagents:
    - {reagent: tris, amount: 10 mmol/L}
    - {reagent: hydrochloric-acid-37, amount: ACID}
    - {reagent: sodium-chloride, amount: SALT mmol/L}
use: {temperature: [10 °C, 30 °C], pH: [7, 9]}
"""


def salted(folder: Path, millimoles: float, acid: str = "5 mmol") -> Formulation:
    path = folder / "salt-water.yaml"
    text = SALT.replace("ACID", acid).replace("SALT", str(millimoles))
    path.write_text(text, encoding="utf-8")
    return read_formulation(path, shipped())


# Tris half neutralised brings 5 mmol/kg; a litre of water at 20 °C is 0.998 kg.
@pytest.mark.parametrize(
    ("millimoles", "name"),
    [(100, "davies"), (490, "davies"), (497, "specific-ion"), (2000, "specific-ion")],
)
def test_without_a_model_the_ionic_strength_decides(
    tmp_path: Path, millimoles: float, name: str
) -> None:
    formulation = salted(tmp_path, millimoles)
    assert formulation.model is None
    subject = subject_of(formulation, shipped())
    assert name_of(subject.model) == name
    assert subject_data(subject)["model"] == name
    state = state_at(subject, reference_temperature(formulation))
    assert state.ionic_strength == pytest.approx((millimoles + 5) / 998.2, rel=2e-3)
    assert (state.ionic_strength <= 0.5) == (name == "davies")


@pytest.mark.parametrize("name", MODELS)
def test_a_model_that_the_file_names_is_kept(tmp_path: Path, name: str) -> None:
    formulation = replace(salted(tmp_path, 2000), model=name)
    assert name_of(subject_of(formulation, shipped()).model) == name


def test_the_choice_at_its_boundary() -> None:
    limit = MODELS["davies"].trusted_to
    assert for_ionic_strength(0.0) == "davies"
    assert for_ionic_strength(limit) == "davies"
    assert for_ionic_strength(math.nextafter(limit, 1.0)) == "specific-ion"
    assert for_ionic_strength(math.nan) == "specific-ion", "Davies did not get there"


# HCl 37 %, 1.184 g/mL, 36.46 g/mol: 98.5 g and 83.2 mL hold one mole.
@pytest.mark.parametrize(
    ("stated", "shown", "weighed"),
    [
        ("2.5 mL", "2.5 mL", False),
        ("2.5 g", "2.5 g", True),
        ("500 mg", "500 mg", True),
        ("6 g/L", "6 g", True),
        ("0.001 kg", "1 g", True),
        ("5 mmol", "416.1 µL", False),
        ("5 mmol/L", "416.1 µL", False),
    ],
)
def test_a_liquid_is_weighed_where_the_file_states_a_mass(
    tmp_path: Path, stated: str, shown: str, weighed: bool
) -> None:
    formulation = salted(tmp_path, 100, acid=stated)
    subject = subject_of(formulation, shipped())
    row = portion_rows(subject, numbering(shipped().sources))[1]
    assert (row.stated, row.amount) == (stated, shown)
    assert formulation.make_up.portions[1].weighed == weighed
    given = subject_data(subject)["recipe"]["parts"][1]  # type: ignore[index]
    assert (given["added"]["volume"] is None) == weighed


def test_a_solid_is_weighed_whatever_its_file_states(tmp_path: Path) -> None:
    assert [each.weighed for each in salted(tmp_path, 100).make_up.portions] == [True, False, True]
